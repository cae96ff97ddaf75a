"""The tracker's grid and its ridges."""

import numpy as np
import pytest

from surfdisp.core import DispersionImage
from surfdisp.dispersion.tracking import FREQUENCY_STEP, log_grid, noise_threshold, ridges

F, C = np.arange(10.0, 60.0, 0.05), np.geomspace(80.0, 800.0, 240)


def image(power, traces=24):
    return DispersionImage(
        frequencies=F, velocities=C, power=power, offsets=10.0 + 2.0 * np.arange(traces), spacing=2.0
    )


def test_rows_are_averaged_within_each_step_so_that_noise_between_frequencies_goes_down():
    noise = np.random.default_rng(1).uniform(0.0, 1.0, len(F))[:, None] * np.ones(len(C))
    grid = log_grid(image(noise))
    high = grid.frequency > 40.0
    expected = np.std(noise[:, 0]) / np.sqrt(50.0 * FREQUENCY_STEP / 0.05)  # rows per step near 50 Hz
    assert np.std(grid.power[high, 0]) == pytest.approx(expected, rel=0.5)


def test_a_gaussian_ridge_is_followed_with_its_strength():
    ridge = 150.0 + 1500.0 / F
    power = 0.65 * np.exp(-np.square(np.log(C[None, :] / ridge[:, None]) / 0.05))
    (found, *_) = ridges(image(power), longest_wavelength=60.0, threshold=0.25)
    exact = 150.0 + 1500.0 / found.frequency
    assert np.abs(found.velocity / exact - 1.0).max() < 0.02
    assert found.strength == pytest.approx(0.4 * np.log(60.0 / 10.0), rel=0.05)


def test_threshold_is_six_times_the_power_of_random_phases():
    assert noise_threshold(image(np.zeros((len(F), len(C))), traces=12)) == pytest.approx(0.5)
    assert noise_threshold(image(np.zeros((len(F), len(C))), traces=96)) == 0.2
