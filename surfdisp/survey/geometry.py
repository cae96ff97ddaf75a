"""The geometry that the settings mean: written in the configuration, in CSV tables, or beside the records."""

from __future__ import annotations

from ..records import Geometry, ReceiverLine, ShotGeometry, geometry_beside, read_geometry_csv
from .settings import RecordSettings


def geometry_of(records: RecordSettings) -> Geometry | None:
    """Return the positions that win over the headers, None where only the headers know.

    Raises
    ------
    InputError
        If a table is broken.
    """
    if records.receivers is None and not records.shots:
        if records.geometry_tables:
            return read_geometry_csv(*records.geometry_tables)
        return geometry_beside(records.files)
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
