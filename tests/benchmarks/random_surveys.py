"""Surveys of random earths by the full wavefield, and how well their curves meet the exact fundamental mode.

The earths have 2 to 8 layers, top velocities of 110 to 280 m/s, contrasts of 1.2 to 5, in about a third of
the cases a slower layer inside or a stiff crust, and a water table in more than half. 24 receivers every 2 m,
three shots off each end, white noise 15 dB below the rms of the median trace.
"""

from __future__ import annotations

from dataclasses import replace
from typing import NamedTuple

import numpy as np

from surfdisp.core import DispersionCurve, Gather, LayeredEarth
from surfdisp.dispersion import dispersion_image, stack_images
from surfdisp.earth import phase_velocity, synthesize

RECEIVERS = 2.0 * np.arange(24)
SOURCES = (-20.0, -10.0, -4.0, 50.0, 56.0, 66.0)
DURATION, INTERVAL = 1.0, 0.001
NOISE_DB = 15.0
NEAR = 0.02
FREQUENCIES = np.geomspace(3.0, 95.0, 200)


def random_earth(seed: int) -> LayeredEarth:
    """Return the earth of one seed."""
    rng = np.random.default_rng([77, seed])
    layers = int(rng.integers(2, 9))
    depth = rng.uniform(6.0, 28.0)
    thickness = np.maximum(np.sort(rng.dirichlet(np.full(layers - 1, 3.0))) * depth, 0.8)
    top, contrast = rng.uniform(110.0, 280.0), np.exp(rng.uniform(np.log(1.2), np.log(5.0)))
    share = np.sort(rng.uniform(0.0, 1.0, layers))
    share = (share - share[0]) / (share[-1] - share[0])
    vs = top * contrast**share
    if layers >= 4 and rng.random() < 0.45:
        vs[int(rng.integers(1, layers - 1))] *= rng.uniform(0.6, 0.85)
    elif layers >= 3 and rng.random() < 0.3:
        vs[0] *= rng.uniform(1.2, 1.6)
    nu = rng.uniform(0.25, 0.4)
    vp = vs * np.sqrt(2.0 * (1.0 - nu) / (1.0 - 2.0 * nu))
    water_table = rng.uniform(2.0, 20.0) if rng.random() < 0.6 else np.inf
    tops = np.concatenate([[0.0], np.cumsum(thickness)])
    vp = np.maximum(np.where(tops >= water_table, np.maximum(vp, 1500.0), vp), 1.5 * vs)
    return LayeredEarth(thickness=np.append(thickness, np.inf), vp=vp, vs=vs, density=1700.0 + 300.0 * share)


def clean_gathers(earth: LayeredEarth) -> list[Gather]:
    """Return the shots of one survey without noise: one wavefield, read at the distances of each shot."""
    distances = [np.abs(RECEIVERS - source) for source in SOURCES]
    every = np.unique(distances)
    data = synthesize(earth, every, DURATION, INTERVAL).data
    return [
        Gather(
            data=data[np.searchsorted(every, distance)],
            interval=INTERVAL,
            receivers=RECEIVERS,
            source=source,
            name=f"source at {source:g} m",
        )
        for source, distance in zip(SOURCES, distances, strict=True)
    ]


def noisy_gathers(clean: list[Gather], seed: int) -> list[Gather]:
    """Return the shots with white noise."""
    rng = np.random.default_rng([9, seed])
    noisy = []
    for gather in clean:
        level = np.sqrt(np.median(np.mean(np.square(gather.data), axis=1))) * 10.0 ** (-NOISE_DB / 20.0)
        noise = level * rng.standard_normal(gather.data.shape)
        noisy.append(replace(gather, data=gather.data + noise))
    return noisy


class Agreement(NamedTuple):
    """How a curve meets the exact fundamental mode.

    `coverage` is the part (in log frequency) of the band where the noise-free image's ridge lies within 2 %
    of mode 0 in which the curve does so too; `band` the ends of that band [Hz]; `errors` the relative errors
    of the curve's points; `inside` the part of them whose 90 % range holds the exact value.
    """

    coverage: float
    band: tuple[float, float]
    errors: np.ndarray
    inside: float


def agreement(curve: DispersionCurve | None, clean: list[Gather], earth: LayeredEarth) -> Agreement:
    """Compare the curve of noisy records with the exact mode, where the noise-free image shows it."""
    exact = phase_velocity(earth, FREQUENCIES)
    band = np.abs(image_ridge(clean, exact) / exact - 1.0) < NEAR
    ends = (float(FREQUENCIES[band][0]), float(FREQUENCIES[band][-1])) if band.any() else (np.nan, np.nan)
    if curve is None:
        return Agreement(0.0, ends, np.array([]), np.nan)
    there = np.abs(at(curve, FREQUENCIES) / exact - 1.0) < NEAR
    errors = curve.velocity / phase_velocity(earth, curve.frequency) - 1.0
    inside = np.abs(errors) < 1.645 * curve.sigma / curve.velocity
    return Agreement(float(np.sum(there & band) / band.sum()), ends, errors, float(np.mean(inside)))


def image_ridge(gathers: list[Gather], exact: np.ndarray) -> np.ndarray:
    """Velocity of the strongest power of the stacked image within 30 % of the exact mode, NaN at an edge."""
    velocities = np.geomspace(40.0, 2500.0, 1600)
    image = stack_images([dispersion_image(g, FREQUENCIES, velocities) for g in gathers])
    ridge = np.full(len(exact), np.nan)
    for i, c in enumerate(exact):
        near = np.flatnonzero(np.abs(velocities / c - 1.0) < 0.3)
        if near.size:
            top = near[np.argmax(image.power[i, near])]
            ridge[i] = velocities[top] if near[0] < top < near[-1] else np.nan
    return ridge


def at(curve: DispersionCurve, frequencies: np.ndarray) -> np.ndarray:
    """Velocity of the curve, NaN outside of its band and inside its gaps."""
    x, known = np.log(frequencies), np.log(curve.frequency)
    velocity = np.interp(x, known, curve.velocity, left=np.nan, right=np.nan)
    distance = np.min(np.abs(x[:, np.newaxis] - known), axis=1)
    return np.where(distance <= 0.6 * np.log(2.0) / 8.0, velocity, np.nan)
