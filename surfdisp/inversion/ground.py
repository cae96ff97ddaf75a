"""What is assumed about the ground besides shear velocity: Vp and density as functions of Vs and depth."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..core import LayeredEarth
from ..core.checks import FloatArray, finite, positive
from ..core.errors import InputError
from .layering import Layering

GRAVITY = 9.81
"""[m/s2]"""
LIGHTEST, HEAVIEST = 1500.0, 2600.0
"""Limits of the density relation [kg/m3]."""
SHALLOWEST = 0.5
"""Least depth that enters the density relation [m]."""


@dataclass(frozen=True)
class Ground:
    """Rules that tie compression velocity and density to shear velocity.

    Parameters
    ----------
    poisson_ratio : float
        Above the water table.
    water_table_depth : float
        [m]; infinite where no water table is assumed.
    saturated_vp : float
        Least compression velocity below the water table [m/s]; about 1500 m/s is common practice.
    density : float or None
        [kg/m3] of all layers, or None for the relation of Mayne (2001).
    density_trend : float
        Relative change of the relation's density over one e-fold of depth; 0 takes it as published.
    """

    poisson_ratio: float
    water_table_depth: float
    saturated_vp: float
    density: float | None
    density_trend: float = 0.0

    def __post_init__(self) -> None:
        if not 0.0 <= finite(self.poisson_ratio, "poisson_ratio") < 0.5:
            raise InputError(f"poisson_ratio must be at least 0 and less than 0.5; got {self.poisson_ratio}")
        if not self.water_table_depth >= 0.0:
            raise InputError(f"water_table_depth must not be negative; got {self.water_table_depth} m")
        positive(self.saturated_vp, "saturated_vp")
        if self.density is not None:
            positive(self.density, "density")

    @property
    def velocity_ratio(self) -> float:
        """Vp/Vs of Poisson's ratio."""
        return math.sqrt((2.0 - 2.0 * self.poisson_ratio) / (1.0 - 2.0 * self.poisson_ratio))

    def compression(self, vs: FloatArray, layering: Layering) -> tuple[FloatArray, FloatArray]:
        """Return Vp [m/s] and dVp/dVs of every layer, (n_layers,) each.

        Water adds its stiffness to that of the frame (Gassmann 1951): Vp^2 = saturated_vp^2 + (ratio Vs)^2.
        """
        wet = layering.top >= self.water_table_depth - 1e-6  # a layering is split at the water table
        water = np.where(wet, self.saturated_vp, 0.0)
        vp = np.hypot(water, self.velocity_ratio * vs)
        return vp, self.velocity_ratio**2 * vs / vp

    def compression_by_poisson_ratio(self, vs: FloatArray, layering: Layering) -> FloatArray:
        """Return the derivative of Vp by Poisson's ratio, (n_layers,) [m/s]."""
        vp, _ = self.compression(vs, layering)
        slope: FloatArray = vs**2 / (vp * (1.0 - 2.0 * self.poisson_ratio) ** 2)
        return slope

    def densities(self, vs: FloatArray, layering: Layering) -> tuple[FloatArray, FloatArray]:
        """Return density [kg/m3] and its derivative by Vs of every layer, (n_layers,) each.

        Unit weight of soil in kN/m3 = 8.32 log10(Vs) - 1.61 log10(depth), Vs in m/s, depth in m (Mayne 2001).
        """
        if self.density is not None:
            return np.full(vs.shape, self.density), np.zeros(vs.shape)
        depth = np.maximum(layering.middle, SHALLOWEST)
        density = 1000.0 * (8.32 * np.log10(vs) - 1.61 * np.log10(depth)) / GRAVITY
        slope = 1000.0 * 8.32 / (math.log(10.0) * GRAVITY * vs)
        inside = (density > LIGHTEST) & (density < HEAVIEST)
        tilt = np.exp(self.density_trend * np.log(depth / depth[0]))
        return np.clip(density, LIGHTEST, HEAVIEST) * tilt, np.where(inside, slope, 0.0) * tilt

    def density_by_trend(self, vs: FloatArray, layering: Layering) -> FloatArray:
        """Return the derivative of density by the density trend, (n_layers,) [kg/m3]."""
        if self.density is not None:
            return np.zeros(vs.shape)
        depth = np.maximum(layering.middle, SHALLOWEST)
        slope: FloatArray = self.densities(vs, layering)[0] * np.log(depth / depth[0])
        return slope

    def earth(self, vs: FloatArray, layering: Layering) -> LayeredEarth:
        """Return the earth whose layers have shear velocity `vs` [m/s], (n_layers,)."""
        vp, _ = self.compression(vs, layering)
        density, _ = self.densities(vs, layering)
        return LayeredEarth(thickness=layering.thickness, vp=vp, vs=vs, density=density)
