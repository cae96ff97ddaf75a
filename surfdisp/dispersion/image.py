"""The door to dispersion images: one gather in, one image out."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..core import DispersionImage, Gather, InputError
from ..core.checks import FloatArray, all_finite, all_positive, float_array, increasing, one_of
from .axes import default_frequencies, default_velocities
from .spectra import signal_to_noise, spectrum
from .transforms import TRANSFORMS


def dispersion_image(
    gather: Gather,
    frequencies: ArrayLike | None = None,
    velocities: ArrayLike | None = None,
    *,
    method: str = "phase-shift",
) -> DispersionImage:
    """Transform a gather to power over frequency and phase velocity.

    Receivers may stand anywhere: the true slant distances from the source are used. Waves are taken to travel
    away from the source.

    Parameters
    ----------
    gather : Gather
        At least two receivers at different distances.
    frequencies : array (n_frequencies,), optional
        Increasing, even or not, below the Nyquist frequency [Hz]; `default_frequencies` by default.
    velocities : array (n_velocities,), optional
        Trial phase velocities, increasing, even or not [m/s]; `default_velocities` by default.
    method : str
        Name of the transform, one of `TRANSFORMS`: "phase-shift" (Park, Miller & Xia 1998).

    Returns
    -------
    DispersionImage
        `power` is 1 where all traces agree in phase; for random phases of n traces it is 1/n on average.

    Raises
    ------
    InputError
        If an axis does not increase, a frequency is beyond Nyquist, or the distances do not differ.
    """
    transform = TRANSFORMS[one_of(method, "method", tuple(TRANSFORMS))]
    f = _axis(default_frequencies(gather) if frequencies is None else frequencies, "frequencies")
    c = _axis(default_velocities(gather) if velocities is None else velocities, "velocities")
    offsets = gather.offsets
    if len(offsets) < 2 or not np.ptp(offsets) > 0.0:
        raise InputError(
            "an image needs receivers at two or more distances from the source;"
            f" {gather.name or 'the gather'} has {len(offsets)} at {np.unique(offsets)} m"
        )
    nyquist = 0.5 / gather.interval
    if f[-1] > nyquist:
        raise InputError(
            f"frequencies must not exceed the Nyquist frequency {nyquist:g} Hz; got {f[-1]:g} Hz"
        )
    spectra = spectrum(gather, f)
    return DispersionImage(
        frequencies=f,
        velocities=c,
        power=transform(spectra, offsets, f, c),
        offsets=np.sort(offsets),
        spacing=gather.spacing,
        signal_to_noise=signal_to_noise(gather, f, spectra),
        method=method,
        name=gather.name,
    )


def _axis(values: ArrayLike, name: str) -> FloatArray:
    array = float_array(values, name)
    if array.size == 0:
        raise InputError(f"{name} must hold at least one value; got none")
    all_finite(array, name)
    all_positive(array, name)
    increasing(array, name)
    return array
