"""LayeredEarth: homogeneous isotropic layers over a half-space."""

from __future__ import annotations

import numpy as np

from .checks import FloatArray, all_finite, all_positive, float_array, same_length
from .errors import InputError
from .noun import noun, set_field, tagged


@noun
class LayeredEarth:
    """Flat layers, listed from the top down; the last one is the half-space.

    Parameters
    ----------
    thickness : array (n_layers,)
        [m]; the last entry is infinite.
    vp, vs : array (n_layers,)
        Velocities of compression and shear [m/s].
    density : array (n_layers,)
        [kg/m3].

    Raises
    ------
    InputError
        If a value is not positive, if the last thickness is not infinite or another one is, or if
        vp/vs is at most 2/sqrt(3), where the bulk modulus would not be positive.
    """

    thickness: FloatArray = tagged("m", "layer")
    vp: FloatArray = tagged("m/s", "layer")
    vs: FloatArray = tagged("m/s", "layer")
    density: FloatArray = tagged("kg/m3", "layer")

    def __post_init__(self) -> None:
        fields = ("thickness", "vp", "vs", "density")
        for field in fields:
            set_field(self, field, float_array(getattr(self, field), field))
            all_positive(getattr(self, field), field)
        same_length([(field, getattr(self, field)) for field in fields])
        if self.thickness.size == 0 or not np.isinf(self.thickness[-1]):
            raise InputError(f"thickness must end with inf for the half-space; got {self.thickness}")
        all_finite(self.thickness[:-1], "thickness of the layers above the half-space")
        for field in fields[1:]:
            all_finite(getattr(self, field), field)
        bad = np.flatnonzero(self.vp <= self.vs * 2.0 / np.sqrt(3.0))
        if bad.size:
            layer = bad[0]
            raise InputError(
                f"vp must exceed 1.155 vs (positive bulk modulus); got vp {self.vp[layer]} and "
                f"vs {self.vs[layer]} m/s in layer {layer + 1} from the top"
            )

    @property
    def depth(self) -> FloatArray:
        """Depth of the top of each layer [m], (n_layers,)."""
        return np.concatenate([[0.0], np.cumsum(self.thickness[:-1])])

    @property
    def shear_modulus(self) -> FloatArray:
        """Small-strain shear modulus density x vs^2 [Pa], (n_layers,)."""
        return self.density * self.vs**2
