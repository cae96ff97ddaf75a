"""Dynamic stiffness of P-SV layers at complex frequency and real wavenumber (Kausel & Roesset 1981).

Symbols: k wavenumber [rad/m]; p, s vertical slownesses relative to k, p^2 = 1 - y and s^2 = 1 - x, with
y = (omega/(alpha k))^2 and x = (omega/(beta k))^2; principal roots. Stiffness is traction per displacement,
rows and columns (horizontal, vertical), scaled to be symmetric. Written as in the paper the elements cancel
where x and y are small (quasi-static); here every difference is taken through 1 - p s and (p - s) k h,
which are known without loss, and every hyperbolic function carries the factor exp(-(p + s) k h), so that
nothing overflows.
"""

from __future__ import annotations

import cmath
import math

from .jit import inlined

Three = tuple[complex, complex, complex]


@inlined
def complex_expm1(z: complex) -> complex:
    """Return exp(z) - 1 without loss near z = 0."""
    sine, cosine, growth = math.sin(0.5 * z.imag), math.cos(0.5 * z.imag), math.expm1(z.real)
    return complex(
        growth * (1.0 - 2.0 * sine * sine) - 2.0 * sine * sine, (growth + 1.0) * 2.0 * sine * cosine
    )


@inlined
def half_space_stiffness(k: float, y: complex, x: complex, mu: complex) -> Three:
    """Return the elements rr, rz, zz of a half-space seen from its surface."""
    p, s = cmath.sqrt(1.0 - y), cmath.sqrt(1.0 - x)
    f = k * mu * x * (1.0 + p * s) / (x + y - x * y)  # k mu x / (1 - p s)
    return f * p, f - 2.0 * k * mu, f * s


@inlined
def layer_stiffness(
    k: float, y: complex, x: complex, mu: complex, thickness: float
) -> tuple[complex, complex, complex, complex, complex, complex]:
    """Return rr, rz, zz of the top face and rr, rz, zz coupling the top to the bottom.

    The bottom face has rr, -rz, zz; the coupling block is [[rr, rz], [-rz, zz]].
    """
    p, s = cmath.sqrt(1.0 - y), cmath.sqrt(1.0 - x)
    ps = p * s
    w = (x + y - x * y) / (1.0 + ps)  # 1 - p s
    grown = complex_expm1((y - x) / (p + s) * k * thickness)  # exp(-(p - s) k h) - 1
    Es = cmath.exp(-s * k * thickness)
    Ep = Es * (1.0 + grown)
    d = -0.5 * Es * grown  # sinh((p - s) k h / 2), scaled
    Sp, Cp, Ss, Cs = (
        0.5 * (1.0 - Ep * Ep),
        0.5 * (1.0 + Ep * Ep),
        0.5 * (1.0 - Es * Es),
        0.5 * (1.0 + Es * Es),
    )
    per_ps = 1.0 / ps
    f = k * mu * x / (w * w * per_ps * Sp * Ss - 4.0 * d * d)
    per_s, per_p = f * p * per_ps, f * s * per_ps
    bend, both = d * (Es + Ep), d * (1.0 + Ep * Es)
    return (
        per_s * (w * Cs * Sp - bend),
        f * (2.0 * d * d + w * Sp * Ss) - k * mu * (2.0 - x),
        per_p * (w * Cp * Ss + bend),
        per_s * (both - w * Sp * Es),
        -f * d * (1.0 - Ep * Es),
        -per_p * (both + w * Ss * Ep),
    )
