"""Fourier sums at any frequency, and the record's noise."""

import numpy as np
import pytest

from surfdisp.core import Gather
from surfdisp.dispersion.spectra import quietest_windows, spectrum


@pytest.mark.parametrize("samples", [1, 255, 256, 1500])
def test_spectrum_is_the_plain_fourier_sum_at_uneven_frequencies(samples):
    rng = np.random.default_rng(4)
    frequencies = np.sort(rng.uniform(2.0, 80.0, 40))
    gather = Gather(
        data=rng.standard_normal((5, samples)),
        interval=0.0005,
        receivers=np.arange(5.0),
        source=-1.0,
        delay=-0.02,
    )
    plain = np.exp(-2j * np.pi * np.outer(frequencies, gather.times)) @ gather.data.T
    np.testing.assert_allclose(spectrum(gather, frequencies), plain, atol=1e-11 * np.abs(plain).max())


def test_quietest_window_is_found_wherever_it_lies():
    data = np.random.default_rng(2).standard_normal((2, 4000))
    data[0, :1000] *= 0.1
    data[1, 3000:] *= 0.1
    windows, length = quietest_windows(Gather(data=data, interval=0.001, receivers=[1.0, 2.0], source=0.0))
    assert length == 1000
    np.testing.assert_allclose(windows[0], data[0, :1000] - data[0, :1000].mean())
    np.testing.assert_allclose(windows[1], data[1, 3000:] - data[1, 3000:].mean())
