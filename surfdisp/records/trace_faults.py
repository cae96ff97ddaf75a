"""Traces that must not go into a dispersion image, each with its reason."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass

import numpy as np

from ..core.checks import FloatArray
from ..core.gather import Gather
from .coherence import HIGHEST, LOWEST, neighbour_coherence

NEGLIGIBLE = 1e-3
"""Amplitude relative to the neighbours below which a trace is dead (60 dB down; gains differ by less)."""

FLAT_TOP = 3
"""Equal samples at the extreme that make a flat top."""

REVERSED = -0.4
"""Coherence with the neighbours at or below which a trace is reversed."""

REVERSED_AT_THE_END = -0.55
"""The same for the last trace of a side, whose neighbours all lie on one hand of it."""

UNRELATED = 0.25
"""Coherence below which a trace has nothing to do with its neighbours."""

STEADY = 4.0
"""Loudest over median amplitude of a trace, in windows, below which it is steady as only noise is."""

WINDOW = 0.05
"""Length of these windows [s]."""

COHERENT_RECORD = 0.5
"""Median coherence that a record must have before single traces of it are called reversed or noise."""

MOSTLY = 0.8
"""Share of noise-like traces above which the record is noise altogether."""


@dataclass(frozen=True)
class Examination:
    """`faults`: reason by index of a faulty trace. `coherence` (n_receivers,): of each trace as recorded with
    its neighbours, reversed ones among them turned; NaN where it cannot be told."""

    faults: dict[int, str]
    coherence: FloatArray


def trace_faults(gather: Gather) -> dict[int, str]:
    """Find dead, clipped, reversed and noise-dominated traces.

    Dead: constant, or 60 dB below its neighbours. Clipped: a flat top at its extreme with a step beside it.
    Reversed: moved out to its place, its neighbours' beam is its opposite. Noise-dominated: unrelated to its
    neighbours, and as loud in one window as in the next. The last two are judged only where the record as a
    whole is coherent from trace to trace, or where nearly all of it is noise. Uneven gains are no fault.

    Parameters
    ----------
    gather : Gather
        One shot, all traces, unfiltered.

    Returns
    -------
    dict
        Reason by index of the trace.
    """
    return examine_traces(gather).faults


def examine_traces(gather: Gather) -> Examination:
    """Do what `trace_faults` does, and return the coherence on which its judgement rests too."""
    dead = _dead(gather)
    faults = dict.fromkeys(dead, "dead: no signal")
    reversed_ones, coherence = _reversed(gather, frozenset(dead))
    judged = np.isfinite(coherence)
    coherent = bool(np.any(judged)) and float(np.median(coherence[judged])) >= COHERENT_RECORD
    noise = judged & (np.nan_to_num(coherence) < UNRELATED) & (_loudest_over_median(gather) < STEADY)
    if coherent:
        faults |= dict.fromkeys(reversed_ones, "reversed polarity against its neighbours")
    if coherent or noise.sum() > MOSTLY * judged.sum():
        told = "noise: coherence with its neighbours"
        faults |= {int(i): f"{told} {coherence[i]:.2f}" for i in np.flatnonzero(noise)}
    faults |= dict.fromkeys(_clipped(gather) - set(dead), "clipped: flat tops at its extreme")
    coherence[list(reversed_ones)] *= -1.0
    return Examination(faults, coherence)


def _dead(gather: Gather) -> list[int]:
    spread = gather.data.std(axis=1)
    dead = []
    for index, own in enumerate(spread):
        around = [spread[i] for i in range(index - 3, index + 4) if i != index and 0 <= i < len(spread)]
        if own <= NEGLIGIBLE * float(np.median(around) if around else 0.0):
            dead.append(index)
    return dead


def _clipped(gather: Gather) -> set[int]:
    return {i for i, row in enumerate(gather.data) if _flat_top(row) or _flat_top(-row)}


def _flat_top(row: FloatArray) -> bool:
    """Whether the largest value lasts, and ends with a step that a rounded crest does not have.

    A smooth crest, coarsely digitised, also repeats its largest value; but it leaves it by one digit at a
    time, a clipped one by many.
    """
    steps = np.abs(np.diff(row))
    if not np.any(steps > 0.0):
        return False
    digit = float(steps[steps > 0.0].min())
    top = np.flatnonzero(row >= row.max() - 0.5 * digit)
    runs = np.split(top, np.flatnonzero(np.diff(top) > 1) + 1)
    for run in runs:
        beside = [i for i in (run[0] - 1, run[-1] + 1) if 0 <= i < len(row)]
        if len(run) >= FLAT_TOP and all(row[run[0]] - row[i] > 8.0 * digit for i in beside):
            return True
    return False


def _reversed(gather: Gather, ignored: frozenset[int]) -> tuple[set[int], FloatArray]:
    """Turn the most opposed trace and look again, until none is opposed; also the coherence then.

    A good trace among several reversed ones may be turned first, and is turned back in its time. Two
    neighbours that are both reversed are told; three look like good ones among themselves.
    """
    turned: set[int] = set()
    data = gather.data.copy()
    limit = np.full(len(data), REVERSED)
    limit[[0, -1]] = REVERSED_AT_THE_END
    coherence = neighbour_coherence(gather, ignored)
    for _ in range(len(data)):
        opposed = np.where(coherence <= limit, coherence, 0.0)
        if not np.any(opposed):
            return turned, coherence
        worst = int(np.argmin(opposed))
        turned ^= {worst}
        data[worst] *= -1.0
        coherence = neighbour_coherence(dataclasses.replace(gather, data=data), ignored)
    return set(), neighbour_coherence(gather, ignored)  # it never settles: nothing can be said


def _loudest_over_median(gather: Gather) -> FloatArray:
    data = gather.data - gather.data.mean(axis=1, keepdims=True)
    frequencies = np.fft.rfftfreq(data.shape[1], gather.interval)
    spectra = np.fft.rfft(data, axis=1) * ((frequencies >= LOWEST) & (frequencies <= HIGHEST))
    data = np.fft.irfft(spectra, data.shape[1], axis=1)
    length = max(1, min(round(WINDOW / gather.interval), data.shape[1] // 4))
    count = data.shape[1] // length
    power = np.square(data[:, : count * length]).reshape(len(data), count, length).mean(axis=2)
    loudness = np.sqrt(power)
    median = np.maximum(np.median(loudness, axis=1), np.finfo(np.float64).tiny)
    return np.asarray(loudness.max(axis=1) / median)
