"""Bars of the modes: tables, random earths against depth finite elements, element accuracy, speed."""

import csv
import ctypes
import math
import multiprocessing
import os
import subprocess
import sys
import tempfile
import time
import tomllib
from collections.abc import Callable, Iterator
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

import numpy as np
from bar import ROOT, SHARED, Bar

from surfdisp.core import LayeredEarth
from surfdisp.earth import mode_count, phase_velocity, phase_velocity_and_sensitivity

sys.path.insert(0, str(ROOT / "tests"))

EARTHS = 2000
SEED = 20261
FREQUENCIES = 30
LAYERS = 10

# The shared yardstick, called in this process so that both sides are timed in windows of the same length.
YARDSTICK = """
#define main yardstick_main
#include "{source}"
#undef main
double evaluate(long count)
{{
    int n = {layers};
    double h[64], a[64], b[64], rho[64];
    for (int i = 0; i < n; i++) {{ double z = (double)i / (n - 1);
        h[i] = 1.5 + 3 * z; b[i] = 150 + 500 * z; a[i] = i < n/3 ? 2.2*b[i] : 1500 + 600 * z; rho[i] = 1800 +
        300 * z; }}
    double sum = 0;
    for (long j = 0; j < count; j++) {{ double f = 3 + 57.0 * (j % 61) / 60; double c = 145 + 420.0 * (j % 97)
    / 96;
        sum += secular(2 * M_PI * f, c, n, h, a, b, rho); }}
    return sum;
}}
"""


def measure() -> Iterator[Bar]:
    """Yield every bar of the modes."""
    yield from tables()
    yield half_spaces()
    yield backward_branch()
    yield elements()
    yield splitting()
    yield overflow()
    yield from speed()
    yield random_earths()


def tables() -> Iterator[Bar]:
    """Published models: every printed velocity, and every blank as NaN."""
    folder = ROOT / "tests" / "published"
    models = tomllib.loads((folder / "rayleigh_models.toml").read_text())
    rows = list(csv.DictReader((folder / "rayleigh_modes.csv").read_text().splitlines()))
    for table in ("A3", "B1", "B2"):
        worst, blanks, wrong = 0.0, 0, 0
        for row in rows:
            if row["table"] != table:
                continue
            earth = LayeredEarth(**models[row["model"]])
            found = phase_velocity(earth, float(row["frequency_hz"]), mode=int(row["mode"]))[0]
            if row["velocity_m_s"]:
                worst = max(worst, abs(found - float(row["velocity_m_s"])) if found == found else math.inf)
            else:
                blanks += 1
                wrong += found == found
        figure = f"worst {worst * 1e3:.3f} mm/s, {wrong} of {blanks} absent modes found"
        yield Bar(f"Rayleigh velocities of {table}", figure, "0.5 mm/s, 0", worst <= 0.5e-3 and not wrong)


def half_spaces() -> Bar:
    """Rayleigh's cubic, the numbers printed in A1."""
    printed = {
        0.0: 0.874032048898,
        0.1: 0.893106005025,
        0.2: 0.910995890975,
        0.25: 0.919401686762,
        0.3: 0.927412709703,
        1 / 3: 0.932525905931,
        0.35: 0.935013127535,
        0.4: 0.942195433116,
        0.45: 0.948959697872,
        0.48: 0.952820099960,
        0.49: 0.954074354140,
    }
    worst = 0.0
    for poisson, ratio in printed.items():
        vp = 250.0 * math.sqrt(2.0 * (1.0 - poisson) / (1.0 - 2.0 * poisson))
        earth = LayeredEarth(thickness=[np.inf], vp=[vp], vs=[250.0], density=[1900.0])
        worst = max(worst, abs(phase_velocity(earth, 10.0)[0] / 250.0 - ratio))
    return Bar("half-space velocities of A1, c/vs", f"worst {worst:.2e}", "5e-13", worst <= 5e-13)


def backward_branch() -> Bar:
    """A4 at 6.5 Hz: counts between the roots, and the slowest root of each branch."""
    earth = LayeredEarth(
        thickness=[10.0, np.inf], vp=[300.0, 3500.0], vs=[100.0, 2000.0], density=[1800.0, 2400.0]
    )
    counts = mode_count(earth, 6.5, [100.0, 170.0, 390.0, 950.0, 1900.0]).tolist()
    slowest = np.array([phase_velocity(earth, 6.5, mode=mode)[0] for mode in (0, 1)])
    error = np.abs(slowest / [104.439393, 273.182387] - 1.0).max()
    figure = f"counts {counts}, slowest {slowest[0]:.6f} and {slowest[1]:.6f} m/s ({error:.1e})"
    return Bar("A4", figure, "counts [0, 1, 2, 1, 2], 1e-8", counts == [0, 1, 2, 1, 2] and error <= 1e-8)


def elements() -> Bar:
    """Layer stiffness against 40-digit arithmetic from kh = 1e-4 to 1e2."""
    import importlib.util

    path = ROOT / "tests" / "kernels" / "test_layer_stiffness.py"
    spec = importlib.util.spec_from_file_location("layer_stiffness_reference", path)
    reference = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(reference)
    worst = 0.0
    for thickness in np.geomspace(1e-4, 1e2, 13):
        for ratio in reference.VP_OVER_VS:
            for velocity in reference.velocities(ratio):
                if thickness * math.sqrt(max(velocity**2 - 1.0, 0.0)) < math.pi:
                    arguments = (float(thickness), velocity**2 / ratio**2, velocity**2)
                    exact = reference.exact(*arguments)
                    error = np.abs(reference.computed(*arguments) - exact).max() / np.abs(exact).max()
                    worst = max(worst, error)
    figure = f"worst {worst:.1e} of the largest"
    return Bar("stiffness elements, kh 1e-4 to 1e2", figure, "1e-12", worst <= 1e-12)


def splitting() -> Bar:
    """A model cut into 400 pieces keeps its roots."""
    rng = np.random.default_rng(SEED)
    worst = 0.0
    for _ in range(20):
        n = 5
        vs = rng.uniform(100.0, 700.0, n)
        vs[-1] = max(vs.max(), 400.0)
        thickness = np.append(rng.uniform(1.0, 8.0, n - 1), np.inf)
        vp, density = vs * rng.uniform(1.5, 6.0, n), rng.uniform(1600.0, 2300.0, n)
        whole = LayeredEarth(thickness=thickness, vp=vp, vs=vs, density=density)
        each = [
            np.append(np.repeat(values[:-1], 100), values[-1])
            for values in (thickness / 100.0, vp, vs, density)
        ]
        each[0][-1] = np.inf
        cut = LayeredEarth(thickness=each[0], vp=each[1], vs=each[2], density=each[3])
        frequency = np.geomspace(2.0, 60.0, 8)
        for mode in (0, 1, 2):
            first = phase_velocity(whole, frequency, mode=mode)
            second = phase_velocity(cut, frequency, mode=mode)
            if not np.array_equal(np.isnan(first), np.isnan(second)):
                worst = math.inf
            worst = max(worst, np.nanmax(np.abs(second / first - 1.0), initial=0.0))
    return Bar("splitting into 400 pieces", f"moves roots by {worst:.1e}", "1e-10", worst <= 1e-10, SEED)


def overflow() -> Bar:
    """Deep earths at 500 Hz."""
    rng = np.random.default_rng(SEED)
    bad = 0
    for _ in range(200):
        n = int(rng.integers(2, 16))
        vs = rng.uniform(60.0, 3000.0, n)
        vs[-1] = vs.max()
        thickness = np.append(rng.uniform(1.0, 40.0, n - 1), np.inf)
        earth = LayeredEarth(
            thickness=thickness,
            vp=vs * rng.uniform(1.5, 12.0, n),
            vs=vs,
            density=rng.uniform(1400.0, 2600.0, n),
        )
        velocity, rows = phase_velocity_and_sensitivity(earth, 500.0)
        finite = all(np.isfinite(values).all() for values in (rows.vs, rows.vp, rows.density, rows.thickness))
        bad += not (0.6 * vs.min() < velocity[0] < vs[-1] and finite)
    figure = f"{bad} without a finite velocity and derivatives"
    return Bar("200 earths at 500 Hz", figure, "0", bad == 0, SEED)


def earth_to_time(rng: np.random.Generator) -> LayeredEarth:
    """Like the yardstick's model, every layer drawn anew."""
    z = np.arange(LAYERS) / (LAYERS - 1)
    vs = (150.0 + 500.0 * z) * rng.uniform(0.9, 1.1, LAYERS)
    return LayeredEarth(
        thickness=np.append(((1.5 + 3.0 * z) * rng.uniform(0.7, 1.3, LAYERS))[:-1], np.inf),
        vp=np.where(np.arange(LAYERS) < LAYERS // 3, 2.2 * vs, 1500.0 + 600.0 * z),
        vs=vs,
        density=1800.0 + 300.0 * z,
    )


def yardstick(folder: Path) -> ctypes.CDLL:
    """Compile the shared yardstick as it says, with a door to its function."""
    source = folder / "yardstick.c"
    source.write_text(YARDSTICK.format(source=SHARED / "yardstick" / "secular.c", layers=LAYERS))
    library = folder / "yardstick.so"
    command = ["gcc", "-O3", "-march=native", "-shared", "-fPIC", "-o", str(library), str(source), "-lm"]
    subprocess.run(command, check=True)
    loaded = ctypes.CDLL(str(library))
    loaded.evaluate.restype = ctypes.c_double
    loaded.evaluate.argtypes = [ctypes.c_long]
    return loaded


def speed() -> Iterator[Bar]:
    """Fundamental curve in yardstick evaluations per frequency, and the derivatives along with it."""
    rng = np.random.default_rng(SEED)
    earths = [earth_to_time(rng) for _ in range(40)]
    grids = {
        "logarithmic": np.geomspace(3.0, 60.0, FREQUENCIES),
        "even": np.linspace(3.0, 60.0, FREQUENCIES),
    }
    with tempfile.TemporaryDirectory() as folder:
        library = yardstick(Path(folder))
        for spacing, frequency in grids.items():
            floor, curve, both = best_times(library, earths, frequency)
            ratio = curve / FREQUENCIES / floor
            figure = f"{ratio:.2f} yardstick evaluations per frequency"
            figure += f" ({curve * 1e6:.0f} us against {floor * 1e9:.0f} ns)"
            name = f"fundamental curve, 3-60 Hz, {spacing} spacing"
            yield Bar(name, figure, "8, goal 5", ratio <= 8.0, SEED)
            figure = f"{both / curve:.2f} x the curve"
            yield Bar("... and all phase derivatives along with it", figure, "3", both <= 3.0 * curve, SEED)


def best_times(
    library: ctypes.CDLL, earths: list[LayeredEarth], frequency: np.ndarray
) -> tuple[float, float, float]:
    """Seconds of a yardstick evaluation, of a curve, of a curve with derivatives; mean of each earth's best.

    All three take turns, each in windows of about a tenth of a millisecond, so that other work on the machine
    disturbs them alike. No call sees the earth of the call before it.
    """
    evaluations = 200
    floor, curve, both = (np.full(len(earths), math.inf) for _ in range(3))
    for _ in range(40):
        for i, earth in enumerate(earths):
            floor[i] = min(floor[i], timed(library.evaluate, evaluations) / evaluations)
            curve[i] = min(curve[i], timed(phase_velocity, earth, frequency))
        for i, earth in enumerate(earths):
            both[i] = min(both[i], timed(phase_velocity_and_sensitivity, earth, frequency))
    return floor.mean(), curve.mean(), both.mean()


def timed(function: Callable[..., object], *arguments: object) -> float:
    """Seconds that one call takes."""
    start = time.perf_counter()
    function(*arguments)
    return time.perf_counter() - start


def random_earths() -> Bar:
    """Every mode of random earths against depth finite elements, in processes of one thread each."""
    os.environ["OPENBLAS_NUM_THREADS"] = os.environ["OMP_NUM_THREADS"] = (
        "1"  # read where NumPy is first loaded
    )
    with ProcessPoolExecutor(mp_context=multiprocessing.get_context("spawn")) as pool:
        results = list(pool.map(compared, range(EARTHS), chunksize=20))
    for index, (faults, _) in enumerate(results):
        if faults:
            sys.stderr.write(f"    earth {index}: {'; '.join(faults)}\n")
    wrong, modes = sum(bool(faults) for faults, _ in results), sum(roots for _, roots in results)
    figure = f"{wrong} earths with a lost, invented or misnumbered mode ({modes} modes)"
    return Bar(f"{EARTHS} random earths", figure, "0", wrong == 0, SEED)


def compared(index: int) -> tuple[list[str], int]:
    """Faults and number of modes of one random earth."""
    from twins.random_earths import disagreements, random_earth

    earth, frequency = random_earth(np.random.default_rng([SEED, index]))
    return disagreements(earth, frequency)
