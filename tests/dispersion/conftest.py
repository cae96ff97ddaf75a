"""Synthetic shots of one known wave, made in the frequency domain without any of our own transforms."""

import numpy as np
import pytest

from surfdisp.core import Gather


def one_wave(
    velocity,
    receivers,
    source,
    *,
    duration=1.0,
    interval=0.001,
    centre=35.0,
    noise=0.0,
    seed=0,
    **fields,
):
    """A pulse of Ricker shape whose phase velocity [m/s] is a number or a function of frequency [Hz].

    `noise` is the standard deviation of white noise relative to the largest sample.
    """
    receivers = np.asarray(receivers, dtype=float)
    count = round(duration / interval)
    padded = 4 * count
    f = np.fft.rfftfreq(padded, interval)
    c = velocity(np.maximum(f, 0.5)) if callable(velocity) else np.full(len(f), float(velocity))
    pulse = np.square(f / centre) * np.exp(1.0 - np.square(f / centre))
    distance = np.abs(receivers - source)
    phase = np.exp(-2j * np.pi * f * (distance[:, None] / c + 0.05))
    data = np.fft.irfft(pulse * phase, padded, axis=1)[:, :count]
    data = data / np.abs(data).max()
    data = data + noise * np.random.default_rng(seed).standard_normal(data.shape)
    return Gather(data=data, interval=interval, receivers=receivers, source=source, **fields)


@pytest.fixture(scope="session")
def make_wave():
    return one_wave
