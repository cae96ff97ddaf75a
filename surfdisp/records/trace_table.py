"""Traces of one shot to one table of samples: those of another interval or length are set aside."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..core.checks import FloatArray
from ..core.errors import FormatError

SHORTEST_INTERVAL, LONGEST_INTERVAL = 1e-6, 10.0
"""Sampling intervals that are believed [s]."""

LARGEST = 1e60
"""Counts beyond this come from damaged files, and their squares would overflow."""


@dataclass(frozen=True)
class TraceTable:
    """Samples (n_traces, n_samples) of a common interval [s]; `refused` traces are rows of zeros."""

    data: FloatArray
    interval: float
    refused: dict[int, str]


def common_traces(traces: list[Any], name: str) -> TraceTable:
    """Return the samples of ObsPy traces as one table, after the interval and length that most have.

    Raises
    ------
    FormatError
        If the interval is not positive, or beyond what any field instrument has.
    """
    shapes = [(float(trace.stats.delta), int(trace.stats.npts)) for trace in traces]
    (interval, samples), _ = Counter(shapes).most_common(1)[0]
    if not SHORTEST_INTERVAL <= interval <= LONGEST_INTERVAL:
        limits = f"{SHORTEST_INTERVAL:g} to {LONGEST_INTERVAL:g} s"
        raise FormatError(f"{name}: sampling interval must be positive, {limits}; got {interval:g} s")
    data = np.zeros((len(traces), samples))
    refused = {}
    for index, (trace, shape) in enumerate(zip(traces, shapes, strict=True)):
        if shape != (interval, samples):
            refused[index] = f"{shape[1]} samples every {shape[0]:g} s where the others have {samples} every "
            refused[index] += f"{interval:g} s"
            continue
        with np.errstate(invalid="ignore", over="ignore"):  # a damaged float may be a signalling NaN
            samples_read = trace.data.astype(np.float64)
        if np.all(np.abs(samples_read) < LARGEST):  # false for NaN too
            data[index] = samples_read
        else:
            refused[index] = "samples that are no sensible numbers"
    return TraceTable(data, interval, refused)
