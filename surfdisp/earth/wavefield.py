"""Synthetic records: the full wavefield of a blow on a layered earth, body waves, near field and all modes.

The spectrum of the motion is the point response times that of the blow, at damped frequencies omega - i eps;
the damping, undone at the end, quells what wraps around in time (Bouchon & Aki 1977).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..core import Gather, InputError, LayeredEarth
from ..core.checks import FloatArray, all_finite, finite, float_array, positive
from .complex_moduli import Loss, complex_moduli, loss_of
from .point_response import point_response

ComplexArray = NDArray[np.complex128]
Pulse = Callable[[FloatArray], FloatArray]

GROWTH = 1e6  # by which the damping quells what wraps around, and its undoing magnifies the record's end


def hammer_blow(time: FloatArray, central_frequency: float = 30.0) -> FloatArray:
    """Force of a sledgehammer on a plate: a smooth push, largest 1 N.

    f(t) = exp(-((t - 4 tau)/tau)^2) for t >= 0, with tau = sqrt(3)/(2 pi central_frequency), so that the
    spectrum of a Rayleigh wave's velocity far from the blow, f's own times frequency^1.5, is largest at the
    central frequency.

    Parameters
    ----------
    time : array
        After the blow [s].
    central_frequency : float
        [Hz]

    Returns
    -------
    array
        Force [N], positive downwards.
    """
    tau = np.sqrt(3.0) / (2.0 * np.pi * central_frequency)
    return np.where(time >= 0.0, np.exp(-np.square(time / tau - 4.0)), 0.0)


def synthesize(
    earth: LayeredEarth,
    offsets: ArrayLike,
    duration: float,
    interval: float,
    *,
    source: float = 0.0,
    delay: float = 0.0,
    pulse: Pulse | ArrayLike = hammer_blow,
    qs: float | ArrayLike = np.inf,
    qp: float | ArrayLike = np.inf,
    reference_frequency: float = 10.0,
    tolerance: float = 1e-3,
) -> Gather:
    """Return the record of a vertical blow on the surface as vertical geophones see it: particle velocity.

    Parameters
    ----------
    earth : LayeredEarth
    offsets : array (n,)
        Positions of the receivers relative to the source [m], either sign, in any order;
        none zero, none twice.
    duration, interval : float
        Length of the record and sampling interval [s]; the record has round(duration/interval) samples.
    source : float
        Position of the source along the line [m].
    delay : float
        Time of the first sample after the blow [s]; negative where recording begins before it.
    pulse : callable or array
        Force of the blow [N], positive downwards: a function of the time after the blow [s], or samples
        every `interval` from the blow on. It should hold little above half the sampling frequency.
    qs, qp : float or array (n_layers,)
        Quality factors of shear and compression; infinite: elastic. Q is constant and the waves causal
        (`complex_moduli`); `vs` and `vp` hold at the reference frequency.
    reference_frequency : float
        [Hz]
    tolerance : float
        Largest error wanted, relative to the peak of each trace, waves that would still come after the
        record included; between 1e-6 and 0.1.

    Returns
    -------
    Gather
        Velocity [m/s], positive downwards (along the blow), receivers in increasing order.

    Raises
    ------
    InputError
        If an offset is zero or repeated, or an argument is outside its bounds.

    Notes
    -----
    The work grows with the square of the duration and with the fastest P velocity: a second at 48 receivers
    over ten layers takes about a second.
    """
    positions = np.sort(float_array(offsets, "offsets"))
    distances = np.abs(positions)
    if positions.size == 0 or not np.all(distances > 0.0):
        raise InputError("offsets must hold at least one distance, none of them zero (the source itself)")
    interval, duration = positive(interval, "interval"), positive(duration, "duration")
    n_samples = round(duration / interval)
    if n_samples < 1:
        raise InputError(f"duration must be at least one interval; got {duration} s and {interval} s")
    if not 1e-6 <= tolerance <= 0.1:
        raise InputError(f"tolerance must lie between 1e-6 and 0.1; got {tolerance}")
    before = int(np.ceil(-finite(delay, "delay") / interval - 1e-9))  # samples; negative: so many are skipped
    loss = loss_of(earth, qs, qp, reference_frequency)
    data = np.zeros((len(positions), n_samples))
    if n_samples > before:
        axis = _time_axis(n_samples - before, interval, delay + before * interval)
        motion = _motion(earth, distances, axis, _force(pulse, axis), loss, tolerance)
        data[:, max(before, 0) :] = motion[:, max(-before, 0) : n_samples - before]
    return Gather(
        data=data,
        interval=interval,
        receivers=source + positions,
        source=source,
        delay=delay,
        name="synthetic",
    )


class _TimeAxis(NamedTuple):
    """Samples of the damped time axis; the first lies between the blow and one interval after it."""

    samples: int
    interval: float
    start: float
    damping: float

    @property
    def omega(self) -> ComplexArray:
        """Damped angular frequencies, (samples//2 + 1,)."""
        return np.asarray(2.0 * np.pi * np.fft.rfftfreq(self.samples, self.interval) - 1j * self.damping)

    @property
    def times(self) -> FloatArray:
        return np.asarray(np.arange(self.samples) * self.interval)


def _time_axis(samples: int, interval: float, start: float) -> _TimeAxis:
    from scipy.fft import next_fast_len

    # A tenth more than asked: what comes before the first sample wraps to the very end, and is cut off.
    count = int(next_fast_len(max(samples + samples // 10, 16), real=True))
    return _TimeAxis(count, interval, start, np.log(GROWTH) / (count * interval))


def _force(pulse: Pulse | ArrayLike, axis: _TimeAxis) -> ComplexArray:
    """Spectrum of the damped force [N s] at the frequencies of the axis."""
    samples = np.zeros(axis.samples)
    given = float_array(pulse(axis.times) if callable(pulse) else pulse, "pulse")[: axis.samples]
    all_finite(given, "pulse")
    samples[: len(given)] = given
    if not np.any(samples):
        raise InputError("pulse must not be zero throughout the record")
    return np.asarray(axis.interval * np.fft.rfft(samples * np.exp(-axis.damping * axis.times)))


def _motion(
    earth: LayeredEarth,
    distances: FloatArray,
    axis: _TimeAxis,
    force: ComplexArray,
    loss: Loss,
    tolerance: float,
) -> FloatArray:
    """Vertical surface velocity [m/s] at the samples of the axis, (n_distances, samples)."""
    smooth = force * _band(force, axis, tolerance)
    omega = axis.omega[: np.flatnonzero(smooth)[-1] + 1]
    spectrum = np.zeros((len(axis.omega), len(distances)), dtype=np.complex128)
    moduli = complex_moduli(earth, loss, omega)
    response = point_response(earth, distances, omega, moduli, tolerance, GROWTH)
    shift = 1j * omega * np.exp(1j * omega * axis.start)
    spectrum[: len(omega)] = response * (smooth[: len(omega)] * shift)[:, np.newaxis]
    damped = np.fft.irfft(spectrum, axis.samples, axis=0).T / axis.interval
    return np.asarray(damped * np.exp(axis.damping * axis.times))


def _band(force: ComplexArray, axis: _TimeAxis, tolerance: float) -> FloatArray:
    """Taper that ends the spectrum where nothing of weight is left, (n_omega,).

    It is so gradual that its echo in time has died out after a fifth of the record, before undoing the
    damping could magnify it.
    """
    from scipy.special import erfc

    weight = np.abs(force) * np.abs(axis.omega) ** 1.5
    last = axis.omega.real[np.flatnonzero(weight > 0.1 * tolerance * weight.max())[-1]]
    steepness = np.sqrt(-np.log(0.1 * tolerance))
    width = 2.0 * steepness / (0.2 * axis.samples * axis.interval)
    distance = (axis.omega.real - last) / width - steepness
    return np.where(distance < steepness, 0.5 * erfc(distance), 0.0)
