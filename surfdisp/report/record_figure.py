"""The record section: traces as they were used, against position and time."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure

from ..core import DispersionCurve, Gather
from .palette import BEST, INK, finish, styled
from .panels import grid, label_outer, legend_below
from .words import metres, number, printable, shortened

SAMPLES_SHOWN = 400
"""Traces of more samples are drawn with every n-th one."""


@styled
def record_section(gathers: Sequence[Gather], curve: DispersionCurve | None = None) -> Figure:
    """Return a figure with one panel per gather: position along the line [m] against time [s], downwards.

    Each trace is scaled to its own largest sample. With a `curve`, two lines show when waves of its slowest
    and fastest phase velocity would arrive.
    """
    figure, panels = grid(len(gathers), panel_height=2.3, extra_height=0.5)
    until = max((_end_of_the_waves(gather) for gather in gathers), default=0.0)
    for axes, gather in zip(panels, gathers, strict=True):
        _traces(axes, gather, until)
        if curve is not None and len(curve.frequency):
            _arrivals(axes, gather, curve)
        finish(axes)
    label_outer(panels, "position along the line (m)", "time after the blow (s)")
    legend_below(figure, panels, columns=2)
    return figure


def _traces(axes: Axes, gather: Gather, until: float) -> None:
    shown = max(int(np.searchsorted(gather.times, until)), 2)
    stride = max(1, shown // SAMPLES_SHOWN)
    times = gather.times[:shown:stride]
    peak = np.abs(gather.data).max(axis=1, keepdims=True)
    unit = gather.data[:, :shown:stride] / np.where(peak > 0.0, peak, 1.0)
    spacing = gather.spacing if len(gather.receivers) > 1 else 1.0
    position = gather.receivers[:, None] + 0.9 * spacing * unit
    lines = np.stack([position, np.broadcast_to(times, position.shape)], axis=-1)
    axes.add_collection(LineCollection(list(lines), colors=INK, linewidths=0.45))
    axes.set_xlim(gather.receivers[0] - 1.5 * spacing, gather.receivers[-1] + 1.5 * spacing)
    axes.set_ylim(until, min(gather.delay, 0.0))
    axes.set_title(f"{shortened(printable(gather.name), 30)}\nsource at {metres(gather.source)} m")


def _end_of_the_waves(gather: Gather) -> float:
    """Return when the strongest wave has passed nearly all receivers, and half as long again [s]."""
    strongest = gather.times[np.abs(gather.data).argmax(axis=1)]
    end = 1.5 * float(np.quantile(strongest, 0.9)) + 0.1
    return min(max(end, float(gather.times[0]) + 10.0 * gather.interval), float(gather.times[-1]))


def _arrivals(axes: Axes, gather: Gather, curve: DispersionCurve) -> None:
    for velocity, style in ((curve.velocity.max(), (0, (5, 2))), (curve.velocity.min(), (0, (1.5, 1.5)))):
        label = f"arrival at {number(velocity)} m/s"
        axes.plot(gather.receivers, gather.offsets / velocity, color=BEST, linestyle=style, label=label)
