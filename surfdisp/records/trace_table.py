"""Traces of one shot to one table of samples: those of another interval or length are set aside."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..core.errors import FormatError

FloatArray = NDArray[np.float64]


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
        If the interval is not a positive number.
    """
    shapes = [(float(trace.stats.delta), int(trace.stats.npts)) for trace in traces]
    (interval, samples), _ = Counter(shapes).most_common(1)[0]
    if not (np.isfinite(interval) and interval > 0.0):
        raise FormatError(f"{name}: sampling interval must be positive; got {interval} s")
    data = np.zeros((len(traces), samples))
    refused = {}
    for index, (trace, shape) in enumerate(zip(traces, shapes, strict=True)):
        if shape != (interval, samples):
            refused[index] = f"{shape[1]} samples every {shape[0]:g} s where the others have {samples} every "
            refused[index] += f"{interval:g} s"
        elif not np.all(np.isfinite(trace.data)):
            refused[index] = "samples that are not finite numbers"
        else:
            data[index] = trace.data
    return TraceTable(data, interval, refused)
