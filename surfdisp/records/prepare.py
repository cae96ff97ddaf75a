"""Field files of a survey to gathers: read, checked, sorted into spreads, stacked, split."""

from __future__ import annotations

import dataclasses
from collections.abc import Sequence
from pathlib import Path

import numpy as np

from ..core.errors import InputError
from ..core.gather import Gather
from ..core.progress import SILENT, Progress
from ..core.record import Record
from .blow_groups import common_channels, number_spreads, repeated_blows
from .field_file import existing_file
from .geometry import Geometry
from .geometry_tables import geometry_beside
from .header_checks import check_headers
from .located_shot import locate
from .polarity_vote import vote_on_polarity
from .selection import select_traces
from .shot_in_work import ShotInWork, read_shots
from .splitting import split_at_source
from .stacking import merge_blows, stack_blows
from .trace_faults import examine_traces

STACKED = "stacked with"
"""How the flag of a stacked blow begins: it tells what was done, it is no doubt."""


def prepare_records(
    paths: Sequence[str | Path],
    *,
    geometry: Geometry | None = None,
    minimum_traces: int = 8,
    progress: Progress = SILENT,
) -> tuple[tuple[Record, ...], tuple[Gather, ...]]:
    """Turn the field files of a survey into gathers ready for dispersion images.

    Each file is read, its headers are checked against its traces, and dead, clipped, reversed and
    noise-dominated traces are set aside. Files of different receiver layouts form separate spreads. Repeated
    blows at one source position of one spread are aligned and stacked. A source inside the spread gives two
    gathers, split at the source. A record that cannot be used is listed with its reason, and the others are
    processed.

    Parameters
    ----------
    paths : sequence of path
        Field files in any order and mixture of formats. Files of a single trace (SAC, miniSEED) that began
        at one moment with one source position are the traces of one shot.
    geometry : Geometry, optional
        Positions that win over the headers; by default the tables `shots.csv` and `receivers.csv` beside
        the files, where there are such.
    minimum_traces : int
        Traces that a gather must have.
    progress : Progress
        Told once per shot.

    Returns
    -------
    records : tuple of Record
        One per file in the order given, or one per shot of a file that holds several.
    gathers : tuple of Gather
        Spread by spread, sources in increasing order; `notes` tell what was found, with the file's name.

    Raises
    ------
    InputError
        If no file is given, one does not exist or is a folder, or a geometry table is broken.
    """
    if not paths:
        raise InputError("no field files given; expected at least one")
    files = [existing_file(path) for path in paths]  # a missing file is told before any work
    table = geometry_beside(files) if geometry is None else geometry
    shots = read_shots(files)
    progress.start("checking records", len(shots))
    for shot in shots:
        _check(shot, table)
        progress.advance()
    number_spreads(shots)
    vote_on_polarity(shots)
    gathers = [gather for group in repeated_blows(shots) for gather in _gathers_of(group, minimum_traces)]
    records = [record for shot in shots for record in shot.records()]
    return tuple(records), tuple(sorted(gathers, key=lambda gather: (gather.spread, gather.source)))


def _check(shot: ShotInWork, table: Geometry | None) -> None:
    """Locate the shot, find its faulty traces, and check its header against the sound ones."""
    if shot.raw is None or shot.reason is not None:
        return
    try:
        located = locate(shot.raw, table)
    except InputError as error:
        shot.reason = str(error)
        shot.flags += shot.raw.flags
        return
    shot.examination = examine_traces(located.gather)
    faults = shot.examination.faults
    shot.located = located
    shot.raw = dataclasses.replace(shot.raw, data=shot.raw.data[:, :0])
    shot.sound = np.array([index not in faults for index in range(len(located.channels))])
    verdict = check_headers(located, np.flatnonzero(shot.sound))
    shot.gather = verdict.gather
    shot.flags += located.flags
    shot.flags += [f"channel {located.channels[i]} set aside: {why}" for i, why in sorted(faults.items())]
    shot.flags += verdict.flags
    if verdict.reason is not None:
        shot.reason = f"{shot.raw.file}: {verdict.reason}"


def _gathers_of(group: list[ShotInWork], minimum_traces: int) -> list[Gather]:
    """Stack the blows of one source position and split them at the source."""
    blows, sound = common_channels(group)
    if len(group) == 1:
        merged, kept = blows[0], sound[0]
    else:
        stack = stack_blows(blows, sound)
        _tell(group, stack.shifts, stack.correlations, stack.used)
        merged, kept = merge_blows(blows, stack), stack.filled
    members = [shot for shot in group if shot.reason is None]
    if not np.any(kept):
        reasons = [f"no usable trace; expected at least {minimum_traces}"]
        parts: list[Gather] = []
    else:
        parts, reasons = split_at_source(select_traces(merged, kept), minimum_traces)
    for shot in members:
        if len(parts) == 2:
            shot.flags.append(f"source inside the spread: split at {merged.source:g} m into two gathers")
        if parts:
            shot.flags += reasons
        else:
            shot.reason = f"{shot.files[0]}: {'; '.join(reasons)}"
    notes = tuple(f"{shot.files[0]}: {flag}" for shot in group for flag in shot.flags)
    spread = group[0].spread
    return [dataclasses.replace(part, spread=spread, notes=(*notes, *part.notes)) for part in parts]


def _tell(
    group: list[ShotInWork],
    shifts: tuple[float, ...],
    correlations: tuple[float, ...],
    used: tuple[bool, ...],
) -> None:
    """Write down at each blow what stacking did with it."""
    names = [shot.files[0] for shot in group]
    for shot, shift, correlation, wanted in zip(group, shifts, correlations, used, strict=True):
        others = ", ".join(name for name in names if name != shot.files[0])
        if wanted:
            moved = f"moved {1e3 * -shift:+.2f} ms, correlation {correlation:.2f}"
            leads = shift == 0.0 and correlation > 1.0 - 1e-9
            shot.flags.append(f"{STACKED} {others}: {'the others were moved to it' if leads else moved}")
        else:
            shot.reason = (
                f"{shot.files[0]}: unlike the other blows at its source position ({others}): "
                f"correlation {correlation:.2f}"
            )
