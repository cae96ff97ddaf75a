"""A made-up survey with every product, built from plain formulas: realistic to look at, quick to make."""

import dataclasses

import numpy as np
import pytest

from surfdisp.core import (
    DispersionCurve,
    DispersionImage,
    Ensemble,
    Gather,
    InversionResult,
    LayeredEarth,
    Picks,
    Profile,
    Record,
    SurveyResult,
)
from surfdisp.site import site_result

RECEIVERS = np.arange(24) * 2.0
SOURCES = (-20.0, -10.0, -4.0, 50.0, 56.0, 66.0, -30.0, 76.0, -14.0, 60.0)
FREQUENCIES = np.arange(4.0, 80.01, 0.5)
VELOCITIES = np.arange(60.0, 600.1, 3.0)
SETTINGS = """title = "Terrace by the river"

[records]
files = ["1001.dat", "1002.dat", "1003.dat", "1004.dat", "1005.dat", "1006.dat", "broken.dat"]
minimum_traces = 8

[conditioning]
slowest_wave_m_s = 50.0

[image]
minimum_frequency_hz = 4.0
maximum_frequency_hz = 80.0

[inversion]
seed = 1
poisson_ratio = 0.33

[site]
class_bounds = "SI"
"""


def true_velocity(frequency):
    """A smooth curve from 330 m/s down to 150 m/s."""
    return 150.0 + 180.0 / (1.0 + (np.asarray(frequency) / 11.0) ** 2.2)


def gather(index: int, rng: np.random.Generator) -> Gather:
    samples, interval, source = 1500, 0.001, SOURCES[index]
    frequency = np.fft.rfftfreq(samples, interval)
    offsets = np.abs(RECEIVERS - source)
    pulse = (frequency / 20.0) ** 2 * np.exp(-((frequency / 22.0) ** 2))
    delay = offsets[:, None] / true_velocity(frequency)[None, :] + 0.05
    spectra = pulse * np.exp(-2j * np.pi * frequency * delay) / np.sqrt(offsets)[:, None]
    data = np.fft.irfft(spectra, samples, axis=1)
    data += 0.02 * np.abs(data).max() * rng.normal(size=data.shape)
    name = f"{1001 + index}.dat"
    return Gather(data=data, interval=interval, receivers=RECEIVERS, source=source, delay=-0.05, name=name)


def image_of(shot: Gather) -> DispersionImage:
    spectra = np.fft.rfft(shot.data, axis=1)
    bins = np.round(FREQUENCIES * shot.data.shape[1] * shot.interval).astype(int)
    unit = (spectra / np.abs(spectra))[:, bins]
    steering = np.exp(2j * np.pi * shot.offsets[:, None, None] * (FREQUENCIES[:, None] / VELOCITIES))
    power = np.abs(np.einsum("rf,rfv->fv", unit, steering)) / len(shot.receivers)
    return DispersionImage(
        frequencies=FREQUENCIES,
        velocities=VELOCITIES,
        power=np.minimum(power**2, 1.0),
        offsets=np.sort(shot.offsets),
        spacing=2.0,
        signal_to_noise=30.0 / (1.0 + FREQUENCIES / 20.0),
        name=shot.name,
    )


def picks_of(image: DispersionImage, rng: np.random.Generator) -> Picks:
    frequency = image.frequencies
    near = np.abs(image.velocities - true_velocity(frequency)[:, None]) < 60.0
    velocity = image.velocities[np.where(near, image.power, 0.0).argmax(axis=1)] + rng.normal(size=len(near))
    velocity = np.where(frequency < 6.0, np.nan, velocity)
    near_field = velocity / frequency > image.offsets.mean()
    refusals = ["no ridge", "signal-to-noise below 2", "near field"]
    return Picks(
        frequency=frequency,
        velocity=velocity,
        sigma=0.01 * velocity + 1.0,
        half_width=velocity**2 / (46.0 * frequency),
        accepted=(frequency >= 8.0) & (frequency <= 55.0),
        reason=np.select([frequency < 6.0, frequency > 55.0, near_field], refusals, ""),
        name=image.name,
    )


def stacked(images: list[DispersionImage]) -> DispersionImage:
    power = np.mean([image.power for image in images], axis=0)
    return dataclasses.replace(images[0], power=power, name="spread 1", shots=len(images))


def curve_of(picks: list[Picks]) -> DispersionCurve:
    wanted = np.unique([int(np.argmin(np.abs(FREQUENCIES - f))) for f in np.geomspace(8.0, 55.0, 28)])
    table = np.array([pick.velocity for pick in picks])[:, wanted]
    frequency = FREQUENCIES[wanted]
    return DispersionCurve(
        frequency=frequency,
        velocity=table.mean(axis=0),
        sigma=table.std(axis=0) + 2.0,
        shots=np.full(len(frequency), len(picks)),
        flags=np.where(frequency < 9.0, "near field", ""),
        notes=("forward and reverse shots differ by 4 % between 20 and 30 Hz: dip or lateral change",),
    )


def inversion_of(curve: DispersionCurve, rng: np.random.Generator) -> InversionResult:
    thickness = np.array([1.5, 2.5, 4.0, 6.0, 8.0, np.inf])
    vs = np.array([155.0, 165.0, 190.0, 250.0, 330.0, 420.0])
    earth = LayeredEarth(thickness=thickness, vp=2.0 * vs, vs=vs, density=np.linspace(1750.0, 2050.0, 6))
    spread = np.array([0.03, 0.03, 0.04, 0.07, 0.12, 0.18])
    earths = []
    for _ in range(200):
        drawn = vs * np.exp(spread * rng.normal(size=6))
        scale = np.exp(0.08 * rng.normal())
        earths.append(dataclasses.replace(earth, thickness=thickness * scale, vs=drawn, vp=2.0 * drawn))
    return InversionResult(
        curve=curve,
        earth=earth,
        ensemble=Ensemble.of(earths, np.ones(200)),
        predicted=true_velocity(curve.frequency) * 1.004,
        chi_square=0.93,
        resolution=np.array([0.98, 0.95, 0.9, 0.7, 0.4, 0.1]),
        resolved_depth=float(curve.wavelength.max() / 2),
        layerings=(
            "ratio 1.3: 8 layers, chi-square 0.93, weight 0.41",
            "ratio 1.6: 6 layers, chi-square 0.95, weight 0.33",
            "ratio 2.0: 5 layers, chi-square 1.02, weight 0.26",
        ),
        message="chi-square reached the noise level",
        iterations=9,
    )


def records_of(gathers: list[Gather]) -> tuple[Record, ...]:
    used = [
        Record(
            file=shot.name,
            sha256=f"{index + 16:02x}" * 32,
            used=True,
            traces=24,
            samples=1500,
            interval=0.001,
            spacing=2.0,
            source=shot.source,
            delay=-0.05,
            stack=3,
        )
        for index, shot in enumerate(gathers)
    ]
    bad = Record(file="broken.dat", sha256="ee" * 32, reason="the file ends in trace 7 of 24")
    flags = ("channel 5 set aside: dead: no signal", "trace 9 has reversed polarity: turned")
    return (dataclasses.replace(used[0], flags=flags), *used[1:], bad)


def survey_of(shots: int, title: str = "Terrace by the river") -> SurveyResult:
    rng = np.random.default_rng(5)
    gathers = [gather(index, rng) for index in range(shots)]
    images = [image_of(shot) for shot in gathers]
    picks = [picks_of(image, rng) for image in images]
    inversion = inversion_of(curve_of(picks), rng)
    borehole = np.array([150.0, 185.0, 260.0, 340.0])
    return SurveyResult(
        title=title,
        settings=SETTINGS,
        version="0.1.0",
        records=records_of(gathers),
        gathers=tuple(gathers),
        images=tuple(images),
        picks=tuple(picks),
        stacked_images=(stacked(images),),
        curve=inversion.curve,
        inversion=inversion,
        site=site_result(inversion),
        logs=(Profile(depth=[0.0, 3.0, 8.0, 15.0], median=borehole, low=borehole, high=borehole),),
        warnings=("broken.dat: the file ends in trace 7 of 24; not used",),
    )


def without_picks(survey: SurveyResult) -> SurveyResult:
    """The same survey, had nothing been there to pick."""
    nothing = []
    for pick in survey.picks:
        nan = np.full(len(pick.frequency), np.nan)
        reason = np.full(len(nan), "no continuous ridge")
        nothing.append(
            dataclasses.replace(
                pick, accepted=np.zeros(len(nan)), velocity=nan, sigma=nan, half_width=nan, reason=reason
            )
        )
    warning = "Nothing could be picked: no ridge is continuous over 0.3 octaves."
    return dataclasses.replace(
        survey, picks=tuple(nothing), curve=None, inversion=None, site=None, logs=(), warnings=(warning,)
    )


@pytest.fixture(scope="session")
def survey():
    return survey_of(6)


@pytest.fixture(scope="session")
def unpicked(survey):
    return without_picks(survey)
