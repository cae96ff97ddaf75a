"""Kernels of the phase-shift image: steered sums over the receivers.

Park, Miller & Xia (1998), E(f, c) = |sum_j U_j(f)/|U_j(f)| exp(i omega x_j / c)|, here divided by the number
of traces and squared, so that a plane wave reaches 1 at its velocity.

The sum depends on frequency and velocity only through k = omega / c, and as a function of k it is band
limited by the aperture of the spread. So it is formed on an even grid of wavenumbers, whose steering phases
are shared by all frequencies, and read off between the grid points by Lagrange interpolation.
"""

import numpy as np
from numpy.typing import NDArray

from .jit import kernel, summing

Floats = NDArray[np.float64]

OVERSAMPLING = 8
"""Grid points per 2 pi / aperture: six-point interpolation is then good to 2e-5 of the largest sum."""


@kernel
def unit_phasors(real: Floats, imag: Floats) -> Floats:
    """Divide each spectral value by its modulus, in place; zeros stay zero. Return the live traces (n_f,)."""
    live = np.zeros(real.shape[0])
    for i in range(real.shape[0]):
        for j in range(real.shape[1]):
            modulus = np.hypot(real[i, j], imag[i, j])
            if modulus > 0.0:
                real[i, j] /= modulus
                imag[i, j] /= modulus
                live[i] += 1.0
    return live


@summing
def steered_power(
    real: Floats, imag: Floats, live: Floats, offsets: Floats, frequencies: Floats, velocities: Floats
) -> Floats:
    """Return |sum_j phasor_j exp(i omega x_j / c)|^2 / live^2, (n_frequencies, n_velocities)."""
    power = np.zeros((len(frequencies), len(velocities)))
    for i in range(len(frequencies)):
        for v in range(len(velocities)):
            k = 2.0 * np.pi * frequencies[i] / velocities[v]
            re, im = 0.0, 0.0
            for j in range(len(offsets)):
                c, s = np.cos(k * offsets[j]), np.sin(k * offsets[j])
                re += real[i, j] * c - imag[i, j] * s
                im += real[i, j] * s + imag[i, j] * c
            power[i, v] = (re * re + im * im) / max(live[i], 1.0) ** 2
    return power


@summing
def gridded_steered_power(
    real: Floats, imag: Floats, live: Floats, offsets: Floats, frequencies: Floats, velocities: Floats
) -> Floats:
    """Return the same as `steered_power` by way of an even grid of wavenumbers.

    `offsets` must be centred on the spread (a shift changes no modulus), `frequencies` and `velocities`
    increase. Writes n_grid x n_traces steering phases, n_grid = 8 aperture f_max / c_min.
    """
    step = 2.0 * np.pi / (OVERSAMPLING * (offsets.max() - offsets.min()))
    # Interpolation reaches from node - 2 to node + 3; one more on each side, for a position that is a whole
    # number may be rounded to either side of it.
    first = int(2.0 * np.pi * frequencies[0] / velocities[-1] / step) - 4
    last = int(2.0 * np.pi * frequencies[-1] / velocities[0] / step) + 6
    cosines = np.empty((last - first, len(offsets)))
    sines = np.empty((last - first, len(offsets)))
    for m in range(last - first):
        for j in range(len(offsets)):
            cosines[m, j] = np.cos((first + m) * step * offsets[j])
            sines[m, j] = np.sin((first + m) * step * offsets[j])
    sum_re = np.empty(last - first)
    sum_im = np.empty(last - first)
    power = np.empty((len(frequencies), len(velocities)))
    for i in range(len(frequencies)):
        scale = 2.0 * np.pi * frequencies[i] / step  # grid position of velocity 1 m/s
        for m in range(int(scale / velocities[-1]) - 3 - first, int(scale / velocities[0]) + 5 - first):
            re, im = 0.0, 0.0
            for j in range(len(offsets)):
                re += real[i, j] * cosines[m, j] - imag[i, j] * sines[m, j]
                im += real[i, j] * sines[m, j] + imag[i, j] * cosines[m, j]
            sum_re[m], sum_im[m] = re, im
        norm = 1.0 / max(live[i], 1.0) ** 2
        for v in range(len(velocities)):
            position = scale / velocities[v]
            node = int(position)
            t = position - node
            m = node - first
            # Lagrange weights of the nodes -2, -1, 0, 1, 2, 3 at t
            a, b, c, d, e = t + 2.0, t + 1.0, t - 1.0, t - 2.0, t - 3.0
            bt, de = b * t, d * e
            w0 = -bt * c * de / 120.0
            w1 = a * t * c * de / 24.0
            w2 = -a * b * c * de / 12.0
            w3 = a * bt * de / 12.0
            w4 = -a * bt * c * e / 24.0
            w5 = a * bt * c * d / 120.0
            re = (
                w0 * sum_re[m - 2] + w1 * sum_re[m - 1] + w2 * sum_re[m]
                + w3 * sum_re[m + 1] + w4 * sum_re[m + 2] + w5 * sum_re[m + 3]
            )  # fmt: skip
            im = (
                w0 * sum_im[m - 2] + w1 * sum_im[m - 1] + w2 * sum_im[m]
                + w3 * sum_im[m + 1] + w4 * sum_im[m + 2] + w5 * sum_im[m + 3]
            )  # fmt: skip
            power[i, v] = (re * re + im * im) * norm
    return power
