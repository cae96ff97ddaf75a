"""Follow the ridges of an image as whole paths through log frequency and log velocity.

A path is judged by its summed power, not frequency by frequency, so that a stronger neighbour at some
frequencies does not pull it away and a weak stretch does not end it.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from ..core import DispersionImage
from ..core.checks import FloatArray

FREQUENCY_STEP = 0.03
"""Step of the tracker's grid in ln f."""
VELOCITY_STEP = 0.01
"""Step of the tracker's grid in ln c."""
STEEPEST_FALL, STEEPEST_RISE = 9, 1
"""Velocity cells per frequency cell: d ln c / d ln f = 1 - c/U from -3 to +1/3, U from c/4 to 1.5 c."""
FORBIDDEN = -1e3


class Ridge(NamedTuple):
    """One path: velocity and power at log-spaced frequencies, and its strength.

    The strength is the sum of (power - threshold) d ln f: a ridge of power 0.65 over one octave, against a
    threshold of 0.25, has 0.28.
    """

    frequency: FloatArray
    velocity: FloatArray
    power: FloatArray
    strength: float


class LogGrid(NamedTuple):
    """Power averaged on even steps of ln f (rows) and ln c (columns)."""

    frequency: FloatArray
    velocity: FloatArray
    power: FloatArray


def noise_threshold(image: DispersionImage) -> float:
    """Return the power that a ridge must exceed on average: six times that of random phases, at least 0.2.

    For random phases the power of n traces is exponential with mean 1/n. A path that follows the larger of a
    few neighbours gains about twice the mean, so that pure noise loses score with every step.
    """
    return max(0.2, 6.0 / len(image.offsets))


def log_grid(image: DispersionImage) -> LogGrid:
    """Average the image's rows within each step of ln f, and interpolate them in ln c."""
    f = np.exp(_steps(image.frequencies, FREQUENCY_STEP))
    c = np.exp(_steps(image.velocities, VELOCITY_STEP))
    columns = _interpolation(np.log(image.velocities), np.log(c))
    averaged = _averaging(np.log(image.frequencies), np.log(f)) @ image.power
    return LogGrid(f, c, averaged @ columns.T)


def ridges(
    image: DispersionImage, *, longest_wavelength: float, threshold: float, count: int = 3
) -> list[Ridge]:
    """Return up to `count` ridges, strongest first, each with its surroundings and its aliases taken out.

    Parameters
    ----------
    image : DispersionImage
    longest_wavelength : float
        No ridge is followed to wavelengths beyond it [m].
    threshold : float
        Power that counts for nothing: less costs, more gains.
    count : int
        How many to look for.
    """
    from ..kernels.tracking import best_path

    grid = log_grid(image)
    wavenumber = grid.frequency[:, None] / grid.velocity[None, :]
    score = grid.power - threshold
    score[wavenumber * longest_wavelength < 1.0] = FORBIDDEN
    found: list[Ridge] = []
    for _ in range(count):
        path = best_path(score, STEEPEST_FALL, STEEPEST_RISE)
        rows = np.flatnonzero(path >= 0)
        if rows.size < 2:
            break
        columns = path[rows]
        strength = FREQUENCY_STEP * float(score[rows, columns].sum())
        found.append(Ridge(grid.frequency[rows], grid.velocity[columns], grid.power[rows, columns], strength))
        _take_out(score, wavenumber, rows, columns, image)
    return found


def _take_out(
    score: FloatArray,
    wavenumber: FloatArray,
    rows: NDArray[np.int64],
    columns: NDArray[np.int64],
    image: DispersionImage,
) -> None:
    """Forbid the main lobe around a path, and around its aliases at k + n / spacing."""
    lobe = 1.0 / (image.aperture + image.spacing)
    period = 1.0 / image.spacing
    apart = wavenumber[rows] - wavenumber[rows, columns][:, None]
    apart = np.abs(apart - period * np.round(apart / period))
    score[rows] = np.where(apart < lobe, FORBIDDEN, score[rows])


def _steps(axis: FloatArray, step: float) -> FloatArray:
    low, high = np.log(axis[0]), np.log(axis[-1])
    return np.asarray(np.linspace(low, high, max(round((high - low) / step), 1) + 1))


def _interpolation(known: FloatArray, wanted: FloatArray) -> FloatArray:
    """Matrix of linear interpolation from `known` to `wanted` positions."""
    if len(known) == 1:
        return np.ones((len(wanted), 1))
    right = np.clip(np.searchsorted(known, wanted), 1, len(known) - 1)
    share = np.clip((wanted - known[right - 1]) / (known[right] - known[right - 1]), 0.0, 1.0)
    matrix = np.zeros((len(wanted), len(known)))
    matrix[np.arange(len(wanted)), right - 1] = 1.0 - share
    matrix[np.arange(len(wanted)), right] += share
    return matrix


def _averaging(known: FloatArray, wanted: FloatArray) -> FloatArray:
    """Matrix of the mean over one step around each wanted position; interpolation where none lies inside."""
    inside = np.abs(known[None, :] - wanted[:, None]) <= 0.5 * FREQUENCY_STEP
    counts = inside.sum(axis=1, keepdims=True)
    return np.asarray(np.where(counts > 1, inside / np.maximum(counts, 1), _interpolation(known, wanted)))
