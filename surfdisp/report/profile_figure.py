"""The shear-velocity profile with its range, the earths behind it, and where the data stop to speak."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure

from ..core import Ensemble, InversionResult, LayeredEarth, Profile, SiteResult
from ..core.checks import FloatArray
from .palette import BAND, BEST, FAINT, HAIR, INK, LOG, finish, sheet, styled
from .panels import legend_below
from .predictions import representative
from .words import interval, number

EARTHS_SHOWN = 60


@styled
def shear_velocity_profile(
    site: SiteResult, inversion: InversionResult, logs: Sequence[Profile] = ()
) -> Figure:
    """Return shear velocity against depth, and beside it how far the data decide each layer."""
    figure = sheet(4.8, width=4.4)
    main, side = figure.subplots(1, 2, sharey=True, width_ratios=(3.6, 1.0))
    bottom = max(1.02 * float(site.profile.depth[-1]), 1.15 * site.resolved_depth)
    _earths(main, inversion.ensemble, bottom)
    _ranges(main, site.profile, bottom)
    _step(
        main,
        inversion.earth.depth,
        inversion.earth.vs,
        bottom,
        color=BEST,
        linestyle=(0, (4, 1.5)),
        label="best earth",
    )
    for index, log in enumerate(logs):
        name = "borehole log" if len(logs) == 1 else f"borehole log {index + 1}"
        _step(
            main,
            log.depth,
            log.median,
            log.depth[-1],
            color=LOG,
            linestyle=(0, (1, 1)),
            linewidth=1.6,
            label=name,
        )
    main.set_xlim(0.0, 1.2 * _fastest_shown(site.profile, inversion.earth, bottom))
    main.set_ylim(bottom, 0.0)
    main.set_xlabel("shear velocity (m/s)")
    main.set_ylabel("depth (m)")
    main.set_title(f"Vs30 {interval(site.vs30)}, 90 % range in brackets")
    legend_below(figure, [main], columns=3)
    _resolution(side, inversion.earth, inversion.resolution, bottom)
    for axes in (main, side):
        axes.axhline(site.resolved_depth, color=INK, linewidth=0.8, linestyle=(0, (6, 2)))
        axes.axhspan(site.resolved_depth, bottom, color=FAINT, alpha=0.12, linewidth=0.0)
        finish(axes)
    main.annotate(
        f"resolved to {number(site.resolved_depth)} m", (1.0, site.resolved_depth), (-2, -3),
        xycoords=("axes fraction", "data"), textcoords="offset points", ha="right", va="top",
        bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.7, "pad": 1.0},
    )  # fmt: skip
    return figure


def _fastest_shown(profile: Profile, earth: LayeredEarth, bottom: float) -> float:
    """Return the largest velocity of range and best earth; single other earths may leave the frame."""
    return float(max(np.nanmax(profile.high, initial=1.0), earth.vs[earth.depth < bottom].max()))


def _earths(axes: Axes, ensemble: Ensemble, bottom: float) -> None:
    lines = [
        np.column_stack(_corners(earth.depth, earth.vs, bottom)[::-1])
        for earth in (ensemble.earth(index) for index in representative(ensemble, EARTHS_SHOWN))
    ]
    label = f"{len(lines)} earths of the ensemble"
    axes.add_collection(LineCollection(lines, colors=BAND, linewidths=0.4, alpha=0.7, label=label))


def _ranges(axes: Axes, profile: Profile, bottom: float) -> None:
    depth, low = _corners(profile.depth, profile.low, bottom)
    high = _corners(profile.depth, profile.high, bottom)[1]
    axes.fill_betweenx(
        depth, low, high, color=HAIR, alpha=0.75, linewidth=0.0, label="90 % range", zorder=0.5
    )
    _step(axes, profile.depth, profile.median, bottom, color=INK, linewidth=1.8, label="median")


def _step(axes: Axes, depth: FloatArray, values: FloatArray, bottom: float, **style: object) -> None:
    corners, steps = _corners(depth, values, bottom)
    axes.plot(steps, corners, **style)  # type: ignore[arg-type]


def _corners(depth: FloatArray, values: FloatArray, bottom: float) -> tuple[FloatArray, FloatArray]:
    """Return depth and value at both ends of every step, the last one drawn to `bottom`."""
    ends = np.append(depth[1:], max(bottom, depth[-1]))
    return np.column_stack([depth, ends]).ravel(), np.repeat(values, 2)


def _resolution(axes: Axes, earth: LayeredEarth, resolution: FloatArray, bottom: float) -> None:
    tops = np.minimum(earth.depth, bottom)
    ends = np.minimum(np.append(earth.depth[1:], bottom), bottom)
    axes.barh(
        tops, resolution, height=ends - tops, align="edge", color=BAND, edgecolor="white", linewidth=0.6
    )
    axes.set_xlim(0.0, 1.0)
    axes.set_xticks([0.0, 0.5, 1.0], ["0", "0.5", "1"])
    axes.set_xlabel("resolution\n(1: data decide)")
