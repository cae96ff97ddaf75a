"""Motion of the surface of a layered half-space under a surface load, in frequency and wavenumber."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .complex_stiffness import Three, half_space_stiffness, layer_stiffness
from .jit import inlined, kernel

ComplexArray = NDArray[np.complex128]


@inlined
def surface_stiffness(
    omega: complex,
    k: float,
    thickness: NDArray[np.float64],
    vp2: ComplexArray,
    vs2: ComplexArray,
    mu: ComplexArray,
) -> Three:
    """Return rr, rz, zz of the whole earth seen from its surface; layers are condensed from below."""
    last = len(thickness) - 1
    n2 = (omega / k) * (omega / k)
    rr, rz, zz = half_space_stiffness(k, n2 / vp2[last], n2 / vs2[last], mu[last])
    for layer in range(last - 1, -1, -1):
        Trr, Trz, Tzz, Crr, Crz, Czz = layer_stiffness(
            k, n2 / vp2[layer], n2 / vs2[layer], mu[layer], thickness[layer]
        )
        rr, rz, zz = rr + Trr, rz - Trz, zz + Tzz
        per = 1.0 / (rr * zz - rz * rz)
        rr, rz, zz = (
            Trr - per * (Crr * Crr * zz - 2.0 * Crr * Crz * rz + Crz * Crz * rr),
            Trz + per * (Crr * Crz * zz + (Crr * Czz - Crz * Crz) * rz - Crz * Czz * rr),
            Tzz - per * (Crz * Crz * zz + 2.0 * Crz * Czz * rz + Czz * Czz * rr),
        )
    return rr, rz, zz


@kernel
def vertical_compliance(
    omega: complex,
    k: NDArray[np.float64],
    thickness: NDArray[np.float64],
    vp2: ComplexArray,
    vs2: ComplexArray,
    mu: ComplexArray,
) -> ComplexArray:
    """Vertical surface displacement per vertical surface traction [m/Pa], (n_k,), along the load.

    Parameters
    ----------
    omega : angular frequency [rad/s], imaginary part negative
    k : wavenumbers [rad/m], positive
    thickness, vp2, vs2, mu : layers top down [m, (m/s)^2, (m/s)^2, Pa]; the last one is the half-space
    """
    out = np.empty(len(k), dtype=np.complex128)
    for i in range(len(k)):
        rr, rz, zz = surface_stiffness(omega, k[i], thickness, vp2, vs2, mu)
        out[i] = rr / (rr * zz - rz * rz)
    return out
