"""Travel-time averages of shear velocity over depth, for one earth or for every earth of an ensemble.

The average velocity down to depth z is z / sum(h_i / v_i), the speed of a vertical shear wave that takes as
long as it does through the layers; an arithmetic mean over depth would be too fast (EN 1998-1:2004, eq. 3.1;
ASCE 7-22, eq. 20.4-1).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..core import Ensemble, LayeredEarth
from ..core.checks import FloatArray, positive


def average_velocity(earth: LayeredEarth, depth: float) -> float:
    """Return the travel-time average of shear velocity from the surface to `depth`.

    Parameters
    ----------
    earth : LayeredEarth
    depth : float
        [m].

    Returns
    -------
    float
        [m/s].

    Raises
    ------
    InputError
        If `depth` is not a positive number.
    """
    depth = positive(depth, "depth")
    return float(depth / travel_times(earth.thickness, earth.vs, depth)[..., 0])


def vs30(earth: LayeredEarth) -> float:
    """Return the travel-time average of shear velocity over the upper 30 m [m/s]."""
    return average_velocity(earth, 30.0)


def average_velocities(ensemble: Ensemble, depth: float) -> FloatArray:
    """Return `average_velocity` of every earth of the ensemble, (n_earths,) [m/s]."""
    velocities: FloatArray = depth / travel_times(ensemble.thickness, ensemble.vs, depth)[..., 0]
    return velocities


def travel_times(thickness: FloatArray, vs: FloatArray, depths: ArrayLike) -> FloatArray:
    """Return the time of a vertical shear wave from the surface to each depth.

    Parameters
    ----------
    thickness, vs : array (..., n_layers)
        [m], the last one infinite, and [m/s].
    depths : float or array (n_depths,)
        [m].

    Returns
    -------
    array (..., n_depths)
        [s].
    """
    return integrals(thickness, 1.0 / vs, depths)


def integrals(thickness: FloatArray, values: FloatArray, depths: ArrayLike) -> FloatArray:
    """Integrate piecewise constant `values` (..., n_layers) over depth down to each of `depths`."""
    bottom = np.cumsum(thickness, axis=-1)[..., None, :]
    top = np.concatenate([np.zeros_like(bottom[..., :1]), bottom[..., :-1]], axis=-1)
    limits = np.atleast_1d(np.asarray(depths, dtype=float))[:, None]
    within = np.clip(np.minimum(bottom, limits) - top, 0.0, None)
    summed: FloatArray = np.sum(within * values[..., None, :], axis=-1)
    return summed
