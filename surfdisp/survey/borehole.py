"""Borehole shear-velocity logs, to be laid over the profile."""

from __future__ import annotations

import csv
import math
from pathlib import Path

from ..core import InputError, Profile

COLUMNS = ("depth_m", "vs_m_s")


def read_borehole_log(path: Path) -> Profile:
    """Read a CSV with columns depth_m (top of each step) and vs_m_s.

    Raises
    ------
    InputError
        If a column is missing or a value is not a number, with file and line.
    """
    try:
        with path.open(newline="", encoding="utf-8-sig") as file:
            rows = list(csv.DictReader(file))
    except (OSError, UnicodeDecodeError, csv.Error) as error:
        raise InputError(f"{path}: cannot be read as CSV ({error})") from error
    if not rows or any(column not in rows[0] for column in COLUMNS):
        found = ", ".join(str(column) for column in rows[0]) if rows else "no rows"
        raise InputError(f"{path}: expected columns {', '.join(COLUMNS)}; found {found}")
    values = [[_number(path, line, row, column) for column in COLUMNS] for line, row in enumerate(rows, 2)]
    depth, vs = zip(*values, strict=True)
    try:
        return Profile(depth=depth, median=vs, low=vs, high=vs)  # type: ignore[arg-type]
    except InputError as error:
        raise InputError(f"{path}: {error}") from error


def _number(path: Path, line: int, row: dict[str, str], column: str) -> float:
    try:
        value = float(row[column])
    except (TypeError, ValueError):
        value = math.nan
    if not math.isfinite(value) or value < 0.0 or (column == "vs_m_s" and value == 0.0):
        raise InputError(f"{path}, line {line}: {column} must be a positive number; got {row[column]!r}")
    return value
