"""DispersionImage: power over frequency and phase velocity, with the array that made it."""

from __future__ import annotations

import numpy as np

from .checks import FloatArray, all_finite, all_positive, float_array, increasing, same_length
from .errors import InputError
from .noun import noun, set_field, tagged


@noun
class DispersionImage:
    """The image of one shot, or of several shots stacked.

    Parameters
    ----------
    frequencies : array (n_frequencies,)
        Increasing [Hz].
    velocities : array (n_velocities,)
        Trial phase velocities, increasing [m/s].
    power : array (n_frequencies, n_velocities)
        Semblance-like power between 0 and 1.
    offsets : array (n_receivers,)
        Source-receiver distances of the array, increasing [m]; of the nearest shot in a stack.
    spacing : float
        Median receiver spacing [m].
    signal_to_noise : array (n_frequencies,), optional
        Amplitude of the arrivals over that of the record before or beside them; NaN where unknown.
    method : str
        Name of the transform.
    name : str
        The record or records behind it.
    shots : int
        How many shots are stacked.
    """

    frequencies: FloatArray = tagged("Hz", "frequency")
    velocities: FloatArray = tagged("m/s", "velocity")
    power: FloatArray = tagged("", "frequency", "velocity")
    offsets: FloatArray = tagged("m", "receiver")
    spacing: float = tagged("m")
    signal_to_noise: FloatArray | None = tagged("", "frequency", default=None)
    method: str = "phase-shift"
    name: str = ""
    shots: int = 1

    def __post_init__(self) -> None:
        for field, ndim in (("frequencies", 1), ("velocities", 1), ("power", 2), ("offsets", 1)):
            set_field(self, field, float_array(getattr(self, field), field, ndim=ndim))
        for field in ("frequencies", "velocities"):
            all_positive(getattr(self, field), field)
            increasing(getattr(self, field), field)
        wanted = (len(self.frequencies), len(self.velocities))
        if self.power.shape != wanted:
            raise InputError(f"power must have shape {wanted}; got {self.power.shape}")
        all_finite(self.power, "power")
        if self.power.size and (self.power.min() < 0.0 or self.power.max() > 1.0 + 1e-9):
            raise InputError(f"power must lie in 0..1; got {self.power.min()} to {self.power.max()}")
        count = len(self.frequencies)
        noise = np.full(count, np.nan) if self.signal_to_noise is None else self.signal_to_noise
        set_field(self, "signal_to_noise", float_array(noise, "signal_to_noise"))
        same_length([("frequencies", self.frequencies), ("signal_to_noise", self.signal_to_noise)])  # type: ignore[list-item]
        all_finite(self.offsets, "offsets")
        if self.offsets.size == 0 or not np.all(np.diff(self.offsets) >= 0.0):
            raise InputError(f"offsets must hold a distance and must not decrease; got {self.offsets}")
        if self.spacing <= 0.0:
            raise InputError(f"spacing must be positive, or NaN where unknown; got {self.spacing}")

    @property
    def aperture(self) -> float:
        """Distance between the nearest and the farthest receiver, seen from the source [m]."""
        return float(self.offsets[-1] - self.offsets[0])
