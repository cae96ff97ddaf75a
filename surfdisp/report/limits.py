"""The limits applied to the picks and the curve: as lines on an image, and in words.

Their values are those of `dispersion`, which this room does not import; a test holds the two together.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

import numpy as np

from ..core import DispersionImage

NEAR_FIELD = 1.0
"""Distance of the array's centre in wavelengths below which a pick is flagged."""
TOO_NEAR = 0.5
"""... and below which it is refused."""
LONGEST_WAVELENGTH = 1.5
"""Longest wavelength in spread lengths."""
STEEP_WAVELENGTH = 0.5
"""Wavelength in spread lengths beyond which a steep ridge is flagged."""
OUTLIER = 3.0
"""Robust standard deviations beyond which a shot is rejected from a bin."""
BINS_PER_OCTAVE = 8


class WavelengthLimit(NamedTuple):
    """A wavelength [m] where picks begin to be refused or flagged, and what the legend calls it."""

    wavelength: float
    label: str


def wavelength_limits(image: DispersionImage) -> Iterator[WavelengthLimit]:
    """Yield the wavelengths that bound what the array can tell, those known for this image.

    The near field of a stack is that of its nearest shot; farther shots reach longer wavelengths.
    """
    centre = float(np.mean(image.offsets))
    whose = " (nearest shot)" if image.shots > 1 else ""
    limits = (
        WavelengthLimit(centre / NEAR_FIELD, f"near field{whose}: flagged above"),
        WavelengthLimit(centre / TOO_NEAR, f"near field{whose}: refused above"),
        WavelengthLimit(
            LONGEST_WAVELENGTH * image.aperture, f"{LONGEST_WAVELENGTH:g} spread lengths: refused above"
        ),
        WavelengthLimit(2.0 * image.spacing, "two spacings: flagged below"),
    )
    return (limit for limit in limits if np.isfinite(limit.wavelength) and limit.wavelength > 0.0)


def limits_in_words() -> str:
    """Return one sentence per limit."""
    return (
        "Limits applied: near field, a pick is refused where the distance from the source to the centre of "
        f"the array is below {TOO_NEAR:g} wavelengths, and flagged where it is below {NEAR_FIELD:g}. Longest "
        f"wavelength, a pick is refused beyond {LONGEST_WAVELENGTH:g} spread lengths; beyond "
        f"{STEEP_WAVELENGTH:g} spread lengths a steep ridge is flagged, as it may be another mode. "
        "Aliasing, a pick at less than two receiver spacings is flagged, and refused where an alias lies "
        "within the scanned velocities unless the ridge continues from longer wavelengths. In the curve, of "
        f"{BINS_PER_OCTAVE} bins per octave, a shot is rejected from a bin where it lies more than "
        f"{OUTLIER:g} robust standard deviations from the median of three or more shots; picks flagged as "
        "near field count only where no shot is without the flag."
    )
