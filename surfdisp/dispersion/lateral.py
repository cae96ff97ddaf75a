"""Does the ground change along the spread? Compare both halves of it, and both shot directions."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np

from ..core import DispersionCurve, DispersionImage, Gather, Picks
from .combining import combine_picks
from .comparing import compare_curves, significant

LEAST_RECEIVERS = 6
"""Receivers that a half needs to be looked at on its own."""

PickAlong = Callable[[DispersionImage], Picks]


def halves(gather: Gather) -> tuple[Gather, Gather]:
    """Split a gather at the middle of its spread into two, the lower coordinates first."""
    middle = 0.5 * (gather.receivers[0] + gather.receivers[-1])
    low = gather.receivers <= middle
    return _part(gather, np.flatnonzero(low)), _part(gather, np.flatnonzero(~low))


def compare_directions(gathers: Sequence[Gather], picks: Sequence[Picks]) -> str | None:
    """Return a warning where shots from the two ends give different curves: dip, or lateral change."""
    forward = [p for g, p in zip(gathers, picks, strict=True) if g.source <= g.receivers[0]]
    backward = [p for g, p in zip(gathers, picks, strict=True) if g.source >= g.receivers[-1]]
    where = _difference(combine_picks(forward), combine_picks(backward)) if forward and backward else ""
    if not where:
        return None
    return f"shots from the two ends of the line differ by {where}: the ground dips or changes along the line"


def compare_halves(
    gathers: Sequence[Gather],
    image: Callable[[Gather], DispersionImage],
    pick: PickAlong,
) -> str | None:
    """Return a warning where the two halves of the spread give different curves.

    Parameters
    ----------
    gathers : sequence of Gather
        The shots of one spread.
    image, pick : callable
        How to make an image of a half, and how to pick it along the ridge of the whole spread.
    """
    parts = [halves(g) for g in gathers]
    if any(len(part.receivers) < LEAST_RECEIVERS for pair in parts for part in pair):
        return None
    low, high = ([pick(image(pair[side])) for pair in parts] for side in (0, 1))
    where = _difference(combine_picks(low), combine_picks(high))
    if not where:
        return None
    first, second = parts[0]
    return (
        f"the halves {_span(first)} and {_span(second)} of the spread differ by {where}: the ground changes "
        "along the line"
    )


def _difference(first: DispersionCurve | None, second: DispersionCurve | None) -> str:
    return significant(compare_curves(first, second)) if first is not None and second is not None else ""


def _part(gather: Gather, rows: np.ndarray[tuple[int], np.dtype[np.int64]]) -> Gather:
    return replace(
        gather,
        data=gather.data[rows],
        receivers=gather.receivers[rows],
        elevations=np.asarray(gather.elevations)[rows],
    )


def _span(gather: Gather) -> str:
    return f"{gather.receivers[0]:g} to {gather.receivers[-1]:g} m"
