"""Join the curves of several spreads of one location, where their overlap agrees."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import NamedTuple

import numpy as np

from ..core import DispersionCurve, InputError
from .comparing import compare_curves, significant
from .picking import NEAR_FIELD

LARGEST_DISAGREEMENT = 0.05
"""Curves whose velocities differ by more in any band, beyond their uncertainty, are of different ground."""


class Joined(NamedTuple):
    """A joined curve, and the indices of the curves that stayed out of it."""

    curve: DispersionCurve
    left_out: tuple[int, ...]


def join_curves(curves: Sequence[DispersionCurve], names: Sequence[str] = ()) -> DispersionCurve:
    """Join curves of fine and coarse spreads into one, after a check of their overlap.

    The curve that reaches the longest wavelength outside of the near field comes first; each other one is
    joined to it if both overlap and differ there by at most 5 %, or within their uncertainty. Where both have
    a point at a frequency the mean weighted by variance is taken, and half their difference is added to its
    standard deviation in quadrature. A curve that disagrees, or that nothing can be checked against, stays
    out, and `notes` say so with numbers.

    Parameters
    ----------
    curves : sequence of DispersionCurve
        Of one wave, kind and mode, with bins at the same frequencies (`combine_picks`).
    names : sequence of str, optional
        What to call them in notes.

    Raises
    ------
    InputError
        If there is no curve, or they are not of one wave, kind and mode.
    """
    return join_agreeing(curves, names).curve


def join_agreeing(curves: Sequence[DispersionCurve], names: Sequence[str] = ()) -> Joined:
    """Do what `join_curves` does, and tell which curves stay out."""
    if not curves:
        raise InputError("joining needs at least one curve; got none")
    kinds = {(c.wave, c.kind, c.mode) for c in curves}
    if len(kinds) > 1:
        raise InputError(f"curves of one wave, kind and mode can be joined; got {sorted(map(str, kinds))}")
    labels = list(names) or [f"spread {i + 1}" for i in range(len(curves))]
    order = sorted(range(len(curves)), key=lambda i: -_reach(curves[i]))
    joined, notes = curves[order[0]], list(curves[order[0]].notes)
    left_out: list[int] = []
    for i in order[1:]:
        differences = compare_curves(joined, curves[i])
        apart = [d for d in differences if d.significant and abs(d.difference) > LARGEST_DISAGREEMENT]
        if apart or not differences:
            left_out.append(i)
        if not differences:
            notes.append(f"{labels[i]} is left out: its curve does not overlap with {labels[order[0]]}")
        elif apart:
            notes.append(
                f"{labels[i]} is left out, different ground: it differs from {labels[order[0]]} by "
                f"{', '.join(map(str, apart))}"
            )
        else:
            joined = _merged(joined, curves[i])
            notes += curves[i].notes
            if small := significant(differences):
                notes.append(f"{labels[i]} differs from {labels[order[0]]} by {small}")
    return Joined(replace(joined, notes=tuple(dict.fromkeys(notes))), tuple(sorted(left_out)))


def _reach(curve: DispersionCurve) -> float:
    """Longest wavelength outside of the near field [m]."""
    far = np.array([NEAR_FIELD not in str(flags) for flags in np.asarray(curve.flags)])
    return float(curve.wavelength[far].max()) if far.any() else 0.0


def _merged(a: DispersionCurve, b: DispersionCurve) -> DispersionCurve:
    frequencies = np.unique(np.round(np.concatenate([a.frequency, b.frequency]), 9))
    columns: dict[str, list[float | int | str]] = {
        name: [] for name in ("velocity", "sigma", "shots", "flags")
    }
    for f in frequencies:
        points = [(c, i) for c in (a, b) for i in np.flatnonzero(np.isclose(c.frequency, f, rtol=1e-6))]
        velocity = np.array([c.velocity[i] for c, i in points])
        variance = np.square([c.sigma[i] for c, i in points])
        columns["velocity"].append(float(np.average(velocity, weights=1.0 / variance)))
        columns["sigma"].append(float(np.sqrt(variance.mean() + velocity.var())))
        columns["shots"].append(int(sum(np.asarray(c.shots)[i] for c, i in points)))
        flags = {x for c, i in points for x in str(np.asarray(c.flags)[i]).split("; ") if x}
        columns["flags"].append("; ".join(sorted(flags)))
    return DispersionCurve(frequency=frequencies, wave=a.wave, kind=a.kind, mode=a.mode, **columns)  # type: ignore[arg-type]
