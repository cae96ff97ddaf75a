"""Vp and density from Vs: closed forms, limits and derivatives."""

import math

import numpy as np
import pytest

from surfdisp.core import InputError
from surfdisp.inversion import Layering
from surfdisp.inversion.ground import Ground

LAYERING = Layering.of("given", [2.0, 3.0, 5.0])
VS = np.array([120.0, 180.0, 400.0, 900.0])


def ground(**changes):
    values = {
        "poisson_ratio": 1.0 / 3.0,
        "water_table_depth": np.inf,
        "saturated_vp": 1500.0,
        "density": None,
    }
    return Ground(**{**values, **changes})


@pytest.mark.parametrize(
    ("poisson_ratio", "ratio"),
    [(0.0, math.sqrt(2.0)), (0.25, math.sqrt(3.0)), (1.0 / 3.0, 2.0), (0.45, math.sqrt(11.0))],
)
def test_velocity_ratio_of_poissons_ratio(poisson_ratio, ratio):
    # (Vp/Vs)^2 = (2 - 2 nu) / (1 - 2 nu)
    assert ground(poisson_ratio=poisson_ratio).velocity_ratio == pytest.approx(ratio)


def test_vp_is_twice_vs_when_dry_and_water_adds_its_stiffness_below_the_table():
    dry, _ = ground().compression(VS, LAYERING)
    np.testing.assert_allclose(dry, 2.0 * VS)
    wet, slope = ground(water_table_depth=2.0).compression(VS, LAYERING)
    np.testing.assert_allclose(wet[0], 240.0)
    np.testing.assert_allclose(wet[1:], np.sqrt(1500.0**2 + (2.0 * VS[1:]) ** 2))
    np.testing.assert_allclose(wet[2], 1700.0)  # 15, 8, 17
    np.testing.assert_allclose(slope[0], 2.0)


def test_vp_of_water_alone_where_the_soil_is_soft():
    # common practice: about 1500 m/s in saturated soil
    wet, slope = ground(water_table_depth=0.0).compression(np.full(4, 80.0), LAYERING)
    np.testing.assert_allclose(wet, 1500.0, rtol=0.01)
    assert np.all(slope < 0.25)


def test_density_of_mayne_2001():
    # [M] unit weight 8.32 log10(Vs) - 1.61 log10(z) kN/m3: Vs 100 m/s at 10 m gives 16.64 - 1.61 = 15.03
    deep = Layering.of("given", [20.0])
    density, _ = ground().densities(np.array([100.0, 100.0]), deep)
    assert density[0] == pytest.approx(15.03 / 9.81 * 1000.0)


def test_densities_stay_plausible_for_extreme_velocities():
    density, slope = ground().densities(np.array([20.0, 50.0, 4000.0, 9000.0]), LAYERING)
    assert np.all((density >= 1500.0) & (density <= 2600.0))
    assert slope[0] == 0.0
    assert slope[-1] == 0.0


def test_given_density_holds_everywhere_and_has_no_slope():
    density, slope = ground(density=1850.0).densities(VS, LAYERING)
    np.testing.assert_array_equal(density, 1850.0)
    np.testing.assert_array_equal(slope, 0.0)
    np.testing.assert_array_equal(ground(density=1850.0).density_by_trend(VS, LAYERING), 0.0)


@pytest.mark.parametrize("rule", ["compression", "densities"])
def test_slopes_by_vs_are_derivatives(rule):
    rules = getattr(ground(water_table_depth=2.0, density_trend=0.03), rule)
    step = 1e-4
    difference = (rules(VS + step, LAYERING)[0] - rules(VS - step, LAYERING)[0]) / (2.0 * step)
    np.testing.assert_allclose(rules(VS, LAYERING)[1], difference, rtol=1e-6)


def test_slopes_by_the_assumptions_are_derivatives():
    step = 1e-6
    at, above, below = (ground(poisson_ratio=0.3 + side * step, water_table_depth=2.0) for side in (0, 1, -1))
    difference = (above.compression(VS, LAYERING)[0] - below.compression(VS, LAYERING)[0]) / (2.0 * step)
    np.testing.assert_allclose(at.compression_by_poisson_ratio(VS, LAYERING), difference, rtol=1e-6)
    steeper, flatter = ground(density_trend=step), ground(density_trend=-step)
    difference = (steeper.densities(VS, LAYERING)[0] - flatter.densities(VS, LAYERING)[0]) / (2.0 * step)
    np.testing.assert_allclose(ground().density_by_trend(VS, LAYERING), difference, rtol=1e-6)


@pytest.mark.parametrize(
    ("changes", "name"),
    [
        ({"poisson_ratio": 0.5}, "poisson_ratio"),
        ({"poisson_ratio": -0.1}, "poisson_ratio"),
        ({"water_table_depth": -1.0}, "water_table_depth"),
        ({"water_table_depth": np.nan}, "water_table_depth"),
        ({"saturated_vp": 0.0}, "saturated_vp"),
        ({"density": -1.0}, "density"),
    ],
)
def test_impossible_ground_is_refused_by_name(changes, name):
    with pytest.raises(InputError, match=name):
        ground(**changes)
