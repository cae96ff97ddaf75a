"""Slowest phase velocity of a Rayleigh branch at each of many frequencies.

A branch omega_j(k) reaches omega last at its largest root k; there, and nowhere at larger k, the count of
branches below omega exceeds j. In c = omega / k that is the first velocity from below at which the count
exceeds j. The frequencies are taken from high to low: where omega_j(k) lies above one frequency it lies above
every lower one, so that each stretch of k is searched once.

A stretch is crossed in one of two ways, and a root is accepted in both only with the count at most j just
below it and more than j just above it (relative distance `MARGIN`).

- Pursuit: the roots already found are extrapolated, and the secular function is solved from there. Used where
  frequencies are close and the branch proves smooth, that is, where the root lies where it was expected.
- Scan: counts at velocities so close that the vertical phase of the waves changes little from one to the
  next;
  between equal counts the slopes of the secular function tell whether a forward and a backward root may hide
  there, and the dip is then searched to its bottom.

So the identity of a root and its sides are certified by count; that no narrower dip of the same branch lies
at lower velocity is a matter of following it closely.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .rayleigh_count import rayleigh_count
from .rayleigh_secular import rayleigh_secular, secular_table

Array = NDArray[np.float64]

MARGIN = 1e-10  # relative distance at which a root is certified by counts on either side
TOP = 1e-9  # relative distance below the half-space shear velocity up to which modes are sought
PHASE_STEP = 0.8  # largest change of vertical phase from one velocity of a scan to the next [rad]
VELOCITY_STEP = 0.1  # largest relative change of velocity in a scan
NEARBY = 1e-7  # relative step of difference quotients
CLOSE = 1.5  # ratio of neighbouring frequencies up to which a root may be pursued
MODERATE = 6.0  # ratio of vs to c up to which the secular function is as exact as `MARGIN`
EXPECTED = 0.03  # relative distance from the extrapolated velocity within which a pursued root may lie


@kernel
def velocity_floor(vp: Array, vs: Array, density: Array) -> float:
    """Return a velocity below which no branch exists at any frequency.

    By Rayleigh's principle no branch is slower than the Rayleigh wave of a half-space that has the least
    moduli and the greatest density anywhere; that wave is faster than 0.87 vs where lambda >= 0 and faster
    than 0.68 vs always.
    """
    shear = np.min(density * vs * vs)
    bulk = np.min(density * (vp * vp - vs * vs))  # lambda + mu, the bulk modulus of plane strain
    return (0.87 if bulk >= 2.0 * shear else 0.68) * math.sqrt(shear / np.max(density))


@inlined
def vertical_phase(omega: float, velocity: float, thickness: Array, vp: Array, vs: Array) -> float:
    """Return the summed phases of the P and S waves that propagate up and down the layers [rad]."""
    k = omega / velocity
    phase = 0.0
    for i in range(thickness.size - 1):
        excess = (omega / vs[i]) ** 2 - k * k
        if excess > 0.0:
            phase += thickness[i] * math.sqrt(excess)
            excess = (omega / vp[i]) ** 2 - k * k
            if excess > 0.0:
                phase += thickness[i] * math.sqrt(excess)
    return phase


@inlined
def next_velocity(omega: float, velocity: float, top: float, thickness: Array, vp: Array, vs: Array) -> float:
    """Return the next velocity of a scan, at most `top`."""
    here = vertical_phase(omega, velocity, thickness, vp, vs)
    step = VELOCITY_STEP
    for _ in range(40):
        ahead = min(velocity * (1.0 + step), top)
        change = vertical_phase(omega, ahead, thickness, vp, vs) - here
        if change <= PHASE_STEP:
            break
        step *= max(0.25, min(0.8, PHASE_STEP / change))
    return ahead


@inlined
def value_and_slope(omega: float, velocity: float, step: float, table: Array) -> tuple[float, float]:
    """Return the secular function and its one-sided difference quotient."""
    value = rayleigh_secular(omega, velocity, table)
    return value, (rayleigh_secular(omega, velocity + step, table) - value) / step


@kernel
def hidden_crossing(
    omega: float,
    low: float,
    high: float,
    left: tuple[float, float],
    right: tuple[float, float],
    mode: int,
    model: tuple[Array, Array, Array, Array],
    table: Array,
) -> float:
    """Return a velocity between `low` and `high` where the count exceeds `mode`, or NaN.

    The counts at both ends equal `mode`; `left` and `right` are values and slopes of the secular function
    there. Where both slopes fall towards the middle, the dip is followed to a change of sign or to its
    bottom.
    """
    for _ in range(60):
        width = high - low
        falling = left[0] * left[1] < 0.0 and right[0] * right[1] > 0.0
        if not falling or width <= 1e-9 * low:
            break
        # where the two tangents meet, kept inside
        middle = (right[0] - left[0] + left[1] * low - right[1] * high) / (left[1] - right[1])
        middle = min(max(middle, low + 0.1 * width), high - 0.1 * width)
        here = value_and_slope(omega, middle, NEARBY * width, table)
        if here[0] * left[0] <= 0.0:
            if rayleigh_count(omega, middle, *model) > mode:
                return middle
            break
        if here[0] * here[1] < 0.0:
            low, left = middle, here
        else:
            high, right = middle, here
    return math.nan


@kernel
def refined(
    omega: float,
    low: float,
    high: float,
    low_count: int,
    high_count: int,
    mode: int,
    model: tuple[Array, Array, Array, Array],
    table: Array,
) -> float:
    """Return the root between `low` (count at most `mode`) and `high` (count above `mode`).

    Bisection by count until one crossing is left, then the zero of the secular function, then the counts on
    both sides of it. Where the two disagree the count decides.
    """
    while (low_count != mode or high_count != mode + 1) and high - low > 2e-15 * high:
        middle = 0.5 * (low + high)
        count = rayleigh_count(omega, middle, *model)
        if count > mode:
            high, high_count = middle, count
        else:
            low, low_count = middle, count
    root = certified(omega, bracketed(omega, low, high, table), low, high, mode, model)
    return root if root == root else bisected(omega, low, high, mode, model)


@kernel
def certified(
    omega: float, root: float, low: float, high: float, mode: int, model: tuple[Array, Array, Array, Array]
) -> float:
    """Return the root of branch `mode` that the counts see close to `root`, or NaN.

    It is `root` itself where the counts differ across `MARGIN`. The secular function loses digits over layers
    much faster than c; there the counts differ across a wider margin, and the root is bisected by count.
    """
    margin = MARGIN
    for _ in range(6):
        below = max(root * (1.0 - margin), low)
        above = min(root * (1.0 + margin), high)
        if rayleigh_count(omega, below, *model) <= mode < rayleigh_count(omega, above, *model):
            return root if margin == MARGIN else bisected(omega, below, above, mode, model)
        margin *= 4.0
    return math.nan


@kernel
def bisected(
    omega: float, low: float, high: float, mode: int, model: tuple[Array, Array, Array, Array]
) -> float:
    """Return the root between `low` (count at most `mode`) and `high` (count above `mode`) by count alone."""
    while high - low > 1e-13 * high:
        middle = 0.5 * (low + high)
        if rayleigh_count(omega, middle, *model) > mode:
            high = middle
        else:
            low = middle
    return 0.5 * (low + high)


@kernel
def bracketed(omega: float, low: float, high: float, table: Array) -> float:
    """Return a zero of the secular function between two velocities of opposite sign (Chandrupatla 1997)."""
    a, fa = high, rayleigh_secular(omega, high, table)
    b, fb = low, rayleigh_secular(omega, low, table)
    if fa * fb > 0.0:
        return 0.5 * (low + high)
    t = 0.5
    for _ in range(100):
        x = a + t * (b - a)
        fx = rayleigh_secular(omega, x, table)
        if (fx > 0.0) == (fa > 0.0):
            c, fc = a, fa
        else:
            c, fc = b, fb
            b, fb = a, fa
        a, fa = x, fx
        best = a if abs(fa) < abs(fb) else b
        tolerance = 2e-15 * abs(best) / abs(b - a)
        if tolerance > 0.5 or fa == 0.0:
            return best
        xi = (a - b) / (c - b)
        phi = (fa - fb) / (fc - fb)
        if phi * phi < xi and (1.0 - phi) * (1.0 - phi) < 1.0 - xi:
            t = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
        else:
            t = 0.5
        t = min(max(t, tolerance), 1.0 - tolerance)
    return best


@kernel
def scanned(
    omega: float, floor: float, top: float, mode: int, model: tuple[Array, Array, Array, Array], table: Array
) -> float:
    """Return the slowest root of branch `mode` between two velocities, NaN where there is none."""
    thickness, vp, vs, _ = model
    low = floor
    low_count = rayleigh_count(omega, low, *model)
    if low_count > mode:
        return math.nan
    left = value_and_slope(omega, low, NEARBY * low, table)
    while low < top:
        high = next_velocity(omega, low, top, thickness, vp, vs)
        high_count = rayleigh_count(omega, high, *model)
        if high_count > mode:
            return refined(omega, low, high, low_count, high_count, mode, model, table)
        right = value_and_slope(omega, high, -NEARBY * high, table)
        if high_count == mode:
            start = low
            while low_count != mode and high - start > 0.1 * (high - low):  # where the count reached `mode`
                middle = 0.5 * (start + high)
                count = rayleigh_count(omega, middle, *model)
                if count > mode:
                    return refined(omega, start, middle, low_count, count, mode, model, table)
                start, low_count = middle, count
            if low_count == mode:
                if start > low:
                    left = value_and_slope(omega, start, NEARBY * start, table)
                crossing = hidden_crossing(omega, start, high, left, right, mode, model, table)
                if crossing == crossing:
                    return refined(omega, start, crossing, mode, mode + 1, mode, model, table)
        low, low_count, left = high, high_count, right
    return math.nan


@kernel
def pursued(
    omega: float, guess: float, spread: float, slope: float, low: float, high: float, table: Array
) -> tuple[float, float]:
    """Return a zero of the secular function near `guess`, and its slope there.

    One step by the expected `slope` (by the relative distance `spread` where it is NaN), then secant and
    inverse quadratic steps. NaN where a step leaves (low, high) or they do not settle.
    """
    a = guess
    if not low < a < high:
        return math.nan, math.nan
    fa = rayleigh_secular(omega, a, table)
    step = spread * guess
    if slope == slope:
        step = min(max(-fa / slope, -EXPECTED * guess), EXPECTED * guess)
        if abs(step) < 1e-9 * guess:
            step = 1e-9 * guess
    b = a + step
    c = fc = 0.0
    for i in range(9):
        if not low < b < high:
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
            if bend * bend * ea * eb * ec <= 2e-12 * x:
                return x, slope
        c, fc = a, fa
        a, fa = b, fb
        b = x
    return math.nan, math.nan


@inlined
def extrapolated(x: float, xs: Array, ys: Array, n: int) -> tuple[float, float]:
    """Return the polynomial through `n` points at `x` (Neville), and its change by the oldest of them."""
    work = np.empty(4)
    for i in range(n):
        work[i] = ys[i]
    estimate = ys[0]
    for m in range(1, n):
        for i in range(n - m):
            work[i] = ((x - xs[i + m]) * work[i] + (xs[i] - x) * work[i + 1]) / (xs[i] - xs[i + m])
        estimate = work[0]
    previous = ys[0]
    if n > 2:  # the polynomial through all but the oldest
        for i in range(n - 1):
            work[i] = ys[i]
        for m in range(1, n - 1):
            for i in range(n - 1 - m):
                work[i] = ((x - xs[i + m]) * work[i] + (xs[i] - x) * work[i + 1]) / (xs[i] - xs[i + m])
        previous = work[0]
    return estimate, abs(estimate - previous)


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
    model = (thickness, vp, vs, density)
    table = secular_table(thickness, vp, vs, density)
    top = vs[-1] * (1.0 - TOP)
    slowest = velocity_floor(vp, vs, density)
    sign = 1.0 if mode % 2 == 0 else -1.0  # of the secular function below a root of the branch
    velocities = np.full(omega.size, math.nan)
    cleared = math.inf  # wavenumber above which the branch is known to lie above the frequency at hand
    logs = np.zeros(4)  # the latest roots, newest first
    roots = np.zeros(4)
    known = 0
    fastest = np.max(vs)
    slope = last_slope = math.nan  # of the secular function at the latest two roots
    for i in range(omega.size):
        w = omega[i]
        log_w = math.log(w)
        low = max(slowest, w / cleared)
        velocity = math.nan
        new_slope = math.nan
        if known > 0 and logs[0] - log_w < math.log(CLOSE):
            if logs[0] == log_w:
                velocities[i] = roots[0]
                continue
            guess, spread = extrapolated(log_w, logs, roots, known)
            spread = min(max(1.5 * spread / guess, 1e-7), 0.01)
            root, found_slope = pursued(w, guess, spread, slope * slope / last_slope, low, top, table)
            if abs(root - guess) < EXPECTED * guess and sign * found_slope < 0.0:
                if (
                    mode == 0
                    and fastest < MODERATE * root
                    and rayleigh_count(w, root * (1.0 - MARGIN), *model) == 0
                    and rayleigh_secular(w, root * (1.0 + MARGIN), table) < 0.0  # odd: cheaper than the count
                ):
                    velocity = root
                else:
                    velocity = certified(w, root, low, top, mode, model)
                new_slope = found_slope
        if velocity != velocity and low < top:
            velocity = scanned(w, low, top, mode, model, table)
        last_slope, slope = slope, new_slope
        if last_slope != last_slope:
            last_slope = slope
        if velocity == velocity:
            velocities[i] = velocity
            cleared = w / velocity
            known = min(known + 1, 4)
            for q in range(known - 1, 0, -1):
                logs[q], roots[q] = logs[q - 1], roots[q - 1]
            logs[0], roots[0] = log_w, velocity
        else:
            cleared = min(cleared, w / top)
            known = 0
    return velocities
