"""SEG-Y and SU headers to RawRecords: coordinates with their scalar, feet, several shots in one file."""

from __future__ import annotations

from itertools import groupby
from typing import Any

import numpy as np

from ..core.checks import FloatArray
from ..core.units import FOOT
from .field_file import FieldFile
from .raw_record import RawRecord
from .trace_table import common_traces

FEET = 2
"""Measurement system of the binary file header (bytes 3255-3256): 1 metres, 2 feet."""

LENGTH_UNITS = (0, 1)
"""Coordinate units (bytes 89-90) that mean lengths; 0 is what most writers leave."""

BROKEN_RATES = (12000, 16000, 24000, 32000, 48000)
"""Sampling rates of instruments whose interval is no whole number of microseconds [Hz]."""

DEAD = 2
"""Trace identification code (bytes 29-30) of a trace that the crew or the instrument marked dead."""

STACK = "number_of_vertically_summed_traces_yielding_this_trace"
OFFSET = "distance_from_center_of_the_source_point_to_the_center_of_the_receiver_group"


def from_segy(file: FieldFile) -> list[RawRecord]:
    """Return the shots of a SEG-Y or SU file, one for each field record number and source position."""
    traces = [(_header(trace), trace) for trace in file.stream]
    groups = [list(members) for _, members in groupby(traces, key=lambda pair: _shot_key(pair[0]))]
    feet = file.format == "SEG-Y" and file.stream.stats.binary_file_header.measurement_system == FEET
    unit = FOOT if feet else 1.0
    return [_shot(file, members, unit, several=len(groups) > 1) for members in groups]


def _header(trace: Any) -> Any:
    return (trace.stats.segy if hasattr(trace.stats, "segy") else trace.stats.su).trace_header


def _shot_key(header: Any) -> tuple[int, int, int]:
    return header.original_field_record_number, header.source_coordinate_x, header.source_coordinate_y


def _shot(file: FieldFile, members: list[tuple[Any, Any]], unit: float, *, several: bool) -> RawRecord:
    headers = [header for header, _ in members]
    record = headers[0].original_field_record_number
    table = common_traces([trace for _, trace in members], file.name)
    flags: list[str] = []
    if unit != 1.0:
        flags.append("positions in the header are in feet; converted to metres")
    if several:
        flags.append(f"field record {record}, one of several shots in the file")
    flags += _truncated_interval(table.interval)
    receivers, source = _positions(headers, flags)
    marked = {
        i: "marked dead in the header" for i, h in enumerate(headers) if h.trace_identification_code == DEAD
    }
    return RawRecord(
        file=file.name,
        format=file.format,
        data=table.data,
        interval=table.interval,
        delay=_delay(headers),
        stack=max(1, int(getattr(headers[0], STACK))),
        receivers=receivers * unit,
        source=source * unit,
        labels=(str(record), str(headers[0].energy_source_point_number)),
        flags=(*flags, *file.said),
        refused=table.refused | marked,
    )


def _truncated_interval(interval: float) -> list[str]:
    """Say so where whole microseconds, which is all the format holds, may stand for a broken number."""
    found = round(1e6 * interval)
    for rate in BROKEN_RATES:
        true = 1e6 / rate
        if abs(found - true) < 1.0 and found != true:
            error = 100.0 * abs(found / true - 1.0)
            return [
                f"sampling interval {found} microseconds: if {rate} Hz is meant, times are {error:.1f} % off"
            ]
    return []


def _delay(headers: list[Any]) -> float:
    """Delay recording time (bytes 109-110, milliseconds) with the scalar of times (bytes 215-216) [s]."""
    milliseconds = float(np.median([header.delay_recording_time for header in headers]))
    return 1e-3 * milliseconds * _scale(headers[0].scalar_to_be_applied_to_times)


def _positions(headers: list[Any], flags: list[str]) -> tuple[FloatArray, FloatArray]:
    """Receivers (n, 3) and source (3,), from the coordinates, or else from the offsets, or else NaN."""
    groups = np.array([_coordinates(header, "group", "receiver_group_elevation") for header in headers])
    sources = np.array([_coordinates(header, "source", "surface_elevation_at_source") for header in headers])
    lengths = all(header.coordinate_units in LENGTH_UNITS for header in headers)
    if not lengths:
        flags.append("coordinates in the header are angles; not used")
    elif len(np.unique(groups[:, :2], axis=0)) > 1:
        return groups, sources[0]
    nowhere = np.full((len(headers), 3), np.nan)
    offsets = np.array([float(getattr(header, OFFSET)) for header in headers])
    if len(np.unique(offsets)) == 1:
        return nowhere, nowhere[0]
    flags.append("no receiver coordinates in the header; positions are the offsets, the source at 0 m")
    nowhere[:, 0] = offsets
    return nowhere, np.array([0.0, np.nan, np.nan])


def _coordinates(header: Any, what: str, elevation: str) -> tuple[float, float, float]:
    xy = _scale(header.scalar_to_be_applied_to_all_coordinates)
    z = _scale(header.scalar_to_be_applied_to_all_elevations_and_depths)
    x, y = (float(getattr(header, f"{what}_coordinate_{axis}")) for axis in "xy")
    return x * xy, y * xy, float(getattr(header, elevation)) * z


def _scale(scalar: int) -> float:
    """Factor of a SEG-Y scalar: positive multiplies, negative divides, zero means one."""
    if scalar == 0:
        return 1.0
    return float(scalar) if scalar > 0 else 1.0 / -scalar
