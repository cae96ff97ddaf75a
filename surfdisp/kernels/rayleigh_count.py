"""Certified count of Rayleigh branches below a frequency at fixed wavenumber.

Wittrick & Williams (1971, Q. J. Mech. Appl. Math. 24, 263-284): the number of branches omega_j(k) < omega is
the number of negative eigenvalues of the assembled dynamic stiffness, provided that no layer resonates below
omega when both its faces are clamped. The lowest frequency of a clamped layer satisfies
omega^2 >= vs^2 (k^2 + pi^2 / h^2), so that each layer is split into pieces thinner than
pi / sqrt(omega^2/vs^2 - k^2) where omega/k > vs. A half-space faster than c has no resonance at all.

The block-tridiagonal matrix is eliminated from the half-space upward; by Sylvester's law of inertia its
negative eigenvalues are those of the 2x2 pivots.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .layer_stiffness import Element, half_space_stiffness, layer_stiffness
from .layer_table import MODULUS, P_SLOWNESS, S_SLOWNESS, THICKNESS

Array = NDArray[np.float64]

SMALLEST = 1e-15  # a pivot's determinant relative to its squared size, below which it counts as singular


@inlined
def piece_count(omega: float, wavenumber: float, thickness: float, slowness_squared: float) -> int:
    """Return into how many pieces a layer is split so that no piece can resonate when clamped."""
    excess = omega * omega * slowness_squared - wavenumber * wavenumber
    if excess <= 0.0:
        return 1
    return int(thickness * math.sqrt(excess) / math.pi) + 1


@inlined
def nudged_determinant(xx: float, xz: float, zz: float) -> float:
    """Return the determinant of a symmetric 2x2 pivot, moved off zero where it is singular."""
    determinant = xx * zz - xz * xz
    least = SMALLEST * SMALLEST * (xx * xx + zz * zz + xz * xz) + 1e-300
    return determinant if abs(determinant) > least else least


@inlined
def negative_eigenvalues(xx: float, zz: float, determinant: float) -> int:
    """Return how many eigenvalues of a symmetric 2x2 matrix are negative."""
    if determinant < 0.0:
        return 1
    return 2 if xx + zz < 0.0 else 0


@inlined
def condensed(
    zxx: float, zxz: float, zzz: float, determinant: float, element: Element
) -> tuple[float, float, float]:
    """Return the stiffness at the top of a layer over all that lies below, from that (z) at its bottom.

    This is top - cross (bottom + z)^-1 cross^T, where `determinant` is that of the pivot bottom + z. In a
    thin layer it is the small difference of large numbers, so that it is rebuilt from the forces against a
    shift of the whole layer: (top + cross) - cross (bottom + z)^-1 (bottom + z + cross^T).
    """
    xx, xz, zz, cxx, cxz, czz, sxx, szz = element
    pxx, pxz, pzz = xx + zxx, zxz - xz, zz + zzz
    inverse = -1.0 / determinant
    ax = (cxx * pzz - cxz * pxz) * inverse
    az = (cxz * pxx - cxx * pxz) * inverse
    bx = -(cxz * pzz + czz * pxz) * inverse
    bz = (cxz * pxz + czz * pxx) * inverse
    qxx, qxz, qzx, qzz = zxx + sxx, pxz - cxz, pxz + cxz, zzz + szz
    return sxx + ax * qxx + az * qzx, xz + cxz + ax * qxz + az * qzz, szz + bx * qxz + bz * qzz


@kernel
def rayleigh_count(omega: float, velocity: float, table: Array) -> int:
    """Return the number of Rayleigh branches omega_j(k) < omega at k = omega / velocity.

    `velocity` must lie below the shear velocity of the half-space, the last row of the layer table.
    """
    k = omega / velocity
    cc = velocity * velocity
    last = table.shape[0] - 1
    zxx, zxz, zzz = half_space_stiffness(
        k, table[last, MODULUS], cc * table[last, P_SLOWNESS], cc * table[last, S_SLOWNESS]
    )
    count = 0
    for i in range(last - 1, -1, -1):
        pieces = piece_count(omega, k, table[i, THICKNESS], table[i, S_SLOWNESS])
        element = layer_stiffness(
            k,
            table[i, THICKNESS] / pieces,
            table[i, MODULUS],
            cc * table[i, P_SLOWNESS],
            cc * table[i, S_SLOWNESS],
        )
        for _ in range(pieces):
            pxx = element[0] + zxx
            pxz = zxz - element[1]
            pzz = element[2] + zzz
            determinant = nudged_determinant(pxx, pxz, pzz)
            count += negative_eigenvalues(pxx, pzz, determinant)
            zxx, zxz, zzz = condensed(zxx, zxz, zzz, determinant, element)
    return count + negative_eigenvalues(zxx, zzz, nudged_determinant(zxx, zxz, zzz))


@kernel
def rayleigh_counts(omega: Array, velocity: Array, table: Array) -> NDArray[np.int64]:
    """Return `rayleigh_count` for each pair of angular frequency and velocity."""
    counts = np.empty(omega.size, np.int64)
    for i in range(omega.size):
        counts[i] = rayleigh_count(omega[i], velocity[i], table)
    return counts
