"""The table of what was read from each field file, for a terminal."""

from __future__ import annotations

from collections.abc import Sequence

from ..core import Record
from .words import printable

HEADINGS = (
    "file",
    "traces",
    "interval ms",
    "length s",
    "spacing m",
    "source m",
    "delay ms",
    "stack",
    "flags",
    "used",
)


def records_text(records: Sequence[Record]) -> str:
    """Return the table, and below it every doubt and every refusal by file."""
    rows = [HEADINGS, *(_row(record) for record in records)]
    widths = [max(len(row[column]) for row in rows) for column in range(len(HEADINGS))]
    lines = ["  ".join(_aligned(row, widths)).rstrip() for row in rows]
    for record in records:
        remarks = ([record.reason] if record.reason else []) + list(record.flags)
        if remarks:
            lead = f"{record.file}: "
            told = [f"  {printable(remark.removeprefix(lead))}" for remark in remarks]
            lines += ["", printable(record.file), *told]
    return "\n".join(lines)


def _row(record: Record) -> tuple[str, ...]:
    length = None
    if record.samples is not None and record.interval is not None:
        length = record.samples * record.interval
    return (
        printable(record.file),
        _number(record.traces, 1.0, ".0f"),
        _number(record.interval, 1e3, ".4g"),
        _number(length, 1.0, ".4g"),
        _number(record.spacing, 1.0, ".4g"),
        _number(record.source, 1.0, ".5g"),
        _number(record.delay, 1e3, ".4g"),
        _number(record.stack, 1.0, ".0f"),
        str(len(record.flags)),
        "yes" if record.used else "no",
    )


def _number(value: float | None, scale: float, form: str) -> str:
    return "-" if value is None else format(value * scale, form)


def _aligned(row: Sequence[str], widths: Sequence[int]) -> list[str]:
    """File names to the left, numbers to the right."""
    numbers = zip(row[1:], widths[1:], strict=True)
    return [row[0].ljust(widths[0]), *(cell.rjust(width) for cell, width in numbers)]
