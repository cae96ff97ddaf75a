"""Shape of a Rayleigh mode at the faces of all pieces of layers: displacements and tractions.

The stiffness is eliminated from the half-space upward (`below`) and from the surface downward (`above`). At a
mode the sum of both is singular at every interface; the shape starts at the interface where it is closest to
singular, which is where the mode is large, and decays from there in both directions, so that a mode trapped
at depth is as accurate as one at the surface.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .layer_stiffness import Element, half_space_stiffness, layer_stiffness
from .rayleigh_count import condensed, nudged_determinant, piece_count

Array = NDArray[np.float64]


@inlined
def smallest_eigenvalue(xx: float, xz: float, zz: float) -> float:
    """Return the eigenvalue of least size of a symmetric 2x2 matrix."""
    mean = 0.5 * (xx + zz)
    radius = math.hypot(0.5 * (xx - zz), xz)
    largest = mean + radius if mean > 0.0 else mean - radius
    return (xx * zz - xz * xz) / largest if largest != 0.0 else 0.0


@inlined
def element_of(elements: Array, i: int, turn: float) -> Element:
    """Return the element of layer `i`; upside down, with xz and cxz of the other sign, where `turn` is -1."""
    return (
        elements[i, 0],
        turn * elements[i, 1],
        elements[i, 2],
        elements[i, 3],
        turn * elements[i, 4],
        elements[i, 5],
        elements[i, 6],
        elements[i, 7],
    )


@inlined
def passed(stiffness: Array, at: int, to: int, element: Element) -> None:
    """Condense one piece: the stiffness beyond face `at` becomes that beyond face `to`."""
    zxx, zxz, zzz = stiffness[at, 0], stiffness[at, 1], stiffness[at, 2]
    determinant = nudged_determinant(zxx + element[0], zxz - element[1], zzz + element[2])
    zxx, zxz, zzz = condensed(zxx, zxz, zzz, determinant, element)
    stiffness[to, 0], stiffness[to, 1], stiffness[to, 2] = zxx, zxz, zzz


@inlined
def carried(faces: Array, stiffness: Array, at: int, to: int, element: Element) -> None:
    """Carry the displacement from face `at` across one piece to face `to`, beyond which lies `stiffness`."""
    xx, xz, zz, cxx, cxz, czz, _, _ = element
    ux, uz = faces[at, 0], faces[at, 1]
    pxx, pxz, pzz = stiffness[to, 0] + xx, stiffness[to, 1] - xz, stiffness[to, 2] + zz
    inverse = 1.0 / nudged_determinant(pxx, pxz, pzz)
    fx, fz = cxz * uz - cxx * ux, -(cxz * ux + czz * uz)
    faces[to, 0] = (pzz * fx - pxz * fz) * inverse
    faces[to, 1] = (pxx * fz - pxz * fx) * inverse


@inlined
def start_of_shape(below: Array, above: Array, faces: Array) -> int:
    """Find the face where the whole stiffness is closest to singular, and put its null vector there."""
    start = 0
    least = math.inf
    for i in range(below.shape[0]):
        size = abs(
            smallest_eigenvalue(
                below[i, 0] + above[i, 0], below[i, 1] + above[i, 1], below[i, 2] + above[i, 2]
            )
        )
        if size < least:
            start, least = i, size
    xx = below[start, 0] + above[start, 0]
    xz = below[start, 1] + above[start, 1]
    zz = below[start, 2] + above[start, 2]
    ux, uz = (-xz, xx) if abs(xx) > abs(zz) else (zz, -xz)
    size = math.hypot(ux, uz)
    faces[start, 0], faces[start, 1] = ux / size, uz / size
    return start


@kernel
def layers_and_elements(
    omega: float, velocity: float, thickness: Array, vp: Array, vs: Array, density: Array
) -> tuple[NDArray[np.int64], Array]:
    """Return the layer of each piece, and the stiffness of the pieces of each layer; last the half-space."""
    k = omega / velocity
    last = thickness.size - 1
    elements = np.zeros((last + 1, 8))
    pieces = np.zeros(last, np.int64)
    total = 0
    for i in range(last + 1):
        e_p, e_s = (velocity / vp[i]) ** 2, (velocity / vs[i]) ** 2
        modulus = density[i] * vs[i] * vs[i]
        if i == last:
            zxx, zxz, zzz = half_space_stiffness(k, modulus, e_p, e_s)
            elements[i, 0], elements[i, 1], elements[i, 2] = zxx, zxz, zzz
        else:
            pieces[i] = piece_count(omega, k, thickness[i], 1.0 / (vs[i] * vs[i]))
            total += pieces[i]
            element = layer_stiffness(k, thickness[i] / pieces[i], modulus, e_p, e_s)
            for column in range(8):
                elements[i, column] = element[column]
    layer = np.empty(total, np.int64)
    n = 0
    for i in range(last):
        for _ in range(pieces[i]):
            layer[n] = i
            n += 1
    return layer, elements


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
        Horizontal and vertical displacement, shear and normal traction on the lower side of a cut. The
        displacement where the mode is largest has length 1; tractions are in Pa for displacements in m.
    """
    layer, elements = layers_and_elements(omega, velocity, thickness, vp, vs, density)
    total = layer.size
    below, above = np.zeros((total + 1, 3)), np.zeros((total + 1, 3))
    for column in range(3):
        below[total, column] = elements[thickness.size - 1, column]
    for i in range(total - 1, -1, -1):
        passed(below, i + 1, i, element_of(elements, layer[i], 1.0))
    for i in range(total):
        passed(above, i, i + 1, element_of(elements, layer[i], -1.0))
    faces = np.zeros((total + 1, 4))
    start = start_of_shape(below, above, faces)
    for i in range(start, total):
        carried(faces, below, i, i + 1, element_of(elements, layer[i], 1.0))
    for i in range(start, 0, -1):
        carried(faces, above, i, i - 1, element_of(elements, layer[i - 1], -1.0))
    for i in range(total + 1):
        ux, uz = faces[i, 0], faces[i, 1]
        if i > start:
            faces[i, 2] = -(below[i, 0] * ux + below[i, 1] * uz)
            faces[i, 3] = -(below[i, 1] * ux + below[i, 2] * uz)
        else:
            faces[i, 2] = above[i, 0] * ux + above[i, 1] * uz
            faces[i, 3] = above[i, 1] * ux + above[i, 2] * uz
    return layer, faces
