"""One measured figure beside its bound, and the commit it belongs to."""

from __future__ import annotations

import subprocess
from dataclasses import dataclass
from pathlib import Path

ROOT = Path(__file__).parents[2]
SHARED = ROOT.parent / "shared"


@dataclass(frozen=True)
class Bar:
    """A bar: what was measured, what was asked, whether it holds, and the seed where chance plays a part."""

    name: str
    figure: str
    bound: str
    met: bool
    seed: int | None = None

    def __str__(self) -> str:
        seed = "" if self.seed is None else f" (seed {self.seed})"
        return f"{'met ' if self.met else 'MISS'}  {self.name}: {self.figure}; bound: {self.bound}{seed}"


def commit() -> str:
    """Short hash of the commit measured, marked where the tree has changes."""
    command = ["git", "-C", str(ROOT), "describe", "--always", "--dirty", "--exclude", "*"]
    return subprocess.run(command, capture_output=True, text=True, check=True).stdout.strip()
