"""Analytic derivatives of phase velocity: Taylor remainder of second order, and exact identities."""

import numpy as np
import pytest

from surfdisp.core import InputError, LayeredEarth
from surfdisp.earth import phase_velocity, phase_velocity_and_sensitivity, sensitivity

FIELDS = ("vs", "vp", "density", "thickness")

SITE = {
    "thickness": [1.5, 3.0, 5.0, 9.0, np.inf],
    "vp": [350.0, 500.0, 1500.0, 1600.0, 2200.0],
    "vs": [160.0, 120.0, 240.0, 330.0, 650.0],
    "density": [1750.0, 1800.0, 1900.0, 2000.0, 2200.0],
}
THIN_AND_STIFF = {
    "thickness": [0.02, 4.0, 0.01, 6.0, 12.0, np.inf],
    "vp": [3500.0, 400.0, 1200.0, 2500.0, 1550.0, 3000.0],
    "vs": [1800.0, 130.0, 90.0, 900.0, 200.0, 1500.0],
    "density": [2400.0, 1700.0, 1600.0, 2200.0, 1800.0, 2300.0],
}
EARTHS = {"site": SITE, "thin and stiff layers": THIN_AND_STIFF}
CASES = [
    (name, frequency, mode)
    for name in EARTHS
    for frequency, modes in ((2.0, [0]), (8.0, [0, 1]), (25.0, [0, 1, 3]), (80.0, [0, 2, 6]))
    for mode in modes
]


def changed(model, field, layer, by):
    values = np.array(model[field])
    values[layer] *= 1.0 + by
    return LayeredEarth(**{**model, field: values})


@pytest.mark.parametrize("field", FIELDS)
@pytest.mark.parametrize(("name", "frequency", "mode"), CASES)
def test_taylor_remainder_is_of_second_order(name, frequency, mode, field):
    model = EARTHS[name]
    velocity, rows = phase_velocity_and_sensitivity(LayeredEarth(**model), frequency, mode=mode)
    layers = len(model["vs"]) - (field == "thickness")
    for layer in range(layers):
        slope = getattr(rows, field)[0, layer] * model[field][layer]
        steps = np.array([2e-3, 1e-3, 5e-4])
        moved = [phase_velocity(changed(model, field, layer, by), frequency, mode=mode)[0] for by in steps]
        remainder = np.abs(np.array(moved) - velocity[0] - slope * steps)
        floor = 3e-10 * velocity[0]
        # halving the step quarters the remainder; a wrong derivative would only halve it
        assert (remainder[1:] <= 0.35 * remainder[:-1] + floor).all(), f"layer {layer}: {remainder}"


@pytest.mark.parametrize(("name", "frequency", "mode"), CASES)
def test_scaling_all_velocities_and_thicknesses_scales_the_velocity(name, frequency, mode):
    """Euler's theorem at fixed frequency: sum of m dc/dm over vs, vp and thickness is c, over density 0."""
    model = EARTHS[name]
    velocity, rows = phase_velocity_and_sensitivity(LayeredEarth(**model), frequency, mode=mode)
    finite = np.append(model["thickness"][:-1], 0.0)
    total = rows.vs @ model["vs"] + rows.vp @ model["vp"] + rows.thickness @ finite
    assert total == pytest.approx(velocity, rel=1e-9)
    assert (rows.density @ model["density"]) == pytest.approx(0.0, abs=1e-8 * velocity[0])


def test_half_space_thickness_column_is_zero_and_missing_modes_are_nan():
    earth = LayeredEarth(**SITE)
    velocity, rows = phase_velocity_and_sensitivity(earth, [2.0, 40.0, 2.0], mode=3)
    assert np.isnan(velocity).tolist() == [True, False, True]
    for field in FIELDS:
        array = getattr(rows, field)
        assert array.shape == (3, 5)
        assert np.isnan(array[[0, 2]]).all()
        assert np.isfinite(array[1]).all()
    assert rows.thickness[1, -1] == 0.0


def test_half_space_alone():
    """The velocity of a half-space scales with its vs at fixed vp/vs (Rayleigh 1885)."""
    earth = LayeredEarth(thickness=[np.inf], vp=[400.0], vs=[200.0], density=[1800.0])
    velocity, rows = phase_velocity_and_sensitivity(earth, [5.0, 50.0])
    assert rows.vs[:, 0] * 200.0 + rows.vp[:, 0] * 400.0 == pytest.approx(velocity, rel=1e-12)
    step = 1e-4
    nearby = LayeredEarth(thickness=[np.inf], vp=[400.0 + step], vs=[200.0], density=[1800.0])
    assert rows.vp[:, 0] == pytest.approx((phase_velocity(nearby, [5.0, 50.0]) - velocity) / step, rel=1e-5)


def test_a_mode_trapped_at_depth_has_no_sensitivity_at_the_surface():
    earth = LayeredEarth(
        thickness=[20.0, 3.0, np.inf],
        vp=[1500.0, 1500.0, 1800.0],
        vs=[500.0, 100.0, 600.0],
        density=[2000.0, 1800.0, 2100.0],
    )
    rows = sensitivity(earth, 60.0)
    assert np.abs(rows.vs[0, 0]) < 1e-3 < 0.5 < rows.vs[0, 1]
    assert rows.vs[0, 1] * 100.0 == pytest.approx(phase_velocity(earth, 60.0)[0], rel=0.2)


@pytest.mark.parametrize("mode", [0, 1])
def test_a_mode_trapped_between_equal_layers_feels_both_alike_and_dies_out_from_there(mode):
    earth = LayeredEarth(
        thickness=[20.0, 3.0, 20.0, np.inf],
        vp=[1500.0, 1500.0, 1500.0, 1800.0],
        vs=[500.0, 100.0, 500.0, 600.0],
        density=[2000.0, 1800.0, 2000.0, 2100.0],
    )
    velocity, rows = phase_velocity_and_sensitivity(earth, 60.0, mode=mode)
    for field in ("vs", "vp", "density"):
        values = getattr(rows, field)[0]
        assert values[0] == pytest.approx(values[2], rel=1e-9)
    decay = np.exp(-2.0 * 2.0 * np.pi * 60.0 * np.sqrt(1.0 / velocity[0] ** 2 - 1.0 / 500.0**2) * 20.0)
    assert 0.0 < rows.vs[0, 3] < 1e3 * decay < 1e-40
    assert 0.0 < np.abs(rows.thickness[0, [0, 2]]).max() < 1e5 * decay


def test_sensitivity_agrees_with_the_pair_and_says_what_is_missing():
    earth = LayeredEarth(**SITE)
    together = phase_velocity_and_sensitivity(earth, [5.0, 10.0])[1]
    assert sensitivity(earth, [5.0, 10.0], of="phase") == together
    with pytest.raises(InputError, match="of='group' is not available yet"):
        sensitivity(earth, 5.0, of="group")
    with pytest.raises(InputError, match="wave='love' is not available yet"):
        sensitivity(earth, 5.0, wave="love")
