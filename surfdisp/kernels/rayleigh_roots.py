"""Slowest phase velocity of one Rayleigh branch at one frequency.

A branch omega_j(k) reaches omega last at its largest root k; there, and nowhere at larger k, the count of
branches below omega exceeds j. In c = omega / k that is the first velocity from below at which the count
exceeds j.

The scan takes counts at velocities so close that the vertical phase of the waves changes little from one to
the next. Between equal counts the slopes of the secular function tell whether a forward and a backward root
may hide there, and the dip is then followed to its bottom. A root is accepted only with the count at most j
just below it and more than j just above it (relative distance `MARGIN`): its number is certified. That no
narrower dip of the same branch lies at a lower velocity is a matter of following it closely, not of proof.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from .jit import inlined, kernel
from .layer_table import P_SLOWNESS, S_SLOWNESS, THICKNESS
from .rayleigh_count import rayleigh_count
from .rayleigh_secular import rayleigh_secular

Array = NDArray[np.float64]

MARGIN = 2e-11  # relative distance at which a root is certified by counts on either side
PHASE_STEP = 0.8  # largest change of vertical phase from one velocity of a scan to the next [rad]
VELOCITY_STEP = 0.1  # largest relative change of velocity in a scan
LEAST_STEP = 1e-9  # the same at least, so that a scan ends
NEARBY = 1e-7  # relative step of difference quotients


@kernel
def velocity_floor(vp: Array, vs: Array, density: Array) -> float:
    """Return a velocity below which no branch exists at any frequency.

    By Rayleigh's principle no branch is slower than the Rayleigh wave of a half-space that has the least
    moduli and the greatest density anywhere; that wave is faster than 0.87 vs where lambda >= 0 and faster
    than 0.68 vs always.
    """
    shear = bulk = math.inf
    greatest = 0.0
    for i in range(vs.size):
        shear = min(shear, density[i] * vs[i] * vs[i])
        bulk = min(bulk, density[i] * (vp[i] * vp[i] - vs[i] * vs[i]))  # lambda + mu: that of plane strain
        greatest = max(greatest, density[i])
    return (0.87 if bulk >= shear else 0.68) * math.sqrt(shear / greatest)


@inlined
def vertical_phase(omega: float, velocity: float, table: Array) -> float:
    """Return the summed phases of the P and S waves that propagate up and down the layers [rad]."""
    k = omega / velocity
    phase = 0.0
    for i in range(table.shape[0] - 1):
        excess = omega * omega * table[i, S_SLOWNESS] - k * k
        if excess > 0.0:
            phase += table[i, THICKNESS] * math.sqrt(excess)
            excess = omega * omega * table[i, P_SLOWNESS] - k * k
            if excess > 0.0:
                phase += table[i, THICKNESS] * math.sqrt(excess)
    return phase


@inlined
def next_velocity(omega: float, velocity: float, top: float, table: Array) -> float:
    """Return the next velocity of a scan, at most `top`."""
    here = vertical_phase(omega, velocity, table)
    step = VELOCITY_STEP
    for _ in range(40):
        ahead = min(velocity * (1.0 + step), top)
        change = vertical_phase(omega, ahead, table) - here
        if change <= PHASE_STEP or step < LEAST_STEP:
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
            if rayleigh_count(omega, middle, table) > mode:
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
    table: Array,
) -> float:
    """Return the root between `low` (count at most `mode`) and `high` (count above `mode`).

    Bisection by count until one crossing is left, then the zero of the secular function, then the counts on
    both sides of it. Where the two disagree the count decides.
    """
    while (low_count != mode or high_count != mode + 1) and high - low > 2e-15 * high:
        middle = 0.5 * (low + high)
        count = rayleigh_count(omega, middle, table)
        if count > mode:
            high, high_count = middle, count
        else:
            low, low_count = middle, count
    root = certified(omega, bracketed(omega, low, high, table), low, high, mode, table)
    return root if root == root else bisected(omega, low, high, mode, table)


@kernel
def certified(omega: float, root: float, low: float, high: float, mode: int, table: Array) -> float:
    """Return the root of branch `mode` that the counts see close to `root`, or NaN.

    It is `root` itself where the counts differ across `MARGIN`. The secular function loses digits over layers
    much faster than c; there the counts differ across a wider margin, and the root is bisected by count.
    """
    margin = MARGIN
    for _ in range(8):
        below = max(root * (1.0 - margin), low)
        above = min(root * (1.0 + margin), high)
        if rayleigh_count(omega, below, table) <= mode < rayleigh_count(omega, above, table):
            return root if margin == MARGIN else bisected(omega, below, above, mode, table)
        margin *= 4.0
    return math.nan


@kernel
def bisected(omega: float, low: float, high: float, mode: int, table: Array) -> float:
    """Return the root between `low` (count at most `mode`) and `high` (count above `mode`) by count alone."""
    while high - low > 1e-13 * high:
        middle = 0.5 * (low + high)
        if rayleigh_count(omega, middle, table) > mode:
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
def scanned(omega: float, floor: float, top: float, mode: int, table: Array) -> float:
    """Return the slowest root of branch `mode` between two velocities, NaN where there is none."""
    low = floor
    low_count = rayleigh_count(omega, low, table)
    if low_count > mode:
        return math.nan
    left = value_and_slope(omega, low, NEARBY * low, table)
    while low < top:
        high = next_velocity(omega, low, top, table)
        high_count = rayleigh_count(omega, high, table)
        if high_count > mode:
            return refined(omega, low, high, low_count, high_count, mode, table)
        right = value_and_slope(omega, high, -NEARBY * high, table)
        if high_count == mode:
            start = low
            while low_count != mode and high - start > 0.1 * (high - low):  # where the count reached `mode`
                middle = 0.5 * (start + high)
                count = rayleigh_count(omega, middle, table)
                if count > mode:
                    return refined(omega, start, middle, low_count, count, mode, table)
                start, low_count = middle, count
            if low_count == mode:
                if start > low:
                    left = value_and_slope(omega, start, NEARBY * start, table)
                crossing = hidden_crossing(omega, start, high, left, right, mode, table)
                if crossing == crossing:
                    return refined(omega, start, crossing, mode, mode + 1, mode, table)
        low, low_count, left = high, high_count, right
    return math.nan
