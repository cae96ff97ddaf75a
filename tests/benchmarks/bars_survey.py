"""Bars of the whole job: the demo end to end, its speed, its size, and how wrong input ends."""

from __future__ import annotations

import json
import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

import numpy as np
from bar import ROOT, SHARED, Bar

from surfdisp.core import LayeredEarth
from surfdisp.site import vs30
from surfdisp.survey import run_survey, settings_from

sys.path.insert(0, str(ROOT / "synthetic_records"))

PERTURBED_SEEDS = range(100, 110)
CONFIG = next(iter(sorted((ROOT / "configs").glob("*.toml"))))


def surfdisp(*words: str, **environment: str) -> tuple[subprocess.CompletedProcess[str], float]:
    """Run the command line in a process of its own and time it."""
    started = time.perf_counter()
    done = subprocess.run(
        [sys.executable, "-m", "surfdisp.cli", *words],
        capture_output=True,
        text=True,
        env={**os.environ, **environment},
        cwd=ROOT,
        check=False,
    )
    return done, time.perf_counter() - started


def measure() -> Iterator[Bar]:
    """Yield every bar of this room."""
    with tempfile.TemporaryDirectory() as folder:
        yield from demo_vs30(Path(folder))
        yield from speed(Path(folder))
        yield from wrong_input(Path(folder))
    yield from real_records()


def demo_vs30(folder: Path) -> Iterator[Bar]:
    """Vs30 of the demo and of ten perturbed earths, from the SEG-2 files alone, all defaults."""
    from make_records import perturbed_earth, true_earth, write_survey

    files = sorted((ROOT / "synthetic_records").glob("*.sg2"))
    error = vs30_error(files, true_earth())
    yield Bar("demo Vs30 against the true earth", f"{error:+.1f} %", "within 5 %", abs(error) <= 5.0)
    errors = []
    for seed in PERTURBED_SEEDS:
        earth = perturbed_earth(true_earth(), seed)
        place = folder / f"perturbed_{seed}"
        place.mkdir()
        errors.append(vs30_error(write_survey(place, earth, seed), earth))
    worst, median = max(np.abs(errors)), float(np.median(np.abs(errors)))
    figure = f"median {median:.1f} %, worst {worst:.1f} % ({', '.join(f'{e:+.1f}' for e in errors)})"
    met = median <= 5.0 and worst <= 12.0
    yield Bar("ten perturbed demos, Vs30", figure, "median 5 %, worst 12 %", met, PERTURBED_SEEDS[0])


def vs30_error(files: list[Path], earth: LayeredEarth) -> float:
    """Error of Vs30 [%] of a run on bare field files; NaN where nothing was picked."""
    result = run_survey(settings_from(files))
    return float("nan") if result.site is None else 100.0 * (result.site.vs30.median / vs30(earth) - 1.0)


def speed(folder: Path) -> Iterator[Bar]:
    """Cold run, warm run, memory, import."""
    cache = str(folder / "cache")
    done, seconds = surfdisp("run", str(CONFIG), "--out", str(folder / "out"), SURFDISP_CACHE=cache)
    ok = done.returncode == 0
    yield Bar("first run, empty compile cache", f"{seconds:.1f} s", "under 90 s", ok and seconds < 90)
    times = []
    for _ in range(3):
        done, seconds = surfdisp("run", str(CONFIG), "--out", str(folder / "out"), SURFDISP_CACHE=cache)
        ok = ok and done.returncode == 0
        times.append(seconds)
    median = float(np.median(times))
    yield Bar("demo run, median of 3", f"{median:.1f} s", "under 30 s (goal 10 s)", ok and median < 30)
    size = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024**2
    yield Bar("memory of a run, largest process", f"{size:.2f} GiB", "under 1 GiB", size < 1.0)
    command = "import time; t = time.perf_counter(); import surfdisp; print(time.perf_counter() - t)"
    spent = [
        float(subprocess.run([sys.executable, "-c", command], capture_output=True, text=True).stdout)
        for _ in range(5)
    ]
    yield Bar(
        "import surfdisp, median of 5", f"{np.median(spent):.3f} s", "under 0.5 s", np.median(spent) < 0.5
    )


def wrong_input(folder: Path) -> Iterator[Bar]:
    """Each wrong input: one line that names the file, exit code 2, no traceback, nothing written."""
    from wrong_inputs import make_wrong_inputs

    bad = []
    cases = make_wrong_inputs(folder)
    for name, words in cases.items():
        out = folder / f"out_{name}"
        done, _ = surfdisp("run", *words, "--out", str(out), SURFDISP_CACHE=str(folder / "empty"))
        lines = done.stderr.strip().splitlines()
        named = Path(words[0]).name in done.stderr
        if done.returncode != 2 or len(lines) != 1 or not named or done.stdout or out.exists():
            bad.append(f"{name}: exit {done.returncode}, {len(lines)} lines")
    figure = f"{len(cases) - len(bad)} of {len(cases)} as wanted {bad or ''}"
    yield Bar("wrong input", figure, "one line naming the file, exit 2, nothing written", not bad)


def real_records() -> Iterator[Bar]:
    """The field records, end to end with all defaults."""
    for name in ("spread_4m", "spread_1m", "no_ridge"):
        with tempfile.TemporaryDirectory() as folder:
            files = sorted(str(path) for path in (SHARED / "data" / name).glob("*.dat"))
            done, seconds = surfdisp("run", *files, "--out", folder)
            ok = done.returncode == 0
            found = json.loads((Path(folder) / "summary.json").read_text()) if ok else {}
            nothing = ok and found["curve"] == [] and found["profile"] == [] and found["vs30"] is None
            figure = f"exit {done.returncode} in {seconds:.1f} s, vs30 {found.get('vs30')}"
            yield Bar(
                f"run on {name}",
                figure,
                "nothing picked" if name == "no_ridge" else "a curve and a profile",
                ok and nothing == (name == "no_ridge"),
            )
