"""Residuals of a dispersion curve in units of sigma, and their derivatives by ln Vs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..core import DispersionCurve, LayeredEarth
from ..core.checks import FloatArray
from ..earth import phase_velocity, phase_velocity_and_sensitivity
from .ground import Ground
from .layering import Layering


@dataclass(frozen=True)
class Misfit:
    """Compares a curve with the earth made of ln Vs.

    Where the mode does not exist at a frequency its velocity counts as that of the half-space, the limit it
    tends to at its cut-off: the misfit stays continuous and pulls the half-space towards the data.
    """

    curve: DispersionCurve
    ground: Ground
    layering: Layering

    def earth(self, ln_vs: FloatArray) -> LayeredEarth:
        """Return the earth of unknowns `ln_vs`, (n_unknowns,)."""
        return self.ground.earth(np.exp(ln_vs)[self.layering.unknown], self.layering)

    def predicted(self, ln_vs: FloatArray) -> FloatArray:
        """Return the phase velocity [m/s] at the curve's frequencies; NaN where the mode does not exist."""
        velocity: FloatArray = phase_velocity(
            self.earth(ln_vs), self.curve.frequency, mode=self.curve.mode or 0
        )
        return velocity

    def residuals(self, ln_vs: FloatArray) -> FloatArray:
        """Return (predicted - observed) / sigma, (n_points,)."""
        velocity = self.predicted(ln_vs)
        velocity = np.where(np.isnan(velocity), np.exp(ln_vs[-1]), velocity)
        return (velocity - self.curve.velocity) / self.curve.sigma

    def linearised(self, ln_vs: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return the residuals and their derivatives by ln Vs, (n_points,) and (n_points, n_unknowns)."""
        earth = self.earth(ln_vs)
        velocity, by = phase_velocity_and_sensitivity(earth, self.curve.frequency, mode=self.curve.mode or 0)
        _, vp_slope = self.ground.compression(earth.vs, self.layering)
        _, density_slope = self.ground.densities(earth.vs, self.layering)
        by_layer = (by.vs + by.vp * vp_slope + by.density * density_slope) * earth.vs
        by_unknown = by_layer @ (self.layering.unknown[:, None] == np.arange(ln_vs.size))
        lost = np.isnan(velocity) | ~np.isfinite(by_unknown).all(axis=1)
        velocity = np.where(np.isnan(velocity), earth.vs[-1], velocity)
        by_unknown[lost] = 0.0
        by_unknown[lost, -1] = earth.vs[-1]
        sigma = self.curve.sigma
        return (velocity - self.curve.velocity) / sigma, by_unknown / sigma[:, None]

    def by_assumptions(self, ln_vs: FloatArray) -> FloatArray:
        """Return the derivatives of the residuals by Poisson's ratio and density trend, (n_points, 2)."""
        earth, ground, layering = self.earth(ln_vs), self.ground, self.layering
        _, by = phase_velocity_and_sensitivity(earth, self.curve.frequency, mode=self.curve.mode or 0)
        vp_slope = ground.compression_by_poisson_ratio(earth.vs, layering)
        density_slope = ground.density_by_trend(earth.vs, layering)
        slopes = np.stack([by.vp @ vp_slope, by.density @ density_slope], axis=1) / self.curve.sigma[:, None]
        return np.nan_to_num(slopes, nan=0.0)
