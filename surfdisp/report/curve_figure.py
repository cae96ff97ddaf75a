"""The picks of all shots over the combined curve."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from ..core import DispersionCurve, Gather, Picks
from ..core.checks import FloatArray
from .axes import frequency_scale
from .palette import FORWARD, HAIR, INK, REVERSE, finish, sheet, styled
from .panels import legend_below
from .words import metres, printable, shortened

MARKS = "osD^vP"
NAMED_SHOTS = 14


@styled
def picks_over_curve(
    picks: Sequence[Picks], curve: DispersionCurve, gathers: Sequence[Gather] = ()
) -> Figure:
    """Return the accepted picks of every shot over the curve, and how far each departs from it.

    `gathers`, in the order of `picks`, tell the direction in which each shot looks along the line.
    """
    figure = sheet(4.6)
    above, below = figure.subplots(2, 1, sharex=True, height_ratios=(2.2, 1.0))
    _curve(above, curve)
    relative = 100.0 * curve.sigma / curve.velocity
    below.fill_between(curve.frequency, -relative, relative, color=HAIR, linewidth=0.0)
    below.axhline(0.0, color=INK, linewidth=0.8)
    reach = _reach(picks, curve)
    for index, pick in enumerate(picks):
        style = _style(index, gathers[index] if gathers else None)
        label = _label(pick, gathers[index] if gathers else None) if index < NAMED_SHOTS else None
        above.scatter(pick.frequency[pick.accepted], pick.velocity[pick.accepted], label=label, **style)
        frequency, departure = _departures(pick, curve)
        below.scatter(frequency, departure.clip(-reach, reach), **style)
    above.set_ylabel(f"{curve.kind} velocity (m/s)")
    below.set_ylabel("pick minus curve (%)")
    below.set_xlabel("frequency (Hz)")
    below.set_ylim(-1.08 * reach, 1.08 * reach)
    for axes in (above, below):
        finish(axes)
    legend_below(figure, [above], columns=3)
    return figure


def _curve(axes: Axes, curve: DispersionCurve) -> None:
    axes.errorbar(
        curve.frequency, curve.velocity, curve.sigma, fmt="_", color=INK, markersize=5, capsize=2,
        elinewidth=1.0, label="combined curve ± sigma", zorder=4,
    )  # fmt: skip
    frequency_scale(axes)


def _label(picks: Picks, gather: Gather | None) -> str:
    source = "" if gather is None else f", {metres(gather.source)} m"
    return f"{shortened(printable(picks.name), 26)}{source}"


def _style(index: int, gather: Gather | None) -> dict[str, Any]:
    forward = gather is None or gather.source <= np.mean(gather.receivers)
    colour = FORWARD if forward else REVERSE
    mark = MARKS[index % len(MARKS)]
    return {"s": 7.0, "marker": mark, "facecolors": "none", "linewidths": 0.6, "edgecolors": colour}


def _departures(picks: Picks, curve: DispersionCurve) -> tuple[FloatArray, FloatArray]:
    """Return how far each accepted pick within the curve's band lies from the curve [%]."""
    frequency = picks.frequency
    shown = picks.accepted & (frequency >= curve.frequency[0]) & (frequency <= curve.frequency[-1])
    expected = np.interp(frequency[shown], curve.frequency, curve.velocity)
    return frequency[shown], 100.0 * (picks.velocity[shown] / expected - 1.0)


def _reach(picks: Sequence[Picks], curve: DispersionCurve) -> float:
    """Return the half-height of the lower panel [%]: nineteen picks in twenty; the others lie at its edge."""
    departures = np.concatenate([np.zeros(1), *(np.abs(_departures(pick, curve)[1]) for pick in picks)])
    sigma = 100.0 * float((curve.sigma / curve.velocity).max())
    return max(1.0, 1.5 * float(np.quantile(departures, 0.95)), min(1.2 * sigma, 30.0))
