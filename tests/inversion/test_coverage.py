"""The 90 % range of Vs30 holds the truth about as often as it says, and a control that must fail does."""

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, LayeredEarth
from surfdisp.earth import phase_velocity
from surfdisp.inversion import invert
from surfdisp.site import site_result, vs30

PROBLEMS = 24


def random_ground(seed):
    """Three or four layers with a Poisson's ratio and a density of their own, unlike the layerings tried."""
    random = np.random.default_rng([seed, 11])
    layers = int(random.integers(3, 5))
    thickness = random.uniform(2.0, 8.0, size=layers - 1) * np.arange(1, layers)
    vs = random.uniform(110.0, 220.0) * np.exp(np.cumsum(random.normal(0.35, 0.2, size=layers)))
    vs[-1] = max(vs[-1], 1.1 * vs[:-1].max())
    poisson = np.clip(random.normal(1.0 / 3.0, 0.06, size=layers), 0.2, 0.45)
    return LayeredEarth(
        thickness=[*thickness, np.inf],
        vs=vs,
        vp=vs * np.sqrt((2.0 - 2.0 * poisson) / (1.0 - 2.0 * poisson)),
        density=np.linspace(random.uniform(1650.0, 1850.0), random.uniform(1850.0, 2100.0), layers),
    )


def share_inside(factor):
    """How often the range holds the true Vs30, where the curve is `factor` times the true one."""
    inside = 0
    for seed in range(PROBLEMS):
        earth, frequency = random_ground(seed), np.geomspace(6.0, 50.0, 24)
        exact = phase_velocity(earth, frequency)
        noise = 1.0 + 0.02 * np.random.default_rng(seed).standard_normal(exact.size)
        curve = DispersionCurve(
            frequency=frequency, velocity=factor * exact * noise, sigma=0.02 * factor * exact
        )
        found = invert(curve, water_table_depth=np.inf, n_earths=120, seed=seed)
        interval = site_result(found).vs30
        inside += interval.low <= vs30(earth) <= interval.high
    return inside / PROBLEMS


@pytest.mark.slow
def test_the_range_holds_the_truth_in_most_random_grounds():
    assert share_inside(1.0) >= 0.8


@pytest.mark.slow
def test_negative_control_a_curve_a_quarter_too_fast_is_not_covered():
    assert share_inside(1.25) <= 0.4
