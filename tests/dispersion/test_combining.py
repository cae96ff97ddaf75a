"""The combined curve: closed forms of mean and standard deviation, rejections and what is said about them."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import InputError, Picks
from surfdisp.dispersion import combine_picks
from surfdisp.dispersion.combining import SINGLE_SHOT_SCATTER
from surfdisp.dispersion.picking import NEAR_FIELD

F = np.arange(10.0, 40.0, 0.25)


def picks(velocity, sigma=0.02, accepted=None, reason="", name="", frequency=F, **fields):
    velocity = np.broadcast_to(velocity, frequency.shape).astype(float)
    accepted = np.ones(len(frequency), dtype=bool) if accepted is None else accepted
    return Picks(
        frequency=frequency,
        velocity=velocity,
        sigma=sigma * velocity,
        half_width=0.05 * velocity,
        accepted=accepted,
        reason=np.where(accepted, reason, "refused"),
        name=name,
        **fields,
    )


def expected_with(scatter, freedom):
    """Scatter shown by `freedom` + 1 shots and the expected one together, by the formula stated."""
    return np.sqrt((0.03**2 + freedom * scatter**2) / (1 + freedom))


def surveys(shots, scatter, count=300, seed=5):
    """Surveys without outliers, whose shots differ by one Gaussian factor each, of one bin at 16 Hz."""
    logs = scatter * np.random.default_rng(seed).standard_normal((count, shots))
    return [[one_bin(200.0 * np.exp(x)) for x in row] for row in logs]


def one_bin(velocity, **fields):
    return picks(velocity, sigma=0.001, frequency=np.array([15.9, 16.0, 16.1]), **fields)


def combined(survey):
    """One point: how many shots it keeps, and its relative standard deviation without the 1 % within."""
    curve = combine_picks(survey, largest_scatter=1.0)
    relative = float(curve.sigma[0] / curve.velocity[0])
    return int(curve.shots[0]), np.sqrt(relative**2 - 0.01**2)


def test_sigma_is_scatter_and_error_within_and_neither_shrinks_with_the_number_of_shots():
    logs = np.array([-0.03, -0.01, 0.01, 0.03])
    curve = combine_picks([picks(200.0 * np.exp(x)) for x in logs])
    np.testing.assert_allclose(curve.velocity, 200.0, rtol=1e-12)
    scatter = expected_with(np.std(logs, ddof=1), 3)
    np.testing.assert_allclose(curve.sigma, 200.0 * np.hypot(scatter, 0.02), rtol=1e-9)
    assert np.all(curve.shots == 4)
    twice = combine_picks([picks(200.0 * np.exp(x)) for x in [*logs, *logs]])
    assert np.all(twice.sigma > 0.9 * curve.sigma)


def test_bins_are_even_in_log_frequency_and_the_slope_within_them_is_taken_out():
    steep = 3000.0 / F
    curve = combine_picks([picks(steep), picks(steep)], bins_per_octave=4)
    np.testing.assert_allclose(curve.frequency[1:] / curve.frequency[:-1], 2.0**0.25)
    np.testing.assert_allclose(curve.velocity, 3000.0 / curve.frequency, rtol=1e-6)


def test_a_shot_far_from_the_others_is_rejected_and_named():
    shots = [picks(v, name=f"{i}.dat") for i, v in enumerate([198.0, 200.0, 202.0, 260.0])]
    curve = combine_picks(shots)
    np.testing.assert_allclose(curve.velocity, np.exp(np.mean(np.log([198.0, 200.0, 202.0]))), rtol=1e-9)
    assert np.all(curve.shots == 3)
    assert any("3.dat: outlier" in note for note in curve.notes)


@pytest.mark.parametrize(("scatter", "most"), [(0.03, 0.0027), (0.04, 0.01), (0.05, 0.021)])
@pytest.mark.parametrize("shots", [3, 4, 6, 9])
def test_good_shots_are_kept(shots, scatter, most):
    # Of Gaussian shots 0.27 % lie beyond three standard deviations. Shots that scatter by more than the 3 %
    # expected are rejected more often, most of all three, which cannot tell their scatter from an outlier.
    count = 300
    rejected = np.mean([shots - combined(survey)[0] for survey in surveys(shots, scatter, count)]) / shots
    assert rejected <= most + 2.0 * np.sqrt(most / (count * shots))


@pytest.mark.parametrize(("scatter", "least"), [(0.005, 1.0), (0.01, 0.98)])
def test_an_outlier_among_six_is_rejected(scatter, least):
    found = []
    for survey in surveys(6, scatter):
        moved = [one_bin(1.15 * survey[0].velocity, name="off.dat"), *survey[1:]]
        curve = combine_picks(moved)
        found.append(curve.shots[0] == 5 and any("off.dat: outlier" in note for note in curve.notes))
    assert np.mean(found) >= least


def test_the_nearer_half_is_never_rejected():
    curve = combine_picks([picks(v) for v in (170.0, 190.0, 210.0, 230.0)], outlier=0.01, largest_scatter=1.0)
    assert np.all(curve.shots == 2)


@pytest.mark.parametrize("limit", ["outlier", "largest_scatter", "bins_per_octave"])
@pytest.mark.parametrize("value", [0.0, -1.0, np.nan, np.inf])
def test_limits_must_be_positive_and_finite(limit, value):
    with pytest.raises(InputError, match=limit):
        combine_picks([picks(200.0)], **{limit: value})


@pytest.mark.parametrize(("shots", "low", "high"), [(2, 0.8, 0.9), (3, 0.84, 0.94), (6, 0.9, 1.0)])
def test_few_shots_state_nearly_their_true_scatter(shots, low, high):
    # Median of sqrt((1 + chi-square of n - 1) / n): 0.85, 0.89 and 0.94 of the truth where shots scatter by
    # the 3 % expected. The control is what the shots show by themselves: 0.67, 0.83 and 0.93 of it.
    several = surveys(shots, 0.03, 500)
    stated = np.median([combined(survey)[1] for survey in several]) / 0.03
    assert low < stated < high
    alone = [np.std([np.log(p.velocity[0]) for p in survey], ddof=1) for survey in several]
    assert np.median(alone) / 0.03 < stated
    assert np.median(alone) / 0.03 < 0.75 or shots > 2


@pytest.mark.parametrize(("scatter", "low", "high"), [(0.01, 2.1, 2.3), (0.05, 0.58, 0.7)])
def test_two_shots_are_between_what_is_expected_and_what_they_show(scatter, low, high):
    # Median of sqrt((0.03**2 + scatter**2 chi-square) / 2): 2.17 and 0.64 of the truth. Two shots of 1 % are
    # stated too cautiously, of 5 % as boldly as they show it by themselves.
    stated = np.median([combined(survey)[1] for survey in surveys(2, scatter, 500)]) / scatter
    assert low < stated < high


def test_two_shots_that_happen_to_agree_are_not_much_surer_than_one():
    one, two = combine_picks([picks(200.0, 0.01)]), combine_picks([picks(200.0, 0.01), picks(200.5, 0.01)])
    ratio = float(two.sigma[5] / one.sigma[5])
    assert ratio == pytest.approx(np.hypot(0.03 / np.sqrt(2.0), 0.01) / np.hypot(0.03, 0.01), rel=0.01)
    assert 0.7 < ratio < 0.8


def test_six_shots_that_agree_keep_a_small_uncertainty():
    logs = 0.003 * np.array([-1.2, -0.8, -0.3, 0.3, 0.8, 1.2])
    curve = combine_picks([picks(200.0 * np.exp(x), sigma=0.003) for x in logs])
    assert np.all(curve.sigma / curve.velocity < 0.017)
    assert np.all(curve.sigma / curve.velocity > 0.01)


def test_the_variance_within_is_the_arithmetic_mean():
    curve = combine_picks([picks(200.0, sigma=0.02), picks(200.0, sigma=0.06)])
    within = (0.02**2 + 0.06**2) / 2.0
    np.testing.assert_allclose(curve.sigma, 200.0 * np.sqrt(expected_with(0.0, 1) ** 2 + within), rtol=1e-9)


def test_notes_say_in_how_many_points_the_expected_scatter_outweighs_the_shown():
    bins = np.round(8.0 * np.log2(F))
    other = np.where(bins >= 36, 200.0 * np.exp(0.08), 200.0)
    curve = combine_picks([picks(200.0), picks(other)], largest_scatter=1.0)
    points = np.round(8.0 * np.log2(curve.frequency)).astype(int)
    # the bin at 35 has one neighbour that differs, of three: 0.0032 / 3 is still above 0.0009
    assert f"in {np.sum(points < 35)} of {len(points)} points" in curve.notes[0]
    assert "do not average out" in curve.notes[0]
    assert combine_picks([picks(200.0), picks(216.0)]).notes == ()


def test_of_two_shots_none_is_an_outlier_but_a_bin_they_disagree_on_is_left_out():
    assert combine_picks([picks(200.0), picks(260.0)]) is None
    partly = np.where(F < 20.0, 260.0, 203.0)
    curve = combine_picks([picks(200.0), picks(partly)])
    assert curve.frequency.min() > 19.0
    assert any("shots disagree" in note for note in curve.notes)


def test_one_shot_is_given_the_assumed_scatter_and_says_so():
    curve = combine_picks([picks(200.0)])
    np.testing.assert_allclose(curve.sigma, 200.0 * np.hypot(SINGLE_SHOT_SCATTER, 0.02), rtol=1e-9)
    assert any("one shot only" in note for note in curve.notes)


def test_a_bin_needs_half_of_the_shots():
    high = F > 20.0
    curve = combine_picks([picks(200.0), picks(200.0, accepted=high), picks(200.0, accepted=high)])
    assert curve.frequency.min() > 19.0


def test_a_shot_with_few_accepted_frequencies_in_a_bin_does_not_count_there():
    sparse = np.zeros(len(F), dtype=bool)
    sparse[::6] = True
    curve = combine_picks([picks(200.0), picks(230.0, accepted=sparse)])
    assert np.all(curve.shots == 1)
    np.testing.assert_allclose(curve.velocity, 200.0)


def test_scatter_is_pooled_with_the_neighbouring_bins():
    # the shots differ in the bin at 16 Hz only: its squares over the three degrees of freedom of three bins
    bins = np.round(8.0 * np.log2(F))
    other = np.where(bins == 32, 200.0 * np.exp(0.06), 200.0)
    curve = combine_picks([picks(200.0), picks(other)], largest_scatter=1.0)
    number = np.round(8.0 * np.log2(curve.frequency)).astype(int)
    relative = (curve.sigma / curve.velocity)[(number >= 31) & (number <= 33)]
    pooled = np.sqrt(2.0 * 0.03**2 / 3.0)
    np.testing.assert_allclose(relative, np.hypot(expected_with(pooled, 1), 0.02), rtol=0.02)


def test_the_less_certain_shot_counts_less():
    curve = combine_picks([picks(200.0, sigma=0.02), picks(210.0, sigma=0.06)])
    expected = np.exp(0.9 * np.log(200.0) + 0.1 * np.log(210.0))
    np.testing.assert_allclose(curve.velocity, expected, rtol=1e-9)


def test_near_field_picks_count_only_where_no_other_does():
    near = picks(180.0, reason=NEAR_FIELD, accepted=F < 30.0)
    far = picks(200.0, accepted=F > 20.0)
    curve = combine_picks([near, far])
    low, high = curve.frequency < 19.0, curve.frequency > 22.0
    np.testing.assert_allclose(curve.velocity[low], 180.0)
    np.testing.assert_allclose(curve.velocity[high], 200.0)
    assert set(curve.flags[low]) == {NEAR_FIELD}
    assert set(curve.flags[high]) == {""}


def test_nothing_accepted_gives_no_curve():
    nothing = picks(200.0, accepted=np.zeros(len(F), dtype=bool))
    assert combine_picks([nothing, nothing]) is None
    assert combine_picks([]) is None


def test_picks_of_different_waves_are_refused():
    with pytest.raises(InputError, match="one wave, kind and mode"):
        combine_picks([picks(200.0), picks(200.0, wave="love")])


@settings(max_examples=30, deadline=None)
@given(seed=st.integers(0, 9999), shots=st.integers(1, 6), factor=st.floats(0.5, 3.0))
def test_order_of_shots_does_not_matter_and_velocities_scale(seed, shots, factor):
    rng = np.random.default_rng(seed)
    relative = 1.0 + 0.02 * rng.standard_normal((shots, len(F)))
    accepted = rng.random((shots, len(F))) > 0.2
    made = [picks(200.0 * r, accepted=a) for r, a in zip(relative, accepted, strict=True)]
    curve, reverse = combine_picks(made), combine_picks(made[::-1])
    scaled = combine_picks(
        [picks(factor * 200.0 * r, accepted=a) for r, a in zip(relative, accepted, strict=True)]
    )
    for other, ratio in ((reverse, 1.0), (scaled, factor)):
        np.testing.assert_allclose(other.velocity, ratio * curve.velocity, rtol=1e-9)
        np.testing.assert_allclose(other.sigma, ratio * curve.sigma, rtol=1e-9)
        np.testing.assert_array_equal(other.shots, curve.shots)
