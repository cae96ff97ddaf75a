"""The transforms that make an image, in one table; every entry keeps the contract of `Transform`."""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray


class Transform(Protocol):
    """From the spectra of the traces to power over frequency and velocity."""

    def __call__(
        self,
        spectra: NDArray[np.complex128],
        offsets: FloatArray,
        frequencies: FloatArray,
        velocities: FloatArray,
    ) -> FloatArray:
        """Return power in 0..1, (n_frequencies, n_velocities).

        `spectra` is (n_frequencies, n_receivers) with time factor exp(+i omega t), `offsets` [m] at least two
        different ones in any order; `frequencies` [Hz] and `velocities` [m/s] increase, with any steps. A
        plane wave of one velocity peaks there.
        """


def phase_shift(
    spectra: NDArray[np.complex128],
    offsets: FloatArray,
    frequencies: FloatArray,
    velocities: FloatArray,
) -> FloatArray:
    """Phase shift of Park, Miller & Xia (1998): |sum_j U_j/|U_j| exp(i omega x_j / c)|^2 / n^2.

    A trace without energy at a frequency does not count there.
    """
    from ..kernels import steering

    real, imag = spectra.real.copy(), spectra.imag.copy()
    live = steering.unit_phasors(real, imag)
    centred = offsets - 0.5 * (offsets.min() + offsets.max())
    # A few velocities against a long aperture: the grid would cost more than the sums themselves.
    grid = steering.OVERSAMPLING * np.ptp(offsets) * frequencies[-1] / velocities[0]
    gridded = grid < 16 * len(velocities)
    sums = steering.gridded_steered_power if gridded else steering.steered_power
    power = sums(real, imag, live, centred, frequencies.copy(), velocities.copy())
    return np.asarray(np.minimum(power, 1.0))  # interpolation may overshoot by 1e-5


TRANSFORMS: dict[str, Transform] = {"phase-shift": phase_shift}
