"""The starting model read straight off the curve."""

from __future__ import annotations

import numpy as np

from ..core import DispersionCurve
from ..core.checks import FloatArray
from .layering import Layering

VELOCITY_FACTOR = 1.1
WAVELENGTHS_PER_DEPTH = 2.5
"""Between the third and the half wavelength of practice."""


def starting_ln_vs(curve: DispersionCurve, layering: Layering) -> FloatArray:
    """Return ln Vs of the unknowns, (n_unknowns,), by the rule Vs = 1.1 c at a depth of wavelength / 2.5.

    The rule of practice quoted by Tokimatsu, Tamura & Kojima (1992), who give a third or half a wavelength.
    Above and below the curve's depths the end values hold; the half-space is made fast enough to carry the
    fastest observed velocity.
    """
    order = np.argsort(curve.wavelength)
    depth = np.log(curve.wavelength[order] / WAVELENGTHS_PER_DEPTH)
    ln_vs = np.interp(np.log(layering.unknown_depth), depth, np.log(VELOCITY_FACTOR * curve.velocity[order]))
    ln_vs[-1] = max(ln_vs[-1], np.log(VELOCITY_FACTOR * curve.velocity.max()))
    return ln_vs
