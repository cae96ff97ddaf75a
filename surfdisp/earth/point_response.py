"""Vertical motion of the surface under a vertical point force on it: the Hankel transform over wavenumber.

The response is an element of the inverse of the dynamic stiffness (Kausel & Roesset 1981), C(k, omega):

    u(r, omega) = F(omega)/(2 pi) * integral over k from 0 to infinity of C(k, omega) J0(k r) k dk

Frequency is damped, omega - i eps (Bouchon & Aki 1977). That clears the path: motion never outruns the
fastest P wave, hence C has no singularity within eps/vp of the real k axis, and a mode's pole lies eps over
its group velocity away. The integral is a sum over Gauss-Legendre panels of about that size, the same for
all frequencies; an even step 2 pi/(vp x duration + offset) would need several times as many wavenumbers.
(Lifting the path above the axis would save more, but poles of backward waves lie there.)

With source and receiver both at the surface the integral converges only conditionally, since C k tends to
the static (1 - nu)/mu. Beyond the slowest wave the load's spectrum is therefore tapered by an error function:
each receiver sees a load spread over a smooth patch, so small that at the receiver its field is that of a
point.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core import LayeredEarth
from ..core.checks import FloatArray
from .closed_forms import half_space_rayleigh_speed
from .complex_moduli import ComplexModuli

ComplexArray = NDArray[np.complex128]

NODES = 16  # Gauss-Legendre nodes in a panel
OSCILLATION = 16.0  # largest width of a panel times the offset, a few oscillations of J0
FASTEST = 1.5  # largest group velocity of a mode over its phase velocity
SLOWEST = 0.9  # slowest wave over the slowest Rayleigh wave of any layer by itself


def point_response(
    earth: LayeredEarth,
    distances: FloatArray,
    omega: ComplexArray,
    moduli: ComplexModuli,
    tolerance: float,
    magnification: float,
) -> ComplexArray:
    """Return the displacement per force [m/N], positive along the force, (n_omega, n_distances).

    Parameters
    ----------
    distances : array (n_distances,)
        Offsets from the force [m], positive.
    omega : array (n_omega,)
        Angular frequencies [rad/s], ascending, with one negative imaginary part in common.
    moduli : ComplexModuli
        At `omega`.
    tolerance : float
        Relative error wanted in time; static and slow parts have it here too.
    magnification : float
        By how much errors of the waves must be smaller still.
    """
    from scipy.special import erfc, j0

    from ..kernels.wavefield import vertical_compliance

    rayleigh = min(half_space_rayleigh_speed(vp, vs) for vp, vs in zip(earth.vp, earth.vs, strict=True))
    slowest = omega.real[-1] / (SLOWEST * rayleigh)
    steepness = np.sqrt(-np.log(0.1 * tolerance))
    taper = 2.0 * steepness**2  # half its width in k times the offset; the static error is exp(-steepness^2)
    edges = _panels(earth.vp.max(), distances, omega, slowest, 2.0 * taper, 0.1 * tolerance / magnification)
    k, weight = _nodes(edges)
    phase = k[:, np.newaxis] * distances
    load = 0.5 * erfc((phase - slowest * distances - taper) / (2.0 * steepness))
    hankel = (weight * k / (2.0 * np.pi))[:, np.newaxis] * j0(phase) * load
    thickness = np.array(earth.thickness)
    response = np.empty((len(omega), len(distances)), dtype=np.complex128)
    for i, w in enumerate(omega):
        compliance = vertical_compliance(complex(w), k, thickness, *(values[i] for values in moduli))
        response[i] = compliance.real @ hankel + 1j * (compliance.imag @ hankel)
    return response


def _panels(
    fastest_p: float,
    distances: FloatArray,
    omega: ComplexArray,
    slowest: float,
    reach: float,
    error: float,
) -> FloatArray:
    """Edges of the panels [rad/m] from 0 to where the taper of the nearest receiver ends.

    Where the nearest singularity is at a distance d from a panel of half-width h, the quadrature errs by
    exp(-2 NODES asinh(d/h)). Beyond `slowest` there is none, and the taper leaves the farther receivers
    behind at `slowest` + `reach`/offset.
    """
    damping, highest = -omega.imag[0], omega.real[-1]
    widest = 2.0 / np.sinh(-np.log(error) / (2 * NODES))  # times d
    edges = [0.0]
    while edges[-1] < slowest + reach / distances.min():
        k = edges[-1]
        beyond = max(k - slowest, 0.0)
        fastest = min(fastest_p, FASTEST * highest / k) if k > 0.0 else fastest_p
        smooth = max(widest * damping / fastest, 0.5 * beyond)
        edges.append(k + min(smooth, OSCILLATION * max(1.0 / distances.max(), beyond / reach)))
    return np.array(edges)


def _nodes(edges: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Gauss-Legendre nodes and weights of all panels."""
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    half = 0.5 * np.diff(edges)[:, np.newaxis]
    middle = 0.5 * (edges[1:] + edges[:-1])[:, np.newaxis]
    return (middle + half * nodes).ravel(), (half * weights).ravel()
