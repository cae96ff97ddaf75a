"""Colours, type and sheets: the one place where the look of all figures is chosen."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.colors import ListedColormap
from matplotlib.figure import Figure

from ..core.checks import FloatArray

F = TypeVar("F", bound=Callable[..., Figure])

INK = "#26323a"
FAINT = "#8c979d"
HAIR = "#d5dade"
BEST = "#b4472e"
BAND = "#9dbcc4"
ACCEPTED = "#f2a33a"
REFUSED = "#7b3f61"
FORWARD = "#2a7886"
REVERSE = "#a8552f"
LOG = "#6b4e9b"

WIDTH = 6.7
"""Width of a figure [inch]: the text width of the report."""

STYLE: Any = {
    "font.family": "DejaVu Sans",
    "font.size": 7.5,
    "axes.titlesize": 7.5,
    "axes.titlelocation": "left",
    "axes.labelsize": 7.5,
    "axes.edgecolor": FAINT,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.6,
    "axes.unicode_minus": True,
    "text.color": INK,
    "text.parse_math": False,  # a $ in a file name is a $
    "xtick.color": INK,
    "ytick.color": INK,
    "xtick.labelsize": 7,
    "ytick.labelsize": 7,
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "xtick.minor.width": 0.4,
    "ytick.minor.width": 0.4,
    "legend.fontsize": 7,
    "legend.frameon": False,
    "legend.handlelength": 1.8,
    "lines.linewidth": 1.1,
    "svg.fonttype": "path",
    "svg.hashsalt": "surfdisp",
}


def styled(function: F) -> F:
    """Draw with `STYLE` while `function` runs, and leave the user's own settings as they were."""
    made: F = mpl.rc_context(STYLE)(function)
    return made


def sheet(height: float, width: float = WIDTH) -> Figure:
    """Return an empty figure of that size [inch], drawn without any window system."""
    figure = Figure(figsize=(width, height), layout="constrained")
    FigureCanvasAgg(figure)
    return figure


def finish(axes: Axes) -> None:
    """Leave only the two sides of the frame that carry scales, and let labels alone decide the layout."""
    axes.spines[["top", "right"]].set_visible(False)
    for artist in (*axes.lines, *axes.collections, *axes.images, *axes.patches):
        artist.set_in_layout(False)


def _tide() -> ListedColormap:
    """Return a map from near-white through sea green to deep indigo with evenly falling CIE lightness."""
    steps = np.linspace(0.0, 1.0, 256)
    lightness = 97.0 - 80.0 * steps
    hue = np.radians(130.0 + 165.0 * steps)
    chroma = 28.0 * np.sin(np.pi * (0.04 + 0.80 * steps))
    return ListedColormap(_srgb(lightness, chroma * np.cos(hue), chroma * np.sin(hue)), name="tide")


def _srgb(lightness: FloatArray, a: FloatArray, b: FloatArray) -> FloatArray:
    """Return sRGB (n, 3) of CIELAB colours (D65): CIE 15 and IEC 61966-2-1."""
    y = (lightness + 16.0) / 116.0
    cube = np.stack([y + a / 500.0, y, y - b / 200.0], axis=-1)
    xyz = np.where(cube > 6.0 / 29.0, cube**3, 3.0 * (6.0 / 29.0) ** 2 * (cube - 4.0 / 29.0))
    xyz *= np.array([0.95047, 1.0, 1.08883])
    matrix = np.array(
        [
            [3.2404542, -1.5371385, -0.4985314],
            [-0.969266, 1.8760108, 0.041556],
            [0.0556434, -0.2040259, 1.0572252],
        ]
    )
    linear = np.clip(xyz @ matrix.T, 0.0, 1.0)
    colours: FloatArray = np.where(linear <= 0.0031308, 12.92 * linear, 1.055 * linear ** (1 / 2.4) - 0.055)
    return colours


TIDE = _tide()
