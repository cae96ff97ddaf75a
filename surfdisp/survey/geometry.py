"""The geometry that the settings mean: written in the configuration, in CSV tables, or beside the records."""

from __future__ import annotations

from functools import reduce
from pathlib import Path

from ..core import InputError
from ..records import Geometry, ReceiverLine, ShotGeometry, geometry_beside, read_geometry_csv
from .settings import RecordSettings


def geometry_of(records: RecordSettings) -> Geometry | None:
    """Return the positions that win over the headers, None where only the headers know.

    The configuration wins over the tables it names, and those over tables beside the records.

    Raises
    ------
    InputError
        If a table is broken, or a shot of the configuration is not among the records.
    """
    sources = [
        _written(records),
        read_geometry_csv(*records.geometry_tables) if records.geometry_tables else None,
        geometry_beside(records.files),
    ]
    given = [geometry for geometry in sources if geometry is not None]
    return reduce(Geometry.over, given) if given else None


def _written(records: RecordSettings) -> Geometry | None:
    """The positions written into the configuration itself."""
    if records.receivers is None and not records.shots:
        return None
    _check_names(records)
    line, positions, elevations = None, None, None
    if records.receivers is not None:
        given = records.receivers
        positions, elevations = given.positions_m, given.elevations_m
        if given.spacing_m is not None:
            line = ReceiverLine(first=given.first_m, spacing=given.spacing_m)
    shots = {
        shot.file: ShotGeometry(
            source=shot.source_m,
            source_off_line=shot.source_off_line_m,
            source_elevation=shot.source_elevation_m,
            delay=shot.delay_s,
        )
        for shot in records.shots
    }
    return Geometry(
        shots=shots,
        line=line,
        receivers=positions,  # type: ignore[arg-type]
        elevations=elevations,  # type: ignore[arg-type]
        origin="the configuration",
    )


def _check_names(records: RecordSettings) -> None:
    names = {Path(file).name for file in records.files}
    for shot in records.shots:
        if shot.file not in names:
            raise InputError(
                f"records.shots: file {shot.file!r} is not among the records; expected the base name of one "
                f"of the {len(names)} files, such as {min(names)!r}"
            )
