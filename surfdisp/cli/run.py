"""`surfdisp run`: the whole job."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import console


def run(
    inputs: Annotated[list[Path], typer.Argument(help="A survey configuration (.toml), or field files.")],
    out: Annotated[
        Path, typer.Option(help="Folder for the results; replaced file by file, on success only.")
    ],
) -> None:
    """Do the whole job, from field files to the report.

    Records, image, picks, curve, inversion, site quantities. Positions in a configuration, or in shots.csv
    and receivers.csv beside the records, win over the headers.

    Examples: surfdisp run configs/river_terrace.toml --out result/

    surfdisp run shot_*.dat --out result/
    """
    from ..core import InputError
    from ..report import summary_text, write_outputs
    from ..survey import read_usable, run_survey, settings_from

    if out.exists() and not out.is_dir():
        raise InputError(f"--out {out}: is a file; give a folder")
    settings = settings_from(inputs)
    with console.progress() as progress:
        read = read_usable(settings, progress=progress)
        console.say_first_run()
        result = run_survey(settings, read=read, progress=progress)
        write_outputs(out, result)
    console.result(summary_text(result))
    console.result(
        f"\nWritten to {out}: report.pdf, summary.json, curve.csv, profile.csv, project.h5, figures"
    )
