"""Scales that several figures share."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.axis import Axis
from matplotlib.ticker import FuncFormatter, LogLocator, NullLocator


def frequency_scale(axes: Axes) -> None:
    """Make x a logarithmic scale of frequency."""
    axes.set_xscale("log")
    _plain_numbers(axes.xaxis, (1.0, 2.0, 3.0, 5.0, 7.0))


def log_scales(axes: Axes) -> None:
    """Make both scales logarithmic."""
    axes.set_xscale("log")
    axes.set_yscale("log")
    for axis in (axes.xaxis, axes.yaxis):
        _plain_numbers(axis, (1.0, 2.0, 5.0))


def _plain_numbers(axis: Axis, leading: tuple[float, ...]) -> None:
    axis.set_major_locator(LogLocator(subs=leading))
    axis.set_minor_locator(NullLocator())
    axis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
