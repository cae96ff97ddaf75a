"""The verbs of the command line, and what their ends mean."""

from __future__ import annotations

import sys
from typing import Annotated

import typer

from .. import __version__
from ..core import SurfdispError
from . import console
from .look import look
from .records import records
from .run import run

INTERRUPTED = 130


def _print_version(wanted: bool) -> None:
    if wanted:
        console.result(__version__)
        raise typer.Exit


app = typer.Typer(
    help="From the field files of a surface-wave survey to a shear-velocity profile with its uncertainty.\n\n"
    "Example: surfdisp run shot_*.dat --out result/",
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)


@app.callback()
def surfdisp(
    version: Annotated[
        bool,
        typer.Option("--version", help="Print the version and exit.", callback=_print_version, is_eager=True),
    ] = False,
) -> None:
    pass


for verb in (run, look, records):
    app.command()(verb)


def main() -> None:
    """Run the command line: exit code 0 done, 2 wrong input or configuration, 1 a fault of the program."""
    try:
        app()
    except SurfdispError as error:
        console.message(f"surfdisp: {' '.join(str(error).split())}")
        sys.exit(2)
    except SystemExit as end:
        if end.code == INTERRUPTED:
            console.message("surfdisp: interrupted; nothing was written")
        raise
