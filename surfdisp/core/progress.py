"""How a long step tells how far it is: a protocol and its silent twin."""

from __future__ import annotations

from typing import Protocol


class Progress(Protocol):
    """Called by long steps; the command line shows it, the library is silent."""

    def start(self, title: str, total: int) -> None:
        """Begin a step of `total` units of work."""

    def advance(self, count: int = 1) -> None:
        """Report `count` more units done."""


class Silent:
    """Shows nothing."""

    def start(self, title: str, total: int) -> None:
        """Do nothing."""

    def advance(self, count: int = 1) -> None:
        """Do nothing."""


SILENT = Silent()
