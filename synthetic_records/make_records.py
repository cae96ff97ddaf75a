"""Make the demo survey: SEG-2 files of an invented site, from the full wavefield.

    python synthetic_records/make_records.py [FOLDER]

The scenario: a river terrace behind a levee. Silt and sand over gravel over weathered rock, ground water at
4.2 m (true_earth.csv, read here and by the tests). A crew lays 48 vertical geophones every 1.5 m along the
foot of the levee and strikes a plate with a sledgehammer 5, 15 and 30 m off either end, twice at the far
ones, one file for each blow. Nothing is taken from a real place.

What is as in life:

- The wavefield has body waves, near field and every mode, with the attenuation of true_earth.csv.
- Each blow differs in strength and in the length of its push.
- Ambient noise, coloured and partly coherent (footfall and traffic: plane waves from random directions at the
  site's own phase velocity), and mains hum of its own strength on each channel. Together they have NOISE
  times the rms of the middle trace of a blow 15 m off the end: a signal-to-noise ratio of 20 dB there.
- Channel 9 is dead, channel 31 is wired the wrong way round, gains are uneven by a factor of up to two.
- Recording began 20 ms before the blow. In blow_05.sg2 the header still holds the source position of the
  other end; the crew saw it, corrected it and struck again.

Everything is seeded: the same call writes the same files.
"""

from __future__ import annotations

import csv
import sys
from datetime import datetime, timedelta
from pathlib import Path

import numpy as np

import surfdisp as sd
from surfdisp.earth import hammer_blow
from surfdisp.records import write_seg2

HERE = Path(__file__).parent
RECEIVERS = 1.5 * np.arange(48)
SOURCES = [-30.0, -30.0, -15.0, -5.0, 75.5, 75.5, 85.5, 100.5, 100.5]
IN_HEADER = [-30.0, -30.0, -15.0, -5.0, -5.0, 75.5, 85.5, 100.5, 100.5]
INTERVAL, SAMPLES, DELAY = 0.001, 1000, -0.020
DEAD, REVERSED = 8, 30  # counted from 0
NOISE = 0.1
FORCE = 4000.0  # N, largest
CENTRAL_FREQUENCY = 35.0
ATTENUATION_REFERENCE = 20.0  # Hz
SEED = 20
FIRST_BLOW = datetime(2024, 10, 8, 9, 30)


def true_earth() -> sd.LayeredEarth:
    """Return the earth of true_earth.csv."""
    rows = _table()
    fields = {"thickness": "thickness_m", "vp": "vp_m_s", "vs": "vs_m_s", "density": "density_kg_m3"}
    return sd.LayeredEarth(**{name: [float(row[column]) for row in rows] for name, column in fields.items()})


def quality_factors() -> dict[str, list[float]]:
    """Return the quality factors qs and qp of its layers."""
    return {name: [float(row[name]) for row in _table()] for name in ("qs", "qp")}


def perturbed_earth(earth: sd.LayeredEarth, seed: int, by: float = 0.2) -> sd.LayeredEarth:
    """Return `earth` with each thickness and Vs changed by a factor between 1 - `by` and 1 + `by`.

    Above the water table Vp keeps its ratio to Vs; below (Vp above 1400 m/s) it is the water's and stays.
    """
    rng = np.random.default_rng([SEED, seed])
    thickness = earth.thickness * rng.uniform(1.0 - by, 1.0 + by, earth.thickness.size)
    factor = rng.uniform(1.0 - by, 1.0 + by, earth.vs.size)
    vp = np.where(earth.vp > 1400.0, earth.vp, earth.vp * factor)
    return sd.LayeredEarth(thickness=thickness, vp=vp, vs=earth.vs * factor, density=earth.density)


def clean_gather(
    earth: sd.LayeredEarth, source: float, force: float = FORCE, central_frequency: float = CENTRAL_FREQUENCY
) -> sd.Gather:
    """Return one blow without noise and faults."""
    return sd.synthesize(
        earth,
        RECEIVERS - source,
        SAMPLES * INTERVAL,
        INTERVAL,
        source=source,
        delay=DELAY,
        pulse=lambda time: force * hammer_blow(time, central_frequency),
        reference_frequency=ATTENUATION_REFERENCE,
        **quality_factors(),
    )


def write_survey(folder: Path, earth: sd.LayeredEarth, seed: int = SEED) -> list[Path]:
    """Write the survey of `earth` with the noise and the accidents of `seed`; return its files."""
    folder.mkdir(parents=True, exist_ok=True)
    rng = np.random.default_rng([SEED, seed, 1])
    gains = 2.0 ** rng.uniform(-0.5, 0.5, len(RECEIVERS))
    hum = rng.lognormal(0.0, 0.7, len(RECEIVERS))
    reference = clean_gather(earth, -15.0)
    level = NOISE * np.std(reference.data[len(RECEIVERS) // 2])
    paths = []
    for blow, source in enumerate(SOURCES):
        force, central = FORCE * rng.uniform(0.8, 1.2), CENTRAL_FREQUENCY * rng.uniform(0.9, 1.1)
        data = clean_gather(earth, source, force, central).data + level * _noise(earth, hum, rng)
        data[DEAD] = 1e-4 * level * rng.standard_normal(SAMPLES)
        data[REVERSED] *= -1.0
        paths.append(folder / f"blow_{blow + 1:02d}.sg2")
        write_seg2(
            paths[-1],
            gains[:, np.newaxis] * data,
            INTERVAL,
            receivers=RECEIVERS.tolist(),
            source=IN_HEADER[blow],
            delay=DELAY,
            sample_format="int32",
            acquired=FIRST_BLOW + timedelta(minutes=4 * blow),
            file_strings={"NOTE": "Invented survey: a river terrace behind a levee"},
        )
    return paths


def _noise(earth: sd.LayeredEarth, hum: np.ndarray, rng: np.random.Generator) -> np.ndarray:
    """Noise of unit rms, (n_receivers, SAMPLES): half its power coherent, the rest each geophone's own."""
    own = np.array([_coloured(rng) for _ in RECEIVERS])
    coherent = np.zeros_like(own)
    frequency = np.fft.rfftfreq(SAMPLES, INTERVAL)
    slowness = _fundamental_slowness(earth, frequency)
    for _ in range(6):
        spectrum = np.fft.rfft(_coloured(rng))
        lag = np.cos(rng.uniform(0.0, 2.0 * np.pi)) * RECEIVERS
        shifted = spectrum * np.exp(-2j * np.pi * frequency * slowness * lag[:, np.newaxis])
        coherent += np.fft.irfft(shifted, SAMPLES, axis=1) / np.sqrt(6.0)
    times = INTERVAL * np.arange(SAMPLES)
    mains = 0.3 * hum[:, np.newaxis] * np.sin(2.0 * np.pi * (50.0 * times + rng.uniform()))
    noise = np.sqrt(0.5) * (own + coherent) + mains
    return noise / np.std(noise)


def _coloured(rng: np.random.Generator) -> np.ndarray:
    """Noise of unit rms whose amplitude falls as 1/f above 4 Hz, over a white floor."""
    frequency = np.fft.rfftfreq(SAMPLES, INTERVAL)
    amplitude = 1.0 / (1.0 + frequency / 4.0) + 0.02
    amplitude[0] = 0.0
    samples = np.fft.irfft(np.fft.rfft(rng.standard_normal(SAMPLES)) * amplitude, SAMPLES)
    return samples / np.std(samples)


def _fundamental_slowness(earth: sd.LayeredEarth, frequency: np.ndarray) -> np.ndarray:
    """Slowness of the fundamental mode [s/m], held constant below 2 and above 120 Hz."""
    grid = np.geomspace(2.0, 120.0, 60)
    velocity = sd.phase_velocity(earth, grid)
    known = np.isfinite(velocity)
    return np.interp(frequency, grid[known], 1.0 / velocity[known])


def _table() -> list[dict[str, str]]:
    with (HERE / "true_earth.csv").open(newline="") as file:
        return list(csv.DictReader(file))


if __name__ == "__main__":
    for path in write_survey(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE, true_earth()):
        print(path)
