"""A source inside the spread makes two gathers: waves leave it both ways."""

from __future__ import annotations

import dataclasses

import numpy as np

from ..core.gather import Gather
from .selection import select_traces

AT_THE_SOURCE = 0.001
"""Offset below which a receiver is at the source itself [m]."""


def split_at_source(gather: Gather, minimum_traces: int) -> tuple[list[Gather], list[str]]:
    """Split a gather where its source is, and set aside a side with too few traces.

    Returns
    -------
    gathers : list of Gather
        None, one or two; a gather whose source is outside its receivers comes back as it is.
    reasons : list of str
        What was set aside, and why.
    """
    reasons = []
    here = gather.offsets < AT_THE_SOURCE
    if np.any(here):
        reasons.append(f"receiver at {gather.receivers[here][0]:g} m set aside: it is at the source")
    low = np.flatnonzero((gather.receivers < gather.source) & ~here)
    high = np.flatnonzero((gather.receivers >= gather.source) & ~here)
    inside = len(low) > 0 and len(high) > 0
    parts: list[Gather] = []
    for side, kept in (("low", low), ("high", high)):
        where = f"on the {side} side of the source at {gather.source:g} m" if inside else "in the record"
        if 0 < len(kept) < minimum_traces:
            reasons.append(f"{len(kept)} usable traces {where} set aside; expected at least {minimum_traces}")
        elif len(kept):
            part = select_traces(gather, kept)
            if inside:
                part = dataclasses.replace(part, name=f"{gather.name}, {side} side")
            parts.append(part)
    return parts, reasons
