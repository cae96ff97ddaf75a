"""Which figures a result has, and how they become files."""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from functools import partial
from pathlib import Path
from typing import Any

from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from ..core import InversionResult, SurveyResult
from .curve_figure import picks_over_curve
from .fit_figure import curve_fit
from .image_figure import image_with_picks, shot_images
from .panels import PANELS_PER_SHEET
from .predictions import ensemble_curves
from .profile_figure import shear_velocity_profile
from .record_figure import record_section

RESOLUTION = 180
"""[dots per inch]"""

Maker = Callable[[], Figure]


def figure_makers(result: SurveyResult) -> Iterator[tuple[str, Maker]]:
    """Yield the name of each figure that the result has, and what draws it.

    Shots come `PANELS_PER_SHEET` to a figure, images one per spread; the second and later ones of a kind are
    numbered: figure_records, figure_records_2, ...
    """
    for name, part in _sheets("records", len(result.gathers)):
        yield name, partial(record_section, result.gathers[part], result.curve)
    if len(result.images) > len(result.stacked_images):  # else the images of the spreads show them all
        for name, part in _sheets("shots", len(result.images)):
            yield name, partial(shot_images, result.images[part], result.picks[part])
    spreads = list(dict.fromkeys(gather.spread for gather in result.gathers))
    for number, (image, spread) in enumerate(zip(result.stacked_images, spreads, strict=False), 1):
        shots = zip(result.gathers, result.picks, strict=True)
        picks = [pick for gather, pick in shots if gather.spread == spread]
        yield _name("image", number), partial(image_with_picks, image, picks, result.curve)
    if result.curve is not None and len(result.curve.frequency):
        yield "figure_curve", partial(picks_over_curve, result.picks, result.curve, result.gathers)
    if result.inversion is not None:
        yield "figure_fit", partial(_fit, result.inversion)
    if result.inversion is not None and result.site is not None:
        yield "figure_profile", partial(shear_velocity_profile, result.site, result.inversion, result.logs)


def write_figures(folder: str | os.PathLike[str], result: SurveyResult) -> list[str]:
    """Write every figure as PNG into the existing `folder`; return the names of the files."""
    names = []
    for name, make in figure_makers(result):
        save_figure(make(), Path(folder) / f"{name}.png")
        names.append(f"{name}.png")
    return names


def save_figure(figure: Figure, path: Path) -> None:
    """Write one figure as PNG: drawn once, where `Figure.savefig` draws a first time for the layout."""
    figure.set_dpi(RESOLUTION)
    canvas: Any = FigureCanvasAgg(figure)
    canvas.print_png(
        path,
        metadata={"Software": None},
        pil_kwargs={"compress_level": 3},  # half the time for a tenth more bytes
    )


def _sheets(kind: str, count: int) -> Iterator[tuple[str, slice]]:
    """Yield the name of each figure of small multiples and its share of `count` panels, evenly dealt."""
    sheets = -(-count // PANELS_PER_SHEET)
    each = -(-count // max(sheets, 1))
    for number in range(1, sheets + 1):
        yield _name(kind, number), slice((number - 1) * each, number * each)


def _name(kind: str, number: int) -> str:
    return f"figure_{kind}" if number == 1 else f"figure_{kind}_{number}"


def _fit(inversion: InversionResult) -> Figure:
    return curve_fit(inversion, ensemble_curves(inversion))
