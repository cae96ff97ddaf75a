"""From gathers to the curve in one step."""

from dataclasses import replace

import numpy as np
import pytest

from surfdisp.core import Gather, InputError
from surfdisp.dispersion import curve_from_gathers, halves

LINE = np.arange(24) * 2.0
SOURCES = (-14.0, -6.0, 52.0, 60.0)


def ground(f):
    return 150.0 + 250.0 / (1.0 + np.square(f / 14.0))


def survey(make_wave, velocity=ground, receivers=LINE, sources=SOURCES, **fields):
    return [
        make_wave(velocity, receivers, s, noise=0.03, seed=i, name=f"{i}.dat", **fields)
        for i, s in enumerate(sources)
    ]


@pytest.fixture(scope="module")
def result(make_wave):
    return curve_from_gathers(survey(make_wave))


def test_curve_is_the_exact_one_within_its_uncertainty(result):
    exact = ground(result.curve.frequency)
    error = np.abs(result.curve.velocity - exact)
    assert np.all(error < 2.5 * result.curve.sigma)
    assert np.all((error / exact)[result.curve.wavelength < 46.0] < 0.02)
    assert np.median(error / exact) < 0.005
    assert np.log2(result.curve.frequency[-1] / result.curve.frequency[0]) > 2.5


def test_products_come_one_per_gather_in_order(result):
    assert [image.name for image in result.images] == ["0.dat", "1.dat", "2.dat", "3.dat"]
    assert [p.name for p in result.picks] == ["0.dat", "1.dat", "2.dat", "3.dat"]
    assert len(result.stacked_images) == 1
    assert result.stacked_images[0].shots == 4


def test_even_ground_gives_no_warning_of_lateral_change(result):
    (note,) = result.notes
    assert "rests on an expected scatter" in note


def two_halves(make_wave, contrast=1.12):
    """A line whose second half is faster: each wave has crossed some of both."""
    gathers = []
    for i, source in enumerate(SOURCES):
        travelled = np.abs(LINE - source)
        slow = np.minimum(LINE, 23.0) - source if source < 0.0 else np.maximum(23.0 - LINE, 0.0)
        same_time = slow + (travelled - slow) / contrast  # distance within the slow half's ground
        made = make_wave(ground, np.sort(same_time), 0.0, noise=0.02, seed=i)
        data = made.data if source < 0.0 else made.data[::-1]
        gathers.append(Gather(data=data, interval=made.interval, receivers=LINE, source=source))
    return gathers


def test_lateral_change_along_the_spread_is_reported_with_numbers(make_wave):
    notes = curve_from_gathers(two_halves(make_wave)).notes
    told = [note for note in notes if note.startswith("the halves 0 to 22 m and 24 to 46 m")]
    assert told
    assert "the ground changes along the line" in told[0]


def test_directions_that_differ_are_reported(make_wave):
    forward = survey(make_wave, sources=SOURCES[:2])
    backward = survey(make_wave, lambda f: 1.06 * ground(f), sources=SOURCES[2:])
    notes = curve_from_gathers([*forward, *backward]).notes
    assert any("shots from the two ends of the line differ by 6 %" in note for note in notes)


def test_pure_noise_ends_in_no_curve_and_says_so():
    rng = np.random.default_rng(8)
    gathers = [
        Gather(data=rng.standard_normal((24, 1000)), interval=0.001, receivers=LINE, source=s)
        for s in SOURCES
    ]
    result = curve_from_gathers(gathers)
    assert result.curve is None
    assert not any(p.accepted.any() for p in result.picks)
    assert "no ridge" in result.notes[0]


def test_fine_and_coarse_spreads_of_one_ground_are_joined(make_wave):
    coarse = survey(make_wave, duration=1.5)
    fine = survey(make_wave, receivers=LINE / 4.0, sources=(-2.0, 14.0), spread=1)
    joined, alone = curve_from_gathers([*coarse, *fine]), curve_from_gathers(coarse)
    assert len(joined.stacked_images) == 2
    assert joined.curve.frequency[-1] >= alone.curve.frequency[-1]
    error = np.abs(joined.curve.velocity - ground(joined.curve.frequency))
    assert np.all(error < 2.5 * joined.curve.sigma)
    assert np.asarray(joined.curve.shots).max() == 6
    assert joined.left_out == ()


def test_spreads_on_different_ground_are_not_joined(make_wave):
    other = survey(
        make_wave, lambda f: 0.75 * ground(f), receivers=LINE / 4.0, sources=(-2.0, 14.0), spread=1
    )
    result = curve_from_gathers([*survey(make_wave), *other])
    assert np.asarray(result.curve.shots).max() == 4
    assert result.left_out == (1,)
    (told,) = [note for note in result.notes if "different ground" in note]
    assert told.startswith("spread 2 (0.dat, 1.dat) is left out, different ground")
    assert "from spread 1 (0.dat, 1.dat, 2.dat and 1 more) by" in told
    swapped = curve_from_gathers(
        [replace(g, spread=1 - g.spread) for g in [*other, *survey(make_wave)]],
    )
    assert swapped.left_out == (0,)


def test_sides_of_a_source_inside_the_spread_are_picked_along_the_ridge_of_the_whole(make_wave):
    low = make_wave(ground, LINE[:12], 23.0, name="side")
    result = curve_from_gathers([*survey(make_wave), low])
    assert result.stacked_images[0].shots == 4
    assert result.picks[4].accepted.any()


def test_halves_split_at_the_middle_of_the_spread(make_wave):
    low, high = halves(make_wave(200.0, LINE, -4.0))
    np.testing.assert_array_equal(np.concatenate([low.receivers, high.receivers]), LINE)
    assert low.receivers[-1] == 22.0
    assert low.data.shape[0] == high.data.shape[0] == 12


def test_no_gather_is_refused():
    with pytest.raises(InputError, match="at least one gather"):
        curve_from_gathers([])
