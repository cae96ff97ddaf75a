"""When the waves reach each receiver, told without regard to gains."""

from __future__ import annotations

import numpy as np

from ..core.checks import FloatArray
from ..core.gather import Gather

ONSET_WINDOW = 0.004
"""Window of the running amplitude for first arrivals [s]."""

ONSET_SHARE = 0.05
"""Share of its largest amplitude at which a trace has begun ..."""

ONSET_OVER_QUIET = 5.0
"""... if that also is so many times its quiet amplitude."""

ENERGY_WINDOW = 0.02
"""Window of the energy whose middle is taken [s]."""


def first_arrivals(gather: Gather) -> FloatArray:
    """Return the time after the blow at which each trace begins to move [s], (n_receivers,)."""
    power, length = _running_power(gather, ONSET_WINDOW)
    amplitude = np.sqrt(power)
    quiet = np.percentile(amplitude, 5.0, axis=1)
    threshold = np.maximum(ONSET_SHARE * amplitude.max(axis=1), ONSET_OVER_QUIET * quiet)
    return np.asarray(gather.times[length - 1 :][np.argmax(amplitude >= threshold[:, None], axis=1)])


def energy_times(gather: Gather) -> FloatArray:
    """Return the time after the blow by which half of each trace's energy has come [s], (n_receivers,).

    Four times the lower quartile of the running power is taken off as noise.
    """
    power, length = _running_power(gather, ENERGY_WINDOW)
    above = np.maximum(power - 4.0 * np.percentile(power, 25.0, axis=1, keepdims=True), 0.0)
    share = np.cumsum(above, axis=1)
    half = np.argmax(share >= 0.5 * share[:, -1:], axis=1)
    return np.asarray(gather.times[half + length // 2])


def _running_power(gather: Gather, window: float) -> tuple[FloatArray, int]:
    """Mean square over a sliding window, and the window's length in samples."""
    data = gather.data - gather.data.mean(axis=1, keepdims=True)
    length = max(1, min(round(window / gather.interval), data.shape[1] // 4))
    sums = np.cumsum(np.pad(np.square(data), ((0, 0), (1, 0))), axis=1)
    return np.maximum(sums[:, length:] - sums[:, :-length], 0.0) / length, length
