"""Conditioning of a gather before it is transformed: trim, detrend, band, surface-wave window, taper."""

from __future__ import annotations

import dataclasses

import numpy as np

from ..core.checks import FloatArray, positive
from ..core.errors import InputError
from ..core.gather import Gather

Limits = tuple[float | None, float | None]

EDGE_OCTAVES = 0.5
"""Width of a filter's edges [octaves]."""

PULSE = 0.15
"""Time kept after the arrival of the slowest wave, for the length of the pulse itself [s]."""


def condition(
    gather: Gather,
    *,
    detrend: bool = True,
    taper: float = 0.05,
    band: Limits = (None, None),
    window: Limits = (None, None),
    window_edge: float = 0.05,
    slowest_velocity: float | None = None,
) -> Gather:
    """Return the gather trimmed, detrended, filtered, windowed and tapered, in this order.

    Parameters
    ----------
    gather : Gather
    detrend : bool
        Remove mean and straight line of each trace.
    taper : float
        Share of the record's length over which its end is brought to zero by a cosine, 0 to 0.5. The
        beginning is tapered over the time before the blow only: arrivals near the source are kept.
    band : (float or None, float or None)
        Lowest and highest frequency [Hz] of a zero-phase filter with cosine edges half an octave wide,
        outside the band; None leaves that side open.
    window : (float or None, float or None)
        Slowest and fastest velocity [m/s] of the surface waves: each trace is kept from offset / fastest to
        offset / slowest, plus 0.15 s for the pulse; None leaves that side open.
    window_edge : float
        Width of the window's cosine edges, outside the window [s].
    slowest_velocity : float, optional
        Slowest wave of interest [m/s]: the record is cut where it has passed the farthest receiver, plus
        0.15 s and the taper.

    Raises
    ------
    InputError
        If an option is out of its range, or two limits are in the wrong order.
    """
    if not 0.0 <= taper <= 0.5:
        raise InputError(f"taper must lie between 0 and 0.5; got {taper}")
    if slowest_velocity is not None:
        gather = _trimmed(gather, positive(slowest_velocity, "slowest_velocity"), taper)
    data = np.array(gather.data)
    if detrend:
        data = _detrended(data)
    data = _filtered(data, gather.interval, *_ordered(band, "band"))
    data = _windowed(data, gather, *_ordered(window, "window"), positive(window_edge, "window_edge"))
    return dataclasses.replace(gather, data=data * _taper(gather.times, taper))


def _ordered(limits: Limits, name: str) -> Limits:
    low, high = (None if limit is None else positive(limit, f"{name} limit") for limit in limits)
    if low is not None and high is not None and not low < high:
        raise InputError(f"{name} limits must increase; got {low:g} and {high:g}")
    return low, high


def _trimmed(gather: Gather, slowest_velocity: float, taper: float) -> Gather:
    last = float(gather.offsets.max()) / slowest_velocity + PULSE
    length = (last - gather.delay) / (1.0 - taper)  # the taper at the end comes after the wave
    count = int(np.clip(np.ceil(length / gather.interval) + 1, 2, gather.data.shape[1]))
    return dataclasses.replace(gather, data=gather.data[:, :count])


def _detrended(data: FloatArray) -> FloatArray:
    ramp = np.linspace(-1.0, 1.0, data.shape[1])
    centred = data - data.mean(axis=1, keepdims=True)
    power = float(ramp @ ramp)
    return np.asarray(centred - np.outer(centred @ ramp / power, ramp)) if power > 0.0 else centred


def _filtered(data: FloatArray, interval: float, low: float | None, high: float | None) -> FloatArray:
    if low is None and high is None:
        return data
    length = 2 * data.shape[1]  # zeros behind, against wrapping round
    octave = np.log2(np.maximum(np.fft.rfftfreq(length, interval), np.finfo(np.float64).tiny))
    spectra = np.fft.rfft(data, length, axis=1)
    if low is not None:
        spectra *= _rise((octave - np.log2(low)) / EDGE_OCTAVES)
    if high is not None:
        spectra *= _rise((np.log2(high) - octave) / EDGE_OCTAVES)
    return np.fft.irfft(spectra, length, axis=1)[:, : data.shape[1]]


def _windowed(
    data: FloatArray, gather: Gather, slowest: float | None, fastest: float | None, edge: float
) -> FloatArray:
    offsets, times = gather.offsets[:, None], gather.times[None, :]
    if fastest is not None:
        data = data * _rise((times - offsets / fastest) / edge)
    if slowest is not None:
        data = data * _rise((offsets / slowest + PULSE - times) / edge)
    return data


def _taper(times: FloatArray, share: float) -> FloatArray:
    length = share * (times[-1] - times[0])
    if not length > 0.0:
        return np.ones_like(times)
    ending = _rise((times[-1] - times) / length - 1.0)
    before = min(length, -times[0])
    return ending * _rise((times - times[0]) / before - 1.0) if before > 0.0 else ending


def _rise(x: FloatArray) -> FloatArray:
    """Cosine from 0 at x = -1 to 1 at x = 0, where the kept part begins."""
    return np.asarray(0.5 + 0.5 * np.cos(np.pi * np.clip(x, -1.0, 0.0)))
