"""DispersionCurve: one wave, mode and kind, with the uncertainty that goes into the inversion."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .checks import FloatArray, all_finite, all_positive, float_array, frozen, increasing, one_of, same_length
from .noun import noun, set_field, tagged
from .picks import KINDS, WAVES


@noun
class DispersionCurve:
    """Velocity against frequency.

    Parameters
    ----------
    frequency : array (n,)
        Increasing [Hz].
    velocity : array (n,)
        [m/s].
    sigma : array (n,)
        Standard deviation [m/s].
    shots : int array (n,), optional
        How many shots agree on the point.
    flags : str array (n,), optional
        Flags that the point carries from its picks, joined by "; ".
    wave, kind : str
        "rayleigh" or "love", "phase" or "group".
    mode : int or None
        Mode number, None for a ridge without an assigned mode.
    notes : tuple of str
        Warnings for the reader of the report (rejected outliers, differing directions, lateral change).
    """

    frequency: FloatArray = tagged("Hz", "point")
    velocity: FloatArray = tagged("m/s", "point")
    sigma: FloatArray = tagged("m/s", "point")
    shots: NDArray[np.int64] | None = tagged("", "point", default=None)
    flags: NDArray[np.str_] | None = tagged("", "point", default=None)
    wave: str = "rayleigh"
    kind: str = "phase"
    mode: int | None = 0
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        for field in ("frequency", "velocity", "sigma"):
            set_field(self, field, float_array(getattr(self, field), field))
            all_finite(getattr(self, field), field)
            all_positive(getattr(self, field), field)
        count = len(self.frequency)
        shots = np.ones(count) if self.shots is None else self.shots
        flags = np.full(count, "") if self.flags is None else self.flags
        set_field(self, "shots", frozen(shots, "shots", dtype=np.int64))
        set_field(self, "flags", frozen(flags, "flags", dtype=np.str_))
        same_length([(f, getattr(self, f)) for f in ("frequency", "velocity", "sigma", "shots", "flags")])
        increasing(self.frequency, "frequency")
        one_of(self.wave, "wave", WAVES)
        one_of(self.kind, "kind", KINDS)
        set_field(self, "notes", tuple(self.notes))

    @property
    def wavelength(self) -> FloatArray:
        """Velocity over frequency [m], (n,)."""
        return self.velocity / self.frequency
