"""Conditioning of a gather before it is transformed: trim, detrend, band, surface-wave window, taper."""

from __future__ import annotations

import dataclasses

import numpy as np
from numpy.typing import NDArray

from ..core.checks import positive
from ..core.errors import InputError
from ..core.gather import Gather

FloatArray = NDArray[np.float64]

PULSE = 0.15
"""Time kept after the arrival of the slowest wave, for the length of the pulse itself [s]."""


def condition(
    gather: Gather,
    *,
    detrend: bool = True,
    taper: float = 0.05,
    band: tuple[float, float] | None = None,
    window: tuple[float, float] | None = None,
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
    band : (float, float), optional
        Lowest and highest frequency [Hz] of a zero-phase band-pass with cosine edges half an octave wide,
        outside the band.
    window : (float, float), optional
        Slowest and fastest velocity [m/s] of the surface waves: each trace is kept from offset / fastest to
        offset / slowest, plus 0.15 s for the pulse.
    window_edge : float
        Width of the window's cosine edges, outside the window [s].
    slowest_velocity : float, optional
        Slowest wave of interest [m/s]: the record is cut where it has passed the farthest receiver, plus
        0.15 s, and never shorter.

    Raises
    ------
    InputError
        If an option is out of its range, or two limits are in the wrong order.
    """
    if not 0.0 <= taper <= 0.5:
        raise InputError(f"taper must lie between 0 and 0.5; got {taper}")
    if slowest_velocity is not None:
        gather = _trimmed(gather, positive(slowest_velocity, "slowest_velocity"))
    data = np.array(gather.data)
    if detrend:
        data = _detrended(data)
    if band is not None:
        data = _band_passed(data, gather.interval, *_ordered(band, "band"))
    if window is not None:
        data *= _window(gather, *_ordered(window, "window"), positive(window_edge, "window_edge"))
    return dataclasses.replace(gather, data=data * _taper(gather.times, taper))


def _ordered(limits: tuple[float, float], name: str) -> tuple[float, float]:
    low, high = positive(limits[0], f"lower {name} limit"), positive(limits[1], f"upper {name} limit")
    if not low < high:
        raise InputError(f"{name} limits must increase; got {low:g} and {high:g}")
    return low, high


def _trimmed(gather: Gather, slowest_velocity: float) -> Gather:
    last = float(gather.offsets.max()) / slowest_velocity + PULSE
    count = int(np.clip(np.ceil((last - gather.delay) / gather.interval) + 1, 2, gather.data.shape[1]))
    return dataclasses.replace(gather, data=gather.data[:, :count])


def _detrended(data: FloatArray) -> FloatArray:
    ramp = np.linspace(-1.0, 1.0, data.shape[1])
    centred = data - data.mean(axis=1, keepdims=True)
    power = float(ramp @ ramp)
    return np.asarray(centred - np.outer(centred @ ramp / power, ramp)) if power > 0.0 else centred


def _band_passed(data: FloatArray, interval: float, low: float, high: float) -> FloatArray:
    length = 2 * data.shape[1]  # zeros behind, against wrapping round
    octaves = np.log2(np.maximum(np.fft.rfftfreq(length, interval), 1e-12))
    gain = _cosine_step((octaves - np.log2(low)) / 0.5 + 1.0) * _cosine_step(
        (np.log2(high) - octaves) / 0.5 + 1.0
    )
    return np.fft.irfft(np.fft.rfft(data, length, axis=1) * gain, length, axis=1)[:, : data.shape[1]]


def _window(gather: Gather, slowest: float, fastest: float, edge: float) -> FloatArray:
    begin = (gather.offsets / fastest)[:, None]
    end = (gather.offsets / slowest)[:, None] + PULSE
    times = gather.times[None, :]
    return _cosine_step((times - begin) / edge + 1.0) * _cosine_step((end - times) / edge + 1.0)


def _taper(times: FloatArray, share: float) -> FloatArray:
    length = max(share * (times[-1] - times[0]), np.finfo(np.float64).tiny)
    ending = _cosine_step((times[-1] - times) / length) if share > 0.0 else np.ones_like(times)
    before = min(length, -times[0])
    return ending * _cosine_step((times - times[0]) / before) if before > 0.0 and share > 0.0 else ending


def _cosine_step(x: FloatArray) -> FloatArray:
    """Rise from 0 at x = 0 to 1 at x = 1."""
    return np.asarray(0.5 - 0.5 * np.cos(np.pi * np.clip(x, 0.0, 1.0)))
