"""Image axes where the settings narrow what the spread and the record would give."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..core import Gather, InputError
from ..core.checks import FloatArray
from ..dispersion import common_axes
from .settings import ImageSettings


def image_axes(
    gathers: Sequence[Gather], settings: ImageSettings
) -> tuple[FloatArray | None, FloatArray | None]:
    """Return frequencies [Hz] and velocities [m/s] for all images; None where the default may stand.

    Raises
    ------
    InputError
        If a lower limit is not below its upper one.
    """
    frequencies, velocities = common_axes(gathers)
    band = settings.minimum_frequency_hz, settings.maximum_frequency_hz
    scan = settings.minimum_velocity_m_s, settings.maximum_velocity_m_s
    return (
        np.linspace(*_ends(frequencies, band, "frequency_hz")) if any(band) else None,
        np.geomspace(*_ends(velocities, scan, "velocity_m_s")) if any(scan) else None,
    )


def _ends(axis: FloatArray, limits: tuple[float | None, float | None], name: str) -> tuple[float, float, int]:
    first = float(axis[0]) if limits[0] is None else limits[0]
    last = float(axis[-1]) if limits[1] is None else limits[1]
    if not first < last:
        raise InputError(
            f"image.minimum_{name} must be below image.maximum_{name}; got {_said(limits[0], first)} and "
            f"{_said(limits[1], last)}"
        )
    return first, last, len(axis)


def _said(given: float | None, used: float) -> str:
    return f"{used:g}" if given is not None else f"{used:g} (the default)"
