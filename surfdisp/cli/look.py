"""`surfdisp look`: image, picks and limits of one file, for the field truck."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from . import console


def look(
    file: Annotated[Path, typer.Argument(help="One field file.")],
    out: Annotated[
        Path | None, typer.Option(help="Picture to write; FILE's name with .png by default.")
    ] = None,
) -> None:
    """Show image, picks and limits of one file within seconds.

    Where its headers are wrong, a table shots.csv or receivers.csv beside it wins.

    Example: surfdisp look shot_07.dat --out shot_07.png
    """
    from ..report import write_look
    from ..survey import look_at, read_usable, settings_for_files

    picture = out or Path(f"{file.stem}.png")
    settings = settings_for_files([file])
    with console.progress() as progress:
        read = read_usable(settings, progress=progress)
        console.say_first_run()
        result = look_at(settings, read=read, progress=progress)
    console.result(write_look(picture, result))
