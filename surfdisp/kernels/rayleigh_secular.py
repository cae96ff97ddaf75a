"""Rayleigh secular function by the fast delta matrix: cheap, smooth in c, zero at every mode.

Buchen & Ben-Hador (1996, Geophys. J. Int. 124, 869-887): the 2x2 minors of the two solutions that leave the
free surface without traction form a vector of five independent components. It is carried down through each
layer by the hyperbolic functions of its vertical phases and across each interface by the contrasts ::

    eps = rho_below / rho_above,   eta = 2 (g_above - eps g_below),   g = (vs / c)^2

and joined to the two decaying waves of the half-space. All steps are scaled by positive factors only,
so that the sign is that of the exact function: by the decaying exponentials, which are smooth in c, and by
the size of the vector only where it would otherwise leave the range of numbers. (Scaled at every step the
function would look like a mere sign near the modes of shallow layers, where the vector itself passes zero.)
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import kernel
from .layer_stiffness import even_functions
from .layer_table import CONTRAST, P_SLOWNESS, S_SLOWNESS, STEP, THICKNESS

Array = NDArray[np.float64]

FAR = 1e100  # size beyond which the vector is scaled


@kernel
def rayleigh_secular(omega: float, velocity: float, table: Array) -> float:
    """Return the secular function, positive where the number of branches below omega is even."""
    k = omega / velocity
    cc = velocity * velocity
    inverse = 1.0 / cc
    last = table.shape[0] - 1
    t = 2.0 - cc * table[0, S_SLOWNESS]
    x1, x2, x3, x4, x5 = 2.0 * t, -t * t, 0.0, 0.0, -4.0
    for i in range(last):
        X = k * table[i, THICKNESS]
        rr = 1.0 - cc * table[i, P_SLOWNESS]
        ss = 1.0 - cc * table[i, S_SLOWNESS]
        ca, sa, ea = even_functions(rr * X * X)
        cb, sb, eb = even_functions(ss * X * X)
        sa *= X
        sb *= X
        # the layer: first the S wave, then the P wave
        p1 = cb * x2 + ss * sb * x3
        p2 = cb * x4 + ss * sb * x5
        p3 = sb * x2 + cb * x3
        p4 = sb * x4 + cb * x5
        q1 = ca * p1 - rr * sa * p2
        q2 = ca * p4 - sa * p3
        q3 = ca * p3 - rr * sa * p4
        q4 = ca * p2 - sa * p1
        x1 *= ea * eb
        # the interface below
        eps = table[i, CONTRAST]
        eta = table[i, STEP] * inverse
        a = eps + eta
        a_1 = a - 1.0
        b = 1.0 - eta
        y1 = a_1 * x1 + a * q1
        y2 = a * x1 + a_1 * q2
        z1 = b * x1 - eta * q1
        z2 = b * q2 - eta * x1
        x1 = b * y2 - eta * y1
        x2 = a * y1 + a_1 * y2
        x3 = eps * q3
        x4 = eps * q4
        x5 = b * z2 - eta * z1
        if i & 7 == 7:
            size = abs(x1) + abs(x2) + abs(x3) + abs(x4) + abs(x5)
            if not 1.0 / FAR < size < FAR:
                size = 1.0 / size
                x1 *= size
                x2 *= size
                x3 *= size
                x4 *= size
                x5 *= size
    r = math.sqrt(1.0 - cc * table[last, P_SLOWNESS])
    s = math.sqrt(1.0 - cc * table[last, S_SLOWNESS])
    value: float = x2 + s * x3 - r * (x4 + s * x5)
    return value
