"""Exact dynamic stiffness of one layer and of the half-space for plane P-SV waves.

Kausel & Roësset (1981, Bull. Seismol. Soc. Am. 71, 1743-1761), in real arithmetic. The displacements are
u_x = phi(z) sin(k x) and u_z = psi(z) cos(k x), z down; forces and displacements at the two faces of a
layer are joined by the symmetric matrix ::

    [ top      cross  ]    top    = [[ xx, xz], [ xz, zz]]
    [ cross^T  bottom ]    bottom = [[ xx,-xz], [-xz, zz]]    cross = [[ cxx, cxz], [-cxz, czz]]

Symbols: X = k h; e_p = (c/vp)^2 and e_s = (c/vs)^2 with c = omega/k; r^2 = 1 - e_p, s^2 = 1 - e_s, both of
either sign; A = r X, B = s X; C = cosh and S = sinh(.)/(.), entire functions of A^2 or B^2. All elements are
numerators over one denominator D; both are scaled by decaying exponentials, so that nothing overflows.

The textbook form of D and of the numerators cancels where the layer is thin (X small) or stiff (c much below
vs). There they are rebuilt from differences that are taken analytically, with P = (A+B)/2, M = (A-B)/2:

    D           = X^2 [e_p e_s S_A S_B + (X (e_s - e_p) / 2)^2 Q(P^2, M^2)],   Q(y) = sinh^2(sqrt y) / y
    C_A S_B - C_B S_A = X^2 (e_s - e_p) / 2 H(P^2, M^2),                       H(y) = S(2 sqrt y)

where Q(u, v) = (Q(u) - Q(v)) / (u - v) is the divided difference: by power series where the layer is thin, in
closed form otherwise.
"""

from __future__ import annotations

import math

from .jit import inlined, kernel

Element = tuple[float, float, float, float, float, float, float, float]
Numerators = tuple[float, float, float, float, float, float, float, float, float]

THIN = 0.15  # |A^2| and |B^2| below which the power series are summed
STIFF = 0.5  # (c/vs)^2 below which the closed differences are used
TERMS = 7  # of each power series; the first one left out is below 1e-17 at THIN
FEW_TERMS = 5  # the same where |A^2| and |B^2| are below 0.01
COSINE = tuple(1.0 / math.factorial(2 * n) for n in range(TERMS + 2))
SINE = tuple(1.0 / math.factorial(2 * n + 1) for n in range(TERMS + 2))
SMALL = 0.3  # |x| below which cosh x and sinh x are summed as power series
EXP_SMALL = math.exp(SMALL)
EXP_MINUS_SMALL = math.exp(-SMALL)


@inlined
def even_functions(square: float) -> tuple[float, float, float]:
    """Return cosh(x) and sinh(x)/x, both times a decay, and the decay itself; x^2 may have either sign.

    The decay is exp(SMALL - x) where x > SMALL, and 1 elsewhere. Where x^2 < 0 the functions are cos|x| and
    sin|x|/|x|.
    """
    if square > SMALL * SMALL:
        x = math.sqrt(square)
        decay = math.exp(SMALL - x)
        falling = 0.5 * EXP_MINUS_SMALL * decay * decay
        return 0.5 * EXP_SMALL + falling, (0.5 * EXP_SMALL - falling) / x, decay
    if square < -SMALL * SMALL:
        x = math.sqrt(-square)
        return math.cos(x), math.sin(x) / x, 1.0
    q = square
    even = 1.0 + q / 2.0 * (
        1.0 + q / 12.0 * (1.0 + q / 30.0 * (1.0 + q / 56.0 * (1.0 + q / 90.0 * (1.0 + q / 132.0))))
    )
    odd = 1.0 + q / 6.0 * (
        1.0 + q / 20.0 * (1.0 + q / 42.0 * (1.0 + q / 72.0 * (1.0 + q / 110.0 * (1.0 + q / 156.0))))
    )
    return even, odd, 1.0


@kernel
def layer_stiffness(
    wavenumber: float, thickness: float, shear_modulus: float, e_p: float, e_s: float
) -> Element:
    """Return (xx, xz, zz, cxx, cxz, czz, xx + cxx, zz + czz) of a layer [Pa/m].

    The two sums, forces against a shift of the whole layer, are small differences where it is thin.

    Parameters
    ----------
    wavenumber : float
        k = omega / c [rad/m].
    thickness : float
        [m], finite. The elements have poles at the resonances of the clamped layer.
    shear_modulus : float
        [Pa].
    e_p, e_s : float
        (c/vp)^2 and (c/vs)^2.
    """
    X = wavenumber * thickness
    X2 = X * X
    if X2 * max(abs(1.0 - e_p), abs(1.0 - e_s)) < THIN:
        D, nxx, nxz, nzz, mxx, mxz, mzz, sxx, szz = _thin(X, e_p, e_s)
    elif e_s < STIFF:
        D, nxx, nxz, nzz, mxx, mxz, mzz, sxx, szz = _stiff(X, e_p, e_s)
    else:
        D, nxx, nxz, nzz, mxx, mxz, mzz, sxx, szz = _general(X, e_p, e_s)
    scale = wavenumber * shear_modulus
    g = scale * e_s / D
    return (
        g * nxx,
        g * nxz + scale * (2.0 - e_s),
        g * nzz,
        g * mxx,
        g * mxz,
        g * mzz,
        g * sxx,
        g * szz,
    )


@inlined
def _general(X: float, e_p: float, e_s: float) -> Numerators:
    """The textbook form (Kausel & Roësset 1981, Table 1)."""
    rr = 1.0 - e_p
    ss = 1.0 - e_s
    ca, sa, ea = even_functions(rr * X * X)
    cb, sb, eb = even_functions(ss * X * X)
    sa *= X
    sb *= X
    one = ea * eb
    D = 2.0 * (one - ca * cb) + (1.0 + rr * ss) * sa * sb
    nxx = ca * sb - rr * cb * sa
    nxz = one - ca * cb + rr * ss * sa * sb
    nzz = cb * sa - ss * ca * sb
    mxx = rr * sa * eb - sb * ea
    mzz = ss * sb * ea - sa * eb
    return D, nxx, nxz, nzz, mxx, ca * eb - cb * ea, mzz, nxx + mxx, nzz + mzz


@inlined
def _stiff(X: float, e_p: float, e_s: float) -> Numerators:
    """Differences in closed form; c < vs, so that r and s are real."""
    r = math.sqrt(1.0 - e_p)
    s = math.sqrt(1.0 - e_s)
    rs = r * s
    r_minus_s = (e_s - e_p) / (r + s)
    P = 0.5 * (r + s) * X
    M = 0.5 * r_minus_s * X
    ea = math.exp(-r * X)
    eb = math.exp(-s * X)
    pp = ea * eb  # exp(-2 P), the factor of all elements
    ca = 0.5 + 0.5 * ea * ea
    cb = 0.5 + 0.5 * eb * eb
    sa = (0.5 - 0.5 * ea * ea) / r
    sb = (0.5 - 0.5 * eb * eb) / s
    ch_m = 0.5 * (eb + ea)  # cosh M exp(-P)
    if M < 0.5:
        q = M * M
        sh_m = M * (
            1.0 + q / 6.0 * (1.0 + q / 20.0 * (1.0 + q / 42.0 * (1.0 + q / 72.0 * (1.0 + q / 110.0))))
        )
        sh_m *= math.sqrt(pp)
    else:
        sh_m = 0.5 * (eb - ea)
    sasb = sa * sb
    D = (e_p * e_s + r_minus_s * r_minus_s) * sasb - 4.0 * sh_m * sh_m
    # C_A S_B - C_B S_A and S_A - S_B
    t = (0.5 * M * (1.0 - pp * pp) - 2.0 * P * sh_m * ch_m) / (X * rs)
    v = (P * (1.0 + pp) * sh_m - M * (1.0 - pp) * ch_m) / (X * rs)
    one_minus_rs = (e_p + e_s - e_p * e_s) / (1.0 + rs)
    nxx = e_p * cb * sa + t
    nxz = -2.0 * sh_m * sh_m - one_minus_rs * rs * sasb
    nzz = e_s * ca * sb - t
    mxx = v - e_p * sa * eb
    mzz = -v - e_s * sb * ea
    return D, nxx, nxz, nzz, mxx, (1.0 - pp) * sh_m, mzz, nxx + mxx, nzz + mzz


@inlined
def _thin(X: float, e_p: float, e_s: float) -> Numerators:
    """Divided differences as power series in the complete homogeneous polynomials of their two arguments."""
    X2 = X * X
    rr = 1.0 - e_p
    ss = 1.0 - e_s
    a = rr * X2
    b = ss * X2
    half_sum = 0.5 * (a + b)  # P^2 + M^2
    product = 0.0625 * (a - b) * (a - b)  # P^2 M^2
    Q = H = C_ab = S_ab = 0.0
    h0, h1 = 0.0, 1.0  # polynomials in (P^2, M^2)
    g0, g1 = 0.0, 1.0  # polynomials in (a, b)
    sine, power = 1.0, 1.0  # 1/(2n+1)! and 4^n
    Ea = Eb = Sa = Sb = 0.0  # 2 (C - 1) / a and S
    an = bn = 1.0
    terms = TERMS if max(abs(a), abs(b)) > 0.01 else FEW_TERMS
    for n in range(1, terms + 1):
        Sa += sine * an
        Sb += sine * bn
        cosine = COSINE[n]
        sine = SINE[n]
        power *= 4.0
        Ea += 2.0 * cosine * an
        Eb += 2.0 * cosine * bn
        Q += 2.0 * power * COSINE[n + 1] * h1
        H += power * sine * h1
        C_ab += cosine * g1
        S_ab += sine * g1
        an *= a
        bn *= b
        h0, h1 = h1, half_sum * h1 - product * h0
        g0, g1 = g1, (a + b) * g1 - a * b * g0
    Ca = 1.0 + 0.5 * a * Ea
    Cb = 1.0 + 0.5 * b * Eb
    d = X2 * (e_s - e_p)
    D = X2 * (e_p * e_s * Sa * Sb + 0.25 * d * (e_s - e_p) * Q)
    if e_s < STIFF:
        rs = math.sqrt(rr * ss)
        one_minus_rs = (e_p + e_s - e_p * e_s) / (1.0 + rs)
        # 2 sinh^2 M = (a + b)/4 - sqrt(a b)/2 + ..., from cosh(2 M) - 1 = C_A C_B - A B S_A S_B - 1
        r_minus_s = (e_s - e_p) / (math.sqrt(rr) + math.sqrt(ss))
        q = 0.25 * X2 * r_minus_s * r_minus_s
        shc = 1.0 + q / 6.0 * (1.0 + q / 20.0 * (1.0 + q / 42.0 * (1.0 + q / 72.0)))
        nxz = -X2 * (0.5 * r_minus_s * r_minus_s * shc * shc + one_minus_rs * rs * Sa * Sb)
    else:
        nxz = X2 * (rr * ss * Sa * Sb - 0.5 * rr * Ea - 0.5 * ss * Eb - 0.25 * X2 * rr * ss * Ea * Eb)
    both = d * (0.5 * H + S_ab)
    return (
        D,
        X * (e_p * Cb * Sa + 0.5 * d * H),
        nxz,
        X * (e_s * Ca * Sb - 0.5 * d * H),
        X * (d * S_ab - e_p * Sa),
        d * C_ab,
        -X * (d * S_ab + e_s * Sb),
        X * (0.5 * b * e_p * Sa * Eb + both),
        X * (0.5 * a * e_s * Sb * Ea - both),
    )


@inlined
def half_space_stiffness(
    wavenumber: float, shear_modulus: float, e_p: float, e_s: float
) -> tuple[float, float, float]:
    """Return (xx, xz, zz) of a half-space whose shear velocity exceeds c [Pa/m]."""
    r = math.sqrt(1.0 - e_p)
    s = math.sqrt(1.0 - e_s)
    a = e_s * (1.0 + r * s) / (e_p + e_s - e_p * e_s)  # (1 - s^2) / (1 - r s)
    scale = wavenumber * shear_modulus
    return scale * r * a, scale * (2.0 - a), scale * s * a
