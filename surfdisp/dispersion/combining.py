"""Combine the picks of several shots in one curve with the uncertainty that their scatter shows."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from ..core import DispersionCurve, InputError, Picks
from ..core.checks import FloatArray, positive
from .picking import NEAR_FIELD

BINS_PER_OCTAVE = 8
LEAST_COVERAGE = 0.4
"""A shot counts in a bin where at least this part of its frequencies there is accepted."""
OUTLIER = 3.0
"""A shot is rejected from a bin beyond this many robust standard deviations from the median, of 3 or more."""
LEAST_SPREAD = 0.01
"""Relative standard deviation below which no bin is stated."""
LARGEST_SCATTER = 0.10
"""A bin whose shots scatter by more (relative standard deviation) is left out."""
SINGLE_SHOT_SCATTER = 0.03
"""Relative scatter between shots expected before any is seen: 2 to 5 % is common practice."""
EXPECTATION_WEIGHT = 1.0
"""How many shots that expectation is worth against the scatter that the shots show."""


class _ShotBin(NamedTuple):
    """What one shot says in one bin: ln velocity at the bin's centre and its relative standard deviation."""

    shot: int
    log_velocity: float
    sigma: float
    flags: frozenset[str]


def combine_picks(
    picks: Sequence[Picks],
    *,
    bins_per_octave: int = BINS_PER_OCTAVE,
    outlier: float = OUTLIER,
    largest_scatter: float = LARGEST_SCATTER,
) -> DispersionCurve | None:
    """Combine the accepted picks of several shots in bins of even width in log frequency.

    In each bin every shot counts once: the mean of its picks, weighted by their variance and moved along the
    local slope to the bin's centre. Its standard deviation is not divided by the root of their number, as
    neighbouring frequencies are not independent. Shots further than `outlier` robust standard deviations from
    the median are rejected where there are three or more, never the nearer half. The bin's velocity is the
    mean over the shots, weighted by their variance: far shots count more where near ones are in their near
    field. Its variance is that of the scatter between them plus the arithmetic mean of their variances, and
    is not divided by their number, as lateral change and near field do not average out. Few shots may agree
    by chance, so the variance of the scatter is (w e**2 + nu s**2) / (w + nu): `s` the scatter shown, pooled
    with the two neighbouring bins, whose shots are the same and add no freedom; `nu` one less than the shots;
    `e` the expected 3 %, worth `w` = 1 shot (the scale of the inverse chi-square law of a variance with such
    an expectation; Gelman et al., Bayesian Data Analysis, section 2.6). A bin needs half of all shots;
    picks flagged as near field count only where no shot is without.

    Parameters
    ----------
    picks : sequence of Picks
        One per shot, of one wave, kind and mode.
    bins_per_octave : int
        Bins are centred at 2**(i / bins_per_octave) Hz.
    outlier : float
        Positive, in robust standard deviations: 1.4826 times the median absolute deviation, which is too
        small of few shots, and the expected 3 %, in quadrature.
    largest_scatter : float
        Positive relative scatter beyond which a bin is left out.

    Returns
    -------
    DispersionCurve or None
        None where no bin remains. `notes` say what was rejected or left out.
    """
    kinds = {(p.wave, p.kind, p.mode) for p in picks}
    if len(kinds) > 1:
        raise InputError(f"picks of one wave, kind and mode can be combined; got {sorted(map(str, kinds))}")
    per_octave = positive(bins_per_octave, "bins_per_octave")
    outlier = positive(outlier, "outlier")
    largest_scatter = positive(largest_scatter, "largest_scatter")
    notes: list[str] = []
    bins = _shots_in_bins(picks, per_octave)
    least = (len(picks) + 1) // 2
    bins = {b: shots for b, shots in sorted(bins.items()) if len(shots) >= least}
    bins = {b: _without_near_field(shots) for b, shots in bins.items()}
    bins = _without_outliers(bins, outlier, picks, per_octave, notes)
    bins = _without_scattered(bins, largest_scatter, per_octave, notes)
    if not bins:
        return None
    notes += _expectation_note(bins)
    wave, kind, mode = kinds.pop()
    velocity = np.exp([_mean(shots) for shots in bins.values()])
    return DispersionCurve(
        frequency=2.0 ** (np.array(list(bins)) / per_octave),
        velocity=velocity,
        sigma=velocity * _relative_sigma(bins),
        shots=np.array([len(shots) for shots in bins.values()]),
        flags=np.array(
            ["; ".join(sorted(set().union(*(s.flags for s in shots)))) for shots in bins.values()]
        ),
        wave=wave,
        kind=kind,
        mode=mode,
        notes=tuple(notes),
    )


def _shots_in_bins(picks: Sequence[Picks], per_octave: float) -> dict[int, list[_ShotBin]]:
    bins: dict[int, list[_ShotBin]] = {}
    members = [np.round(per_octave * np.log2(p.frequency)).astype(int) for p in picks]
    for b in sorted({int(b) for p, m in zip(picks, members, strict=True) for b in m[p.accepted]}):
        centre = b * np.log(2.0) / per_octave
        slope = _local_slope(picks, centre, np.log(2.0) / per_octave)
        for shot, (p, member) in enumerate(zip(picks, members, strict=True)):
            inside = member == b
            used = inside & p.accepted
            if used.any() and used.sum() >= LEAST_COVERAGE * inside.sum():
                bins.setdefault(b, []).append(_shot_bin(shot, p, used, centre, slope))
    return bins


def _shot_bin(shot: int, picks: Picks, used: NDArray[np.bool_], centre: float, slope: float) -> _ShotBin:
    """Mean of one shot's picks, weighted by variance; sigma is from the harmonic mean of the variances.

    Flags are those that half of the picks carry.
    """
    relative = np.maximum(picks.sigma[used] / picks.velocity[used], 1e-4)
    moved = np.log(picks.velocity[used]) - slope * (np.log(picks.frequency[used]) - centre)
    weight = 1.0 / np.square(relative)
    carried = [flag for reason in picks.reason[used] for flag in str(reason).split("; ") if flag]
    flags = frozenset(flag for flag in carried if carried.count(flag) >= 0.5 * used.sum())
    mean = float(np.average(moved, weights=weight))
    return _ShotBin(shot, mean, float(1.0 / np.sqrt(weight.mean())), flags)


def _local_slope(picks: Sequence[Picks], centre: float, width: float) -> float:
    """Slope d ln c / d ln f within the shots, of accepted picks within one and a half bins of `centre`."""
    products, squares = 0.0, 0.0
    for p in picks:
        x = np.log(p.frequency) - centre
        near = p.accepted & (np.abs(x) <= 1.5 * width)
        if np.count_nonzero(near) > 2 and np.ptp(x[near]) > 0.5 * width:
            apart = x[near] - x[near].mean()
            products += float(np.sum(apart * np.log(p.velocity[near])))
            squares += float(np.sum(np.square(apart)))
    return products / squares if squares > 0.0 else 0.0


def _without_near_field(shots: list[_ShotBin]) -> list[_ShotBin]:
    far = [s for s in shots if NEAR_FIELD not in s.flags]
    return far or shots


def _without_outliers(
    bins: dict[int, list[_ShotBin]],
    outlier: float,
    picks: Sequence[Picks],
    per_octave: float,
    notes: list[str],
) -> dict[int, list[_ShotBin]]:
    kept: dict[int, list[_ShotBin]] = {}
    rejected: dict[int, list[int]] = {}
    for b, shots in bins.items():
        values = np.array([s.log_velocity for s in shots])
        distance = np.abs(values - np.median(values))
        middle = float(np.median(distance))
        scale = np.hypot(1.4826 * middle, SINGLE_SHOT_SCATTER)
        limit = np.maximum(outlier * np.maximum(scale, [s.sigma for s in shots]), middle)
        out = (distance > limit) if len(shots) >= 3 else np.zeros(len(shots), dtype=bool)
        kept[b] = [s for s, bad in zip(shots, out, strict=True) if not bad]
        for s, bad in zip(shots, out, strict=True):
            if bad:
                rejected.setdefault(s.shot, []).append(b)
    for shot, rows in sorted(rejected.items()):
        name = picks[shot].name or f"shot {shot + 1}"
        notes.append(
            f"{name}: outlier against the other shots in {len(rows)} of {len(bins)} bins "
            f"({_band(rows, per_octave)})"
        )
    return kept


def _without_scattered(
    bins: dict[int, list[_ShotBin]], largest: float, per_octave: float, notes: list[str]
) -> dict[int, list[_ShotBin]]:
    scatter = {b: _scatter([shots]) for b, shots in bins.items()}
    out = [b for b, value in scatter.items() if value is not None and value > largest]
    if out:
        worst = max(scatter[b] or 0.0 for b in out)
        notes.append(
            f"left out where the shots disagree: {_band(out, per_octave)}, scatter up to {100 * worst:.0f} %"
        )
    return {b: shots for b, shots in bins.items() if b not in out}


def _relative_sigma(bins: dict[int, list[_ShotBin]]) -> FloatArray:
    variance = np.array([_expected_variance(bins, b) + _within(shots) for b, shots in bins.items()])
    return np.asarray(np.maximum(np.sqrt(variance), LEAST_SPREAD))


def _expected_variance(bins: dict[int, list[_ShotBin]], b: int) -> float:
    """Relative variance between shots: what they show, shrunk to what is expected."""
    shown, freedom = _shown(bins, b)
    expected = EXPECTATION_WEIGHT * SINGLE_SHOT_SCATTER**2
    return (expected + freedom * shown**2) / (EXPECTATION_WEIGHT + freedom)


def _shown(bins: dict[int, list[_ShotBin]], b: int) -> tuple[float, int]:
    """Scatter pooled with the neighbouring bins, and its freedom: the same shots count once, not per bin."""
    groups = [bins[n] for n in (b - 1, b, b + 1) if n in bins]
    return _scatter(groups) or 0.0, max(len(group) for group in groups) - 1


def _within(shots: list[_ShotBin]) -> float:
    """Arithmetic mean of the shots' own relative variances."""
    return float(np.mean(np.square([max(s.sigma, LEAST_SPREAD) for s in shots])))


def _expectation_note(bins: dict[int, list[_ShotBin]]) -> list[str]:
    """Say in how many points the expected scatter outweighs the scatter that the shots show."""
    assumed = f"{100 * SINGLE_SHOT_SCATTER:.0f} %"
    if max(len(shots) for shots in bins.values()) == 1:
        return [f"one shot only: scatter between shots is unknown, {assumed} is assumed"]
    shown = [_shown(bins, b) for b in bins]
    count = sum(nu * s**2 < EXPECTATION_WEIGHT * SINGLE_SHOT_SCATTER**2 for s, nu in shown)
    if not count:
        return []
    return [
        f"in {count} of {len(bins)} points the uncertainty rests on an expected scatter of {assumed} more "
        "than on the shots' own, which is smaller: lateral change and near field do not average out"
    ]


def _weights(shots: list[_ShotBin]) -> FloatArray:
    return np.asarray(1.0 / np.square([max(s.sigma, LEAST_SPREAD) for s in shots]))


def _mean(shots: list[_ShotBin]) -> float:
    return float(np.average([s.log_velocity for s in shots], weights=_weights(shots)))


def _scatter(groups: Sequence[list[_ShotBin]]) -> float | None:
    """Pooled standard deviation within the groups; None where none has two shots."""
    values = [np.array([s.log_velocity for s in group]) for group in groups]
    freedom = sum(len(v) - 1 for v in values)
    if freedom == 0:
        return None
    return float(np.sqrt(sum(np.sum(np.square(v - v.mean())) for v in values) / freedom))


def _band(rows: Sequence[int], per_octave: float) -> str:
    low, high = (2.0 ** (b / per_octave) for b in (min(rows), max(rows)))
    return f"{low:.1f} Hz" if low == high else f"{low:.1f} to {high:.1f} Hz"
