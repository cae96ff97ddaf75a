"""The hot loops under pytest-benchmark: run with `pytest tests/benchmarks --benchmark-enable`.

The bars, with their bounds, are in bars.py; here each loop is timed alone, to compare two changes.
"""

import numpy as np
import pytest

from surfdisp.core import Gather, LayeredEarth
from surfdisp.dispersion import dispersion_image
from surfdisp.earth import phase_velocity, phase_velocity_and_sensitivity


@pytest.fixture
def earth():
    vs = np.linspace(150.0, 600.0, 10)
    return LayeredEarth(
        thickness=[*np.linspace(1.5, 4.5, 9), np.inf],
        vp=2.2 * vs,
        vs=vs,
        density=np.linspace(1800.0, 2100.0, 10),
    )


@pytest.fixture
def frequency():
    return np.geomspace(3.0, 60.0, 30)


def test_fundamental_curve(benchmark, earth, frequency):
    velocity = benchmark(phase_velocity, earth, frequency)
    assert np.all(np.diff(velocity) < 0.0)  # this earth stiffens with depth


def test_curve_with_its_derivatives(benchmark, earth, frequency):
    velocity, by = benchmark(phase_velocity_and_sensitivity, earth, frequency)
    # all velocities scaled by a and the frequency with them: c(f) scales too, so the derivatives add up
    slope = np.gradient(velocity, frequency)
    scaled = (by.vs * earth.vs + by.vp * earth.vp).sum(axis=1) + frequency * slope
    np.testing.assert_allclose(scaled[1:-1], velocity[1:-1], rtol=0.02)


def test_phase_shift_image(benchmark):
    times = 0.001 * np.arange(1000)
    receivers = np.arange(48.0)
    phase = (times - (receivers[:, None] + 5.0) / 200.0) / 0.008
    gather = Gather(
        data=(1.0 - phase**2) * np.exp(-0.5 * phase**2), interval=0.001, receivers=receivers, source=-5.0
    )
    frequencies, velocities = 5.0 + 0.25 * np.arange(300), 80.0 + 2.0 * np.arange(460)
    image = benchmark(dispersion_image, gather, frequencies, velocities)
    assert velocities[np.argmax(image.power[60])] == 200.0
