"""Repeated blows at one source position: aligned and averaged."""

from __future__ import annotations

import dataclasses
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray
from ..core.gather import Gather

LARGEST_SHIFT = 0.02
"""Trigger error that is looked for [s]."""

LIKE = 0.5
"""Correlation with the leading blow, all traces together, below which a blow is not one of the same."""


@dataclass(frozen=True)
class Stack:
    """`data` (n_receivers, n_samples); per blow its shift [s] and its correlation with the leading blow.

    `used[blow]` tells whether it is in the stack, `filled[receiver]` whether any blow has that trace.
    """

    data: FloatArray
    shifts: tuple[float, ...]
    correlations: tuple[float, ...]
    used: tuple[bool, ...]
    filled: NDArray[np.bool_]


def stack_blows(blows: Sequence[Gather], sound: Sequence[NDArray[np.bool_]]) -> Stack:
    """Align repeated blows on the one most like the others and average them trace by trace.

    The shift of a blow is where its cross-correlation with the leading blow, summed over the traces sound in
    both, each scaled to unit energy, is largest; it is applied as a phase shift, so to fractions of a sample.
    A blow unlike the others is left out. Weights are the blows that the instrument had already stacked.

    Parameters
    ----------
    blows : sequence of Gather
        Same receivers, interval and number of samples.
    sound : sequence of bool array (n_receivers,)
        Which traces of each blow may be used.
    """
    unit = [_unit_energy(blow.data) * ok[:, None] for blow, ok in zip(blows, sound, strict=True)]
    interval = blows[0].interval
    matches = [[_best_shift(a, b, interval) for b in unit] for a in unit]
    likeness = [
        np.median([match[1] for j, match in enumerate(row) if j != i]) for i, row in enumerate(matches)
    ]
    leading = int(np.argmax(np.round(likeness, 3)))  # the first of equals
    shifts = tuple(match[0] for match in matches[leading])
    correlations = tuple(match[1] for match in matches[leading])
    used = tuple(i == leading or value >= LIKE for i, value in enumerate(correlations))
    weights = np.zeros(len(blows[0].data))
    total = np.zeros_like(blows[0].data)
    for blow, ok, shift, wanted in zip(blows, sound, shifts, used, strict=True):
        if wanted:
            weight = ok.astype(np.float64) * blow.blows
            total += weight[:, None] * _earlier(blow.data, shift / interval)
            weights += weight
    return Stack(total / np.maximum(weights, 1.0)[:, None], shifts, correlations, used, weights > 0.0)


def merge_blows(blows: Sequence[Gather], stack: Stack) -> Gather:
    """Return the gather of a stack."""
    chosen = [blow for blow, used in zip(blows, stack.used, strict=True) if used]
    leading = blows[int(np.argmax(stack.correlations))]
    return dataclasses.replace(
        leading,
        data=stack.data,
        name=" + ".join(dict.fromkeys(blow.name for blow in chosen)),
        blows=sum(blow.blows for blow in chosen),
    )


def _unit_energy(data: FloatArray) -> FloatArray:
    centred = data - data.mean(axis=1, keepdims=True)
    norm = np.sqrt(np.sum(np.square(centred), axis=1, keepdims=True))
    return np.asarray(centred / np.maximum(norm, np.finfo(np.float64).tiny))


def _best_shift(reference: FloatArray, other: FloatArray, interval: float) -> tuple[float, float]:
    """Time by which `other` is late [s], and the mean correlation of the common traces there."""
    common = int(np.sum(np.any(reference, axis=1) & np.any(other, axis=1)))
    if common == 0:
        return 0.0, 0.0
    length = 2 * reference.shape[1]
    spectrum = np.sum(np.fft.rfft(other, length) * np.conj(np.fft.rfft(reference, length)), axis=0)
    correlation = np.fft.irfft(spectrum, length) / common
    reach = max(1, min(round(LARGEST_SHIFT / interval), reference.shape[1] - 1))
    lags = np.arange(-reach, reach + 1)
    values = correlation[lags]
    peak = int(np.argmax(values))
    return (lags[peak] + _vertex(values, peak)) * interval, float(values[peak])


def _vertex(values: FloatArray, peak: int) -> float:
    """Place of the parabola's top through the largest value and its neighbours, relative to it."""
    if not 0 < peak < len(values) - 1:
        return 0.0
    before, at, after = values[peak - 1 : peak + 2]
    bend = before - 2.0 * at + after
    return 0.5 * (before - after) / bend if bend < 0.0 else 0.0


def _earlier(data: FloatArray, samples: float) -> FloatArray:
    """Move traces to earlier times by a fraction of samples; the ends are padded, not wrapped."""
    if samples == 0.0:
        return data
    padded = np.pad(data, ((0, 0), (0, data.shape[1])), mode="edge")
    padded[:, data.shape[1] :] *= np.linspace(1.0, 0.0, data.shape[1])
    frequencies = np.fft.rfftfreq(padded.shape[1])
    spectra = np.fft.rfft(padded, axis=1) * np.exp(2j * np.pi * frequencies * samples)
    return np.fft.irfft(spectra, padded.shape[1], axis=1)[:, : data.shape[1]]
