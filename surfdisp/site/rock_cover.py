"""What EN 1998-1:2004 asks beyond the 30 m average: how thick the soil over rock is.

Table 3.1 calls a profile A only with at most 5 m of weaker material at the surface, and E where a surface
layer with velocities of C or D, 5 to 20 m thick, lies on material of more than 800 m/s.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core import Ensemble
from ..core.checks import FloatArray
from .averages import travel_times

ROCK = 800.0
"""Shear velocity above which ground counts as rock [m/s]."""
SOIL = 360.0
"""Upper shear velocity of classes C and D [m/s]."""
THICKEST_COVER_OF_A = 5.0
THINNEST_COVER_OF_E, THICKEST_COVER_OF_E = 5.0, 20.0
DEPTH = 30.0
"""Depth down to which rock must hold once it is reached [m]."""

RULES = (
    "E where 5 to 20 m of soil averaging at most 360 m/s lie on more than 800 m/s; A only with at most 5 m "
    "of weaker material at the surface, else B"
)


def cover_thickness(ensemble: Ensemble) -> FloatArray:
    """Return the depth below which every earth stays above 800 m/s down to 30 m, (n_earths,) [m].

    It is infinite where the ground at 30 m is no rock.
    """
    bottom = np.cumsum(ensemble.thickness, axis=1)
    top = np.concatenate([np.zeros((len(ensemble), 1)), bottom[:, :-1]], axis=1)
    weak = (ensemble.vs <= ROCK) & (top < DEPTH)
    cover: FloatArray = np.max(np.where(weak, bottom, 0.0), axis=1)
    return np.where(cover < DEPTH, cover, np.inf)


def with_rock_rules(names: NDArray[np.str_], ensemble: Ensemble) -> NDArray[np.str_]:
    """Return the classes by 30 m average, (n_earths,), corrected by the rules about soil over rock."""
    cover = cover_thickness(ensemble)
    rock = np.isfinite(cover) & (cover > 0.0)
    average = np.full(len(ensemble), np.inf)
    for index in np.flatnonzero(rock):
        time = travel_times(ensemble.thickness[index], ensemble.vs[index], cover[index])[0]
        average[index] = cover[index] / time
    is_e = (cover >= THINNEST_COVER_OF_E) & (cover <= THICKEST_COVER_OF_E) & (average <= SOIL)
    not_a = (names == "A") & (cover > THICKEST_COVER_OF_A)
    return np.where(is_e, "E", np.where(not_a, "B", names))
