"""Shear velocity and modulus against depth, with ranges, as steps that fit every earth of an ensemble."""

from __future__ import annotations

import numpy as np

from ..core import Ensemble, Profile
from ..core.checks import FloatArray
from .averages import integrals, travel_times
from .percentiles import weighted_percentiles

THINNEST_STEP = 0.25
"""[m]"""
RELATIVE_STEP = 0.03
"""Thinnest step as a share of its depth: finer ones would state depths that nobody can resolve."""


def profiles(ensemble: Ensemble, bottom: float) -> tuple[Profile, Profile]:
    """Return shear velocity [m/s] and shear modulus [Pa] as steps from the surface to `bottom` [m].

    Steps begin at the interfaces of the earths. Within a step each earth counts by its travel-time average,
    so that the time through the steps is the time through the layers; the modulus is mean density times the
    square of that velocity. The last row begins at `bottom`.
    """
    depth = step_tops(ensemble, bottom)
    edges = np.append(depth, depth[-1] + max(THINNEST_STEP, RELATIVE_STEP * bottom))
    thickness = np.diff(edges)
    vs = thickness / np.diff(travel_times(ensemble.thickness, ensemble.vs, edges), axis=1)
    density = np.diff(integrals(ensemble.thickness, ensemble.density, edges), axis=1) / thickness
    return _profile(depth, vs, ensemble.weights), _profile(depth, density * vs**2, ensemble.weights)


def step_tops(ensemble: Ensemble, bottom: float) -> FloatArray:
    """Return where steps begin: 0, the interfaces of the ensemble thinned to legible steps, and `bottom`."""
    interfaces = np.cumsum(ensemble.thickness[:, :-1], axis=1)
    real = np.any(np.diff(ensemble.vs, axis=1) != 0.0, axis=0)  # fillers below a shorter earth are none
    tops = [0.0]
    for depth in np.unique(interfaces[:, real]):
        room = max(THINNEST_STEP, RELATIVE_STEP * depth)
        if depth >= tops[-1] + room and depth + room <= bottom:
            tops.append(float(depth))
    return np.array([*tops, bottom])


def _profile(depth: FloatArray, values: FloatArray, weights: FloatArray) -> Profile:
    low, median, high = weighted_percentiles(values, weights, (5.0, 50.0, 95.0))
    return Profile(depth=depth, median=median, low=low, high=high)
