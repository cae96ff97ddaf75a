"""Arrival times of pulses whose times are known."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import spearmanr

from surfdisp.core import Gather
from surfdisp.records.arrivals import energy_times, first_arrivals
from surfdisp.records.rank_correlation import rank_correlation

TRUE = np.array([0.21, 0.28, 0.4, 0.633])


def gather_of(data, delay):
    receivers = np.arange(1.0, len(data) + 1.0)
    return Gather(data=data, interval=0.0005, receivers=receivers, source=0.0, delay=delay)


def bursts(delay, noise=0.0):
    """Wavelets of 40 Hz and 0.1 s, each symmetric about its time; gains differ by thousands."""
    times = delay + 0.0005 * np.arange(2000)
    lag = times - TRUE[:, None]
    data = np.cos(2.0 * np.pi * 40.0 * lag) * np.exp(-((lag / 0.025) ** 2))
    data += noise * np.random.default_rng(1).normal(size=data.shape)
    return gather_of(data * np.array([[1.0], [50.0], [1e-3], [7.0]]), delay)


@pytest.mark.parametrize("delay", [0.0, -0.1, 0.05])
@pytest.mark.parametrize("noise", [0.0, 0.2])
def test_half_the_energy_has_come_at_the_middle_of_a_symmetric_pulse(delay, noise):
    np.testing.assert_allclose(
        energy_times(bursts(delay, noise)), TRUE, atol=0.002 if noise == 0.0 else 0.008
    )


@pytest.mark.parametrize("delay", [0.0, -0.1, 0.05])
def test_first_arrivals_are_where_a_wave_train_begins(delay):
    times = delay + 0.0005 * np.arange(2000)
    begun = times >= TRUE[:, None]
    data = np.where(begun, np.sin(2.0 * np.pi * 60.0 * (times - TRUE[:, None])), 0.0)
    found = first_arrivals(gather_of(data, delay))
    np.testing.assert_allclose(found, TRUE, atol=0.002)
    assert np.all(found >= TRUE - 0.0005)


@given(st.lists(st.tuples(st.integers(0, 6), st.integers(0, 6)), min_size=3, max_size=30))
def test_rank_correlation_agrees_with_an_independent_one_ties_included(pairs):
    a, b = np.array(pairs, dtype=float).T
    found = rank_correlation(a, b)
    if np.ptp(a) == 0.0 or np.ptp(b) == 0.0:
        assert found == 0.0
    else:
        assert found == pytest.approx(spearmanr(a, b).statistic, abs=1e-12)
