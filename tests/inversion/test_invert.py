"""The whole inversion of one curve: published models, honesty, settings."""

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, InputError, LayeredEarth, StepError
from surfdisp.dispersion import picking
from surfdisp.earth import phase_velocity
from surfdisp.inversion import invert
from surfdisp.inversion.invert import BEYOND_HALF_SPACING
from surfdisp.site import site_result, vs30

# B1: Xia, Miller & Park 1999, Geophysics 64:691-700, layer numbers from memory [M]
XIA = LayeredEarth(
    thickness=[2.0, 2.3, 2.5, 2.8, 3.2, np.inf],
    vs=[194.0, 270.0, 367.0, 485.0, 603.0, 740.0],
    vp=[650.0, 750.0, 1400.0, 1800.0, 2150.0, 2800.0],
    density=[1820.0, 1860.0, 1910.0, 1960.0, 2020.0, 2090.0],
)


# B2: Tokimatsu, Tamura & Kojima 1992, J. Geotech. Eng. 118:1529-1543, layer numbers from memory [M]
def tokimatsu(*vs):
    return LayeredEarth(
        thickness=[2.0, 4.0, 8.0, np.inf], vs=vs, vp=[300.0, 1000.0, 1400.0, 1400.0], density=[1800.0] * 4
    )


PUBLISHED = [
    pytest.param(XIA, 4.3, id="B1"),
    pytest.param(tokimatsu(80.0, 120.0, 180.0, 360.0), 2.0, id="B2 case 1"),
    pytest.param(tokimatsu(180.0, 120.0, 180.0, 360.0), 2.0, id="B2 case 2"),
]
DRY = LayeredEarth(
    thickness=[3.0, 6.0, 12.0, np.inf],
    vs=[150.0, 220.0, 330.0, 500.0],
    vp=[300.0, 440.0, 660.0, 1000.0],
    density=[1750.0, 1800.0, 1900.0, 2000.0],
)


def curve_of(earth, *, noise=0.02, seed=1, frequency=None, **changes):
    frequency = np.geomspace(4.0, 50.0, 30) if frequency is None else frequency
    exact = phase_velocity(earth, frequency)
    velocity = exact * (1.0 + noise * np.random.default_rng(seed).standard_normal(exact.size))
    return DispersionCurve(frequency=frequency, velocity=velocity, sigma=noise * exact, **changes)


@pytest.fixture(scope="module")
def dry():
    return invert(curve_of(DRY, frequency=np.geomspace(7.0, 45.0, 40)))


@pytest.mark.parametrize(("earth", "water_table_depth"), PUBLISHED)
def test_published_models_come_back_from_their_curves(earth, water_table_depth):
    found = invert(curve_of(earth), water_table_depth=water_table_depth)
    assert found.converged
    assert 0.5 < found.chi_square <= 1.0
    assert vs30(found.earth) == pytest.approx(vs30(earth), rel=0.05)
    assert site_result(found).vs30.median == pytest.approx(vs30(earth), rel=0.05)


def test_exact_data_of_the_assumed_ground_give_back_vs30_and_the_top_layer():
    known = invert(curve_of(DRY, noise=0.002), thickness=[[3.0, 6.0, 12.0]], water_table_depth=np.inf)
    np.testing.assert_allclose(known.earth.vs, DRY.vs, rtol=0.04)
    assert vs30(known.earth) == pytest.approx(vs30(DRY), rel=0.01)


def test_result_is_whole(dry):
    layers = len(dry.earth.vs)
    assert dry.resolution.shape == (layers,)
    assert np.all((dry.resolution > -1e-9) & (dry.resolution < 1.0 + 1e-9))
    assert dry.predicted.shape == dry.curve.velocity.shape
    residuals = (dry.predicted - dry.curve.velocity) / dry.curve.sigma
    assert dry.chi_square == pytest.approx(np.mean(residuals**2))
    np.testing.assert_allclose(dry.predicted, phase_velocity(dry.earth, dry.curve.frequency), rtol=1e-9)
    assert dry.ensemble.weights.sum() == pytest.approx(1.0)
    assert len(dry.layerings) >= 3
    assert dry.iterations > 0


def test_resolved_depth_is_half_the_longest_wavelength_and_said_so(dry):
    assert dry.resolved_depth == pytest.approx(0.5 * dry.curve.wavelength.max())
    assert any("half the longest wavelength" in note for note in dry.notes)


def test_ranges_widen_with_depth_below_the_data(dry):
    site = site_result(dry)
    width = np.log(site.profile.high / site.profile.low)
    shallow = width[np.searchsorted(site.profile.depth, 5.0) - 1]
    assert width[-1] > 1.5 * shallow
    assert site.vs30_note.startswith("Vs30 is extended")


def test_larger_sigma_gives_wider_ranges():
    precise, vague = (
        invert(curve_of(DRY, noise=noise), water_table_depth=np.inf, layering_ratios=(1.5,))
        for noise in (0.01, 0.08)
    )
    narrow, wide = (site_result(found) for found in (precise, vague))
    assert wide.vs30.high - wide.vs30.low > narrow.vs30.high - narrow.vs30.low
    tops = [site.profile.high[0] / site.profile.low[0] - 1.0 for site in (narrow, wide)]
    assert tops[1] > 2.0 * tops[0]


def test_a_sigma_that_is_far_too_small_is_confessed():
    curve = curve_of(DRY, noise=0.04)
    bold = DispersionCurve(frequency=curve.frequency, velocity=curve.velocity, sigma=curve.sigma / 8.0)
    found = invert(bold)
    assert found.chi_square > 1.0
    assert "does not fit to the noise" in found.message
    assert any("does not fit to the noise" in note for note in found.notes)


def test_same_seed_same_bits_other_seed_other_draws():
    curve = curve_of(DRY)
    first, again = (invert(curve, n_earths=60, seed=3) for _ in range(2))
    assert first == again
    other = invert(curve, n_earths=60, seed=4)
    assert other.earth == first.earth
    assert other.ensemble != first.ensemble


def test_unknown_water_is_part_of_the_ranges_and_known_water_is_not(dry):
    known = invert(dry.curve, water_table_depth=np.inf)
    wide, narrow = site_result(dry).vs30, site_result(known).vs30
    assert wide.low < narrow.low
    assert any("No water table was given" in note for note in dry.notes)
    assert not any("No water table" in note for note in known.notes)
    assert len(known.layerings) == 3
    given = invert(dry.curve, water_table_depth=2.5)
    assert np.any(np.isclose(given.earth.depth, 2.5))
    assert np.all(given.earth.vp[given.earth.depth >= 2.5 - 1e-9] >= 1500.0)


def test_bounds_hold_for_the_best_earth_and_all_others():
    found = invert(curve_of(DRY), vs_bounds=(160.0, 390.0))
    assert found.earth.vs.min() >= 160.0 * (1.0 - 1e-12)
    assert found.earth.vs.max() <= 390.0 * (1.0 + 1e-12)
    assert found.ensemble.vs.min() >= 160.0 * (1.0 - 1e-12)
    assert found.ensemble.vs.max() <= 390.0 * (1.0 + 1e-12)
    assert any("stand at a bound" in note for note in found.notes)


def test_a_decrease_is_found_where_allowed_and_held_back_where_not():
    curve = curve_of(tokimatsu(180.0, 120.0, 180.0, 360.0))  # case 2: 120 under 180 m/s
    free = invert(curve, water_table_depth=2.0)
    held = invert(curve, water_table_depth=2.0, allow_decrease=False)
    falls = [np.minimum(np.diff(np.log(found.earth.vs)), 0.0).sum() for found in (free, held)]
    assert falls[0] < -0.1
    assert falls[1] > 0.5 * falls[0]
    assert any("held back from falling" in note for note in held.notes)


def test_given_start_and_density_are_used(dry):
    found = invert(dry.curve, start=DRY, density=1900.0, thickness=[[3.0, 6.0, 12.0, 9.0]])
    np.testing.assert_array_equal(found.earth.density, 1900.0)
    assert vs30(found.earth) == pytest.approx(vs30(dry.earth), rel=0.05)
    assert any("Only 1 layering" in note for note in found.notes)


def test_points_beyond_half_the_spacing_do_not_thin_the_top_layer():
    curve = curve_of(DRY)
    flags = np.where(curve.wavelength < 6.0, BEYOND_HALF_SPACING, "")
    flagged = DispersionCurve(
        frequency=curve.frequency, velocity=curve.velocity, sigma=curve.sigma, flags=flags
    )
    counted = curve.wavelength[curve.wavelength >= 6.0].min()
    found = invert(flagged, layering_ratios=(1.5,), n_earths=10)
    assert found.earth.thickness[0] == pytest.approx(counted / 3.0)
    assert any("carry flags" in note for note in found.notes)
    assert BEYOND_HALF_SPACING == picking.BEYOND_HALF_SPACING


def test_a_ridge_without_a_mode_counts_as_the_fundamental_and_says_so(dry):
    curve = DispersionCurve(
        frequency=dry.curve.frequency, velocity=dry.curve.velocity, sigma=dry.curve.sigma, mode=None
    )
    found = invert(curve)
    assert found.earth == dry.earth
    assert any("inverted as the fundamental" in note for note in found.notes)


def test_a_narrow_band_still_gives_an_honest_answer():
    found = invert(curve_of(DRY, frequency=np.linspace(20.0, 26.0, 5)))
    site = site_result(found)
    assert site.vs30.low < vs30(DRY) < site.vs30.high
    assert site.vs30.high > 1.3 * site.vs30.low


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"wave": "love"}, "only Rayleigh phase velocity"),
        ({"kind": "group"}, "only Rayleigh phase velocity"),
        ({"frequency": np.array([10.0, 20.0, 30.0])}, "at least 4 points; the curve has 3"),
    ],
)
def test_curves_that_cannot_be_inverted_are_refused_with_the_reason(changes, message):
    with pytest.raises(StepError, match=message):
        invert(curve_of(DRY, **changes))


@pytest.mark.parametrize(
    ("options", "name"),
    [
        ({"vs_bounds": (500.0, 100.0)}, "vs_bounds"),
        ({"poisson_ratio": 0.6}, "poisson_ratio"),
        ({"water_table_depth": -2.0}, "water_table_depth"),
        ({"layering_ratios": ()}, "at least one layering"),
        ({"layering_ratios": (0.5,)}, "layering ratio"),
        ({"n_earths": 0}, "n_earths"),
        ({"minimum_wavelength": 0.0}, "minimum_wavelength"),
    ],
)
def test_impossible_options_are_refused_by_name(dry, options, name):
    with pytest.raises(InputError, match=name):
        invert(dry.curve, **options)
