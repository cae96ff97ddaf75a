"""Report sections on the dispersion curve: images, picks, and what was made of them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Sequence

from ..core import DispersionCurve, Picks, SurveyResult
from .blocks import Block, bullets, figures_named, heading, paragraph
from .limits import limits_in_words
from .words import band_and_wavelengths, mode_name, number, observable, percent, printable, scanned, span

SHOT_LINES = 10
IMAGES = 2
"""Figures of stacked images in the report; those of further spreads are in the output folder."""


def picking(result: SurveyResult, figures: Sequence[str]) -> Iterator[Block]:
    """Yield what was picked from each shot, what was refused and why, and the images."""
    yield heading("Images and picks")
    yield paragraph(
        "A ridge is followed through the image of each shot. A pick is refused where the ridge is lost, "
        "weak, in the near field, longer than the spread can measure, or an alias; the half-width of the "
        "ridge says what can be separated and is not an uncertainty."
    )
    yield paragraph(
        limits_in_words(),
        f"Scanned were {scanned(result.images)}; chosen from spread and record unless set.",
    )
    yield bullets([_shot_line(picks) for picks in result.picks], SHOT_LINES, "project.h5")
    yield from figures_named(
        "figure_shots",
        figures,
        "Image of each shot with picks accepted, accepted with a flag, and refused, and the limits applied.",
        width=88,
    )
    shown = "the picks of every shot, the combined curve" if result.curve is not None else "what was refused"
    yield from figures_named(
        "figure_image",
        figures,
        f"Image of each spread, its shots stacked, with {shown}, and the limits applied; the near field is "
        "judged shot by shot, so that picks of farther shots may lie above the lines of the nearest one.",
        width=80 if len(result.stacked_images) == 1 else 66,
        most=IMAGES,
    )
    yield from figures_named(
        "figure_curve",
        figures,
        "Accepted picks of all shots over the combined curve, in one colour where the source stands before "
        "the middle of the line and in another where it stands behind it, and their departure from it with "
        "the curve's standard deviation shaded; what lies beyond the lower panel is drawn at its edge.",
        width=82,
    )


def _shot_line(picks: Picks) -> str:
    accepted = picks.frequency[picks.accepted]
    band = f", {number(accepted[0])} to {number(accepted[-1])} Hz" if len(accepted) else ""
    reasons = Counter(str(reason) for reason in picks.reason[~picks.accepted] if reason)
    refused = "; ".join(f"{reason} ({count})" for reason, count in reasons.most_common(4))
    return (
        f"{printable(picks.name)}: {len(accepted)} of {len(picks.frequency)} frequencies accepted{band}"
        + (f". Refused: {refused}" if refused else "")
    )


def curve(result_curve: DispersionCurve) -> Iterator[Block]:
    """Yield the combined curve in words: band, wavelengths, uncertainty, and the mode it is taken for."""
    relative = result_curve.sigma / result_curve.velocity
    band, wavelengths = band_and_wavelengths(result_curve)
    yield heading("Dispersion curve")
    yield paragraph(
        f"{observable(result_curve)}: {len(result_curve.frequency)} points from {band}, "
        f"{span(result_curve.velocity, 'm/s')}, {wavelengths}.",
        f"Standard deviations are {percent(float(relative.min()))} to {percent(float(relative.max()))} of "
        "the velocity: the error of the ridge's location joined with the scatter between shots, not "
        "divided by their number, because near field and lateral change do not average out.",
        _mode_assumption(result_curve.mode),
    )


def _mode_assumption(mode: int | None) -> str:
    if mode is None:
        return "The ridge is not assigned to a mode."
    return (
        f"The ridge is taken for the {mode_name(mode)}; where a higher mode carried the energy, this would "
        "make the ground look stiffer than it is."
    )
