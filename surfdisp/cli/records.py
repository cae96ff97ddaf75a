"""`surfdisp records`: what the field files say of themselves, checked against the data."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import console


def records(
    files: Annotated[list[Path], typer.Argument(help="Field files, or one survey configuration (.toml).")],
) -> None:
    """Print what was read from each file, and every doubt about it.

    A file that cannot be used is part of the answer: the exit code is 0.

    Example: surfdisp records shot_*.dat
    """
    from ..report import records_text
    from ..survey import read_records, settings_from

    with console.progress() as progress:
        rows, _ = read_records(settings_from(files), progress=progress)
    console.result(records_text(rows))
