"""Stack the images of the shots of one spread."""

from __future__ import annotations

import warnings
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from ..core import DispersionImage, InputError
from ..core.checks import FloatArray, float_array


def stack_images(images: Sequence[DispersionImage], *, weights: ArrayLike | None = None) -> DispersionImage:
    """Average the power of several images, so that what they share stands out of what differs.

    Power is averaged without phase: the shots lie at different distances. Random side lobes average out,
    the ridge of the ground stays, and so do aliases, which belong to the receivers.

    Parameters
    ----------
    images : sequence of DispersionImage
        Of one method and on the same frequencies and velocities.
    weights : array (n_images,), optional
        Non-negative; all equal by default.

    Returns
    -------
    DispersionImage
        With the offsets of the nearest shot, the mean signal-to-noise ratio of those that state one, and the
        number of shots.

    Raises
    ------
    InputError
        If there is no image, or the images do not match.
    """
    if not images:
        raise InputError("a stack needs at least one image; got none")
    first = images[0]
    for image in images[1:]:
        _check_match(first, image)
    share = _shares(weights, len(images))
    nearest = min(images, key=lambda image: float(image.offsets[0]))
    ratios = np.array([image.signal_to_noise for image in images])
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", "Mean of empty slice", RuntimeWarning)
        ratio = np.nanmean(ratios, axis=0)
    return DispersionImage(
        frequencies=first.frequencies,
        velocities=first.velocities,
        power=np.minimum(np.tensordot(share, np.array([image.power for image in images]), axes=1), 1.0),
        offsets=nearest.offsets,
        spacing=nearest.spacing,
        signal_to_noise=ratio,
        method=first.method,
        name=", ".join(dict.fromkeys(image.name for image in images if image.name)),
        shots=sum(image.shots for image in images),
    )


def _check_match(first: DispersionImage, image: DispersionImage) -> None:
    for axis in ("frequencies", "velocities"):
        if not np.array_equal(getattr(first, axis), getattr(image, axis)):
            raise InputError(
                f"images can be stacked on the same {axis} only; {image.name or 'an image'} differs from "
                f"{first.name or 'the first'}: give both the same {axis}"
            )
    if image.method != first.method:
        raise InputError(f"images of one method can be stacked; got {first.method!r} and {image.method!r}")


def _shares(weights: ArrayLike | None, count: int) -> FloatArray:
    values = float_array(np.ones(count) if weights is None else weights, "weights")
    if values.shape != (count,) or not np.all(values >= 0.0) or not 0.0 < values.sum() < np.inf:
        raise InputError(f"weights must be {count} non-negative numbers, not all zero; got {values}")
    return np.asarray(values / values.sum())
