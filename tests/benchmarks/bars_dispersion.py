"""Bars of images and picks."""

from __future__ import annotations

import subprocess
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

import numpy as np
from bar import SHARED, Bar

from surfdisp.dispersion import TRANSFORMS


def measure() -> Iterator[Bar]:
    """Measure the bars of this room."""
    yield image_speed()


def image_speed(repeats: int = 9) -> Bar:
    """Time the phase-shift image and the C yardstick in turn, one thread each, best of `repeats`."""
    angle = np.random.default_rng(1).uniform(0.0, 2.0 * np.pi, (300, 48))
    offsets = 5.0 + np.arange(48.0)
    frequencies, velocities = 5.0 + 0.25 * np.arange(300), 80.0 + 2.0 * np.arange(460)
    arguments = (np.exp(1j * angle), offsets, frequencies, velocities)
    TRANSFORMS["phase-shift"](*arguments)
    ours, yardstick = np.inf, np.inf
    with tempfile.TemporaryDirectory() as folder:
        program = str(Path(folder) / "image")
        source = str(SHARED / "yardstick" / "image.c")
        command = ["gcc", "-O3", "-march=native", "-ffast-math", "-o", program, source, "-lm"]
        subprocess.run(command, check=True)
        for _ in range(repeats):
            started = time.perf_counter()
            TRANSFORMS["phase-shift"](*arguments)
            ours = min(ours, time.perf_counter() - started)
            done = subprocess.run(
                [program, "48", "300", "460", "1"], capture_output=True, text=True, check=True
            )
            yardstick = min(yardstick, 1e-3 * float(done.stdout.split()[0]))
    ratio = ours / yardstick
    return Bar(
        name="phase-shift image, 48 traces x 300 frequencies x 460 velocities",
        figure=f"{ratio:.2f} x yardstick ({1e3 * ours:.1f} ms against {1e3 * yardstick:.1f} ms)",
        bound="at most 2 x, goal 1 x",
        met=ratio <= 2.0,
    )
