"""Gather: the traces of one source, or of several repeated blows stacked, on one line of receivers."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from .checks import FloatArray, all_finite, finite, float_array, increasing, positive, same_length
from .errors import InputError
from .noun import noun, set_field, tagged


@noun
class Gather:
    """One shot gather, immutable, in SI units.

    Parameters
    ----------
    data : array (n_receivers, n_samples)
        Vertical ground motion in the instrument's units, receivers in the order of `receivers`.
    interval : float
        Sampling interval [s].
    receivers : array (n_receivers,)
        Positions along the line [m], increasing.
    source : float
        Position of the source along the line [m].
    delay : float
        Time of the first sample after the blow [s]; negative where recording began before it.
    source_off_line : float
        Horizontal distance of the source from the line [m].
    elevations : array (n_receivers,), optional
        Receiver elevations [m]; zero by default.
    source_elevation : float
        Elevation of the source [m].
    name : str
        What people call the record: its file, or the files stacked into it.
    blows : int
        How many blows are stacked.
    spread : int
        Which receiver layout of the survey it belongs to; gathers of one spread may miss different traces.
    notes : tuple of str
        What was found and done on the way: doubtful headers, traces set aside, each with its reason.

    Raises
    ------
    InputError
        If shapes differ, receivers do not increase, or a value is not finite.
    """

    data: FloatArray = tagged("", "receiver", "sample")
    interval: float = tagged("s")
    receivers: FloatArray = tagged("m", "receiver")
    source: float = tagged("m")
    delay: float = tagged("s", default=0.0)
    source_off_line: float = tagged("m", default=0.0)
    elevations: FloatArray | None = tagged("m", "receiver", default=None)
    source_elevation: float = tagged("m", default=0.0)
    name: str = ""
    blows: int = 1
    spread: int = 0
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        set_field(self, "data", float_array(self.data, "data", ndim=2))
        set_field(self, "receivers", float_array(self.receivers, "receivers"))
        elevations: ArrayLike = np.zeros(len(self.receivers)) if self.elevations is None else self.elevations
        set_field(self, "elevations", float_array(elevations, "elevations"))
        set_field(self, "interval", positive(self.interval, "interval"))
        for field in ("source", "delay", "source_off_line", "source_elevation"):
            set_field(self, field, finite(getattr(self, field), field))
        same_length([("receivers", self.receivers), ("data", self.data), ("elevations", self.elevations)])  # type: ignore[list-item]
        if self.data.size == 0:
            raise InputError(f"data must hold at least one sample; got shape {self.data.shape}")
        all_finite(self.data, "data")
        all_finite(self.receivers, "receivers")
        increasing(self.receivers, "receivers")
        set_field(self, "notes", tuple(self.notes))

    @property
    def offsets(self) -> FloatArray:
        """Slant distances from source to receivers [m], (n_receivers,)."""
        return np.sqrt(
            np.square(self.receivers - self.source)
            + self.source_off_line**2
            + np.square(np.asarray(self.elevations) - self.source_elevation)
        )

    @property
    def times(self) -> FloatArray:
        """Times of the samples after the blow [s], (n_samples,)."""
        return self.delay + self.interval * np.arange(self.data.shape[1], dtype=np.float64)

    @property
    def spacing(self) -> float:
        """Median distance between neighbouring receivers [m]; NaN for a single receiver."""
        return float(np.median(np.diff(self.receivers))) if len(self.receivers) > 1 else float("nan")

    @property
    def spread_length(self) -> float:
        """Distance between the first and the last receiver [m]."""
        return float(self.receivers[-1] - self.receivers[0])
