"""Sub-grid peaks and their error: closed forms."""

import numpy as np
import pytest

from surfdisp.dispersion.location import NO_PEAK, locate, wavenumber_sigma


def test_parabola_in_wavenumber_is_located_exactly():
    f, exact = 20.0, 187.3
    velocities = np.linspace(150.0, 240.0, 60)
    k, k0 = 2.0 * np.pi * f / velocities, 2.0 * np.pi * f / exact
    power = 0.8 - 4.0 * np.square(k - k0)
    peak = locate(f, velocities, power, 170.0, 210.0)
    assert peak.velocity == pytest.approx(exact, rel=1e-12)
    assert peak.power == pytest.approx(0.8, rel=1e-12)
    assert peak.curvature == pytest.approx(4.0 / 0.8, rel=1e-9)


def test_half_width_is_half_the_full_width_at_half_power():
    velocities = np.linspace(150.0, 240.0, 901)
    power = np.maximum(0.8 - 0.4 * np.abs(velocities - 190.0) / 12.0, 0.0)  # a triangle: half power at 12 m/s
    assert locate(20.0, velocities, power, 180.0, 200.0).half_width == pytest.approx(12.0, rel=1e-6)


def test_an_edge_of_the_window_is_no_peak():
    velocities = np.linspace(150.0, 240.0, 91)
    rising = np.linspace(0.1, 0.9, 91)
    assert locate(20.0, velocities, rising, 160.0, 200.0) == NO_PEAK
    assert locate(20.0, velocities, rising, 300.0, 400.0) == NO_PEAK


def test_sigma_is_that_of_a_straight_line_fitted_to_independent_phases():
    # least squares: var(k) = s2 / sum (x - mean x)^2; s2 is read from the expected power
    x = np.arange(24) * 2.0
    s2 = 0.09
    power = np.exp(-s2) + (1.0 - np.exp(-s2)) / 24.0
    expected = np.sqrt(s2 / np.sum(np.square(x - x.mean())))
    assert wavenumber_sigma(power, float(np.var(x)), 24) == pytest.approx(expected, rel=1e-12)


def test_sigma_agrees_with_the_scatter_of_steered_sums_over_random_phases():
    rng = np.random.default_rng(7)
    x, k0, s = np.arange(24) * 2.0, 0.6, 0.4
    k = k0 + np.linspace(-0.02, 0.02, 2001)
    steer = np.exp(1j * np.outer(k, x))
    found, power = [], []
    for _ in range(300):
        sums = np.square(np.abs(steer @ np.exp(-1j * (k0 * x + s * rng.standard_normal(24))) / 24.0))
        found.append(k[np.argmax(sums)])
        power.append(sums.max())
    stated = wavenumber_sigma(float(np.mean(power)), float(np.var(x)), 24)
    assert stated == pytest.approx(np.std(found), rel=0.15)
