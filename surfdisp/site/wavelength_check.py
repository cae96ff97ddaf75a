"""Vs30 read off the dispersion curve alone, as an independent check of the inverted one."""

from __future__ import annotations

import math

import numpy as np

from ..core import DispersionCurve, Interval

WAVELENGTH = 36.0
"""[m]"""
FACTOR = 1.076
RANGE_95 = 0.10
"""Half-width of the regression's 95 % interval, relative."""


def wavelength_check(curve: DispersionCurve) -> Interval | None:
    """Return 1.076 times the fundamental Rayleigh phase velocity at 36 m wavelength, with its 90 % range.

    Brown, Diehl & Nigbor 2000 (12th World Conf. Earthq. Eng., paper 0677), a regression on 40 profiles whose
    95 % interval is about +-10 %; the range returned joins it with the curve's own sigma.

    Returns
    -------
    Interval or None
        [m/s]; None where the curve is no fundamental Rayleigh phase velocity or does not reach 36 m.
    """
    if (curve.wave, curve.kind, curve.mode) != ("rayleigh", "phase", 0) or not len(curve.frequency):
        return None
    order = np.argsort(curve.wavelength)
    wavelength = curve.wavelength[order]
    if not wavelength[0] <= WAVELENGTH <= wavelength[-1]:
        return None
    velocity = float(np.interp(math.log(WAVELENGTH), np.log(wavelength), curve.velocity[order]))
    sigma = float(np.interp(math.log(WAVELENGTH), np.log(wavelength), (curve.sigma / curve.velocity)[order]))
    half = 1.645 * math.hypot(RANGE_95 / 1.960, sigma)
    vs30 = FACTOR * velocity
    return Interval(median=vs30, low=vs30 * (1.0 - half), high=vs30 * (1.0 + half))


def agrees(vs30: Interval, check: Interval) -> bool:
    """Tell whether the median Vs30 lies inside the range of the check."""
    return check.low <= vs30.median <= check.high
