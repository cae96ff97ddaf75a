"""The only place that prints: results on stdout, progress and messages on stderr."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager

from ..core import SILENT, Progress


def result(text: str) -> None:
    """Print a result on stdout."""
    print(text)


def message(text: str) -> None:
    """Print a message on stderr."""
    print(text, file=sys.stderr)


class _Bars:
    """Shows each step of the job as a bar that replaces the one before."""

    def __init__(self) -> None:
        from rich.console import Console
        from rich.progress import BarColumn, MofNCompleteColumn, TextColumn, TimeElapsedColumn
        from rich.progress import Progress as RichProgress

        self.bars = RichProgress(
            TextColumn("{task.description}", markup=False),
            BarColumn(bar_width=24),
            MofNCompleteColumn(),
            TimeElapsedColumn(),
            console=Console(stderr=True),
            transient=True,
        )
        self.task = self.bars.add_task("starting", total=None)

    def start(self, title: str, total: int) -> None:
        self.bars.remove_task(self.task)
        self.task = self.bars.add_task(title, total=total)

    def advance(self, count: int = 1) -> None:
        self.bars.advance(self.task, count)


@contextmanager
def progress() -> Iterator[Progress]:
    """Show progress on stderr while the block runs; nothing where stderr is not a terminal."""
    if not sys.stderr.isatty():
        yield SILENT
        return
    shown = _Bars()
    with shown.bars:
        yield shown


def say_first_run() -> None:
    """Say once that the first run compiles."""
    from ..kernels.jit import is_cold

    if is_cold():
        message("First run on this machine: compiling once, about half a minute.")
