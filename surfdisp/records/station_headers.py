"""SAC and miniSEED headers to RawRecords: formats made for stations, often one trace to a file."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from ..core.errors import FormatError
from .field_file import FieldFile
from .raw_record import RawRecord
from .trace_table import common_traces

EQUATORIAL_RADIUS = 6378137.0
"""Semi-major axis of the WGS 84 ellipsoid [m]."""

FLATTENING = 1.0 / 298.257223563
"""Flattening of the WGS 84 ellipsoid."""


def from_sac(file: FieldFile) -> RawRecord:
    """Return the trace of a SAC file as a record of one receiver.

    Positions: station and event latitude and longitude, as metres east and north of the event; or else DIST
    (kilometres) with the source at 0 m; or else none. Delay: B less O, where the origin time O is set.
    """
    header = file.stream[0].stats.sac
    table = common_traces(list(file.stream), file.name)
    receivers, source = np.full((1, 3), np.nan), np.full(3, np.nan)
    if all(key in header for key in ("stla", "stlo", "evla", "evlo")):
        receivers[0, :2] = _metres_from(header.evla, header.evlo, header.stla, header.stlo)
        source[:2] = 0.0
        receivers[0, 2], source[2] = float(header.get("stel", 0.0)), float(header.get("evel", 0.0))
    elif "dist" in header:
        receivers[0, 0], source[0] = 1000.0 * float(header.dist), 0.0
    return RawRecord(
        file=file.name,
        format=file.format,
        data=table.data,
        interval=float(f"{table.interval:.7g}"),  # the header holds a 32-bit float
        delay=float(header.get("b", 0.0)) - float(header["o"]) if "o" in header else 0.0,
        receivers=receivers,
        source=source,
        started=str(file.stream[0].stats.starttime),
        flags=file.said,
        refused=table.refused,
    )


def from_miniseed(file: FieldFile) -> RawRecord:
    """Return the traces of a miniSEED file, in their order in the file; it holds no positions.

    Raises
    ------
    FormatError
        If a channel has a gap or an overlap.
    """
    names = [trace.id for trace in file.stream]
    broken = next((name for name in names if names.count(name) > 1), None)
    if broken is not None:
        raise FormatError(f"{file.name}: channel {broken} is recorded in pieces; expected one without gaps")
    starts = [trace.stats.starttime for trace in file.stream]
    if max(starts) - min(starts) > 0.5 * file.stream[0].stats.delta:
        raise FormatError(
            f"{file.name}: channels begin {max(starts) - min(starts):g} s apart; expected one common start"
        )
    table = common_traces(list(file.stream), file.name)
    return RawRecord(
        file=file.name,
        format=file.format,
        data=table.data,
        interval=table.interval,
        receivers=np.full((len(names), 3), np.nan),
        started=str(starts[0]),
        flags=file.said,
        refused=table.refused,
    )


def _metres_from(latitude: Any, longitude: Any, to_latitude: Any, to_longitude: Any) -> tuple[float, float]:
    """Metres east and north on the plane that touches the ellipsoid midway; exact enough for a few km."""
    middle = math.radians(0.5 * (float(latitude) + float(to_latitude)))
    squared = FLATTENING * (2.0 - FLATTENING)  # first eccentricity
    root = math.sqrt(1.0 - squared * math.sin(middle) ** 2)
    meridian = EQUATORIAL_RADIUS * (1.0 - squared) / root**3
    east = math.radians(float(to_longitude) - float(longitude)) * EQUATORIAL_RADIUS / root * math.cos(middle)
    return east, math.radians(float(to_latitude) - float(latitude)) * meridian
