"""Coordinates to positions along the receivers' line."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..core.checks import FloatArray


@dataclass(frozen=True)
class OnLine:
    """Positions along the line, and what the projection leaves out.

    `receivers` (n,) and `source` along the line [m]; `source_off_line` and the receivers' largest
    distance `bend` from it [m].
    """

    receivers: FloatArray
    source: float
    source_off_line: float
    bend: float


def project(receivers: FloatArray, source: FloatArray) -> OnLine:
    """Project x, y of receivers (n, 2) and source (2,) on the receivers' best straight line.

    Receivers on a line of equal y keep their x. Otherwise positions count from the first receiver towards
    the last, along the principal axis of all receivers.

    A missing y (NaN) is that of the others, or zero.
    """
    known = receivers[np.isfinite(receivers[:, 1]), 1]
    level = float(np.median(known)) if known.size else 0.0
    points = np.column_stack(
        [receivers[:, 0], np.where(np.isfinite(receivers[:, 1]), receivers[:, 1], level)]
    )
    at = np.array([source[0], source[1] if np.isfinite(source[1]) else level])
    if np.ptp(points[:, 1]) == 0.0:
        return OnLine(points[:, 0].copy(), float(at[0]), abs(float(at[1]) - level), 0.0)
    centre = points.mean(axis=0)
    along = np.linalg.svd(points - centre, full_matrices=False)[2][0]
    if np.dot(points[-1] - points[0], along) < 0.0:
        along = -along
    across = np.array([-along[1], along[0]])
    distances = (points - centre) @ along
    start = distances[0]
    return OnLine(
        distances - start,
        float((at - centre) @ along - start),
        abs(float((at - centre) @ across)),
        float(np.max(np.abs((points - centre) @ across))),
    )
