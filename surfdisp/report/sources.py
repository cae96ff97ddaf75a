"""The published methods behind the numbers of a report."""

from __future__ import annotations

from collections.abc import Sequence

from ..core import SurveyResult

IMAGE = "Phase-shift image: Park, Miller & Xia 1998, 68th Annual Meeting of the SEG."
NEAR_FIELD = (
    "Near field by the distance of the array centre in wavelengths: Yoon & Rix 2009, J. Geotech. Geoenviron. "
    "Eng. 135."
)
LONGEST = "Longest wavelength in lengths of the array: Park & Carnevale 2010, GeoFlorida, ASCE."
FORWARD = (
    "Phase velocities from the dynamic stiffness of layered ground: Kausel & Roësset 1981, Bull. Seismol. "
    "Soc. Am. 71; certified mode count: Wittrick & Williams 1971, Q. J. Mech. Appl. Math. 24; fast secular "
    "function: Buchen & Ben-Hador 1996, Geophys. J. Int. 124."
)
INVERSION = (
    "Smoothest earth that fits to the noise: Constable, Parker & Constable 1987, Geophysics 52; layerings by "
    "a constant ratio: Cox & Teague 2016, Geophys. J. Int. 207."
)
DEPTH = (
    "Resolved depth as half the longest wavelength: common practice, see Foti et al. 2018, Bull. Earthq. "
    "Eng. 16."
)
CHECK = (
    "Vs30 from the phase velocity at 36 m wavelength: Brown, Diehl & Nigbor 2000, 12th World Conf. Earthq. "
    "Eng., paper 0677."
)
CLASSES = "Site classes: ASCE 7-22, Table 20.2-1; ASCE 7-16, Table 20.3-1; EN 1998-1:2004, Table 3.1."


def sources(result: SurveyResult) -> Sequence[str]:
    """Return one sentence per method that the result rests on."""
    used = [IMAGE] if result.images else []
    used += [NEAR_FIELD, LONGEST] if result.picks else []
    used += [FORWARD, INVERSION, DEPTH] if result.inversion is not None else []
    used += [CHECK, CLASSES] if result.site is not None else []
    return used or ["None was applied: no record could be used."]
