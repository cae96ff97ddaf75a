"""The fit: what was measured, what the earths predict, and the misfit by frequency."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure

from ..core import InversionResult
from ..core.checks import FloatArray
from .axes import frequency_scale
from .palette import BAND, BEST, HAIR, INK, finish, sheet, styled
from .panels import legend_below
from .words import number


@styled
def curve_fit(inversion: InversionResult, ensemble_curves: FloatArray | None = None) -> Figure:
    """Return the curve with its error bars, the best earth's prediction, and the residuals by frequency.

    `ensemble_curves`, (n, n_points), are the velocities [m/s] that other earths of the ensemble predict.
    """
    figure = sheet(4.0)
    above, below = figure.subplots(2, 1, sharex=True, height_ratios=(2.4, 1.0))
    _velocities(above, inversion, ensemble_curves)
    _residuals(below, inversion)
    above.set_ylabel(f"{inversion.curve.kind} velocity (m/s)")
    below.set_ylabel("measured minus\npredicted (sigma)")
    below.set_xlabel("frequency (Hz)")
    figure.align_ylabels()
    legend_below(figure, [above], columns=3)
    return figure


def _velocities(axes: Axes, inversion: InversionResult, ensemble_curves: FloatArray | None) -> None:
    curve = inversion.curve
    if ensemble_curves is not None and len(ensemble_curves):
        x = np.broadcast_to(curve.frequency, ensemble_curves.shape)
        lines = list(np.stack([x, ensemble_curves], axis=-1))
        label = f"{len(ensemble_curves)} earths of the ensemble"
        axes.add_collection(LineCollection(lines, colors=BAND, linewidths=0.5, alpha=0.6, label=label))
    axes.errorbar(
        curve.frequency, curve.velocity, curve.sigma, fmt="o", color=INK, markersize=2.5, capsize=1.5,
        elinewidth=0.8, label="measured ± sigma",
    )  # fmt: skip
    axes.plot(curve.frequency, inversion.predicted, color=BEST, label="best earth", zorder=3)
    axes.set_title(f"mean squared misfit in units of the variance: {number(inversion.chi_square)}")
    frequency_scale(axes)
    finish(axes)


def _residuals(axes: Axes, inversion: InversionResult) -> None:
    curve = inversion.curve
    residual = (curve.velocity - inversion.predicted) / curve.sigma
    axes.axhspan(-1.0, 1.0, color=HAIR, linewidth=0.0)
    axes.axhline(0.0, color=INK, linewidth=0.8)
    axes.vlines(curve.frequency, 0.0, residual, color=BEST, linewidth=1.2)
    axes.plot(curve.frequency, residual, "o", color=BEST, markersize=2.5)
    reach = max(2.2, 1.15 * float(np.nanmax(np.abs(residual), initial=0.0)))
    axes.set_ylim(-reach, reach)
    finish(axes)
