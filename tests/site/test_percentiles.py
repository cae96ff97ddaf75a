"""Weighted percentiles against closed forms."""

import numpy as np

from surfdisp.site import weighted_percentiles
from surfdisp.site.percentiles import interval


def test_equal_weights_give_hazens_percentiles():
    values = np.random.default_rng(1).normal(size=37)
    found = weighted_percentiles(values, np.full(37, 1.0 / 37), (5.0, 50.0, 95.0))
    np.testing.assert_allclose(found, np.percentile(values, (5.0, 50.0, 95.0), method="hazen"), rtol=1e-12)


def test_weights_of_an_importance_sample_give_the_quantiles_of_its_target():
    # u uniform with weight 2u has distribution function u^2: quantiles are square roots
    u = (np.arange(20_000) + 0.5) / 20_000
    found = weighted_percentiles(u, 2.0 * u, (5.0, 50.0, 95.0))
    np.testing.assert_allclose(found, np.sqrt([0.05, 0.50, 0.95]), atol=1e-4)


def test_order_and_scale_of_the_weights_do_not_matter():
    rng = np.random.default_rng(2)
    values, weights = rng.normal(size=50), rng.uniform(size=50)
    order = rng.permutation(50)
    first = weighted_percentiles(values, weights, (10.0, 90.0))
    np.testing.assert_allclose(weighted_percentiles(values[order], 7.0 * weights[order], (10.0, 90.0)), first)


def test_a_sample_of_no_weight_counts_for_nothing():
    found = interval(np.array([1.0, 2.0, 3.0, 1e9]), np.array([1.0, 1.0, 1.0, 0.0]))
    assert (found.low, found.median, found.high) == (1.0, 2.0, 3.0)


def test_columns_are_independent():
    values = np.random.default_rng(3).normal(size=(40, 3))
    weights = np.random.default_rng(4).uniform(size=40)
    found = weighted_percentiles(values, weights, (5.0, 50.0))
    single = [weighted_percentiles(column, weights, (5.0, 50.0)) for column in values.T]
    np.testing.assert_allclose(found, np.transpose(single), rtol=1e-14)
