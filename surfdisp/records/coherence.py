"""How well each trace agrees with its neighbours, once the waves' travel from one to the next is undone."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray
from ..core.gather import Gather

LOWEST, HIGHEST = 4.0, 60.0
"""Frequencies compared [Hz]: hammer surface waves, below the air wave and most machinery."""

SLOWNESSES = np.linspace(1.0 / 1500.0, 1.0 / 60.0, 91)
"""Slownesses tried between neighbours [s/m]."""

NEIGHBOURS = 8
"""Traces that a trace is compared with, the nearest on its side of the source."""

LEAST_NEIGHBOURS = 3

LEAST_SEMBLANCE = 0.4
"""Semblance of the neighbours below which a frequency has no say."""


def neighbour_coherence(gather: Gather, ignored: frozenset[int] = frozenset()) -> FloatArray:
    """Correlate each trace with the beam of its neighbours, from -1 (reversed) over 0 (alien) to 1.

    At each frequency the neighbours are summed at the slowness at which they agree best, the trace itself
    left out, and shifted to its place. Because each frequency has its own slowness, dispersion and higher
    modes do no harm; and because an alias of the slowness puts the same phase on evenly spaced receivers,
    aliasing does none either. A constant gain drops out. Spectra are compressed to the square root of their
    amplitude, so that no single frequency decides.

    Parameters
    ----------
    gather : Gather
    ignored : set of int
        Indices of traces that are neither judged nor used as neighbours.

    Returns
    -------
    array (n_receivers,)
        Coherence; NaN for ignored traces and where fewer than three neighbours are left.
    """
    spectra, frequencies = _compressed_spectra(gather)
    coherence = np.full(len(spectra), np.nan)
    for side in (gather.receivers < gather.source, gather.receivers >= gather.source):
        members = np.array([i for i in np.flatnonzero(side) if i not in ignored], dtype=np.int64)
        for index in members:
            others = members[members != index]
            distance = gather.offsets[others] - gather.offsets[index]
            nearest = np.argsort(np.abs(distance), kind="stable")[:NEIGHBOURS]
            if len(nearest) >= LEAST_NEIGHBOURS:
                neighbours = spectra[others[nearest]]
                coherence[index] = _agreement(spectra[index], neighbours, distance[nearest], frequencies)
    return coherence


def _compressed_spectra(gather: Gather) -> tuple[NDArray[np.complex128], FloatArray]:
    data = gather.data - gather.data.mean(axis=1, keepdims=True)
    frequencies: FloatArray = np.fft.rfftfreq(data.shape[1], gather.interval).astype(np.float64)
    band = (frequencies >= LOWEST) & (frequencies <= HIGHEST)
    spectra = np.fft.rfft(data, axis=1)[:, band]
    amplitude = np.abs(spectra)
    if not spectra.size:
        return spectra, frequencies[band]
    peak = amplitude.max(axis=1, keepdims=True)
    scale = np.sqrt(np.maximum(amplitude, 1e-12 * peak) * peak)
    return np.divide(spectra, scale, out=np.zeros_like(spectra), where=scale > 0.0), frequencies[band]


def _agreement(
    trace: NDArray[np.complex128],
    neighbours: NDArray[np.complex128],
    distance: FloatArray,
    frequencies: FloatArray,
) -> float:
    """Correlation of `trace` with the beam of `neighbours` that lie `distance` (n,) farther out."""
    travel = np.exp(2j * np.pi * SLOWNESSES[:, None, None] * frequencies[:, None] * distance)
    beams = np.einsum("sfn,nf->sf", travel, neighbours) / len(neighbours)
    beam = np.take_along_axis(beams, np.argmax(np.abs(beams), axis=0)[None, :], axis=0)[0]
    power = np.mean(np.abs(neighbours) ** 2, axis=0)
    weight = np.maximum(
        np.abs(beam) ** 2 / np.maximum(power, np.finfo(np.float64).tiny) - LEAST_SEMBLANCE, 0.0
    )
    scale = np.sqrt(np.sum(weight * np.abs(trace) ** 2) * np.sum(weight * np.abs(beam) ** 2))
    return float(np.sum(weight * np.real(trace * np.conj(beam))) / scale) if scale > 0.0 else 0.0
