"""Report sections on what was done in the field: geometry, records, processing."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from ..core import Gather, Record, SurveyResult
from .blocks import NUMBER, TEXT, WIDE, Block, bullets, figures_named, heading, paragraph, settings, table
from .words import metres, number, printable, shortened, traces_used, without_file

RECORD_ROWS = 20
FLAG_LINES = 10
FILES_NAMED = 4
SETTING_LINES = 70

RECORD_COLUMNS = (
    ("file", TEXT),
    ("used", TEXT),
    ("traces", NUMBER),
    ("interval (ms)", NUMBER),
    ("source (m)", NUMBER),
    ("delay (ms)", NUMBER),
    ("blows", NUMBER),
    ("SHA-256", TEXT),
    ("reason, flags", WIDE),
)


def geometry(gathers: Sequence[Gather]) -> Iterator[Block]:
    """Yield where receivers and sources stood, one paragraph per spread."""
    yield heading("Site and geometry")
    for spread in sorted({gather.spread for gather in gathers}):
        yield paragraph(*_spread([gather for gather in gathers if gather.spread == spread]))
    if not gathers:
        yield paragraph("No record could be used.")
    yield paragraph(
        "Coordinates, topography beyond receiver elevations, and the water table are not part of field "
        "records; what was assumed stands among the settings."
    )


def _spread(gathers: Sequence[Gather]) -> Iterator[str]:
    first = max(gathers, key=lambda gather: len(gather.receivers))
    yield (
        f"{len(first.receivers)} vertical receivers from {metres(first.receivers[0])} to "
        f"{metres(first.receivers[-1])} m along the line, median spacing {metres(first.spacing)} m."
    )
    positions = sorted({gather.source for gather in gathers})
    more = f" and {len(positions) - 16} more" if len(positions) > 16 else ""
    yield f"Sources at {', '.join(map(metres, positions[:16]))}{more} m."
    length = first.interval * first.data.shape[1]
    yield f"Sampling interval {number(1e3 * first.interval)} ms, {number(length)} s used of each record."
    elevations = np.asarray(first.elevations)
    if np.ptp(elevations) > 0.0:
        yield f"Receiver elevations from {number(elevations.min())} to {number(elevations.max())} m."
    off_line = max(gather.source_off_line for gather in gathers)
    if off_line > 0.0:
        yield f"Sources up to {number(off_line)} m off the line."


def records(table_of: Sequence[Record]) -> Iterator[Block]:
    """Yield the table of field files with what became of each, and what was doubtful about it."""
    yield heading("Records")
    yield table(RECORD_COLUMNS, [_record_row(record) for record in table_of[:RECORD_ROWS]])
    if len(table_of) > RECORD_ROWS:
        yield paragraph(f"{len(table_of) - RECORD_ROWS} more records are listed in summary.json.")
    flags = _files_by_flag(table_of)
    if flags:
        yield bullets(flags, FLAG_LINES, "project.h5")


def _files_by_flag(records: Sequence[Record]) -> list[str]:
    """Return each flag once, with the files that carry it."""
    files: dict[str, list[str]] = {}
    for record in records:
        for flag in record.flags:
            files.setdefault(without_file(flag, record.file), []).append(printable(record.file))
    return [f"{_few(names)}: {flag}" for flag, names in files.items()]


def _few(names: Sequence[str]) -> str:
    more = f" and {len(names) - FILES_NAMED} more" if len(names) > FILES_NAMED else ""
    return ", ".join(names[:FILES_NAMED]) + more


def _record_row(record: Record) -> list[str]:
    flags = {0: "", 1: "1 flag, see below"}.get(len(record.flags), f"{len(record.flags)} flags, see below")
    return [
        shortened(printable(record.file), 24),
        "yes" if record.used else "no",
        traces_used(record),
        number(_milli(record.interval)),
        metres(record.source),
        number(_milli(record.delay)),
        number(record.stack),
        record.sha256[:10] or "–",
        shortened(printable(without_file(record.reason or flags, record.file)), 120),
    ]


def _milli(seconds: float | None) -> float | None:
    return None if seconds is None else 1e3 * seconds


def processing(result: SurveyResult, figures: Sequence[str]) -> Iterator[Block]:
    """Yield the settings, what was done to each gather, and the traces as used."""
    yield heading("Processing")
    yield paragraph(
        "Records of one source position were aligned and stacked, dead and noisy traces set aside, and each "
        "gather turned into an image of power over frequency and phase velocity.",
        "Settings; what is not listed was chosen by the program and is stated in the text:"
        if result.settings
        else "",
        leads_on=True,
    )
    if result.settings:
        yield settings(result.settings, SETTING_LINES)
    notes = _notes_beyond_flags(result)
    if notes:
        yield bullets(notes, FLAG_LINES, "project.h5")
    arrivals = (
        "; lines show when waves of the slowest and the fastest phase velocity of the curve arrive"
        if result.curve is not None
        else ""
    )
    caption = f"Traces as used, each scaled to its largest sample{arrivals}."
    yield from figures_named("figure_records", figures, caption, width=88)


def _notes_beyond_flags(result: SurveyResult) -> list[str]:
    """Return what the gathers tell beyond the flags of the record table."""
    flags = tuple(flag for record in result.records for flag in record.flags)
    notes = [note for gather in result.gathers for note in gather.notes if not note.endswith(flags)]
    return list(dict.fromkeys(notes))
