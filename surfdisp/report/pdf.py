"""The report as PDF, typeset without a network, a clock or fonts of the machine."""

from __future__ import annotations

import json
import os
import shutil
import tempfile
from pathlib import Path
from typing import Any

import typst

from ..core import StepError, SurveyResult
from .document import document
from .figures import write_figures

TEMPLATE = Path(__file__).with_name("report.typ")
MOST_PAGES = 6
SCALES = (1.0, 0.85, 0.7)
"""Sizes of the figures, tried in this order until the report keeps to its pages."""


def write_report(
    path: str | os.PathLike[str], result: SurveyResult, *, figures: str | os.PathLike[str] | None = None
) -> None:
    """Write the report of `result` as PDF; the same result gives the same bytes.

    Parameters
    ----------
    figures : path, optional
        Folder where `write_figures` has already put the figures of this result; drawn anew by default.

    Raises
    ------
    StepError
        If the report cannot be typeset.
    """
    with tempfile.TemporaryDirectory(prefix="surfdisp-report-") as folder:
        workplace = Path(folder)
        if figures is None:
            names = write_figures(workplace, result)
        else:
            names = sorted(file.name for file in Path(figures).glob("figure_*.png"))
            for name in names:
                shutil.copyfile(Path(figures) / name, workplace / name)
        Path(path).write_bytes(_typeset(workplace, result, names))


def _typeset(workplace: Path, result: SurveyResult, figures: list[str]) -> bytes:
    (workplace / "report.json").write_text(json.dumps(document(result, figures)), encoding="ascii")
    shutil.copyfile(TEMPLATE, workplace / TEMPLATE.name)
    try:
        compiler = typst.Compiler(
            str(workplace / TEMPLATE.name), root=str(workplace), ignore_system_fonts=True
        )
        for scale in SCALES:
            made: Any = compiler.compile(format="pdf", sys_inputs={"scale": str(scale)})
            if int(compiler.query("<pages>", field="value", one=True)) <= MOST_PAGES:
                break
    except typst.TypstError as error:
        raise StepError(f"the report cannot be typeset: {error.message}") from error
    return bytes(made)
