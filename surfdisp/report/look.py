"""The quick look: one record's image with picks and limits as a picture, and in words."""

from __future__ import annotations

import os
from collections.abc import Iterator
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ..core import DispersionImage, InputError, Picks, SurveyResult
from ..core.checks import FloatArray
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
    for image, picks in zip(result.images, result.picks, strict=True):
        lines += [_limits(image), *_picks(picks)]
    return "\n".join([*lines, f"picture: {path}"])


def _picks(picks: Picks) -> Iterator[str]:
    taken = picks.accepted
    name = printable(picks.name)
    if taken.any():
        frequency, wavelength = picks.frequency[taken], picks.wavelength[taken]
        yield (
            f"{name}: picked {number(frequency[0])} to {number(frequency[-1])} Hz, wavelengths "
            f"{number(wavelength.min())} to {number(wavelength.max())} m"
        )
    else:
        yield f"{name}: nothing picked"
    yield from _reasons("flagged", picks.frequency[taken], picks.reason[taken])
    yield from _reasons("refused", picks.frequency[~taken], picks.reason[~taken])


def _reasons(verdict: str, frequency: FloatArray, reason: NDArray[np.str_]) -> Iterator[str]:
    """Each reason with the band over which it occurs and the number of its frequencies."""
    for words in dict.fromkeys(reason):
        if words:
            marked = frequency[reason == words]
            band = f"{number(marked[0])} to {number(marked[-1])} Hz"
            yield f"  {verdict}, {band}, {len(marked)} frequencies: {printable(str(words))}"


def _limits(image: DispersionImage) -> str:
    """What the array of one image can tell, in words."""
    centre = float(np.mean(image.offsets))
    return (
        f"{printable(image.name)}: array {number(image.aperture)} m long, its centre {number(centre)} m from "
        f"the source; wavelengths below two spacings ({number(2.0 * image.spacing)} m) do not resolve the top"
    )
