"""Dispersion images with the ridge, the picks accepted and refused, and the limits of the array."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np
from matplotlib.axes import Axes
from matplotlib.cm import ScalarMappable
from matplotlib.colors import Normalize
from matplotlib.figure import Figure
from numpy.typing import NDArray

from ..core import DispersionCurve, DispersionImage, Picks
from ..core.checks import FloatArray
from .axes import log_scales
from .limits import wavelength_limits
from .palette import ACCEPTED, BEST, INK, REFUSED, TIDE, finish, sheet, styled
from .panels import grid, label_outer, legend_below
from .words import printable, shortened

FREQUENCY = "frequency (Hz)"
VELOCITY = "phase velocity (m/s)"
POWER = "power (1: traces agree)"
ALIAS = "alias of the ridge"
PIXELS = 400
"""Rows and columns of an image as drawn."""
LINE_STYLES: Any = ((0, (6, 2)), "solid", (0, (6, 2, 1, 2)), (0, (1.5, 1.5)))
"""Of the limits, in their order."""


@styled
def shot_images(images: Sequence[DispersionImage], picks: Sequence[Picks]) -> Figure:
    """Return a figure with one panel per shot: its image, its picks and its limits."""
    figure, panels = grid(len(images), panel_height=1.95, extra_height=0.75)
    for axes, image, pick in zip(panels, images, picks, strict=True):
        view = _view(image, picks)
        _power(axes, image, view)
        _limits(axes, image)
        _picks(axes, pick, size=2.5)
        _alias(axes, image, pick.frequency[pick.accepted], pick.velocity[pick.accepted])
        _frame(axes, view)
        axes.set_title(shortened(printable(image.name), 30))
    label_outer(panels, FREQUENCY, VELOCITY)
    _power_scale(figure, panels)
    legend_below(figure, panels, columns=3)
    return figure


@styled
def image_with_picks(
    image: DispersionImage, picks: Sequence[Picks] = (), curve: DispersionCurve | None = None
) -> Figure:
    """Return one image over the whole sheet with the picks of one shot or several, limits, and a curve."""
    figure = sheet(4.1)
    axes = figure.subplots()
    view = _view(image, picks)
    _power(axes, image, view)
    _limits(axes, image)
    for pick in picks:
        _picks(axes, pick, size=4.0 if len(picks) == 1 else 1.5, band=len(picks) == 1)
    if curve is None and len(picks) == 1:
        accepted = picks[0].accepted
        _alias(axes, image, picks[0].frequency[accepted], picks[0].velocity[accepted])
    if curve is not None and len(curve.frequency):
        _alias(axes, image, curve.frequency, curve.velocity)
        axes.errorbar(
            curve.frequency, curve.velocity, curve.sigma, fmt="s", color=BEST, markersize=2.6, capsize=1.5,
            elinewidth=0.8, markeredgecolor="white", markeredgewidth=0.3, label="combined curve ± sigma",
            zorder=4,
        )  # fmt: skip
    _frame(axes, view)
    axes.set_title(_title(image))
    axes.set_xlabel(FREQUENCY)
    axes.set_ylabel(VELOCITY)
    _power_scale(figure, [axes])
    legend_below(figure, [axes], columns=3)
    return figure


def _title(image: DispersionImage) -> str:
    """Return the name of a single shot's image; of a stack the number of shots, and of files behind them."""
    if image.shots == 1:
        return shortened(printable(image.name), 60)
    names = image.name.replace(" + ", ", ").split(", ")  # as blows and images are joined
    files = len({name for name in names if name not in ("", "low side", "high side")})
    return f"{image.shots} shots stacked" + (f" ({files} files)" if files > 1 else "")


class _View(NamedTuple):
    """What of an image is shown: lowest and highest frequency [Hz], slowest and fastest velocity [m/s]."""

    lowest: float
    highest: float
    slowest: float
    fastest: float


def _view(image: DispersionImage, picks: Sequence[Picks]) -> _View:
    """Return the range around the accepted picks where their aliases and limits show, or the whole image."""
    frequencies, velocities = image.frequencies, image.velocities
    frequency = np.concatenate([np.empty(0), *(pick.frequency[pick.accepted] for pick in picks)])
    velocity = np.concatenate([np.empty(0), *(pick.velocity[pick.accepted] for pick in picks)])
    return _View(
        max(frequencies[0], 0.5 * frequency.min()) if len(frequency) else frequencies[0],
        frequencies[-1],
        max(velocities[0], 0.4 * velocity.min()) if len(velocity) else velocities[0],
        min(velocities[-1], 2.5 * velocity.max()) if len(velocity) else velocities[-1],
    )


def _power(axes: Axes, image: DispersionImage, view: _View) -> None:
    """Draw the power on logarithmic scales, where lines of equal wavelength run parallel."""
    frequencies = np.geomspace(view.lowest, view.highest, PIXELS)
    velocities = np.geomspace(view.slowest, view.fastest, PIXELS)
    rows, columns = _nearest(image.velocities, velocities), _nearest(image.frequencies, frequencies)
    pixels = image.power.T[rows[:, None], columns]
    log_scales(axes)
    axes.autoscale(enable=False)
    axes.imshow(
        pixels, cmap=TIDE, vmin=0.0, vmax=1.0, origin="lower", aspect="auto", extent=(0.0, 1.0, 0.0, 1.0),
        transform=axes.transAxes,  # the pixels are even in the logarithm, as the axes are
    )  # fmt: skip


def _nearest(values: FloatArray, wanted: FloatArray) -> NDArray[np.intp]:
    """Return the index of the entry of `values` nearest to each of `wanted`."""
    return np.searchsorted(0.5 * (values[1:] + values[:-1]), wanted)


def _limits(axes: Axes, image: DispersionImage) -> None:
    """Draw the wavelengths that bound what the array can tell: lines through the origin."""
    for limit, style in zip(wavelength_limits(image), LINE_STYLES, strict=False):
        velocity = limit.wavelength * image.frequencies
        axes.plot(image.frequencies, velocity, color=INK, linewidth=0.8, linestyle=style, label=limit.label)


def _alias(axes: Axes, image: DispersionImage, ridge_frequency: FloatArray, ridge: FloatArray) -> None:
    """Draw where replicas of a ridge must lie: wavenumbers k +- 1/spacing (cycles per metre).

    Above its last point the ridge is continued at that point's velocity.
    """
    if not (len(ridge) and np.isfinite(image.spacing) and image.spacing > 0.0):
        return
    frequency = image.frequencies[image.frequencies >= ridge_frequency[0]]
    ridge = np.interp(frequency, ridge_frequency, ridge)
    for order in (-1.0, 1.0):
        wavenumber = frequency / ridge + order / image.spacing
        velocity = np.where(wavenumber > 0.0, frequency / np.where(wavenumber > 0.0, wavenumber, 1.0), np.nan)
        axes.plot(frequency, velocity, color=REFUSED, linewidth=0.9, linestyle=(0, (3, 1.5)), label=ALIAS)


def _picks(axes: Axes, picks: Picks, *, size: float, band: bool = True) -> None:
    flagged = picks.accepted & (picks.reason != "")
    plain = picks.accepted & ~flagged
    refused = ~picks.accepted & np.isfinite(picks.velocity)
    if band and picks.accepted.any():
        _half_width(axes, picks)
    if refused.any():
        axes.scatter(
            picks.frequency[refused], picks.velocity[refused], s=2.0 * size, marker="D", facecolors="none",
            edgecolors=REFUSED, linewidths=0.5, label="ridge, refused", zorder=3,
        )  # fmt: skip
    if plain.any():
        axes.scatter(
            picks.frequency[plain], picks.velocity[plain], s=size, marker="o", color=ACCEPTED,
            linewidths=0.0, label="pick, accepted", zorder=3,
        )  # fmt: skip
    if flagged.any():
        axes.scatter(
            picks.frequency[flagged], picks.velocity[flagged], s=2.0 * size, marker="^", facecolors="white",
            edgecolors=ACCEPTED, linewidths=0.6, label="pick, accepted with a flag", zorder=3,
        )  # fmt: skip


def _half_width(axes: Axes, picks: Picks) -> None:
    for side in (-1.0, 1.0):
        edge = np.where(picks.accepted, picks.velocity + side * picks.half_width, np.nan)
        axes.plot(picks.frequency, edge, color=ACCEPTED, linewidth=0.7, label="half-width of the ridge")


def _frame(axes: Axes, view: _View) -> None:
    """Keep the frame to what is shown, whatever the limits' lines reach."""
    axes.set_xlim(view.lowest, view.highest)
    axes.set_ylim(view.slowest, view.fastest)
    finish(axes)


def _power_scale(figure: Figure, panels: list[Axes]) -> None:
    scale = ScalarMappable(Normalize(0.0, 1.0), TIDE)
    figure.colorbar(scale, ax=panels, label=POWER, fraction=0.03, pad=0.01, aspect=30)
