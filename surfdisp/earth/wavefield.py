"""Synthetic records: the full wavefield of a blow on a layered earth, body waves, near field and all modes.

The vertical surface motion under a vertical point force is the Hankel transform of the surface compliance
C(k, omega), an element of the inverse of the dynamic stiffness (Kausel & Roesset 1981):

    u(r, omega) = F(omega)/(2 pi) * integral over k from 0 to infinity of C(k, omega) J0(k r) k dk

Frequency is damped, omega - i eps, against wrap-around in time (Bouchon & Aki 1977). That also clears the
path: motion never outruns the fastest P wave, hence C has no singularity within eps/vp of the real k axis,
and a mode's pole lies eps over its group velocity away. The integral is a sum over Gauss-Legendre panels of
about that size, the same for all frequencies; an even step 2 pi/(vp x duration + offset) would need several
times as many wavenumbers. With source and receiver both at the surface the integral converges only
conditionally, since C k tends to the static (1 - nu)/mu: beyond the slowest wave the load's spectrum is
tapered by an error function, that is, each receiver sees a load spread over a smooth patch, so small that at
the receiver its field is that of a point.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from surfdisp.core import Gather, InputError, LayeredEarth
from surfdisp.core.checks import FloatArray, all_finite, all_positive, finite, float_array, positive

ComplexArray = NDArray[np.complex128]
Pulse = Callable[[FloatArray], FloatArray]

NODES = 16  # Gauss-Legendre nodes in a panel
OSCILLATION = 16.0  # largest width of a panel times the offset, a few oscillations of J0
GROWTH = 1e6  # by which the damping quells what wraps around, and its undoing magnifies the record's end
FASTEST = 1.5  # largest group velocity of a mode over its phase velocity
SLOWEST = (
    0.8  # slowest wave over the slowest shear velocity; Rayleigh waves exceed 0.87 except near vp/vs = 1.155
)


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
        Quality factors of shear and compression; infinite: elastic. A modulus is
        rho v^2 (1 + i/Q) (f/reference_frequency)^(2 atan(1/Q)/pi), which keeps Q constant and the waves
        causal (Kjartansson 1979); `vs` and `vp` hold at the reference frequency.
    reference_frequency : float
        [Hz]
    tolerance : float
        Largest error wanted, relative to the peak of each trace; between 1e-6 and 0.1.

    Returns
    -------
    Gather
        Velocity [m/s], positive downwards (along the blow), receivers in increasing order.

    Raises
    ------
    InputError
        If an offset is zero or repeated, or an argument is outside its bounds.
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
    first = int(
        np.ceil(-finite(delay, "delay") / interval - 1e-9)
    )  # samples before the blow; negative: skipped
    after = n_samples - first
    data = np.zeros((len(positions), n_samples))
    if after > 0:
        moduli = _moduli(earth, qs, qp, positive(reference_frequency, "reference_frequency"))
        axis = _time_axis(after, interval, delay + first * interval)
        force = _force(pulse, axis)
        motion = _motion(earth, distances, axis, force, moduli, tolerance)
        data[:, max(first, 0) :] = motion[:, max(-first, 0) : after]
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


_Moduli = Callable[[ComplexArray], tuple[ComplexArray, ComplexArray, ComplexArray]]


def _moduli(
    earth: LayeredEarth, qs: float | ArrayLike, qp: float | ArrayLike, reference_frequency: float
) -> _Moduli:
    """Return vp^2, vs^2 and shear modulus as a function of angular frequency, each (n_omega, n_layers)."""
    loss = {}
    for name, quality in (("qs", qs), ("qp", qp)):
        per_layer = float_array(
            np.broadcast_to(quality, earth.vs.shape) if np.ndim(quality) == 0 else quality, name
        )
        all_positive(per_layer, name)
        if per_layer.shape != earth.vs.shape:
            raise InputError(
                f"{name} must be one number or one per layer ({len(earth.vs)}); got {len(per_layer)}"
            )
        loss[name] = 1.0 / per_layer

    def factor(inverse_quality: FloatArray, omega: ComplexArray) -> ComplexArray:
        ratio = omega[:, np.newaxis] / (2.0 * np.pi * reference_frequency)
        return np.asarray((1.0 + 1j * inverse_quality) * ratio ** (2.0 / np.pi * np.arctan(inverse_quality)))

    def moduli(omega: ComplexArray) -> tuple[ComplexArray, ComplexArray, ComplexArray]:
        vs2 = earth.vs**2 * factor(loss["qs"], omega)
        return earth.vp**2 * factor(loss["qp"], omega), vs2, earth.density * vs2

    return moduli


def _motion(
    earth: LayeredEarth,
    distances: FloatArray,
    axis: _TimeAxis,
    force: ComplexArray,
    moduli: _Moduli,
    tolerance: float,
) -> FloatArray:
    """Vertical surface velocity [m/s] at the samples of the axis, (n_distances, count)."""
    smooth = force * _band(force, axis, tolerance)
    omega = axis.omega[: np.flatnonzero(smooth)[-1] + 1]
    spectrum = np.zeros((len(axis.omega), len(distances)), dtype=np.complex128)
    response = _point_response(earth, distances, omega, moduli(omega), tolerance)
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
    steepness = _decay(tolerance)
    width = 2.0 * steepness / (0.2 * axis.samples * axis.interval)
    distance = (axis.omega.real - last) / width - steepness
    return np.where(distance < steepness, 0.5 * erfc(distance), 0.0)


def _decay(tolerance: float) -> float:
    """Return x with exp(-x^2) = tolerance/10."""
    return float(np.sqrt(-np.log(0.1 * tolerance)))


def _point_response(
    earth: LayeredEarth,
    distances: FloatArray,
    omega: ComplexArray,
    moduli: tuple[ComplexArray, ComplexArray, ComplexArray],
    tolerance: float,
) -> ComplexArray:
    """Vertical displacement per vertical point force [m/N], (n_omega, n_distances)."""
    from scipy.special import erfc, j0

    from surfdisp.kernels.wavefield import vertical_compliance

    slowest = omega.real[-1] / (SLOWEST * earth.vs.min())
    steepness = _decay(tolerance)
    taper = 2.0 * steepness**2  # half its width in k times the offset; the static error is exp(-steepness^2)
    k, weight = _wavenumbers(earth, distances, omega, slowest, 2.0 * taper, tolerance)
    phase = k[:, np.newaxis] * distances
    load = 0.5 * erfc((phase - slowest * distances - taper) / (2.0 * steepness))
    hankel = (weight * k / (2.0 * np.pi))[:, np.newaxis] * j0(phase) * load
    vp2, vs2, mu = moduli
    thickness = np.array(earth.thickness)
    rows = [vertical_compliance(complex(w), k, thickness, vp2[i], vs2[i], mu[i]) for i, w in enumerate(omega)]
    return np.asarray(np.array(rows) @ hankel)


def _wavenumbers(
    earth: LayeredEarth,
    distances: FloatArray,
    omega: ComplexArray,
    slowest: float,
    reach: float,
    tolerance: float,
) -> tuple[FloatArray, FloatArray]:
    """Nodes and weights of the integration over k, up to where the taper of the nearest receiver ends.

    A panel may be as wide as the distance to the nearest singularity allows, exp(-2 NODES asinh(distance/half
    width)) being its error. Beyond `slowest` there are none, and the taper leaves the farther receivers
    behind at `slowest` + `reach`/offset.
    """
    damping, highest = -omega.imag[0], omega.real[-1]
    widest = 2.0 / np.sinh(-np.log(0.1 * tolerance / GROWTH) / (2 * NODES))
    edges = [0.0]
    while edges[-1] < slowest + reach / distances.min():
        k = edges[-1]
        beyond = max(k - slowest, 0.0)
        fastest = min(earth.vp.max(), FASTEST * highest / k) if k > 0.0 else earth.vp.max()
        smooth = max(widest * damping / fastest, 0.5 * beyond)
        edges.append(k + min(smooth, OSCILLATION * max(1.0 / distances.max(), beyond / reach)))
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    half = 0.5 * np.diff(edges)[:, np.newaxis]
    middle = 0.5 * np.add(edges[1:], edges[:-1])[:, np.newaxis]
    return (middle + half * nodes).ravel(), (half * weights).ravel()
