"""One field file to one gather."""

from __future__ import annotations

import dataclasses
from collections.abc import Sequence
from pathlib import Path

import numpy as np

from ..core.errors import FormatError
from ..core.gather import Gather
from .field_file import FieldFile, parse, read_bytes
from .geometry import Geometry
from .geometry_tables import geometry_beside
from .located_shot import locate
from .raw_record import RawRecord
from .seg2_headers import from_seg2
from .segy_headers import from_segy
from .station_headers import from_miniseed, from_sac


def read_gather(path: str | Path | Sequence[str | Path], *, geometry: Geometry | None = None) -> Gather:
    """Read one shot from a SEG-2, SEG-Y, SU, SAC or miniSEED file; the format is told from the content.

    The gather holds all traces that have samples and a place of their own, ordered along the line; nothing
    is judged, split or stacked. `prepare_records` does that for a whole survey.

    Parameters
    ----------
    path : path, or sequence of paths
        The field file; several where each holds some traces of the shot, in the order of the channels.
    geometry : Geometry, optional
        Positions that win over the header. By default the tables `shots.csv` and `receivers.csv` beside the
        file, where there are such; an empty ``Geometry()`` leaves the word to the header.

    Returns
    -------
    Gather
        Samples in physical units (SEG-2: count x DESCALING_FACTOR / STACK), positions in metres, and in
        `notes` what the reader has to know.

    Raises
    ------
    FormatError
        If the content is none of these formats, is cut short, contradicts itself, or holds several shots.
    InputError
        If there is no such file, it is a folder, or it has no positions.
    """
    paths = [Path(path)] if isinstance(path, str | Path) else [Path(one) for one in path]
    contents = [read_bytes(one) for one in paths]
    table = geometry_beside(paths) if geometry is None else geometry
    records = []
    for one, content in zip(paths, contents, strict=True):
        shots = shots_of(parse(content, one.name))
        if len(shots) > 1:
            raise FormatError(
                f"{one.name}: holds {len(shots)} shots; expected one (prepare_records takes them all)"
            )
        records += shots
    shot = locate(join(records), table)
    return dataclasses.replace(shot.gather, notes=shot.flags)


def shots_of(file: FieldFile) -> list[RawRecord]:
    """Return the shots that a field file holds."""
    if file.format == "SEG-2":
        return [from_seg2(file)]
    if file.format == "SAC":
        return [from_sac(file)]
    if file.format == "miniSEED":
        return [from_miniseed(file)]
    return from_segy(file)


def join(records: Sequence[RawRecord]) -> RawRecord:
    """Put single traces of one shot, each from its own file, into one record.

    Raises
    ------
    FormatError
        If interval or length differ.
    """
    first = records[0]
    for other in records[1:]:
        if (other.interval, other.data.shape[1]) != (first.interval, first.data.shape[1]):
            raise FormatError(f"{other.file}: interval or length differs from {first.file} of the same shot")
    counts = np.cumsum([0, *(len(record.data) for record in records)])
    return dataclasses.replace(
        first,
        data=np.concatenate([record.data for record in records]),
        receivers=np.concatenate([record.receivers for record in records]),
        flags=tuple(dict.fromkeys(flag for record in records for flag in record.flags)),
        refused={
            int(start) + index: reason
            for start, record in zip(counts[:-1], records, strict=True)
            for index, reason in record.refused.items()
        },
    )
