"""Everything a run leaves in its output folder, put there on success only."""

from __future__ import annotations

import os
import re
import shutil
import tempfile
from pathlib import Path

from ..core import InputError, StoreError, SurveyResult
from ..project import write_project
from .figures import write_figures
from .pdf import write_report
from .tables import write_tables

PROJECT, REPORT = "project.h5", "report.pdf"
OUR_FIGURES = re.compile(r"figure_(records|shots|image|curve|fit|profile)(_\d+)?\.png")


def write_outputs(folder: str | os.PathLike[str], result: SurveyResult) -> None:
    """Write project file, tables, figures and report into `folder`, which is made where it is missing.

    All is written into a temporary folder beside it first; then each file replaces its namesake, and figures
    of an earlier run that this one does not have are removed. Other files in the folder stay.

    Raises
    ------
    InputError
        If `folder` is a file or cannot be made.
    StoreError
        If the disk is full or the folder cannot be written.
    """
    folder = Path(folder)
    if folder.exists() and not folder.is_dir():
        raise InputError(f"{folder}: the output folder is a file; name another one")
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        workplace = Path(tempfile.mkdtemp(prefix=f".{folder.name}.", suffix=".part", dir=folder.parent))
    except OSError as error:
        raise InputError(f"{folder}: the output folder cannot be made: {error.strerror}") from error
    try:
        write_project(workplace / PROJECT, result)
        write_tables(workplace, result)
        write_figures(workplace, result)
        write_report(workplace / REPORT, result, figures=workplace)
        _move_into_place(workplace, folder)
    except OSError as error:
        raise StoreError(f"{folder}: the results cannot be written: {error.strerror or error}") from error
    finally:
        shutil.rmtree(workplace, ignore_errors=True)


def _move_into_place(workplace: Path, folder: Path) -> None:
    folder.mkdir(exist_ok=True)
    new = sorted(file.name for file in workplace.iterdir())
    for name in new:
        (workplace / name).replace(folder / name)
    for file in folder.iterdir():
        if OUR_FIGURES.fullmatch(file.name) and file.name not in new:
            file.unlink()
