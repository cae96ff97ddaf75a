"""CSV tables beside the records: where the shots and the receivers were."""

from __future__ import annotations

import csv
import math
from collections.abc import Iterable, Sequence
from pathlib import Path

import numpy as np

from ..core.errors import InputError
from ..core.units import FOOT
from .geometry import Geometry, ReceiverLine, ShotGeometry

SHOT_TABLE = "shots.csv"
RECEIVER_TABLE = "receivers.csv"

SHOT_FIELDS = {
    "source": "source_m",
    "source_off_line": "source_off_line_m",
    "source_elevation": "source_elevation_m",
    "delay": "delay_s",
}
LINE_FIELDS = {"first": "first_receiver_m", "spacing": "receiver_spacing_m"}
RECEIVER_FIELDS = {"position": "receiver_m", "elevation": "elevation_m"}

Row = dict[str, float | None]


def read_geometry_csv(*paths: str | Path) -> Geometry:
    """Read tables of shots and of receivers into one geometry.

    A table of shots has a row per file: `file`, and any of `source_m`, `source_off_line_m`,
    `source_elevation_m`, `delay_s`, `first_receiver_m` and `receiver_spacing_m`. A table of receivers has a
    row per channel: `channel` (counted from 1), `receiver_m`, and `elevation_m` if wanted. Lengths may be in
    feet under names that end in `_ft`. An empty cell leaves the word to the header.

    Parameters
    ----------
    *paths : path
        One or both of the tables; which is which the column names tell.

    Raises
    ------
    InputError
        If a file is missing, a column is unknown, or a cell is not what its column says; the message names
        file, line and column.
    """
    shots: dict[str, ShotGeometry] = {}
    receivers: list[float | None] = []
    elevations: list[float | None] = []
    for path in map(Path, paths):
        columns, rows = _table(path)
        if "file" in columns:
            shots |= _shots(path, rows)
        elif "channel" in columns:
            receivers, elevations = _receivers(path, rows)
        else:
            raise InputError(
                f"{path}: expected a column `file` or `channel`; got {', '.join(columns) or 'none'}"
            )
    return Geometry(
        shots=shots,
        receivers=_whole(receivers, "receiver_m", paths),
        elevations=_whole(elevations, "elevation_m", paths),
        origin=" and ".join(Path(path).name for path in paths),
    )


def geometry_beside(paths: Iterable[str | Path]) -> Geometry | None:
    """Read `shots.csv` and `receivers.csv` from the folder of the field files, None where there are none.

    Raises
    ------
    InputError
        If the files lie in several folders that have such tables, or a table is broken.
    """
    folders = dict.fromkeys(Path(path).parent for path in paths)
    found = {
        folder: [folder / n for n in (SHOT_TABLE, RECEIVER_TABLE) if (folder / n).is_file()]
        for folder in folders
    }
    tables = [files for files in found.values() if files]
    if len(tables) > 1:
        names = ", ".join(str(file) for files in tables for file in files)
        raise InputError(
            f"geometry tables in several folders ({names}); expected one folder, or name the table"
        )
    return read_geometry_csv(*tables[0]) if tables else None


def _table(path: Path) -> tuple[list[str], list[tuple[int, dict[str, str]]]]:
    """Column names, and the rows with their line numbers."""
    try:
        with path.open(newline="", encoding="utf-8-sig") as file:
            reader = csv.reader(file, skipinitialspace=True)
            lines = [(reader.line_num, [cell.strip() for cell in row]) for row in reader]
    except (OSError, UnicodeDecodeError, csv.Error) as error:
        raise InputError(f"{path}: cannot be read as a CSV table ({error})") from error
    lines = [(number, row) for number, row in lines if any(row) and not row[0].startswith("#")]
    if not lines:
        raise InputError(f"{path}: is empty; expected a line of column names")
    columns = lines[0][1]
    for number, row in lines[1:]:
        if len(row) != len(columns):
            raise InputError(f"{path}, line {number}: expected {len(columns)} cells; got {len(row)}")
    return columns, [(number, dict(zip(columns, row, strict=True))) for number, row in lines[1:]]


def _shots(path: Path, rows: list[tuple[int, dict[str, str]]]) -> dict[str, ShotGeometry]:
    shots: dict[str, ShotGeometry] = {}
    for number, cells in rows:
        where = f"{path}, line {number}"
        name = cells["file"]
        if not name or name in shots:
            raise InputError(f"{where}: `file` must name each file once; got {name!r}")
        values = _numbers(where, cells, "file", [*SHOT_FIELDS.values(), *LINE_FIELDS.values()])
        first, spacing = (values.get(column) for column in LINE_FIELDS.values())
        if (first is None) != (spacing is None):
            raise InputError(f"{where}: first_receiver_m and receiver_spacing_m must be given together")
        try:
            line = None if first is None or spacing is None else ReceiverLine(first=first, spacing=spacing)
        except InputError as error:
            raise InputError(f"{where}: {error}") from error
        given = {field: values.get(column) for field, column in SHOT_FIELDS.items()}
        shots[name] = ShotGeometry(**given, line=line)
    return shots


def _receivers(
    path: Path, rows: list[tuple[int, dict[str, str]]]
) -> tuple[list[float | None], list[float | None]]:
    positions: list[float | None] = []
    elevations: list[float | None] = []
    for index, (number, cells) in enumerate(rows):
        where = f"{path}, line {number}"
        if cells["channel"] != str(index + 1):
            raise InputError(f"{where}: `channel` must count 1, 2, 3, ...; got {cells['channel']!r}")
        values = _numbers(where, cells, "channel", list(RECEIVER_FIELDS.values()))
        positions.append(values.get("receiver_m"))
        elevations.append(values.get("elevation_m"))
    return positions, elevations


def _numbers(where: str, cells: dict[str, str], key: str, known: Sequence[str]) -> Row:
    """Values of a row by metric column name, feet converted, None for an empty cell."""
    values: Row = {}
    for column, cell in cells.items():
        if column == key:
            continue
        metric = column.removesuffix("_ft") + "_m" if column.endswith("_ft") else column
        if metric not in known or metric in values:
            raise InputError(
                f"{where}: column {column!r} is not expected; expected {key}, {', '.join(known)}"
            )
        values[metric] = _number(where, column, cell)
    return values


def _number(where: str, column: str, cell: str) -> float | None:
    if not cell:
        return None
    try:
        value = float(cell)
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise InputError(f"{where}: {column} must be a number; got {cell!r}")
    return value * FOOT if column.endswith("_ft") else value


def _whole(values: list[float | None], column: str, paths: Sequence[str | Path]) -> np.ndarray | None:
    """All channels' values, or none of them."""
    if all(value is None for value in values):
        return None
    if any(value is None for value in values):
        missing = values.index(None) + 1
        raise InputError(f"{', '.join(map(str, paths))}: {column} is missing for channel {missing}")
    return np.array(values, dtype=np.float64)
