"""Travel-time averages against closed forms and published models."""

import numpy as np
import pytest

from surfdisp.core import Ensemble, InputError, LayeredEarth
from surfdisp.site import average_velocity, vs30
from surfdisp.site.averages import average_velocities, integrals


def earth(thickness, vs):
    vs = np.asarray(vs, dtype=float)
    return LayeredEarth(thickness=[*thickness, np.inf], vp=2.0 * vs, vs=vs, density=np.full(len(vs), 1800.0))


def test_ten_metres_of_200_over_twenty_of_400_average_300():
    # 30 / (10/200 + 20/400) = 300; the arithmetic mean over depth would be 333.3
    assert vs30(earth([10.0], [200.0, 400.0])) == pytest.approx(300.0, rel=1e-14)


def test_a_half_space_alone_averages_its_own_velocity_over_any_depth():
    assert average_velocity(earth([], [321.0]), 7.3) == pytest.approx(321.0, rel=1e-14)


def test_an_average_that_ends_inside_a_layer_counts_only_the_part_above():
    # 4 m at 100 m/s and 2 m at 200 m/s: 0.05 s over 6 m
    assert average_velocity(earth([4.0, 50.0], [100.0, 200.0, 900.0]), 6.0) == pytest.approx(120.0, rel=1e-14)


def test_splitting_a_layer_changes_nothing():
    whole = earth([6.0, 9.0], [150.0, 240.0, 500.0])
    split = earth([2.5, 3.5, 9.0, 4.0], [150.0, 150.0, 240.0, 500.0, 500.0])
    for depth in (1.0, 6.0, 11.0, 40.0):
        assert average_velocity(split, depth) == pytest.approx(average_velocity(whole, depth), rel=1e-14)


def test_ensemble_average_equals_that_of_each_member_also_where_layers_are_filled_up():
    members = [earth([10.0], [200.0, 400.0]), earth([3.0, 5.0, 8.0], [120.0, 180.0, 260.0, 390.0])]
    ensemble = Ensemble.of(members, [0.5, 0.5])
    expected = [average_velocity(member, 25.0) for member in members]
    np.testing.assert_allclose(average_velocities(ensemble, 25.0), expected, rtol=1e-14)


def test_integral_of_density_over_depth_is_the_mass_per_area():
    # 2 m of 1700 and 3 m of 1900 kg/m3
    mass = integrals(np.array([2.0, np.inf]), np.array([1700.0, 1900.0]), [1.0, 5.0])
    np.testing.assert_allclose(mass, [1700.0, 9100.0], rtol=1e-14)


@pytest.mark.parametrize("depth", [0.0, -30.0, np.nan, np.inf, "deep"])
def test_a_depth_that_is_not_positive_is_refused_by_name(depth):
    with pytest.raises(InputError, match="depth must be"):
        average_velocity(earth([10.0], [200.0, 400.0]), depth)
