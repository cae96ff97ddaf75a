"""What members of an ensemble predict for the curve they were made from."""

from __future__ import annotations

import numpy as np

from ..core import Ensemble, InversionResult
from ..core.checks import FloatArray
from ..earth import phase_velocity

CURVES_SHOWN = 40


def representative(ensemble: Ensemble, count: int) -> list[int]:
    """Return the indices of up to `count` members, evenly spaced in cumulative weight; no chance involved."""
    levels = (np.arange(count) + 0.5) / count
    found = np.searchsorted(np.cumsum(ensemble.weights), levels)
    return sorted({min(int(index), len(ensemble) - 1) for index in found})


def ensemble_curves(inversion: InversionResult) -> FloatArray:
    """Return the velocities [m/s] that up to `CURVES_SHOWN` earths predict, (n_earths, n_points).

    None (0, n_points) for what is no phase velocity of a numbered Rayleigh mode.
    """
    curve = inversion.curve
    if (curve.wave, curve.kind) != ("rayleigh", "phase") or curve.mode is None:
        return np.empty((0, len(curve.frequency)))
    earths = [inversion.ensemble.earth(index) for index in representative(inversion.ensemble, CURVES_SHOWN)]
    return np.array([phase_velocity(earth, curve.frequency, mode=curve.mode) for earth in earths])
