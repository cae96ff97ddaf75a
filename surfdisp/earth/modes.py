"""Modal phase velocities, mode counts and sensitivities of a layered earth."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..core.checks import FloatArray, all_finite, all_positive, one_of
from ..core.errors import InputError
from ..core.layered_earth import LayeredEarth
from ..core.sensitivity import Sensitivity

WAVES = ("rayleigh", "love")


def phase_velocity(
    earth: LayeredEarth, frequency: ArrayLike, *, wave: str = "rayleigh", mode: int = 0
) -> FloatArray:
    """Return the phase velocity of one mode.

    Modes are the branches omega_j(k), numbered from 0 at fixed wavenumber k. Where a branch takes one
    frequency at several velocities (part of it runs backward), the slowest one is returned, so that the
    result jumps where the branch turns back.

    Parameters
    ----------
    earth : LayeredEarth
    frequency : array (n,) or scalar
        [Hz], in any order.
    wave : {"rayleigh"}
        Love waves are not available yet.
    mode : int
        Number of the branch; 0 is the fundamental.

    Returns
    -------
    array (n,)
        [m/s], to 1e-10 relative; NaN where the mode does not exist: below its cut-off, or no slower than the
        shear velocity of the half-space.

    Raises
    ------
    InputError
        If a frequency is not positive and finite, the mode number negative, or the wave unknown.

    Notes
    -----
    Every velocity is certified by the count of branches on both sides of it (Wittrick & Williams 1971). That
    no narrow stretch of the same branch turns back at lower velocity is a matter of following the branch
    closely, not of proof.
    """
    from ..kernels.rayleigh_curve import slowest_velocities

    omega, order = _descending(frequency)
    _rayleigh_only(wave)
    velocity = np.empty_like(omega)
    velocity[order] = slowest_velocities(omega, _mode_number(mode), *_model(earth))
    return velocity


def mode_count(
    earth: LayeredEarth, frequency: ArrayLike, velocity: ArrayLike, *, wave: str = "rayleigh"
) -> NDArray[np.int64]:
    """Return how many branches omega_j(k) lie below each frequency at k = omega / velocity.

    Parameters
    ----------
    earth : LayeredEarth
    frequency, velocity : array (n,) or scalar
        [Hz] and [m/s], broadcast element by element.
    wave : {"rayleigh"}
        Love waves are not available yet.

    Returns
    -------
    int array (n,)

    Raises
    ------
    InputError
        If a velocity reaches the shear velocity of the half-space, beyond which modes leak, or a value is not
        positive and finite.
    """
    from ..kernels.layer_table import layer_table
    from ..kernels.rayleigh_count import rayleigh_counts

    _rayleigh_only(wave)
    frequencies = _positive_array(frequency, "frequency")
    velocities = _positive_array(velocity, "velocity")
    limit = earth.vs[-1]
    if np.any(velocities >= limit):
        raise InputError(
            f"velocity must be below the shear velocity of the half-space, {limit} m/s; "
            f"got {velocities.max()} m/s"
        )
    try:
        omega, c = np.broadcast_arrays(2.0 * np.pi * frequencies, velocities)
    except ValueError as error:
        raise InputError(
            f"frequency and velocity must have the same length, or one of them length 1; "
            f"got {frequencies.size} and {velocities.size}"
        ) from error
    counts: NDArray[np.int64] = rayleigh_counts(omega.copy(), c.copy(), layer_table(*_model(earth)))
    return counts


def sensitivity(
    earth: LayeredEarth, frequency: ArrayLike, *, wave: str = "rayleigh", mode: int = 0, of: str = "phase"
) -> Sensitivity:
    """Return the derivatives of phase velocity with respect to the properties of every layer.

    They are analytic, by first-order perturbation of the stiffness, at fixed frequency and with the other
    properties held.

    Parameters
    ----------
    earth, frequency, wave, mode
        As for `phase_velocity`.
    of : {"phase"}
        Group velocity is not available yet.

    Returns
    -------
    Sensitivity
        Arrays (n, n_layers); NaN rows where the mode does not exist or its group velocity is zero.

    Raises
    ------
    InputError
        As `phase_velocity`, and if `of` is unknown.
    """
    _rayleigh_only(wave)
    if one_of(of, "of", ("phase", "group")) == "group":
        raise InputError("of='group' is not available yet; use of='phase'")
    return phase_velocity_and_sensitivity(earth, frequency, mode=mode)[1]


def phase_velocity_and_sensitivity(
    earth: LayeredEarth, frequency: ArrayLike, *, mode: int = 0
) -> tuple[FloatArray, Sensitivity]:
    """Return `phase_velocity` and `sensitivity` of a Rayleigh mode together.

    Raises
    ------
    InputError
        As `phase_velocity`.
    """
    from ..kernels.rayleigh_curve import slowest_velocities
    from ..kernels.rayleigh_derivatives import curve_derivatives

    omega, order = _descending(frequency)
    model = _model(earth)
    found = slowest_velocities(omega, _mode_number(mode), *model)
    velocity = np.empty_like(omega)
    velocity[order] = found
    derivatives = np.empty((4, omega.size, earth.vs.size))
    derivatives[:, order] = curve_derivatives(omega, found, *model)
    vs, vp, density, thickness = derivatives
    return velocity, Sensitivity(vs=vs, vp=vp, density=density, thickness=thickness)


def _model(earth: LayeredEarth) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    return earth.thickness.copy(), earth.vp.copy(), earth.vs.copy(), earth.density.copy()


def _descending(frequency: ArrayLike) -> tuple[FloatArray, NDArray[np.intp]]:
    """Return angular frequencies from high to low, and the places they came from."""
    omega = 2.0 * np.pi * _positive_array(frequency, "frequency")
    order = omega.argsort()[::-1]
    return omega[order], order


def _positive_array(values: ArrayLike, name: str) -> FloatArray:
    try:
        array = np.atleast_1d(np.asarray(values, dtype=np.float64))
    except (TypeError, ValueError) as error:
        raise InputError(f"{name} must be numbers; got {values!r:.80}") from error
    if array.ndim != 1:
        raise InputError(f"{name} must have one axis; got shape {array.shape}")
    if array.size and not (array.min() > 0.0 and array.max() < np.inf):  # the whole at once: it is quick
        all_positive(array, name)
        all_finite(array, name)
    return array


def _rayleigh_only(wave: str) -> None:
    if one_of(wave, "wave", WAVES) == "love":
        raise InputError("wave='love' is not available yet; use wave='rayleigh'")


def _mode_number(mode: int) -> int:
    if isinstance(mode, bool) or not isinstance(mode, (int, np.integer)) or mode < 0:
        raise InputError(f"mode must be a whole number from 0; got {mode!r}")
    return int(mode)
