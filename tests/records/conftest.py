"""Shots made from a closed form, and the field data that lie beside the project."""

import os
import warnings
from pathlib import Path

import numpy as np
import pytest

FIELD_DATA = Path(__file__).parents[2].parent / "shared" / "data"

INTERVAL = 0.0005
SAMPLES = 2000


def phase_velocity(frequency):
    """An invented fundamental mode: 350 m/s for long waves, 150 m/s for short ones."""
    return 150.0 + 200.0 / (1.0 + (frequency / 15.0) ** 2)


def dispersive_shot(receivers, source, *, noise=0.002, seed=0, delay=0.0, samples=SAMPLES):
    """Traces of one mode travelling outwards, a causal pulse 5 to 60 Hz, plus a weak wave of 800 m/s.

    Amplitudes fall with the square root of the offset; noise is a share of each trace's peak.
    Recording begins `delay` after the blow.
    """
    offset = np.abs(np.asarray(receivers, dtype=float) - source)
    frequency = np.fft.rfftfreq(2 * samples, INTERVAL)
    pulse = frequency**2 * np.exp(-((frequency / 22.0) ** 2)) * np.exp(-2j * np.pi * frequency * 0.03)
    travel = offset[:, None] / phase_velocity(frequency) - delay
    mode = np.exp(-2j * np.pi * frequency * travel)
    early = 0.1 * np.exp(-2j * np.pi * frequency * (offset[:, None] / 800.0 - delay))
    traces = np.fft.irfft(pulse * (mode + early), 2 * samples, axis=1)[:, :samples]
    traces /= np.sqrt(np.maximum(offset, 1.0))[:, None] * np.abs(traces).max()
    peak = np.abs(traces).max(axis=1, keepdims=True)
    return traces + noise * peak * np.random.default_rng(seed).normal(size=traces.shape)


@pytest.fixture
def make_shot():
    return dispersive_shot


@pytest.fixture
def obspy_reads():
    """ObsPy's own reading of a file, its remarks silenced."""

    def read(path):
        import obspy

        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            return obspy.read(str(path))

    return read


@pytest.fixture
def field_data():
    """The folder of real records; skips where it is absent, unless everything is required."""
    if not FIELD_DATA.is_dir():
        if os.environ.get("SURFDISP_REQUIRE_ALL") == "1":
            pytest.fail(f"{FIELD_DATA} is required")
        pytest.skip(f"{FIELD_DATA} is absent")
    return FIELD_DATA


@pytest.fixture(scope="session")
def make_shot_ever():
    """The same for tests whose examples share one fixture."""
    return dispersive_shot
