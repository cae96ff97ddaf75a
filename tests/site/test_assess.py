"""From an inversion's ensemble to the site result: probabilities, steps, sentences."""

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, Ensemble, InputError, InversionResult, LayeredEarth
from surfdisp.site import average_velocity, site_result


def earth(thickness, vs, density=1800.0):
    vs = np.asarray(vs, dtype=float)
    return LayeredEarth(thickness=[*thickness, np.inf], vp=2.0 * vs, vs=vs, density=np.full(len(vs), density))


def curve(slope=0.0, **changes):
    frequency = np.linspace(4.0, 40.0, 60)
    velocity = 200.0 - slope * (frequency - 20.0)
    values = {"frequency": frequency, "velocity": velocity, "sigma": np.full(60, 4.0)}
    return DispersionCurve(**{**values, **changes})


def inversion(members, weights=None, resolved_depth=40.0, data=None):
    data = curve() if data is None else data
    return InversionResult(
        curve=data,
        earth=members[0],
        ensemble=Ensemble.of(members, np.ones(len(members)) if weights is None else weights),
        predicted=data.velocity,
        chi_square=1.0,
        resolution=np.ones(len(members[0].vs)),
        resolved_depth=resolved_depth,
    )


def uniform(*velocities):
    return [earth([], [velocity]) for velocity in velocities]


def test_class_probabilities_are_the_weights_of_the_earths_in_each_class():
    site = site_result(inversion(uniform(280.0, 290.0, 310.0), [0.2, 0.5, 0.3]))
    assert site.site_class["ASCE 7-22"] == pytest.approx({"D": 0.7, "CD": 0.3})
    assert site.site_class["ASCE 7-16"] == pytest.approx({"D": 1.0})
    assert site.site_class["EN 1998-1:2004"] == pytest.approx({"C": 1.0})
    assert site.median_class == {"ASCE 7-22": "D", "ASCE 7-16": "D", "EN 1998-1:2004": "C"}


def test_limits_in_feet_change_the_class_and_the_result_says_so():
    by_metres = site_result(inversion(uniform(304.0)))
    by_feet = site_result(inversion(uniform(304.0)), units="ft/s")
    assert (by_metres.median_class["ASCE 7-22"], by_feet.median_class["ASCE 7-22"]) == ("CD", "D")
    assert any("ASCE 7-22 would be D instead of CD" in note for note in by_metres.notes)
    assert any("ASCE 7-22 would be CD instead of D" in note for note in by_feet.notes)
    assert not any("would be" in note for note in site_result(inversion(uniform(250.0))).notes)


def test_velocity_criterion_and_caution_stand_beside_every_result():
    site = site_result(inversion(uniform(250.0)))
    words = "velocity criterion only: soft-clay and special-study classes not checked"
    assert all(words in bounds for bounds in site.class_bounds.values())
    assert any(words in note for note in site.notes)
    assert any("local codes and licensed practice prevail" in note for note in site.notes)


@pytest.mark.parametrize(
    ("thickness", "vs", "name"),
    [
        ([10.0], [200.0, 900.0], "E"),  # 10 m of soil over rock; by average alone 415 m/s, B
        ([10.0], [200.0, 790.0], "B"),  # no rock below
        ([4.0], [200.0, 900.0], "B"),  # cover thinner than 5 m, average 613 m/s
        ([21.0], [200.0, 900.0], "C"),  # cover thicker than 20 m, average 261 m/s
        ([10.0], [400.0, 900.0], "B"),  # cover stiffer than C
        (
            [3.0, 8.0],
            [900.0, 200.0, 900.0],
            "E",
        ),  # a crust counts to the cover: 11 / (3/900 + 8/200) = 254 m/s
        ([4.0], [500.0, 1500.0], "A"),  # at most 5 m weaker
        ([8.0], [500.0, 3000.0], "B"),  # 1289 m/s on average, but 8 m weaker
    ],
)
def test_en_1998_rules_about_soil_over_rock(thickness, vs, name):
    site = site_result(inversion([earth(thickness, vs)]))
    assert site.median_class["EN 1998-1:2004"] == name
    assert site.site_class["EN 1998-1:2004"] == {name: 1.0}


def test_short_resolved_depth_makes_vs30_tell_how_much_is_extension():
    # 10 of 30 m resolved at 200 m/s over 800 m/s: 0.025 of 0.075 s lie below
    site = site_result(inversion([earth([10.0], [200.0, 800.0])], resolved_depth=10.0))
    assert site.vs30.median == pytest.approx(400.0)
    assert "resolves 10.0 m" in site.vs30_note
    assert "33 % of the travel time" in site.vs30_note
    assert site_result(inversion(uniform(200.0), resolved_depth=30.0)).vs30_note == ""


@pytest.mark.parametrize(("resolved", "bottom"), [(12.0, 30.0), (44.5, 44.5)])
def test_profile_steps_reach_thirty_metres_or_the_resolved_depth(resolved, bottom):
    four = earth([4.0, 9.0, 20.0], [160.0, 260.0, 380.0, 500.0])
    members = [earth([3.0, 6.0], [150.0, 250.0, 400.0]), four]
    site = site_result(inversion(members, resolved_depth=resolved))
    assert site.profile.depth[0] == 0.0
    assert site.profile.depth[-1] == bottom
    np.testing.assert_array_equal(site.shear_modulus.depth, site.profile.depth)
    assert np.all(site.profile.low <= site.profile.median)
    assert np.all(site.profile.median <= site.profile.high)


def test_steps_of_one_earth_are_its_layers_and_its_moduli():
    site = site_result(
        inversion([earth([3.0, 6.0], [150.0, 250.0, 400.0], density=1900.0)], resolved_depth=9.5)
    )
    np.testing.assert_allclose(site.profile.depth, [0.0, 3.0, 9.0, 30.0])
    np.testing.assert_allclose(site.profile.median, [150.0, 250.0, 400.0, 400.0])
    np.testing.assert_allclose(site.shear_modulus.median, 1900.0 * site.profile.median**2)


def test_time_through_the_steps_is_the_time_through_the_layers_where_interfaces_crowd():
    rng = np.random.default_rng(5)
    member = earth(rng.uniform(0.05, 0.4, size=80), rng.uniform(100.0, 400.0, size=81))
    profile = site_result(inversion([member])).profile
    steps = earth(np.diff(profile.depth), profile.median)
    assert average_velocity(steps, 40.0) == pytest.approx(average_velocity(member, 40.0), rel=1e-12)
    assert len(profile.depth) < 81


def test_averages_are_reported_only_where_resolved():
    site = site_result(
        inversion([earth([10.0], [200.0, 400.0])], resolved_depth=22.0), depths=(5, 10, 20, 50)
    )
    assert set(site.average_velocity) == {"5", "10", "20"}
    assert site.average_velocity["20"].median == pytest.approx(20.0 / (0.05 + 0.025))


def test_check_at_36_m_wavelength_is_the_published_factor():
    # Brown, Diehl & Nigbor 2000: 1.076 x V(36 m); 200 m/s everywhere reaches 36 m at 5.56 Hz
    check = site_result(inversion(uniform(210.0))).wavelength_check
    assert check.median == pytest.approx(215.2, rel=1e-12)
    # 95 % interval +-10 % and sigma 2 %: 90 % half-width 1.645 sqrt((10/1.96)^2 + 2^2) = 9.014 %
    assert check.high == pytest.approx(215.2 * 1.09014, rel=1e-4)
    assert check.low == pytest.approx(215.2 * 0.90986, rel=1e-4)


def test_check_reads_a_sloping_curve_where_velocity_over_frequency_is_36_m():
    # 200 - 2 (f - 20) = 36 f  at  f = 240/38 Hz
    check = site_result(inversion(uniform(250.0), data=curve(slope=2.0))).wavelength_check
    assert check.median == pytest.approx(1.076 * 36.0 * 240.0 / 38.0, rel=1e-3)


@pytest.mark.parametrize("changes", [{"wave": "love"}, {"mode": 1}, {"mode": None}, {"kind": "group"}])
def test_no_check_without_a_fundamental_rayleigh_phase_curve(changes):
    site = site_result(inversion(uniform(250.0), data=curve(**changes)))
    assert site.wavelength_check is None
    assert any("not available" in note for note in site.notes)


def test_no_check_where_the_curve_ends_before_36_m():
    short = DispersionCurve(frequency=[10.0, 20.0], velocity=[200.0, 180.0], sigma=[4.0, 4.0])
    assert site_result(inversion(uniform(250.0), data=short)).wavelength_check is None


def test_a_check_that_disagrees_is_said_aloud():
    assert any("OUTSIDE" in note for note in site_result(inversion(uniform(300.0))).notes)
    assert any("lies inside" in note for note in site_result(inversion(uniform(215.0))).notes)


def test_wrong_units_and_depths_are_refused():
    with pytest.raises(InputError, match="units must be one of"):
        site_result(inversion(uniform(250.0)), units="feet")
    with pytest.raises(InputError, match="depths must be positive"):
        site_result(inversion(uniform(250.0)), depths=(-5.0,))
