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
STATIONARY = 1e-12  # group over phase velocity below which derivatives at fixed frequency do not exist

Medium = tuple[float, float, float]  # vp, vs, density
Work = tuple[float, float, float, float]


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


@inlined
def work_of_piece(faces: Array, i: int, h: float, omega: float, k: float, medium: Medium) -> Work:
    """Return phi K_m phi of the piece between faces i and i + 1, for m = vs, vp, density and thickness."""
    vp, vs, rho = medium
    mu = rho * vs * vs
    stiff = rho * vp * vp
    inertia = rho * omega * omega
    u0, w0, t0, s0 = faces[i, 0], faces[i, 1], faces[i, 2], faces[i, 3]
    u1, w1, t1, s1 = faces[i + 1, 0], faces[i + 1, 1], faces[i + 1, 2], faces[i + 1, 3]
    dilatation0 = (s0 + 2.0 * mu * k * u0) / stiff
    dilatation1 = (s1 + 2.0 * mu * k * u1) / stiff
    rotation0 = t0 / mu + 2.0 * k * w0
    rotation1 = t1 / mu + 2.0 * k * w1
    dilatations = integral_of_square(
        dilatation0,
        (k * mu * rotation0 - inertia * w0) / stiff,
        dilatation1,
        (k * mu * rotation1 - inertia * w1) / stiff,
        k * k - inertia / stiff,
        h,
    )
    rotations = integral_of_square(
        rotation0,
        (k * stiff * dilatation0 - inertia * u0) / mu,
        rotation1,
        (k * stiff * dilatation1 - inertia * u1) / mu,
        k * k - inertia / mu,
        h,
    )
    # the Hamiltonian at the face where the mode is smaller: there it is small, not a difference
    if u0 * u0 + w0 * w0 < u1 * u1 + w1 * w1:
        u, w, t, dilatation = u0, w0, t0, dilatation0
    else:
        u, w, t, dilatation = u1, w1, t1, dilatation1
    slope_u = t / mu + k * w
    slope_w = dilatation - k * u
    hamiltonian = stiff * slope_w * slope_w + mu * slope_u * slope_u
    hamiltonian -= (stiff * k * k - inertia) * u * u + (mu * k * k - inertia) * w * w
    return (
        2.0 * rho * vs * (rotations - 4.0 * k * (u1 * w1 - u0 * w0)),
        2.0 * rho * vp * dilatations,
        (t1 * u1 + s1 * w1 - t0 * u0 - s0 * w0) / rho,
        -hamiltonian,
    )


@inlined
def work_of_half_space(faces: Array, i: int, omega: float, k: float, medium: Medium) -> Work:
    """Return the same of the half-space below face i, where dilatation and rotation decay as exp(-r k z)."""
    vp, vs, rho = medium
    mu = rho * vs * vs
    stiff = rho * vp * vp
    u, w, t, s = faces[i, 0], faces[i, 1], faces[i, 2], faces[i, 3]
    dilatation = (s + 2.0 * mu * k * u) / stiff
    rotation = t / mu + 2.0 * k * w
    decay_p = math.sqrt(k * k - (omega / vp) ** 2)
    decay_s = math.sqrt(k * k - (omega / vs) ** 2)
    return (
        2.0 * rho * vs * (rotation * rotation / (2.0 * decay_s) + 4.0 * k * u * w),
        2.0 * rho * vp * dilatation * dilatation / (2.0 * decay_p),
        -(t * u + s * w) / rho,
        0.0,
    )


@kernel
def velocity_derivatives(
    omega: float, velocity: float, thickness: Array, vp: Array, vs: Array, density: Array
) -> Array:
    """Return dc/dvs, dc/dvp, dc/ddensity, dc/dthickness (rows) of one mode for each layer (columns).

    NaN where the group velocity vanishes.
    """
    n = thickness.size
    k = omega / velocity
    layer, faces = rayleigh_shape(omega, velocity, thickness, vp, vs, density)
    total = layer.size
    pieces = np.zeros(n)
    for i in range(total):
        pieces[layer[i]] += 1.0
    work = np.zeros((4, n))
    for i in range(total):
        j = layer[i]
        piece = work_of_piece(faces, i, thickness[j] / pieces[j], omega, k, (vp[j], vs[j], density[j]))
        work[VS, j] += piece[VS]
        work[VP, j] += piece[VP]
        work[DENSITY, j] += piece[DENSITY]
        work[THICKNESS, j] += piece[THICKNESS] / pieces[j]
    piece = work_of_half_space(faces, total, omega, k, (vp[n - 1], vs[n - 1], density[n - 1]))
    work[VS, n - 1], work[VP, n - 1], work[DENSITY, n - 1] = piece[VS], piece[VP], piece[DENSITY]
    kinetic = 0.0
    slope = 0.0  # k phi K_k phi
    for j in range(n):
        kinetic += vp[j] * work[VP, j] + vs[j] * work[VS, j]
        if j < n - 1:
            slope += thickness[j] * work[THICKNESS, j]
    slope += kinetic
    factor = velocity / slope if abs(slope) > STATIONARY * kinetic else math.nan
    for row in range(4):
        for j in range(n):
            work[row, j] *= factor
    return work


@kernel
def curve_derivatives(
    omega: Array, velocity: Array, thickness: Array, vp: Array, vs: Array, density: Array
) -> Array:
    """Return `velocity_derivatives` at each frequency, (4, n, layers); NaN rows where the velocity is NaN."""
    n = thickness.size
    derivatives = np.empty((4, omega.size, n))
    for i in range(omega.size):
        if velocity[i] == velocity[i]:
            rows = velocity_derivatives(omega[i], velocity[i], thickness, vp, vs, density)
            for row in range(4):
                for j in range(n):
                    derivatives[row, i, j] = rows[row, j]
        else:
            for row in range(4):
                for j in range(n):
                    derivatives[row, i, j] = math.nan
    return derivatives
