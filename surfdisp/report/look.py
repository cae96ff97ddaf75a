"""The quick look: one record's image with picks and limits as a picture, and in words."""

from __future__ import annotations

import os
from collections.abc import Iterator
from pathlib import Path

from ..core import InputError, Picks, SurveyResult
from .figures import save_figure
from .image_figure import shot_images
from .records_text import records_text
from .words import number, printable


def write_look(path: str | os.PathLike[str], result: SurveyResult) -> str:
    """Draw the images of the record with picks and limits into `path` and return the same in words.

    Raises
    ------
    InputError
        If the picture cannot be written.
    """
    path = Path(path)
    figure = shot_images(result.images, result.picks)
    try:
        save_figure(figure, path)
    except OSError as error:
        raise InputError(f"{path}: the picture cannot be written: {error.strerror}") from error
    lines = [records_text(result.records), ""]
    for picks in result.picks:
        lines += _picks(picks)
    return "\n".join([*lines, f"picture: {path}"])


def _picks(picks: Picks) -> Iterator[str]:
    taken = picks.accepted
    if not taken.any():
        yield f"{printable(picks.name)}: nothing picked"
        return
    frequency, wavelength = picks.frequency[taken], picks.wavelength[taken]
    yield (
        f"{printable(picks.name)}: picked {number(frequency[0])} to {number(frequency[-1])} Hz, wavelengths "
        f"{number(wavelength.min())} to {number(wavelength.max())} m"
    )
    for remark in dict.fromkeys(picks.reason[taken]):
        if remark:
            marked = frequency[picks.reason[taken] == remark]
            yield f"  {number(marked[0])} to {number(marked[-1])} Hz: {printable(str(remark))}"
