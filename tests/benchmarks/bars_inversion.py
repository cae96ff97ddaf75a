"""Bars of the inversion room: Vs30 of published models, coverage of the ranges, and speed."""

from __future__ import annotations

import statistics
import time
from collections.abc import Iterator

import numpy as np
from bar import Bar

from surfdisp.core import DispersionCurve, InversionResult, LayeredEarth
from surfdisp.earth import phase_velocity
from surfdisp.inversion import invert, layering_by_ratio
from surfdisp.inversion.ground import Ground
from surfdisp.inversion.misfit import Misfit
from surfdisp.inversion.occam import WANDERS, smoothest_fit
from surfdisp.inversion.smoothness import Smoothness
from surfdisp.inversion.starting import starting_ln_vs
from surfdisp.site import site_result, vs30

SEEDS = 20
FEWER_SEEDS = 8
NOISE = 0.02

# Layer numbers of both papers from memory [M]: Xia, Miller & Park 1999; Tokimatsu, Tamura & Kojima 1992.
XIA = LayeredEarth(
    thickness=[2.0, 2.3, 2.5, 2.8, 3.2, np.inf],
    vs=[194.0, 270.0, 367.0, 485.0, 603.0, 740.0],
    vp=[650.0, 750.0, 1400.0, 1800.0, 2150.0, 2800.0],
    density=[1820.0, 1860.0, 1910.0, 1960.0, 2020.0, 2090.0],
)


def tokimatsu(*vs: float) -> LayeredEarth:
    """Return one of the cases: thicknesses, Vp and density are common to them."""
    vp = [300.0, 1000.0, 1400.0, 1400.0]
    return LayeredEarth(thickness=[2.0, 4.0, 8.0, np.inf], vs=vs, vp=vp, density=[1800.0] * 4)


MODELS = {
    "B1": (XIA, 4.3),
    "B2 case 1": (tokimatsu(80.0, 120.0, 180.0, 360.0), 2.0),
    "B2 case 2": (tokimatsu(180.0, 120.0, 180.0, 360.0), 2.0),
}
"""Each with the depth below which its Vp is that of saturated ground [m]."""


def measure() -> Iterator[Bar]:
    """Yield the bars of this room."""
    for name, (earth, water_table_depth) in MODELS.items():
        yield published(name, earth, water_table_depth)
        yield published(f"{name}, water table not given", earth, None, FEWER_SEEDS)
    yield coverage()
    yield least_squares_time()
    yield whole_time()


def noisy_curve(earth: LayeredEarth, frequency: np.ndarray, seed: int) -> DispersionCurve:
    """Return the exact fundamental with 2 % independent noise."""
    exact = phase_velocity(earth, frequency)
    noise = 1.0 + NOISE * np.random.default_rng(seed).standard_normal(exact.size)
    return DispersionCurve(frequency=frequency, velocity=exact * noise, sigma=NOISE * exact)


def published(name: str, earth: LayeredEarth, water_table_depth: float | None, seeds: int = SEEDS) -> Bar:
    """Vs30 of a published model from its fundamental, 4 to 50 Hz, 30 points."""
    truth, frequency = vs30(earth), np.geomspace(4.0, 50.0, 30)
    errors, inside, chi_squares = [], 0, []
    for seed in range(seeds):
        found = invert(noisy_curve(earth, frequency, seed), water_table_depth=water_table_depth)
        median, covered = _vs30(found, truth)
        errors.append(100.0 * abs(median / truth - 1.0))
        inside += covered
        chi_squares.append(found.chi_square)
    worst = max(errors)
    return Bar(
        f"{name}: Vs30 of the ensemble's median, {seeds} seeds",
        f"error median {statistics.median(errors):.1f} %, worst {worst:.1f} %; inside the 90 % range "
        f"{inside}/{seeds}; chi-square median {statistics.median(chi_squares):.2f}",
        "inside in 80 %" if water_table_depth is None else "worst 5 %, inside in 80 %",
        inside >= 0.8 * seeds and (worst <= 5.0 or water_table_depth is None),
    )


def coverage(problems: int = 40) -> Bar:
    """How often the 90 % range holds the true Vs30, for grounds unlike the inversion's own layerings."""
    inside, errors = 0, []
    for seed in range(problems):
        earth, curve = random_survey(seed)
        truth = vs30(earth)
        median, covered = _vs30(invert(curve, seed=seed), truth)
        inside += covered
        errors.append(100.0 * (median / truth - 1.0))
    return Bar(
        f"coverage of Vs30 by the 90 % range, {problems} random dry grounds, defaults",
        f"{inside}/{problems}; error median {statistics.median(np.abs(errors)):.1f} %, "
        f"worst {np.max(np.abs(errors)):.1f} %, mean {np.mean(errors):+.1f} %",
        "at least 80 %",
        inside >= 0.8 * problems,
        seed=0,
    )


def random_survey(seed: int) -> tuple[LayeredEarth, DispersionCurve]:
    """Return a ground of 3 to 6 layers whose Vp and density are its own, and its noisy curve."""
    random = np.random.default_rng([seed, 7])
    layers = int(random.integers(3, 7))
    thickness = np.diff(np.concatenate([[0.0], np.geomspace(2.0, random.uniform(12.0, 35.0), layers - 1)]))
    thickness *= random.uniform(0.7, 1.3, size=layers - 1)
    steps = random.normal(0.3, 0.25, size=layers - 1)
    vs = random.uniform(100.0, 250.0) * np.exp(np.concatenate([[0.0], np.cumsum(steps)]))
    vs[-1] = max(vs[-1], 1.1 * vs[:-1].max())
    poisson = np.clip(random.normal(1.0 / 3.0, 0.06, size=layers), 0.2, 0.45)
    vp = vs * np.sqrt((2.0 - 2.0 * poisson) / (1.0 - 2.0 * poisson))
    density = np.linspace(random.uniform(1650.0, 1850.0), random.uniform(1850.0, 2150.0), layers)
    earth = LayeredEarth(thickness=[*thickness, np.inf], vp=vp, vs=vs, density=density)
    frequency = np.geomspace(random.uniform(5.0, 9.0), 50.0, 35)
    return earth, noisy_curve(earth, frequency, seed)


def _vs30(found: InversionResult, truth: float) -> tuple[float, bool]:
    interval = site_result(found).vs30
    return interval.median, interval.low <= truth <= interval.high


def least_squares_time() -> Bar:
    """The smoothest fit of 10 layers on 40 frequencies, once compiled."""
    curve = noisy_curve(XIA, np.geomspace(5.0, 50.0, 40), 1)
    layering = layering_by_ratio(float(curve.wavelength.min()), 30.0, 1.26)
    misfit = Misfit(curve, Ground(1.0 / 3.0, 4.3, 1500.0, None), layering.split_at(4.3))
    start = starting_ln_vs(curve, misfit.layering)
    prior = Smoothness(misfit.layering.unknown_depth, float(start.mean()), WANDERS[0])
    lower, upper = np.full(start.size, np.log(80.0)), np.full(start.size, np.log(2500.0))
    times = []
    for _ in range(7):
        started = time.process_time()
        fit = smoothest_fit(misfit, prior, start, lower, upper)
        times.append(time.process_time() - started)
    best = min(times)
    return Bar(
        f"least squares of {len(misfit.layering.thickness)} layers on 40 frequencies",
        f"{1000.0 * best:.0f} ms for {fit.iterations} iterations, best of 7 (processor time)",
        "200 ms",
        best < 0.2,
    )


def whole_time() -> Bar:
    """The whole inversion with all layerings, water tables and draws, once compiled."""
    curve = noisy_curve(XIA, np.geomspace(5.0, 50.0, 40), 1)
    times = []
    for _ in range(3):
        started = time.process_time()
        found = invert(curve)
        times.append(time.process_time() - started)
    best = min(times)
    return Bar(
        f"whole inversion, {len(found.layerings)} fits and {len(found.ensemble)} draws",
        f"{best:.2f} s, best of 3 (processor time)",
        "3 s",
        best < 3.0,
    )
