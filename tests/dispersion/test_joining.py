"""Curves of several spreads: joined where they agree, kept apart with numbers where they do not."""

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, InputError
from surfdisp.dispersion import compare_curves, join_curves
from surfdisp.dispersion.joining import join_agreeing
from surfdisp.dispersion.picking import NEAR_FIELD


def curve(first, last, factor=1.0, sigma=0.02, **fields):
    f = 2.0 ** (np.arange(first, last) / 8.0)
    c = factor * (150.0 + 1200.0 / f)
    return DispersionCurve(
        frequency=f, velocity=c, sigma=sigma * c, shots=fields.pop("shots", np.full(len(f), 4)), **fields
    )


def test_curves_that_agree_are_joined_to_the_whole_band():
    coarse, fine = curve(24, 40), curve(32, 52)
    joined = join_curves([fine, coarse])
    np.testing.assert_allclose(joined.frequency, 2.0 ** (np.arange(24, 52) / 8.0))
    np.testing.assert_allclose(joined.velocity, 150.0 + 1200.0 / joined.frequency)
    assert np.all(np.asarray(joined.shots)[8:16] == 8)
    assert joined.notes == ()


def test_half_the_difference_is_added_to_sigma_where_both_have_a_point():
    joined = join_curves([curve(24, 40), curve(32, 52, factor=1.03)])
    both = slice(8, 16)
    low = 150.0 + 1200.0 / joined.frequency[both]
    expected = np.sqrt(np.square(0.02 * low) * 0.5 * (1.0 + 1.03**2) + np.square(0.5 * 0.03 * low))
    np.testing.assert_allclose(joined.sigma[both], expected, rtol=1e-9)
    assert "differs from" in joined.notes[0]


def test_curves_of_different_ground_are_not_joined_and_the_difference_is_stated():
    joined = join_curves([curve(24, 40), curve(32, 52, factor=0.8)], ["the long line", "the short line"])
    np.testing.assert_allclose(joined.frequency, 2.0 ** (np.arange(24, 40) / 8.0))
    assert "the short line is left out, different ground" in joined.notes[0]
    assert "22 %" in joined.notes[0]  # ln 0.8 = -0.223


def test_curves_without_overlap_cannot_be_checked_and_stay_apart():
    joined = join_curves([curve(24, 32), curve(40, 52)])
    assert len(joined.frequency) == 8
    assert "does not overlap" in joined.notes[0]


def test_which_curves_stay_out_is_told_by_their_place():
    apart, fine, coarse, alone = curve(32, 52, 0.8), curve(32, 52), curve(24, 40), curve(64, 70)
    joined = join_agreeing([apart, fine, coarse, alone])
    assert joined.left_out == (0, 3)
    np.testing.assert_array_equal(joined.curve.velocity, join_curves([fine, coarse]).velocity)
    assert join_agreeing([fine, coarse]).left_out == ()


def test_the_base_is_the_curve_with_the_longest_wavelength_outside_the_near_field():
    near = curve(16, 40, factor=0.8, flags=np.where(np.arange(16, 40) < 30, NEAR_FIELD, ""))
    assert join_curves([near, curve(24, 40)]).frequency[0] == pytest.approx(8.0)


def test_difference_is_the_mean_log_ratio_in_bands_with_its_standard_error():
    bands = compare_curves(curve(24, 40), curve(24, 40, factor=1.1))
    assert len(bands) == 4
    for band in bands:
        assert band.difference == pytest.approx(np.log(1.1), rel=1e-9)
        assert band.error == pytest.approx(0.02 * np.sqrt(2.0 / 4.0), rel=1e-9)
        assert band.significant
    assert not any(b.significant for b in compare_curves(curve(24, 40), curve(24, 40, factor=1.015)))
    assert not any(b.significant for b in compare_curves(curve(24, 40, sigma=0.1), curve(24, 40, 1.1, 0.1)))


def test_nothing_and_different_waves_are_refused():
    with pytest.raises(InputError, match="at least one curve"):
        join_curves([])
    with pytest.raises(InputError, match="one wave"):
        join_curves([curve(24, 40), curve(24, 40, wave="love")])
