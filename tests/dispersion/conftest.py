"""Synthetic shots of known waves, made in the frequency domain without any of our own transforms."""

import numpy as np
import pytest

from surfdisp.core import Gather


def ricker(f, centre=35.0):
    return np.square(f / centre) * np.exp(1.0 - np.square(f / centre))


def waves(
    modes,
    receivers,
    source,
    *,
    duration=1.0,
    interval=0.001,
    noise=0.0,
    seed=0,
    **fields,
):
    """Sum of waves, each a pair of functions of frequency [Hz]: phase velocity [m/s] and amplitude.

    `noise` is the standard deviation of white noise relative to the largest sample.
    """
    receivers = np.asarray(receivers, dtype=float)
    count = round(duration / interval)
    padded = 4 * count
    f = np.fft.rfftfreq(padded, interval)
    distance = np.abs(receivers - source)[:, None]
    spectrum = 0.0
    for velocity, amplitude in modes:
        c = velocity(np.maximum(f, 0.5))
        spectrum = spectrum + amplitude(f) * np.exp(-2j * np.pi * f * (distance / c + 0.05))
    data = np.fft.irfft(spectrum, padded, axis=1)[:, :count]
    data = data / np.abs(data).max()
    data = data + noise * np.random.default_rng(seed).standard_normal(data.shape)
    return Gather(data=data, interval=interval, receivers=receivers, source=source, **fields)


def one_wave(velocity, receivers, source, *, amplitude=ricker, **options):
    """One wave whose phase velocity [m/s] is a number or a function of frequency [Hz]."""
    of_frequency = velocity if callable(velocity) else lambda f: np.full(len(f), float(velocity))
    return waves([(of_frequency, amplitude)], receivers, source, **options)


@pytest.fixture(scope="session")
def make_wave():
    return one_wave


@pytest.fixture(scope="session")
def make_waves():
    return waves
