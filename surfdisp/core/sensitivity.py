"""Sensitivity: derivatives of a modal quantity with respect to the properties of every layer."""

from __future__ import annotations

from .checks import FloatArray, float_array
from .noun import noun, set_field, tagged


@noun
class Sensitivity:
    """Derivatives at fixed frequency, the other properties held; NaN rows where the mode does not exist.

    Each array is (n, n_layers), in SI: for a velocity, `vs` and `vp` are dimensionless, `density` is in
    (m/s)/(kg/m3) and `thickness` in 1/s. A thickness derivative shifts all deeper interfaces; its
    half-space column is zero.
    """

    vs: FloatArray = tagged("1", "frequency", "layer")
    vp: FloatArray = tagged("1", "frequency", "layer")
    density: FloatArray = tagged("(m/s)/(kg/m3)", "frequency", "layer")
    thickness: FloatArray = tagged("1/s", "frequency", "layer")

    def __post_init__(self) -> None:
        for field in ("vs", "vp", "density", "thickness"):
            set_field(self, field, float_array(getattr(self, field), field, ndim=2))
