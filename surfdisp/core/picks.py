"""Picks: what the picker says at every frequency of one image, the refusals included."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .checks import FloatArray, all_finite, float_array, frozen, increasing, one_of, same_length
from .noun import noun, set_field, tagged

WAVES = ("rayleigh", "love")
KINDS = ("phase", "group")


@noun
class Picks:
    """Ridge of one image, one entry per frequency.

    Parameters
    ----------
    frequency : array (n,)
        Increasing [Hz].
    velocity : array (n,)
        Ridge velocity [m/s]; NaN where there is no ridge.
    sigma : array (n,)
        Standard deviation of the ridge's location [m/s]; NaN where there is no ridge.
    half_width : array (n,)
        Half-width of the ridge [m/s]: resolution, what can be separated; not an uncertainty.
    accepted : bool array (n,)
        Whether the pick goes into the curve.
    reason : str array (n,)
        Why a frequency was refused, or which flags an accepted pick carries (joined by "; "); else empty.
    mode : int or None
        Mode number, None for a ridge without an assigned mode.
    name : str
        The image picked.
    author : str
        "automatic", or who picked by hand.
    """

    frequency: FloatArray = tagged("Hz", "frequency")
    velocity: FloatArray = tagged("m/s", "frequency")
    sigma: FloatArray = tagged("m/s", "frequency")
    half_width: FloatArray = tagged("m/s", "frequency")
    accepted: NDArray[np.bool_] = tagged("", "frequency")
    reason: NDArray[np.str_] = tagged("", "frequency")
    wave: str = "rayleigh"
    kind: str = "phase"
    mode: int | None = 0
    name: str = ""
    author: str = "automatic"

    def __post_init__(self) -> None:
        for field in ("frequency", "velocity", "sigma", "half_width"):
            set_field(self, field, float_array(getattr(self, field), field))
        set_field(self, "accepted", frozen(self.accepted, "accepted", dtype=np.bool_))
        set_field(self, "reason", frozen(self.reason, "reason", dtype=np.str_))
        fields = ("frequency", "velocity", "sigma", "half_width", "accepted", "reason")
        same_length([(field, getattr(self, field)) for field in fields])
        increasing(self.frequency, "frequency")
        for field in ("velocity", "sigma"):
            all_finite(
                getattr(self, field)[self.accepted], f"{field} of accepted picks of {self.name or 'an image'}"
            )
        one_of(self.wave, "wave", WAVES)
        one_of(self.kind, "kind", KINDS)

    @property
    def wavelength(self) -> FloatArray:
        """Velocity over frequency [m], (n,)."""
        return self.velocity / self.frequency
