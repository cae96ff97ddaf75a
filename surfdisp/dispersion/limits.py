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
NEAR_FIELD_ERROR = {
    0.5: 0.07,
    1.0: 0.06,
    1.5: 0.057,
    2.0: 0.024,
    2.5: 0.016,
    3.0: 0.009,
    4.0: 0.007,
    6.0: 0.0,
}
"""Relative standard deviation for the near field, at array-centre distances in wavelengths.

Yoon & Rix (2009) state a bias of up to 10 to 15 % at 1 and up to 5 % at 2, taken as two standard deviations.
From 1 to 4 the values are rms errors of the accepted picks of single shots, within 10 % of the distance, on
noise-free full wavefields of 24 random earths (seeds 0 to 23 of tests/benchmarks/random_surveys.py): 6.0 % at
1, 5.7 % at 1.5, 2.4 % at 2, 1.6 % at 2.5, 0.9 % at 3 and 0.7 % at 4. At 5 and 6 the errors were 0.5 and
0.6 %; they fall no further there and so are not counted as near field.
"""
LONGEST_WAVELENGTH = 1.5
"""Longest wavelength in spread lengths: best up to 1, within 5 % up to 2 (Park & Carnevale 2010)."""


def centre_distance_in_wavelengths(image: DispersionImage, wavelength: FloatArray) -> FloatArray:
    """Return the normalised array-centre distance of Yoon & Rix (2009): mean offset over wavelength."""
    return np.asarray(np.mean(image.offsets) / wavelength)


def near_field_error(distance: FloatArray) -> FloatArray:
    """Return the relative standard deviation of a pick for the near field (`NEAR_FIELD_ERROR`)."""
    return np.asarray(np.interp(distance, list(NEAR_FIELD_ERROR), list(NEAR_FIELD_ERROR.values())))


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
