"""Derivatives of Rayleigh phase velocity at fixed frequency, by first-order perturbation of K(omega, k) phi =
0.

For every parameter m, dk/dm = -(phi K_m phi) / (phi K_k phi), so that dc/dm = (c/k) (phi K_m phi) / (phi K_k
phi). The stiffness of a layer is twice the action of the exact field in it, and the derivative of an action
at fixed end points is that of the Lagrangian alone. With dilatation T = k phi + psi' and rotation R = phi' +
k psi, twice the Lagrangian of P-SV motion is, apart from rho omega^2 (phi^2 + psi^2),

    (lambda + 2 mu) T^2 + mu (R^2 - 4 k (phi psi)'),

so that each layer needs two integrals only, of T^2 and of R^2. Both T and R obey a scalar wave equation, and
their values and slopes at the faces follow from displacements and tractions there; the integrals are closed,
and nothing cancels however thin or stiff the layer. The derivative with respect to thickness is minus twice
the Hamiltonian, which is constant in a layer. Density at fixed velocities scales the layer's whole
Lagrangian, whose integral is the work of the tractions. Scaling all lengths and velocities gives the last
one:

    k phi K_k phi = sum over layers of phi (h K_h + vp K_vp + vs K_vs) phi.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .rayleigh_shape import rayleigh_shape

Array = NDArray[np.float64]

VS, VP, DENSITY, THICKNESS = range(4)  # rows of the derivatives


@inlined
def integral_of_square(
    value: float, slope: float, end_value: float, end_slope: float, stiffness: float, thickness: float
) -> float:
    """Return the integral of w^2 over a layer where w'' = stiffness * w, from w and w' at both faces."""
    q = stiffness * thickness * thickness
    if abs(q) > 0.5:
        # (w w')' = w'^2 + stiffness w^2, and w'^2 - stiffness w^2 is constant
        constant = 0.5 * (
            slope * slope + end_slope * end_slope - stiffness * (value * value + end_value * end_value)
        )
        return (end_value * end_slope - value * slope - constant * thickness) / (2.0 * stiffness)
    # w = value C + slope z S, both power series in q; S4 = S(4 q)
    q4 = 4.0 * q
    rest = (
        1.0
        / 6.0
        * (
            1.0
            + q4
            / 20.0
            * (
                1.0
                + q4
                / 42.0
                * (
                    1.0
                    + q4
                    / 72.0
                    * (1.0 + q4 / 110.0 * (1.0 + q4 / 156.0 * (1.0 + q4 / 210.0 * (1.0 + q4 / 272.0))))
                )
            )
        )
    )
    sine = 1.0 + q / 6.0 * (1.0 + q / 20.0 * (1.0 + q / 42.0 * (1.0 + q / 72.0 * (1.0 + q / 110.0))))
    rise = slope * thickness
    return thickness * (
        value * value * (1.0 + 0.5 * q4 * rest) + value * rise * sine * sine + 2.0 * rise * rise * rest
    )


@kernel
def velocity_derivatives(
    omega: float, velocity: float, thickness: Array, vp: Array, vs: Array, density: Array
) -> Array:
    """Return dc/dvs, dc/dvp, dc/ddensity, dc/dthickness (rows) of one mode for each layer (columns).

    NaN where the group velocity vanishes.
    """
    n = thickness.size
    last = n - 1
    k = omega / velocity
    layer, faces = rayleigh_shape(omega, velocity, thickness, vp, vs, density)
    total = layer.size
    work = np.zeros((4, n))  # phi K_m phi
    pieces = np.zeros(n)
    for i in range(total):
        pieces[layer[i]] += 1.0
    for i in range(total):
        j = layer[i]
        h = thickness[j] / pieces[j]
        rho = density[j]
        mu = rho * vs[j] * vs[j]
        stiff = rho * vp[j] * vp[j]
        inertia = rho * omega * omega
        u0, w0, t0, s0 = faces[i]
        u1, w1, t1, s1 = faces[i + 1]
        dilatation0 = (s0 + 2.0 * mu * k * u0) / stiff
        dilatation1 = (s1 + 2.0 * mu * k * u1) / stiff
        rotation0 = t0 / mu + 2.0 * k * w0
        rotation1 = t1 / mu + 2.0 * k * w1
        dilatations = integral_of_square(
            dilatation0,
            (k * mu * rotation0 - inertia * w0) / stiff,
            dilatation1,
            (k * mu * rotation1 - inertia * w1) / stiff,
            k * k - (omega / vp[j]) ** 2,
            h,
        )
        rotations = integral_of_square(
            rotation0,
            (k * stiff * dilatation0 - inertia * u0) / mu,
            rotation1,
            (k * stiff * dilatation1 - inertia * u1) / mu,
            k * k - (omega / vs[j]) ** 2,
            h,
        )
        work[VP, j] += 2.0 * rho * vp[j] * dilatations
        work[VS, j] += 2.0 * rho * vs[j] * (rotations - 4.0 * k * (u1 * w1 - u0 * w0))
        work[DENSITY, j] += (t1 * u1 + s1 * w1 - t0 * u0 - s0 * w0) / rho
        # the Hamiltonian at the face where the mode is smaller: there it is small, not a difference
        if u0 * u0 + w0 * w0 < u1 * u1 + w1 * w1:
            u, w, t, dilatation = u0, w0, t0, dilatation0
        else:
            u, w, t, dilatation = u1, w1, t1, dilatation1
        slope_u = t / mu + k * w
        slope_w = dilatation - k * u
        hamiltonian = (
            stiff * slope_w * slope_w
            + mu * slope_u * slope_u
            - (stiff * k * k - inertia) * u * u
            - (mu * k * k - inertia) * w * w
        )
        work[THICKNESS, j] -= hamiltonian / pieces[j]
    rho = density[last]
    mu = rho * vs[last] * vs[last]
    stiff = rho * vp[last] * vp[last]
    u, w, t, s = faces[total]
    dilatation = (s + 2.0 * mu * k * u) / stiff
    rotation = t / mu + 2.0 * k * w
    r = math.sqrt(1.0 - (velocity / vp[last]) ** 2)
    s_decay = math.sqrt(1.0 - (velocity / vs[last]) ** 2)
    work[VP, last] = rho * vp[last] * dilatation * dilatation / (k * r)
    work[VS, last] = 2.0 * rho * vs[last] * (rotation * rotation / (2.0 * k * s_decay) + 4.0 * k * u * w)
    work[DENSITY, last] = -(t * u + s * w) / rho
    kinetic = 0.0
    slope = 0.0  # k phi K_k phi
    for j in range(n):
        kinetic += vp[j] * work[VP, j] + vs[j] * work[VS, j]
        if j < last:
            slope += thickness[j] * work[THICKNESS, j]
    slope += kinetic
    if not abs(slope) > 1e-12 * kinetic:
        return np.full((4, n), math.nan)
    return work * (velocity / slope)


@kernel
def curve_derivatives(
    omega: Array, velocity: Array, thickness: Array, vp: Array, vs: Array, density: Array
) -> Array:
    """Return `velocity_derivatives` at each frequency, (4, n, layers); NaN rows where the velocity is NaN."""
    derivatives = np.full((4, omega.size, thickness.size), math.nan)
    for i in range(omega.size):
        if velocity[i] == velocity[i]:
            derivatives[:, i, :] = velocity_derivatives(omega[i], velocity[i], thickness, vp, vs, density)
    return derivatives
