"""Closed forms of the homogeneous half-space: known answers to measure the numerical ones by."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..core.checks import FloatArray, positive
from ..core.errors import InputError

RAYLEIGH_ARRIVAL = 0.5 * np.sqrt(3.0 + np.sqrt(3.0))
"""Arrival of the Rayleigh wave at Poisson's ratio 1/4 over that of the shear wave (Pekeris 1955)."""


def half_space_rayleigh_speed(vp: float, vs: float) -> float:
    """Return the speed of the Rayleigh wave on a homogeneous half-space [m/s].

    The root below vs of x^3 - 8 x^2 + (24 - 16 g) x - 16 (1 - g) = 0, x = (c/vs)^2, g = (vs/vp)^2
    (Rayleigh 1885).

    Parameters
    ----------
    vp, vs : float
        Velocities of compression and shear [m/s].

    Raises
    ------
    InputError
        If vp/vs is at most 2/sqrt(3), where the bulk modulus would not be positive.
    """
    vp, vs = positive(vp, "vp"), positive(vs, "vs")
    if not vp > vs * 2.0 / np.sqrt(3.0):
        raise InputError(f"vp must exceed 1.155 vs (positive bulk modulus); got vp {vp} and vs {vs} m/s")
    g = (vs / vp) ** 2
    roots = np.roots([1.0, -8.0, 24.0 - 16.0 * g, -16.0 * (1.0 - g)])
    real = roots.real[np.abs(roots.imag) < 1e-9]
    return float(vs * np.sqrt(real[(real > 0.0) & (real < 1.0)][0]))


def lamb_step_response(time: ArrayLike, offset: float, vs: float, density: float) -> FloatArray:
    """Return the vertical surface displacement after a vertical unit step of force on the surface [m/N].

    Lamb's problem for Poisson's ratio 1/4, in closed form (Pekeris 1955): with tau = vs t/offset the
    motion starts with the P wave at tau = 1/sqrt(3), grows without bound towards the Rayleigh wave at
    tau = sqrt(3 + sqrt(3))/2 = 1.0877, and is the static 3/(8 pi mu offset) from there on.

    Parameters
    ----------
    time : array
        After the step [s].
    offset : float
        Distance from the load along the surface [m].
    vs : float
        Shear velocity [m/s]; vp is sqrt(3) vs.
    density : float
        [kg/m3]

    Returns
    -------
    array
        Positive along the load, of the shape of `time`.
    """
    offset, vs, density = positive(offset, "offset"), positive(vs, "vs"), positive(density, "density")
    tau = vs * np.asarray(time, dtype=np.float64) / offset
    square, root = np.square(tau), np.sqrt(3.0)
    before_p, before_s, before_rayleigh = tau <= 1.0 / root, tau < 1.0, tau < RAYLEIGH_ARRIVAL
    with np.errstate(invalid="ignore", divide="ignore"):
        rayleigh = np.sqrt((3.0 * root + 5.0) / (0.75 + root / 4.0 - square))
        shear = np.sqrt((3.0 * root - 5.0) / (square + root / 4.0 - 0.75))
        compression = np.sqrt(3.0 / (square - 0.25))
        between = (6.0 - compression - rayleigh + shear) / 32.0
        normalised = np.select(
            [before_p, before_s, before_rayleigh], [0.0, between, (6.0 - rayleigh) / 16.0], default=0.375
        )
    return np.asarray(normalised / (np.pi * density * vs**2 * offset))
