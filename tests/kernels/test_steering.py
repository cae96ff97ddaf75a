"""The steering kernels against sums written out in plain NumPy."""

import numpy as np
import pytest

from surfdisp.kernels import steering

FREQUENCIES = np.sort(np.random.default_rng(3).uniform(2.0, 80.0, 40))
VELOCITIES = np.geomspace(60.0, 1500.0, 90)


def phasors(n_traces, seed=1):
    angle = np.random.default_rng(seed).uniform(0.0, 2.0 * np.pi, (len(FREQUENCIES), n_traces))
    return np.exp(1j * angle)


def plain_power(unit, offsets):
    k = 2.0 * np.pi * FREQUENCIES[:, None, None] / VELOCITIES[None, :, None]
    return np.square(np.abs(np.mean(unit[:, None, :] * np.exp(1j * k * offsets), axis=2)))


@pytest.mark.parametrize("even", [True, False], ids=["even", "uneven"])
@pytest.mark.parametrize("kernel", [steering.steered_power, steering.gridded_steered_power])
def test_power_is_the_plain_sum_over_traces(kernel, even):
    offsets = np.arange(24.0) * 2.0 if even else np.sort(np.random.default_rng(2).uniform(3.0, 70.0, 24))
    unit = phasors(24)
    live = np.full(len(FREQUENCIES), 24.0)
    centred = offsets - 0.5 * (offsets[0] + offsets[-1])
    got = kernel(unit.real.copy(), unit.imag.copy(), live, centred, FREQUENCIES, VELOCITIES)
    np.testing.assert_allclose(np.sqrt(got), np.sqrt(plain_power(unit, offsets)), atol=2e-5)


def test_grid_error_is_bounded_where_it_is_largest_at_the_ends_of_the_spread():
    # all the signal on the two end traces: the highest frequency that the wavenumber spectrum can hold
    offsets = np.array([-30.0, 30.0])
    unit = phasors(2)
    live = np.full(len(FREQUENCIES), 2.0)
    got = steering.gridded_steered_power(
        unit.real.copy(), unit.imag.copy(), live, offsets, FREQUENCIES, VELOCITIES
    )
    np.testing.assert_allclose(np.sqrt(got), np.sqrt(plain_power(unit, offsets)), atol=1e-4)


def test_scans_that_begin_and_end_on_grid_points_stay_within_the_grid():
    # f / c x 8 x aperture is a whole number at both ends, which may be rounded down or up
    offsets = np.arange(24.0) * 2.0 - 23.0
    for f in np.arange(5.0, 120.0, 5.0):
        frequencies, velocities = np.array([f]), np.array([5.0 * f / 2.0, 4.0 * f, 5.0 * f])
        angle = np.random.default_rng(int(f)).uniform(0.0, 2.0 * np.pi, (1, 24))
        arrays = (np.cos(angle), np.sin(angle), np.array([24.0]), offsets, frequencies, velocities)
        np.testing.assert_allclose(
            steering.gridded_steered_power(*arrays), steering.steered_power(*arrays), atol=1e-5
        )


def test_unit_phasors_keep_the_phase_and_leave_dead_traces_out():
    real, imag = np.array([[3.0, 0.0, -1e-200]]), np.array([[4.0, 0.0, 0.0]])
    live = steering.unit_phasors(real, imag)
    np.testing.assert_allclose(real, [[0.6, 0.0, -1.0]])
    np.testing.assert_allclose(imag, [[0.8, 0.0, 0.0]])
    assert live.tolist() == [2.0]
