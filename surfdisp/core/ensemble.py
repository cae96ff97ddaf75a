"""Ensemble: weighted layered earths that all explain the curve."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from .checks import FloatArray, float_array
from .errors import InputError
from .layered_earth import LayeredEarth
from .noun import noun, set_field, tagged


@noun
class Ensemble:
    """Earths as rectangular arrays (n_earths, n_layers), and their weights (n_earths,), which sum to 1.

    Earths of fewer layers are filled up with slices of their own half-space, which changes nothing.
    """

    thickness: FloatArray = tagged("m", "earth", "layer")
    vp: FloatArray = tagged("m/s", "earth", "layer")
    vs: FloatArray = tagged("m/s", "earth", "layer")
    density: FloatArray = tagged("kg/m3", "earth", "layer")
    weights: FloatArray = tagged("", "earth")

    def __post_init__(self) -> None:
        for field in ("vs", "thickness", "vp", "density"):
            set_field(self, field, float_array(getattr(self, field), field, ndim=2))
            if getattr(self, field).shape != self.vs.shape:
                raise InputError(
                    f"{field} must have the shape of vs {self.vs.shape}; got {getattr(self, field).shape}"
                )
        weights = np.asarray(self.weights, dtype=float)
        total = float(weights.sum())
        proper = np.all(weights >= 0.0) and 0.0 < total < np.inf
        if weights.shape != (self.vs.shape[0],) or not proper:
            raise InputError(
                "weights must be one finite non-negative number per earth, not all zero; got shape "
                f"{weights.shape} with sum {total} for {self.vs.shape[0]} earths"
            )
        if abs(total - 1.0) > 1e-12:  # dividing again what already sums to 1 would move the last bits
            weights = weights / total
        set_field(self, "weights", float_array(weights, "weights"))

    @classmethod
    def of(cls, earths: Sequence[LayeredEarth], weights: Sequence[float] | FloatArray) -> Ensemble:
        """Gather `earths`, which may differ in their number of layers."""
        layers = max(len(earth.vs) for earth in earths)
        columns = {
            field: np.array([_filled(getattr(earth, field), layers) for earth in earths])
            for field in ("vp", "vs", "density")
        }
        thickness = np.array([_filled_thickness(earth.thickness, layers) for earth in earths])
        return cls(thickness=thickness, weights=np.asarray(weights), **columns)

    def __len__(self) -> int:
        return int(self.vs.shape[0])

    def earth(self, index: int) -> LayeredEarth:
        """Return one member."""
        return LayeredEarth(
            thickness=self.thickness[index],
            vp=self.vp[index],
            vs=self.vs[index],
            density=self.density[index],
        )


def _filled(values: FloatArray, layers: int) -> FloatArray:
    return np.concatenate([values, np.full(layers - len(values), values[-1])])


def _filled_thickness(thickness: FloatArray, layers: int) -> FloatArray:
    slices = np.full(layers - len(thickness), 1.0)
    return np.concatenate([thickness[:-1], slices, [np.inf]])
