"""Spectra of a gather at any frequencies, and how far they stand above the record's own noise."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core import Gather
from ..core.checks import FloatArray

BLOCK = 256
"""Samples per block of the Fourier sums."""
NOISE_WINDOW = 0.25
"""Length of the window in which the noise is measured, as a part of the record."""
PERIODS = 3.0
"""Periods that the window must hold."""


def spectrum(gather: Gather, frequencies: FloatArray) -> NDArray[np.complex128]:
    """Return the Fourier sums of all traces [instrument unit], (n_frequencies, n_receivers).

    Exact sums of sample x exp(-i omega t) at the wanted frequencies, which need not be even; time zero is the
    blow, not the first sample. The record is cut into blocks whose sums share one table of phases (a product
    of matrices), and each block is then turned by the phase of its start.
    """
    traces, samples = gather.data.shape
    blocks = -(-samples // BLOCK)
    data = np.zeros((traces, blocks * BLOCK))
    data[:, :samples] = gather.data
    omega = 2.0 * np.pi * frequencies
    within = np.outer(gather.interval * np.arange(BLOCK), omega)
    table = np.concatenate([np.cos(within), -np.sin(within)], axis=1)
    real, imag = np.split((data.reshape(-1, BLOCK) @ table).reshape(traces, blocks, -1), 2, axis=2)
    starts = gather.delay + gather.interval * BLOCK * np.arange(blocks)
    turn = np.exp(-1j * np.outer(starts, omega))
    return np.asarray(np.einsum("jbf,bf->fj", real + 1j * imag, turn))


def signal_to_noise(gather: Gather, frequencies: FloatArray, spectra: NDArray[np.complex128]) -> FloatArray:
    """Return the amplitude of the arrivals over that of the record beside them, (n_frequencies,).

    The noise of a trace is measured in its quietest quarter, wherever that lies (before the arrivals on far
    traces, after them on near ones), and scaled to the length of the record by energy. Each trace is
    weighted by its own noise, so that unequal gains do not matter; the median trace counts as the signal.
    NaN throughout where the traces have no noise to measure (a muted or noise-free record), and below three
    periods in the quarter, which cannot tell noise from the tail of a wave.
    """
    quiet, length = quietest_windows(gather)
    power = np.mean(np.square(quiet), axis=1)
    largest = np.max(np.abs(gather.data), axis=1)
    usable = power > np.square(1e-9 * largest)
    if np.count_nonzero(usable) < max(2, len(power) // 2):
        return np.full(len(frequencies), np.nan)
    window = Gather(
        data=quiet[usable], interval=gather.interval, receivers=gather.receivers[usable], source=0.0
    )
    noise = np.square(np.abs(spectrum(window, frequencies))) * gather.data.shape[1] / length
    noise[frequencies * gather.interval * length < PERIODS] = np.nan
    total = np.square(np.abs(spectra[:, usable]))
    ratio = np.median(total / power[usable], axis=1) / np.mean(noise / power[usable], axis=1)
    return np.asarray(np.sqrt(np.maximum(ratio - 1.0, 0.0)))


def quietest_windows(gather: Gather) -> tuple[FloatArray, int]:
    """Return the quarter of least energy of each trace, mean removed, (n_receivers, length), and length."""
    n_samples = gather.data.shape[1]
    length = max(int(NOISE_WINDOW * n_samples), 1)
    starts = np.unique(np.linspace(0, n_samples - length, 13).astype(int))
    windows = np.stack([gather.data[:, s : s + length] for s in starts])
    windows = windows - windows.mean(axis=2, keepdims=True)
    best = np.argmin(np.sum(np.square(windows), axis=2), axis=0)
    return windows[best, np.arange(len(best))], length
