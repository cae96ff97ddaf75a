"""Frequencies and trial velocities of an image, chosen from the spread and the record."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..core import Gather
from ..core.checks import FloatArray

LOWEST_FREQUENCY = 2.0
"""No hammer and no geophone of the trade gives usable surface waves below it [Hz]."""
HIGHEST_FREQUENCY = 100.0
"""Upper end for receivers 1 m apart or more [Hz]; closer receivers raise it in proportion."""
SLOWEST, FASTEST = 50.0, 2000.0
"""Limits of the trial velocities [m/s]: peat to rock."""
VELOCITY_COUNT = 400


def default_frequencies(gather: Gather) -> FloatArray:
    """Return even frequencies [Hz] that the record can tell apart.

    From 2 Hz, or one and a half periods in the record, to 100 Hz (100 m/s over the spacing for receivers
    closer than 1 m), never above 0.4 of the sampling rate; two steps to the resolution of the record,
    1 / duration, but between 0.1 and 0.5 Hz.
    """
    duration = gather.interval * gather.data.shape[1]
    spacing = gather.spacing if len(gather.receivers) > 1 else 1.0
    highest = min(0.4 / gather.interval, HIGHEST_FREQUENCY * max(1.0, 1.0 / spacing))
    lowest = min(max(LOWEST_FREQUENCY, 1.5 / duration), 0.5 * highest)
    step = float(np.clip(0.5 / duration, 0.1, 0.5))
    count = max(round((highest - lowest) / step), 8)
    return np.linspace(lowest, highest, count + 1)


def default_velocities(gather: Gather) -> FloatArray:
    """Return 400 trial phase velocities [m/s] in even ratios.

    The slowest is 50 m/s, or what crosses half the spread within the record; the fastest belongs to a wave
    of three spread lengths at 20 Hz, within 500 to 2000 m/s.
    """
    end = max(float(gather.times[-1]), gather.interval)
    slowest = max(SLOWEST, min(float(np.median(gather.offsets)) / end, 4.0 * SLOWEST))
    fastest = float(np.clip(60.0 * gather.spread_length, 500.0, FASTEST))
    return np.geomspace(slowest, fastest, VELOCITY_COUNT)


def common_axes(gathers: Sequence[Gather]) -> tuple[FloatArray, FloatArray]:
    """Return frequencies and velocities that suit all gathers of one spread, whose images are to be stacked.

    The longest record sets the frequency step, the coarsest sampling the highest frequency.
    """
    longest = max(gathers, key=lambda g: g.interval * g.data.shape[1])
    f = default_frequencies(longest)
    f = f[f <= min(0.4 / g.interval for g in gathers) * (1.0 + 1e-9)]
    ends = [default_velocities(g)[[0, -1]] for g in gathers]
    return f, np.geomspace(min(e[0] for e in ends), max(e[1] for e in ends), VELOCITY_COUNT)
