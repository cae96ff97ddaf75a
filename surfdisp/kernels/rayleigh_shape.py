"""Shape of a Rayleigh mode at the faces of all pieces of layers: displacements and tractions.

The stiffness is eliminated from the half-space upward (`below`) and from the surface downward (`above`). At a
mode the sum of both is singular at every interface; the shape starts at the interface where it is closest to
singular, which is where the mode is large, and decays from there in both directions, so that a mode trapped
at depth is as accurate as one at the surface.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .layer_stiffness import half_space_stiffness, layer_stiffness
from .rayleigh_count import condensed, nudged_determinant, piece_count

Array = NDArray[np.float64]


@inlined
def smallest_eigenvalue(xx: float, xz: float, zz: float) -> float:
    """Return the eigenvalue of least size of a symmetric 2x2 matrix."""
    mean = 0.5 * (xx + zz)
    radius = np.hypot(0.5 * (xx - zz), xz)
    largest = mean + radius if mean > 0.0 else mean - radius
    return (xx * zz - xz * xz) / largest if largest != 0.0 else 0.0


@inlined
def solved(pxx: float, pxz: float, pzz: float, x: float, z: float) -> tuple[float, float]:
    """Return the solution of a symmetric 2x2 system."""
    inverse = 1.0 / nudged_determinant(pxx, pxz, pzz)
    return (pzz * x - pxz * z) * inverse, (pxx * z - pxz * x) * inverse


@kernel
def rayleigh_shape(
    omega: float, velocity: float, thickness: Array, vp: Array, vs: Array, density: Array
) -> tuple[NDArray[np.int64], Array]:
    """Return the layer of each piece and the mode at each face, from the surface to the half-space.

    Returns
    -------
    layer : int array (n_pieces,)
        Index of the layer to which each piece belongs; its thickness is that of the layer over the number of
        its pieces.
    faces : array (n_pieces + 1, 4)
        Horizontal and vertical displacement, shear and normal traction on the lower side of a cut, in the
        units of wavenumber x pascal per metre; the largest displacement is near 1.
    """
    k = omega / velocity
    last = thickness.size - 1
    total = 0
    for i in range(last):
        total += piece_count(omega, k, thickness[i], 1.0 / (vs[i] * vs[i]))
    layer = np.empty(total, np.int64)
    elements = np.empty((last, 8))
    n = 0
    for i in range(last):
        pieces = piece_count(omega, k, thickness[i], 1.0 / (vs[i] * vs[i]))
        ratio_p = velocity / vp[i]
        ratio_s = velocity / vs[i]
        element = layer_stiffness(
            k, thickness[i] / pieces, density[i] * vs[i] * vs[i], ratio_p * ratio_p, ratio_s * ratio_s
        )
        for q in range(8):
            elements[i, q] = element[q]
        layer[n : n + pieces] = i
        n += pieces
    below = np.empty((total + 1, 3))
    above = np.zeros((total + 1, 3))
    ratio_p = velocity / vp[last]
    ratio_s = velocity / vs[last]
    below[total] = half_space_stiffness(
        k, density[last] * vs[last] * vs[last], ratio_p * ratio_p, ratio_s * ratio_s
    )
    for i in range(total - 1, -1, -1):
        xx, xz, zz, cxx, cxz, czz, sxx, szz = elements[layer[i]]
        zxx, zxz, zzz = below[i + 1]
        determinant = nudged_determinant(zxx + xx, zxz - xz, zzz + zz)
        below[i] = condensed(zxx, zxz, zzz, determinant, (xx, xz, zz, cxx, cxz, czz, sxx, szz))
    for i in range(total):  # the same upside down: xz and cxz change sign
        xx, xz, zz, cxx, cxz, czz, sxx, szz = elements[layer[i]]
        zxx, zxz, zzz = above[i]
        determinant = nudged_determinant(zxx + xx, zxz + xz, zzz + zz)
        above[i + 1] = condensed(zxx, zxz, zzz, determinant, (xx, -xz, zz, cxx, -cxz, czz, sxx, szz))
    start = 0
    least = np.inf
    for i in range(total + 1):
        size = abs(
            smallest_eigenvalue(
                below[i, 0] + above[i, 0], below[i, 1] + above[i, 1], below[i, 2] + above[i, 2]
            )
        )
        if size < least:
            start, least = i, size
    xx, xz, zz = (
        below[start, 0] + above[start, 0],
        below[start, 1] + above[start, 1],
        below[start, 2] + above[start, 2],
    )
    faces = np.empty((total + 1, 4))
    ux, uz = (-xz, xx) if abs(xx) > abs(zz) else (zz, -xz)
    size = np.hypot(ux, uz)
    faces[start, 0], faces[start, 1] = ux / size, uz / size
    for i in range(start, total):
        xx, xz, zz, cxx, cxz, czz, _, _ = elements[layer[i]]
        ux, uz = faces[i, 0], faces[i, 1]
        fx, fz = -(cxx * ux - cxz * uz), -(cxz * ux + czz * uz)
        faces[i + 1, 0], faces[i + 1, 1] = solved(
            below[i + 1, 0] + xx, below[i + 1, 1] - xz, below[i + 1, 2] + zz, fx, fz
        )
    for i in range(start, 0, -1):
        xx, xz, zz, cxx, cxz, czz, _, _ = elements[layer[i - 1]]
        ux, uz = faces[i, 0], faces[i, 1]
        fx, fz = -(cxx * ux + cxz * uz), -(czz * uz - cxz * ux)
        faces[i - 1, 0], faces[i - 1, 1] = solved(
            above[i - 1, 0] + xx, above[i - 1, 1] + xz, above[i - 1, 2] + zz, fx, fz
        )
    for i in range(total + 1):
        ux, uz = faces[i, 0], faces[i, 1]
        if i > start:
            faces[i, 2] = -(below[i, 0] * ux + below[i, 1] * uz)
            faces[i, 3] = -(below[i, 1] * ux + below[i, 2] * uz)
        else:
            faces[i, 2] = above[i, 0] * ux + above[i, 1] * uz
            faces[i, 3] = above[i, 1] * ux + above[i, 2] * uz
    return layer, faces
