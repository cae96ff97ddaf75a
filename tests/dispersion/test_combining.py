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


def picks(velocity, sigma=0.02, accepted=None, reason="", name="", **fields):
    velocity = np.broadcast_to(velocity, F.shape).astype(float)
    accepted = np.ones(len(F), dtype=bool) if accepted is None else accepted
    return Picks(
        frequency=F,
        velocity=velocity,
        sigma=sigma * velocity,
        half_width=0.05 * velocity,
        accepted=accepted,
        reason=np.where(accepted, reason, "refused"),
        name=name,
        **fields,
    )


def test_sigma_is_scatter_and_error_within_and_neither_shrinks_with_the_number_of_shots():
    logs = np.array([-0.03, -0.01, 0.01, 0.03])
    curve = combine_picks([picks(200.0 * np.exp(x)) for x in logs])
    np.testing.assert_allclose(curve.velocity, 200.0, rtol=1e-12)
    scatter = np.std(logs, ddof=1)
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
    np.testing.assert_allclose(relative, np.hypot(pooled, 0.02), rtol=0.05)


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
