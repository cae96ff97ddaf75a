"""Scales that several figures share."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.ticker import FuncFormatter, LogLocator, NullLocator


def frequency_scale(axes: Axes) -> None:
    """Make x a logarithmic frequency scale with plain numbers at 1, 2, 3, 5, 7 and their decades."""
    axes.set_xscale("log")
    axes.xaxis.set_major_locator(LogLocator(subs=(1.0, 2.0, 3.0, 5.0, 7.0)))
    axes.xaxis.set_minor_locator(NullLocator())
    axes.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
