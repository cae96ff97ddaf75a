"""From the gathers of a survey to its curve in one step: images, stacks, picks, curve, comparisons."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from functools import partial
from typing import NamedTuple

from numpy.typing import ArrayLike

from ..core import SILENT, DispersionCurve, DispersionImage, Gather, InputError, Picks, Progress
from . import limits
from .axes import common_axes
from .combining import BINS_PER_OCTAVE, combine_picks
from .image import dispersion_image
from .joining import join_agreeing
from .lateral import compare_directions, compare_halves
from .picking import MINIMUM_STRENGTH, pick
from .stacking import stack_images

WHOLE_SPREAD = 0.75
"""Part of the widest aperture that an image needs to be stacked: one of half the spread blurs the others."""


FILES_NAMED = 3
"""How many of its files stand beside the number of a spread in notes."""


class CurveFromGathers(NamedTuple):
    """The products of `curve_from_gathers`.

    `images` and `picks` have one entry per gather in the same order, `stacked_images` one per spread in the
    order of their first gather; `curve` is None where nothing can be picked; `notes` are for the reader of
    the report and include those of the curve; `left_out` has the numbers (`Gather.spread`) of spreads with a
    curve of their own that is no part of `curve`, being of different ground or without overlap.
    """

    images: tuple[DispersionImage, ...]
    stacked_images: tuple[DispersionImage, ...]
    picks: tuple[Picks, ...]
    curve: DispersionCurve | None
    notes: tuple[str, ...]
    left_out: tuple[int, ...] = ()


class _Spread(NamedTuple):
    images: list[DispersionImage]
    stack: DispersionImage
    picks: list[Picks]
    curve: DispersionCurve | None
    notes: list[str]


def curve_from_gathers(
    gathers: Sequence[Gather],
    *,
    frequencies: ArrayLike | None = None,
    velocities: ArrayLike | None = None,
    method: str = "phase-shift",
    near_field: float = limits.NEAR_FIELD,
    too_near: float = limits.TOO_NEAR,
    longest_wavelength: float = limits.LONGEST_WAVELENGTH,
    minimum_strength: float = MINIMUM_STRENGTH,
    bins_per_octave: int = BINS_PER_OCTAVE,
    progress: Progress = SILENT,
) -> CurveFromGathers:
    """Make the images of all gathers, pick the fundamental mode, and combine the picks in one curve.

    For each spread (`Gather.spread`) the stack of its images is picked first; where it holds a ridge every
    shot is picked along that ridge, so that all shots follow the same branch, and the picks are combined.
    Shots from both ends, and both halves of the spread, are compared. The curves of several spreads are
    joined where they agree.

    Parameters
    ----------
    gathers : sequence of Gather
        Conditioned; shots off the ends of their spread.
    frequencies, velocities : array, optional
        Axes of all images; chosen per spread by default (`common_axes`).
    method : str
        Transform (`TRANSFORMS`).
    near_field, too_near, longest_wavelength, minimum_strength : float
        See `pick`.
    bins_per_octave : int
        See `combine_picks`.
    progress : Progress
        Counts images.

    Returns
    -------
    CurveFromGathers
    """
    if not gathers:
        raise InputError("a curve needs at least one gather; got none")
    limited = partial(pick, near_field=near_field, longest_wavelength=longest_wavelength)
    # Near field depends on the shot: it is judged shot by shot, not on the stack.
    search = partial(limited, too_near=0.0, minimum_strength=minimum_strength)
    follow = partial(limited, too_near=too_near)
    spreads: dict[int, _Spread] = {}
    progress.start("dispersion images", len(gathers))
    for number in dict.fromkeys(g.spread for g in gathers):
        members = [g for g in gathers if g.spread == number]
        f, c = common_axes(members)
        axes = (f if frequencies is None else frequencies, c if velocities is None else velocities)
        images = []
        for gather in members:
            images.append(dispersion_image(gather, *axes, method=method))
            progress.advance()
        spreads[number] = _pick_spread(members, images, search, follow, bins_per_octave)
    return _collect(gathers, spreads)


def _pick_spread(
    gathers: Sequence[Gather],
    images: list[DispersionImage],
    search: Callable[[DispersionImage], Picks],
    follow: Callable[..., Picks],
    bins_per_octave: int,
) -> _Spread:
    whole = _whole(images)
    stack = stack_images([images[i] for i in whole])
    along = partial(follow, guide=search(stack))
    picks = [along(image) for image in images]
    curve = combine_picks(picks, bins_per_octave=bins_per_octave)
    if curve is None:
        return _Spread(images, stack, picks, None, ["no ridge that could be picked as the fundamental mode"])
    first = images[0]
    image = partial(
        dispersion_image, frequencies=first.frequencies, velocities=first.velocities, method=first.method
    )
    warnings = [compare_directions(gathers, picks), compare_halves([gathers[i] for i in whole], image, along)]
    return _Spread(images, stack, picks, curve, [*curve.notes, *(w for w in warnings if w)])


def _whole(images: list[DispersionImage]) -> list[int]:
    """Which images see the whole spread; the sides of a source inside it see a part."""
    widest = max(image.aperture for image in images)
    return [i for i, image in enumerate(images) if image.aperture >= WHOLE_SPREAD * widest]


def _collect(gathers: Sequence[Gather], spreads: dict[int, _Spread]) -> CurveFromGathers:
    rank = {number: iter(range(len(gathers))) for number in spreads}
    places = [(g.spread, next(rank[g.spread])) for g in gathers]
    several = len(spreads) > 1
    label = {number: _label(number, gathers) for number in spreads}
    notes = [
        f"{label[number]}: {note}" if several else note for number, s in spreads.items() for note in s.notes
    ]
    curves = {number: s.curve for number, s in spreads.items() if s.curve is not None}
    curve: DispersionCurve | None = None
    left_out: tuple[int, ...] = ()
    if curves:
        bare = [replace(c, notes=()) for c in curves.values()]
        joined = join_agreeing(bare, [label[number] for number in curves])
        notes = [*notes, *joined.curve.notes]
        curve = replace(joined.curve, notes=tuple(notes))
        left_out = tuple(list(curves)[i] for i in joined.left_out)
    return CurveFromGathers(
        images=tuple(spreads[number].images[i] for number, i in places),
        stacked_images=tuple(s.stack for s in spreads.values()),
        picks=tuple(spreads[number].picks[i] for number, i in places),
        curve=curve,
        notes=tuple(notes),
        left_out=left_out,
    )


def _label(number: int, gathers: Sequence[Gather]) -> str:
    """Number of a spread from one on, and its files."""
    names = list(dict.fromkeys(g.name for g in gathers if g.spread == number and g.name))
    if not names:
        return f"spread {number + 1}"
    more = f" and {len(names) - FILES_NAMED} more" if len(names) > FILES_NAMED else ""
    return f"spread {number + 1} ({', '.join(names[:FILES_NAMED])}{more})"
