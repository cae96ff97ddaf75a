"""Where exactly a ridge peaks at one frequency, how sure that is, and how wide the ridge is."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from ..core.checks import FloatArray


class Peak(NamedTuple):
    """Peak of one row of an image; velocity NaN where the window holds none.

    `curvature` is -p''/(2 p) in radian wavenumber [m2], `half_width` half the full width at half power [m/s].
    """

    velocity: float
    power: float
    curvature: float
    half_width: float


NO_PEAK = Peak(np.nan, np.nan, np.nan, np.nan)


def locate(
    frequency: float, velocities: FloatArray, power: FloatArray, slowest: float, fastest: float
) -> Peak:
    """Find the largest maximum of `power` between two velocities, refined by a parabola in wavenumber."""
    first, last = np.searchsorted(velocities, [slowest, fastest])
    first, last = max(int(first), 1), min(int(last), len(velocities) - 1)
    if last <= first:
        return NO_PEAK
    inner = power[first:last]
    peaks = np.flatnonzero((inner >= power[first - 1 : last - 1]) & (inner >= power[first + 1 : last + 1]))
    if peaks.size == 0:
        return NO_PEAK
    top = first + int(peaks[np.argmax(inner[peaks])])
    k = 2.0 * np.pi * frequency / velocities[top - 1 : top + 2]
    bend, slope = _parabola(k - k[1], power[top - 1 : top + 2] - power[top])
    if not bend < 0.0 or not power[top] > 0.0:
        return NO_PEAK
    shift = -slope / (2.0 * bend)
    height = float(power[top] - slope * slope / (4.0 * bend))
    velocity = 2.0 * np.pi * frequency / (k[1] + shift)
    return Peak(
        float(velocity), min(height, 1.0), -bend / height, _half_width(velocities, power, top, height)
    )


def wavenumber_sigma(power: float, curvature: float, traces: int) -> float:
    """Return the standard deviation of a peak's wavenumber [rad/m] for `traces` independent phases.

    Phase errors of variance s2 lower the expected power to exp(-s2) + (1 - exp(-s2))/n, from which s2 is
    read; the maximum of the steered sum is the least-squares slope of phase against distance, whose variance
    is s2 / (n Var(x)); and Var(x) is the curvature of the power at its peak, -p''/(2 p).
    """
    share = (power - 1.0 / traces) / (1.0 - 1.0 / traces)
    variance = -np.log(min(max(share, 1e-3), 1.0 - 1e-6))
    return float(np.sqrt(variance / (traces * curvature)))


def _parabola(x: FloatArray, y: FloatArray) -> tuple[float, float]:
    """Return a, b of y = a x2 + b x through (x0, y0), (0, 0), (x2, y2)."""
    a = (y[0] / x[0] - y[2] / x[2]) / (x[0] - x[2])
    return float(a), float(y[0] / x[0] - a * x[0])


def _half_width(velocities: FloatArray, power: FloatArray, top: int, height: float) -> float:
    """Half the distance between the half-power points; the image's edge where it cuts the ridge off."""
    below = power < 0.5 * height
    left = np.flatnonzero(below[:top])
    right = np.flatnonzero(below[top:])
    slow = _crossing(velocities, power, int(left[-1]), 0.5 * height) if left.size else velocities[0]
    fast = (
        _crossing(velocities, power, top + int(right[0]) - 1, 0.5 * height) if right.size else velocities[-1]
    )
    return float(0.5 * (fast - slow))


def _crossing(velocities: FloatArray, power: FloatArray, index: int, level: float) -> float:
    share = (level - power[index]) / (power[index + 1] - power[index])
    return float(velocities[index] + share * (velocities[index + 1] - velocities[index]))
