"""RawRecord: one shot as its file tells it, before any position is believed."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from ..core.checks import FloatArray


@dataclass(frozen=True, kw_only=True)
class RawRecord:
    """One shot, samples in physical units, positions in metres as the header has them.

    Parameters
    ----------
    file : str
        Base name of the file.
    format : str
        "SEG-2", "SEG-Y", "SU", "SAC" or "miniSEED".
    data : array (n_traces, n_samples)
        NaN or infinite where the file has no number.
    interval, delay : float
        Sampling interval, and time of the first sample after the blow [s].
    stack : int
        Blows already stacked by the instrument.
    receivers : array (n_traces, 3)
        x, y, z [m]; NaN where the header says nothing.
    source : array (3,)
        Likewise.
    labels : tuple of str
        What the header calls the shot (shot sequence number, field record): a source position that merely
        repeats it is no position.
    started : str
        Clock time of the first sample, by which files of single traces are put together; empty if unknown.
    flags : tuple of str
        What the reader has to know.
    refused : dict
        Reason for each trace (counted from 0) that the reader already sets aside.
    """

    file: str
    format: str
    data: FloatArray
    interval: float
    delay: float = 0.0
    stack: int = 1
    receivers: FloatArray
    source: FloatArray = field(default_factory=lambda: np.full(3, np.nan))
    labels: tuple[str, ...] = ()
    started: str = ""
    flags: tuple[str, ...] = ()
    refused: dict[int, str] = field(default_factory=dict)
