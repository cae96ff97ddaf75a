"""Pick the fundamental mode of one image, or say why not."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from ..core import DispersionImage, InputError, Picks
from ..core.checks import FloatArray, positive
from . import limits
from .continuity import smooth_runs, steep_below
from .location import NO_PEAK, Peak, locate, wavenumber_sigma
from .tracking import Ridge, noise_threshold, ridges

NO_RIDGE = "no ridge"
NO_PEAK_NEAR_RIDGE = "no peak near the ridge"
WEAK = "not above the image's noise"
LOW_SIGNAL = "record not above its own noise"
TOO_LONG = "wavelength too long for the spread"
TOO_NEAR = "near field, too close to be used"
AMBIGUOUS = "may be an alias"
OTHER_BRANCH = "beyond a gap or jump of the ridge"
NEAR_FIELD = "near field"
STEEP = "steep, may be another mode"
BEYOND_HALF_SPACING = "beyond half the spacing's wavenumber"

MINIMUM_STRENGTH = 0.2
"""Least sum of (power - threshold) d ln f of a ridge.

Pure noise stays below 0.02, single hammer shots with a clear ridge gave 0.45 to 0.84, one without 0.07.
"""
MINIMUM_SIGNAL = 1.5
"""Least signal-to-noise ratio of the record, where it is known."""
STEEP_WAVELENGTH = 0.5
"""Wavelength in spread lengths beyond which a steep ridge is flagged."""
STEEP_ERROR = 0.2
"""Relative standard deviation of such picks, times the wavelength in spread lengths."""
WINDOW = 0.15
"""Relative distance from the ridge within which a peak belongs to it."""


class Guide(NamedTuple):
    """A ridge to pick along: velocity [m/s] at increasing frequencies [Hz]."""

    frequency: FloatArray
    velocity: FloatArray


def pick(
    image: DispersionImage,
    *,
    guide: Guide | Picks | None = None,
    near_field: float = limits.NEAR_FIELD,
    too_near: float = limits.TOO_NEAR,
    longest_wavelength: float = limits.LONGEST_WAVELENGTH,
    minimum_strength: float = MINIMUM_STRENGTH,
) -> Picks:
    """Pick the fundamental mode, with sub-grid velocities and an entry for every frequency of the image.

    The ridge is followed over the whole image (see `tracking`); where two ridges run side by side the slower
    one is taken. Around it every frequency is located by a parabola. A frequency is refused, with its
    reason, where the peak is not above the noise, the wavelength is too long for the spread or the source
    too near, or an alias cannot be told from the ridge. Accepted picks carry flags: near field; steep at long
    wavelengths, where the ridge may have left for a higher mode; or beyond the wavenumber 1 / (2 spacing),
    where they are valid because the ridge reaches there continuously from below or no alias lies within the
    scanned velocities.

    Parameters
    ----------
    image : DispersionImage
    guide : Guide or Picks, optional
        A ridge to follow instead of looking for one, such as the accepted picks of the stacked image.
    near_field : float
        Distance of the array's centre in wavelengths below which picks are flagged.
    too_near : float
        ... and below which they are refused.
    longest_wavelength : float
        In lengths of the spread.
    minimum_strength : float
        Least strength of a ridge (`tracking.Ridge`).

    Returns
    -------
    Picks
        None accepted where there is nothing to pick. `sigma` is the error of the peak's location, from its
        curvature and from how far its power falls short of one, the error of the near field
        (`limits.NEAR_FIELD_ERROR`), and that of a steep ridge at long wavelengths, in quadrature.
    """
    if image.aperture <= 0.0:
        raise InputError(
            f"picking needs receivers at different distances; {image.name or 'the image'} has none"
        )
    longest = positive(longest_wavelength, "longest_wavelength") * image.aperture
    ridge = fundamental(image, longest, minimum_strength) if guide is None else _guide(guide)
    if ridge is None:
        return _nothing(image)
    peaks = _peaks(image, ridge)
    reason = _reasons(image, peaks, longest, too_near)
    _keep_one_branch(image, peaks, reason)
    _refuse_ambiguous(image, peaks, reason)
    accepted = np.array([r == "" for r in reason])
    steep = _steep(image, peaks, accepted)
    flags = _flags(image, peaks, near_field, steep)
    return Picks(
        frequency=image.frequencies,
        velocity=np.array([p.velocity for p in peaks]),
        sigma=_sigma(image, peaks, steep),
        half_width=np.array([p.half_width for p in peaks]),
        accepted=accepted,
        reason=np.where(accepted, flags, reason),
        name=image.name,
    )


def fundamental(image: DispersionImage, longest: float, minimum_strength: float) -> Guide | None:
    """Return the ridge of the fundamental mode, or None where no ridge is strong enough.

    The strongest ridge that is no alias; or a slower one, strong enough in itself, that runs beside it over
    half an octave or more: higher modes are faster.
    """
    threshold = noise_threshold(image)
    found = ridges(image, longest_wavelength=longest, threshold=threshold)
    strong = [
        r
        for r in found
        if r.strength >= minimum_strength and not limits.is_fast_alias(image, r.frequency, r.velocity)
    ]
    if not strong:
        return None
    chosen = strong[0]
    for other in strong[1:]:
        if _runs_below(other, chosen):
            chosen = other
    return Guide(chosen.frequency, chosen.velocity)


def _runs_below(other: Ridge, chosen: Ridge) -> bool:
    low = max(other.frequency[0], chosen.frequency[0])
    high = min(other.frequency[-1], chosen.frequency[-1])
    if high < np.sqrt(2.0) * low:
        return False
    f = np.geomspace(low, high, 20)
    slower = _at(Guide(other.frequency, other.velocity), f) < _at(Guide(chosen.frequency, chosen.velocity), f)
    return bool(np.all(slower))


def _guide(guide: Guide | Picks | None) -> Guide | None:
    if not isinstance(guide, Picks):
        return guide
    known = guide.accepted
    return Guide(guide.frequency[known], guide.velocity[known]) if known.any() else None


def _at(guide: Guide, frequencies: FloatArray) -> FloatArray:
    """Velocity of the guide, NaN outside of its frequencies."""
    log_velocity = np.interp(
        np.log(frequencies), np.log(guide.frequency), np.log(guide.velocity), left=np.nan, right=np.nan
    )
    return np.asarray(np.exp(log_velocity))


def _peaks(image: DispersionImage, guide: Guide) -> list[Peak]:
    """Locate the peak at each frequency within reach of the guide: 15 %, or the resolution where finer."""
    resolution = 1.0 / (image.aperture + image.spacing)
    peaks = []
    for f, c, row in zip(image.frequencies, _at(guide, image.frequencies), image.power, strict=True):
        if not np.isfinite(c):
            peaks.append(NO_PEAK)
            continue
        reach = min(WINDOW, max(0.5 * resolution * c / f, 0.04))
        peaks.append(locate(float(f), image.velocities, row, c / (1.0 + reach), c / (1.0 - reach)))
    return peaks


def _reasons(
    image: DispersionImage, peaks: list[Peak], longest: float, too_near: float
) -> NDArray[np.object_]:
    """Return why each frequency is refused, an empty text where it is not."""
    velocity = np.array([p.velocity for p in peaks])
    power = np.array([p.power for p in peaks])
    wavelength = velocity / image.frequencies
    tests = [
        (~np.isfinite(velocity), NO_RIDGE),
        (power < _weakest(image), WEAK),
        (np.asarray(image.signal_to_noise) < MINIMUM_SIGNAL, LOW_SIGNAL),
        (wavelength > longest, TOO_LONG),
        (limits.centre_distance_in_wavelengths(image, wavelength) < too_near, TOO_NEAR),
    ]
    reason = np.full(len(peaks), "", dtype=object)
    for refused, text in tests:
        reason[refused & (reason == "")] = text
    return reason


def _weakest(image: DispersionImage) -> float:
    """Power that noise alone exceeds at one trial in 150: exp(-5)."""
    return min(5.0 / len(image.offsets), 0.6)


def _keep_one_branch(image: DispersionImage, peaks: list[Peak], reason: NDArray[np.object_]) -> None:
    """Keep the strongest run of accepted picks that is one smooth branch, refuse the others."""
    good = np.flatnonzero(reason == "")
    velocity = np.array([peaks[i].velocity for i in good])
    power = np.array([peaks[i].power for i in good])
    lobe = 1.0 / (image.aperture + image.spacing)
    runs = smooth_runs(image.frequencies[good], velocity, power, lobe)
    if len(runs) < 2:
        return
    weight = power * np.gradient(np.log(image.frequencies))[good]
    best = max(range(len(runs)), key=lambda r: float(weight[runs[r]].sum()))
    for r, run in enumerate(runs):
        if r != best:
            reason[good[run]] = OTHER_BRANCH


def _refuse_ambiguous(image: DispersionImage, peaks: list[Peak], reason: NDArray[np.object_]) -> None:
    """Refuse picks with a visible alias unless the ridge comes continuously from below 1 / (2 spacing)."""
    velocity = np.array([p.velocity for p in peaks])
    wavelength = velocity / image.frequencies
    good = reason == ""
    with np.errstate(invalid="ignore"):
        beyond = limits.beyond_half_spacing(image, wavelength)
        visible = limits.has_visible_alias(image, image.frequencies, velocity)
    if not np.any(good & ~beyond):
        reason[good & beyond & visible] = AMBIGUOUS


def _steep(image: DispersionImage, peaks: list[Peak], accepted: NDArray[np.bool_]) -> NDArray[np.bool_]:
    velocity = np.array([p.velocity for p in peaks])
    f = image.frequencies
    below = steep_below(f[accepted], velocity[accepted], STEEP_WAVELENGTH * image.aperture)
    return np.asarray(f <= below)


def _flags(
    image: DispersionImage, peaks: list[Peak], near_field: float, steep: NDArray[np.bool_]
) -> list[str]:
    wavelength = np.array([p.velocity for p in peaks]) / image.frequencies
    near = limits.centre_distance_in_wavelengths(image, wavelength) < near_field
    beyond = limits.beyond_half_spacing(image, wavelength)
    named = [(near, NEAR_FIELD), (steep & np.isfinite(wavelength), STEEP), (beyond, BEYOND_HALF_SPACING)]
    return ["; ".join(text for where, text in named if where[i]) for i in range(len(peaks))]


def _sigma(image: DispersionImage, peaks: list[Peak], steep: NDArray[np.bool_]) -> FloatArray:
    """Standard deviation of each velocity: location, sigma_c = c2 / omega sigma_k, near field, other mode."""
    traces = len(image.offsets) * image.shots
    omega = 2.0 * np.pi * image.frequencies
    velocity = np.array([p.velocity for p in peaks])
    wavelength = velocity / image.frequencies
    wavenumber = np.array([wavenumber_sigma(p.power, p.curvature, traces) for p in peaks])
    near = limits.near_field_error(limits.centre_distance_in_wavelengths(image, wavelength))
    other = np.where(steep, STEEP_ERROR * wavelength / image.aperture, 0.0)
    relative = np.sqrt(np.square(velocity / omega * wavenumber) + np.square(near) + np.square(other))
    return np.asarray(velocity * relative)


def _nothing(image: DispersionImage) -> Picks:
    nan = np.full(len(image.frequencies), np.nan)
    return Picks(
        frequency=image.frequencies,
        velocity=nan,
        sigma=nan,
        half_width=nan,
        accepted=np.zeros(len(nan), dtype=bool),
        reason=np.full(len(nan), NO_RIDGE),
        name=image.name,
    )
