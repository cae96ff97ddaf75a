"""A part of a gather: some of its traces."""

from __future__ import annotations

import dataclasses
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from ..core.gather import Gather


def select_traces(gather: Gather, kept: Sequence[int] | NDArray[np.int64] | NDArray[np.bool_]) -> Gather:
    """Return the gather with only the `kept` traces (indices, or a mask), and all else unchanged."""
    elevations = np.asarray(gather.elevations)[kept]
    return dataclasses.replace(
        gather, data=gather.data[kept], receivers=gather.receivers[kept], elevations=elevations
    )
