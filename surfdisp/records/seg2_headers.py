"""SEG-2 headers to a RawRecord: descaling, stack, delay, and positions with their units."""

from __future__ import annotations

import re

import numpy as np

from ..core.checks import FloatArray
from ..core.units import FOOT
from .field_file import FieldFile
from .raw_record import RawRecord
from .trace_table import common_traces

NUMBER = re.compile(r"[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?")


def from_seg2(file: FieldFile) -> RawRecord:
    """Return the shot of a SEG-2 file.

    Physical value = count x DESCALING_FACTOR / STACK: the standard's descaling, and the division by the
    blows summed, which is the convention. One blow of the mean is what the samples then show.

    Raises
    ------
    FormatError
        If the traces share no sampling interval.
    """
    traces = list(file.stream)
    headers = [{key: str(value) for key, value in trace.stats.seg2.items()} for trace in traces]
    table = common_traces(traces, file.name)
    flags: list[str] = []
    stacks = [_stack(header) for header in headers]
    factors = [_descaling(header, stack) for header, stack in zip(headers, stacks, strict=True)]
    unit = _unit(headers[0], flags)
    receivers = np.array([_coordinates(header.get("RECEIVER_LOCATION")) for header in headers]) * unit
    sources = np.array([_coordinates(header.get("SOURCE_LOCATION")) for header in headers]) * unit
    if len({source.tobytes() for source in sources}) > 1:
        flags.append("SOURCE_LOCATION differs between the traces; that of the first trace is used")
    return RawRecord(
        file=file.name,
        format=file.format,
        data=table.data * np.array(factors)[:, None],
        interval=table.interval,
        delay=_delay(headers, flags),
        stack=stacks[0],
        receivers=receivers,
        source=sources[0],
        labels=tuple(filter(None, (headers[0].get("SHOT_SEQUENCE_NUMBER"), *re.findall(r"\d+", file.name)))),
        flags=(*flags, *file.said),
        refused=table.refused,
    )


def _first_number(text: str | None) -> float | None:
    found = NUMBER.search(text or "")
    return float(found.group()) if found else None


def _descaling(header: dict[str, str], stack: int) -> float:
    factor = _first_number(header.get("DESCALING_FACTOR"))
    sensible = factor is not None and 1e-30 < factor < 1e30
    return (factor if factor is not None and sensible else 1.0) / stack


def _stack(header: dict[str, str]) -> int:
    stack = _first_number(header.get("STACK"))
    return int(stack) if stack is not None and 1.0 <= stack < 1e6 else 1


def _coordinates(text: str | None) -> FloatArray:
    values = [float(number) for number in NUMBER.findall(text or "")[:3]]
    return np.array(values + [np.nan] * (3 - len(values)))


def _unit(header: dict[str, str], flags: list[str]) -> float:
    units = header.get("UNITS", "").upper()
    if units.startswith(("FEET", "FOOT", "FT")):
        flags.append("positions in the header are in feet; converted to metres")
        return FOOT
    if units and not units.startswith(("MET", "M")):
        flags.append(f"UNITS {units!r:.20} is not known; positions are taken as metres")
    return 1.0


def _delay(headers: list[dict[str, str]], flags: list[str]) -> float:
    delays = [_first_number(header.get("DELAY")) or 0.0 for header in headers]
    if len(set(delays)) > 1:
        flags.append(f"DELAY differs between the traces ({min(delays):g} to {max(delays):g} s)")
    return float(np.median(delays))
