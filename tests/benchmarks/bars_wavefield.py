"""Bars of the full wavefield: Lamb's problem, the Rayleigh wave far away, convergence and time."""

import sys
import time
from collections.abc import Iterator
from pathlib import Path

import numpy as np
from bar import Bar

from surfdisp.core import Gather, LayeredEarth
from surfdisp.earth import half_space_rayleigh_speed, synthesize

sys.path.append(str(Path(__file__).parents[1] / "published"))
from test_pekeris_1955 import closed_form_velocity, half_space

SEED = 7


def measure() -> Iterator[Bar]:
    """Measure the bars of the wavefield."""
    yield lamb()
    yield far_rayleigh_speed()
    yield from ten_layers()


def lamb() -> Bar:
    """Lamb's problem at Poisson's ratio 1/4 against Pekeris' closed form (checks.md, A6)."""
    offsets = [5.0, 20.0, 60.0]
    gather = synthesize(half_space(), offsets, 0.6, 0.001)
    expected = np.array([closed_form_velocity(gather.times, offset, 30.0) for offset in offsets])
    worst = _largest_difference(gather.data, expected)
    figures = ", ".join(f"{1e2 * w:.5f} % at {r:g} m" for w, r in zip(worst, offsets, strict=True))
    return Bar(
        "Lamb, velocity after the default hammer blow (30 Hz)",
        figures,
        "1 % of the peak",
        worst.max() <= 0.01,
    )


def far_rayleigh_speed() -> Bar:
    """Phase velocity between 100 and 200 m, 15 to 60 Hz (checks.md, A1)."""
    earth = half_space()
    gather = synthesize(earth, [100.0, 200.0], 1.4, 0.001)
    frequency = np.arange(15.0, 61.0, 5.0)
    near, far = gather.data @ np.exp(-2j * np.pi * np.outer(gather.times, frequency))
    speed = half_space_rayleigh_speed(earth.vp[0], earth.vs[0])
    cycles = frequency * 100.0 / speed
    lag = -np.angle(far / near) / (2.0 * np.pi)
    lag += np.round(cycles - lag)
    error = np.abs(cycles / lag - 1.0).max()
    return Bar("Rayleigh speed far away, 15 to 60 Hz", f"{1e2 * error:.3f} %", "0.2 %", error <= 0.002)


def ten_layers() -> Iterator[Bar]:
    """48 receivers, 1 s, pulse to beyond 100 Hz, three different earths, one thread."""
    synthesize(half_space(), [10.0], 0.1, 0.001)  # compiles
    rng = np.random.default_rng(SEED)
    seconds, worst = [], []
    for _ in range(3):
        vs = np.sort(rng.uniform(140.0, 600.0, 10))
        vp = np.maximum(2.0 * vs, 1500.0 * (np.arange(10) > 3))
        thickness = [*rng.uniform(1.0, 5.0, 9), np.inf]
        earth = LayeredEarth(thickness=thickness, vp=vp, vs=vs, density=np.full(10, 1900.0))
        started = time.perf_counter()
        gather = _record(earth)
        seconds.append(time.perf_counter() - started)
        worst.append(_largest_difference(gather.data, _record(earth, tolerance=1e-4).data).max())
    yield Bar(
        "time of 48 receivers, 1 s, 10 layers, the slowest of 3 earths",
        f"{max(seconds):.2f} s",
        "10 s, goal 3 s",
        max(seconds) <= 10.0,
        SEED,
    )
    yield Bar(
        "change with the tolerance tightened tenfold",
        f"{1e2 * max(worst):.4f} %",
        "1 % of the peak",
        max(worst) <= 0.01,
        SEED,
    )


def _record(earth: LayeredEarth, **options: float) -> Gather:
    return synthesize(earth, 5.0 + 2.0 * np.arange(48), 1.0, 0.001, **options)


def _largest_difference(data: np.ndarray, expected: np.ndarray) -> np.ndarray:
    """Relative to the peak of each trace, (n_traces,)."""
    return np.abs(data - expected).max(axis=1) / np.abs(expected).max(axis=1)
