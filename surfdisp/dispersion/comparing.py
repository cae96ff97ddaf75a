"""Compare two curves of one site: both shot directions, both halves of a spread, two spreads."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from ..core import DispersionCurve
from ..core.checks import FloatArray

BAND = 0.5
"""Width of the bands in which curves are compared [octaves]."""
SMALLEST_DIFFERENCE = 0.02
"""A relative difference below it is not worth a warning, however certain."""
CERTAINTY = 2.0
"""Standard errors that a difference must exceed."""


class BandDifference(NamedTuple):
    """Mean velocities of two curves in one band, their relative difference and its standard error."""

    low: float
    high: float
    first: float
    second: float
    difference: float
    error: float

    @property
    def significant(self) -> bool:
        """Whether the difference exceeds two standard errors and 2 %."""
        return abs(self.difference) > max(CERTAINTY * self.error, SMALLEST_DIFFERENCE)

    def __str__(self) -> str:
        return (
            f"{100 * abs(self.difference):.0f} % at {self.low:.0f} to {self.high:.0f} Hz "
            f"({self.first:.0f} against {self.second:.0f} m/s)"
        )


def compare_curves(first: DispersionCurve, second: DispersionCurve) -> list[BandDifference]:
    """Compare two curves in half-octave bands of the frequencies that both cover.

    `difference` is the mean of ln(second / first). Its error takes the curves' standard deviations over the
    root of the number of shots, which share what is systematic, and points of one band as not independent.

    Returns
    -------
    list of BandDifference
        Empty where the curves do not overlap.
    """
    low = max(first.frequency[0], second.frequency[0]) * (1.0 - 1e-9)
    high = min(first.frequency[-1], second.frequency[-1]) * (1.0 + 1e-9)
    inside = (first.frequency >= low) & (first.frequency <= high)
    if not inside.any():
        return []
    f = first.frequency[inside]
    a, b = np.log(first.velocity[inside]), _at(second, f, np.log(second.velocity))
    variance = _mean_variance(first)[inside] + _at(second, f, _mean_variance(second))
    octave = np.log2(f / f[0])
    count = max(round(float(octave[-1]) / BAND), 1)
    band = np.minimum((octave / (octave[-1] / count + 1e-9)).astype(int), count - 1)
    return [_in_band(f[m], a[m], b[m], variance[m]) for m in (band == i for i in range(count)) if m.any()]


def _in_band(f: FloatArray, a: FloatArray, b: FloatArray, variance: FloatArray) -> BandDifference:
    first, second = float(np.exp(a.mean())), float(np.exp(b.mean()))
    return BandDifference(
        float(f[0]), float(f[-1]), first, second, float(np.mean(b - a)), float(np.sqrt(variance.mean()))
    )


def _at(curve: DispersionCurve, frequency: FloatArray, values: FloatArray) -> FloatArray:
    return np.asarray(np.interp(np.log(frequency), np.log(curve.frequency), values))


def _mean_variance(curve: DispersionCurve) -> FloatArray:
    return np.asarray(np.square(curve.sigma / curve.velocity) / np.asarray(curve.shots))


def significant(differences: list[BandDifference]) -> str:
    """Say where two curves differ beyond their uncertainty; an empty text where they do not."""
    return ", ".join(str(d) for d in differences if d.significant)
