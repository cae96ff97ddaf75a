"""Slowest phase velocity of one Rayleigh branch at many frequencies, from high to low.

Where omega_j(k) lies above one frequency it lies above every lower one: each root found clears all larger
wavenumbers for the frequencies to come, so that each stretch of k is searched once. It is crossed in one of
two ways. The branch is pursued where it proves smooth: the roots already found are extrapolated, the secular
function is solved from there, and the root must lie where it was expected; a long or failing step is halved.
Otherwise the stretch is scanned. Both accept a root only with the right counts on both sides of it.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .layer_table import STEP, layer_table
from .rayleigh_count import rayleigh_count
from .rayleigh_roots import MARGIN, certified, scanned, velocity_floor
from .rayleigh_secular import rayleigh_secular

Array = NDArray[np.float64]

TOP = 1e-9  # relative distance below the half-space shear velocity up to which modes are sought
CLOSE = math.log(1.5)  # largest step in log frequency of a pursuit
EXPECTED = 0.03  # relative distance from the extrapolated velocity within which a pursued root may lie
ROUNDING = 1e-14  # of the secular function, per square of the largest contrast eta that it has to cancel

LOG_OMEGA, VELOCITY, SLOPE = range(3)  # columns of the trail: roots found, newest first; slope of the secular
MEMORY = 4  # function there, NaN where unknown; rows of the trail


@inlined
def extrapolated(x: float, trail: Array, known: int) -> float:
    """Return the velocity expected at log frequency `x`, by the polynomial through the known roots."""
    estimate = 0.0
    for i in range(known):
        term = trail[i, VELOCITY]
        for j in range(known):
            if j != i:
                term *= (x - trail[j, LOG_OMEGA]) / (trail[i, LOG_OMEGA] - trail[j, LOG_OMEGA])
        estimate += term
    return estimate


@inlined
def expected_slope(trail: Array, known: int) -> float:
    """Return the slope of the secular function expected at the next root, NaN where nothing is known."""
    if known == 0:
        return math.nan
    slope: float = trail[0, SLOPE]
    if known > 1 and trail[1, SLOPE] == trail[1, SLOPE]:
        slope *= slope / trail[1, SLOPE]
    return slope


@inlined
def remembered(trail: Array, known: int, log_omega: float, velocity: float, slope: float) -> int:
    """Put a root at the head of the trail and return its new length."""
    known = min(known + 1, MEMORY)
    for i in range(known - 1, 0, -1):
        for column in range(3):
            trail[i, column] = trail[i - 1, column]
    trail[0, LOG_OMEGA], trail[0, VELOCITY], trail[0, SLOPE] = log_omega, velocity, slope
    return known


@kernel
def solved_near(
    omega: float, guess: float, slope: float, low: float, high: float, table: Array
) -> tuple[float, float]:
    """Return a zero of the secular function near `guess`, and its slope there.

    One step by the expected `slope` (by a fixed distance where it is NaN), then secant and inverse quadratic
    steps. NaN where a step leaves (low, high) or they do not settle.
    """
    a = guess
    if not low < a < high:
        return math.nan, math.nan
    fa = rayleigh_secular(omega, a, table)
    step = 1e-3 * guess
    if slope == slope:
        step = min(max(-fa / slope, -EXPECTED * guess), EXPECTED * guess)
        if abs(step) < 1e-9 * guess:
            step = 1e-9 * guess
    b = a + step
    c = fc = 0.0
    for i in range(9):
        if not low < b < high or abs(b - guess) > EXPECTED * guess:
            break
        fb = rayleigh_secular(omega, b, table)
        if fb == fa:
            break
        slope = (fb - fa) / (b - a)
        x = b - fb / slope
        if i > 0:
            if fc in (fa, fb):
                break
            secant = x
            x = (
                a * fb * fc / ((fa - fb) * (fa - fc))
                + b * fa * fc / ((fb - fa) * (fb - fc))
                + c * fa * fb / ((fc - fa) * (fc - fb))
            )
            # the error of the secant step is K (x-a)(x-b), that of the quadratic one K^2 (x-a)(x-b)(x-c)
            ea, eb, ec = abs(x - a), abs(x - b), abs(x - c)
            bend = max(abs(x - secant) / (ea * eb), eb / (ea * ec))  # K, from this step and from the last
            if bend * bend * ea * eb * ec <= 5e-12 * x:
                return x, slope
        c, fc = a, fa
        a, fa = b, fb
        b = x
    return math.nan, math.nan


@kernel
def pursued(
    omega: float,
    low: float,
    top: float,
    mode: int,
    trail: Array,
    known: int,
    contrast: float,
    table: Array,
) -> tuple[float, float]:
    """Return the root that continues the trail, with the slope of the secular function, or NaN."""
    guess = extrapolated(math.log(omega), trail, known)
    root, slope = solved_near(omega, guess, expected_slope(trail, known), low, top, table)
    odd = (
        mode % 2 == 1
    )  # the secular function is positive where the count is even, and falls or rises past it
    if not abs(root - guess) < EXPECTED * guess or (slope > 0.0) != odd:
        return math.nan, slope
    above = root * (1.0 + MARGIN)
    value = rayleigh_secular(omega, above, table)
    polished = above - value / slope
    if abs(polished - root) < MARGIN * root:
        below = root * (1.0 - MARGIN)
        root = polished
        eta = contrast / (root * root)
        exact = ROUNDING * (1.0 + eta * eta) < MARGIN * root * abs(slope)
        if mode == 0 and exact and rayleigh_count(omega, below, table) == 0:
            return root, slope  # the sign of `value` stands for an odd count above
    return certified(omega, root, low, top, mode, table), slope


@kernel
def slowest_velocities(
    omega: Array, mode: int, thickness: Array, vp: Array, vs: Array, density: Array
) -> Array:
    """Return the slowest phase velocity of branch `mode` at each angular frequency, NaN where it has none.

    Parameters
    ----------
    omega : array (n,)
        Angular frequencies in descending order [rad/s].
    mode : int
        Number of the branch, from 0.
    """
    table = layer_table(thickness, vp, vs, density)
    top = vs[-1] * (1.0 - TOP)
    contrast = 0.0
    for i in range(vs.size):
        contrast = max(contrast, abs(table[i, STEP]))
    slowest = velocity_floor(vp, vs, density)
    cleared = math.inf  # wavenumber above which the branch is known to lie above the frequency at hand
    trail = np.empty((MEMORY, 3))
    known = int(np.int64(0))  # a literal 0 would be compiled for apart
    velocities = np.empty(omega.size)
    for i in range(omega.size):
        if i > 0 and omega[i] == omega[i - 1]:
            velocities[i] = velocities[i - 1]
            continue
        velocity = math.nan
        log_omega = math.log(omega[i])
        steps = 1
        while known > 0 and steps <= 4 and velocity != velocity:
            step = (trail[0, LOG_OMEGA] - log_omega) / steps
            for left in range(steps - 1, -1, -1):
                if step > CLOSE:
                    break
                w = omega[i] * math.exp(left * step) if left > 0 else omega[i]
                low = max(slowest, w / cleared)
                root, slope = pursued(w, low, top, mode, trail, known, contrast, table)
                if root != root:
                    break
                known = remembered(trail, known, log_omega + left * step, root, slope)
                cleared = w / root
                if left == 0:
                    velocity = root
            steps *= 2
        if velocity != velocity:
            low = max(slowest, omega[i] / cleared)
            if low < top:
                velocity = scanned(omega[i], low, top, mode, table)
            if velocity == velocity:
                known = remembered(trail, known, log_omega, velocity, math.nan)
                cleared = omega[i] / velocity
            else:
                known = int(np.int64(0))
                cleared = min(cleared, omega[i] / top)
        velocities[i] = velocity
    return velocities
