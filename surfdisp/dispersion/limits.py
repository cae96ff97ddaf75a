"""What a spread can and cannot see: near field, longest wavelength, aliases."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core import DispersionImage
from ..core.checks import FloatArray

NEAR_FIELD = 1.0
"""Array-centre distance in wavelengths below which a pick is flagged (Yoon & Rix 2009: bias to 15 %)."""
TOO_NEAR = 0.5
"""... and below which it is refused."""
LONGEST_WAVELENGTH = 1.5
"""Longest wavelength in spread lengths: best up to 1, within 5 % up to 2 (Park & Carnevale 2010)."""


def centre_distance_in_wavelengths(image: DispersionImage, wavelength: FloatArray) -> FloatArray:
    """Return the normalised array-centre distance of Yoon & Rix (2009): mean offset over wavelength."""
    return np.asarray(np.mean(image.offsets) / wavelength)


def beyond_half_spacing(image: DispersionImage, wavelength: FloatArray) -> NDArray[np.bool_]:
    """Tell where the wavenumber is beyond 1 / (2 spacing)."""
    return np.asarray(wavelength < 2.0 * image.spacing)


def has_visible_alias(
    image: DispersionImage, frequency: FloatArray, velocity: FloatArray
) -> NDArray[np.bool_]:
    """Tell where a replica at k + n / spacing lies within the scanned velocities.

    Waves travel away from the source, so only positive wavenumbers are scanned.
    """
    period = 1.0 / image.spacing
    k = frequency / velocity
    slowest, fastest = frequency / image.velocities[0], frequency / image.velocities[-1]
    return np.asarray((k + period <= slowest) | (k - period >= fastest))


def is_fast_alias(image: DispersionImage, frequency: FloatArray, velocity: FloatArray) -> bool:
    """Tell whether a ridge is the replica at k - n / spacing of a slower one that is scanned too.

    A ridge of the ground runs towards k = 0 as the frequency falls; its replica is the same curve moved
    sideways and runs towards -n / spacing. The line through the lower half of the ridge tells which.
    """
    lower = slice(0, max(len(frequency) // 2, 3))
    k = frequency / velocity
    _, intercept = np.polyfit(frequency[lower], k[lower], 1)
    period = 1.0 / image.spacing
    twin_is_scanned = k[0] + period <= frequency[0] / image.velocities[0]
    return bool(twin_is_scanned and intercept < -0.5 * period)
