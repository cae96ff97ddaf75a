"""The smoothness prior is a Brownian motion in ln depth."""

import numpy as np
import pytest

from surfdisp.inversion.smoothness import LEVEL, UNWANTED_FALL, Smoothness

DEPTH = np.array([1.0, 2.0, 4.0, 16.0])


def test_variance_of_a_step_is_wander_squared_times_ln_of_the_depth_ratio():
    rows = Smoothness(DEPTH, 5.0, 0.3).jacobian(np.full(4, 5.0))
    covariance = np.linalg.inv(rows.T @ rows)
    steps = np.diff(np.eye(4), axis=0)
    variances = np.diag(steps @ covariance @ steps.T)
    np.testing.assert_allclose(variances, 0.3**2 * np.log([2.0, 2.0, 4.0]), rtol=1e-10)


def test_variance_of_the_mean_is_that_of_the_level():
    rows = Smoothness(DEPTH, 5.0, 0.3).jacobian(np.full(4, 5.0))
    assert np.linalg.inv(rows.T @ rows).mean() == pytest.approx(LEVEL**2)


def test_the_same_step_is_as_probable_in_finer_layers():
    fine = np.geomspace(1.0, 16.0, 9)
    rows = Smoothness(fine, 5.0, 0.3).jacobian(np.full(9, 5.0))
    covariance = np.linalg.inv(rows.T @ rows)
    whole = np.zeros(9)
    whole[0], whole[-1] = -1.0, 1.0
    assert whole @ covariance @ whole == pytest.approx(0.3**2 * np.log(16.0))


def test_a_constant_at_the_level_costs_nothing_and_shifts_cost_only_the_level():
    prior = Smoothness(DEPTH, 5.0, 0.3)
    np.testing.assert_allclose(prior.residuals(np.full(4, 5.0)), 0.0, atol=1e-15)
    np.testing.assert_allclose(prior.residuals(np.full(4, 5.5)), [0.0, 0.0, 0.0, 0.5 / LEVEL], atol=1e-15)


def test_a_power_of_depth_costs_nothing_at_its_exponent():
    law = 0.25 * np.log(DEPTH)
    prior = Smoothness(DEPTH, float(law.mean()), 0.3, 0.25)
    np.testing.assert_allclose(prior.residuals(law), 0.0, atol=1e-14)
    flat = prior.residuals(np.full(4, law.mean()))
    np.testing.assert_allclose(flat[:3], -0.25 * np.sqrt(np.log([2.0, 2.0, 4.0])) / 0.3)


def test_rows_have_no_jump_where_a_rise_turns_into_an_unwanted_fall():
    held = Smoothness(DEPTH, 5.0, 0.3, 0.25, decrease=False)
    flat = np.full(4, 5.0)
    tilt = np.array([0.0, 1e-9, 0.0, 0.0])
    np.testing.assert_allclose(held.residuals(flat + tilt), held.residuals(flat - tilt), atol=1e-6)


def test_a_fall_is_resisted_more_than_a_rise_where_not_wanted():
    free, held = Smoothness(DEPTH, 5.0, 0.3), Smoothness(DEPTH, 5.0, 0.3, decrease=False)
    profile = np.array([5.0, 5.2, 4.9, 5.3])
    ratio = held.residuals(profile)[:3] / free.residuals(profile)[:3]
    np.testing.assert_allclose(ratio, [1.0, 0.3 / UNWANTED_FALL, 1.0])
