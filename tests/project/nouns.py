"""Hypothesis strategies for every noun that a project file can hold."""

import hypothesis.extra.numpy as hnp
import numpy as np
from hypothesis import strategies as st

from surfdisp.core import (
    DispersionCurve,
    DispersionImage,
    Ensemble,
    Gather,
    Interval,
    InversionResult,
    LayeredEarth,
    Picks,
    Profile,
    Record,
    SiteResult,
    SurveyResult,
)

TEXT = st.text(st.characters(), max_size=12)  # every code point: zero, lone surrogates, markup
NUMBER = st.floats(-1e9, 1e9)
ANY = st.floats(allow_nan=True, allow_infinity=True)
POSITIVE = st.floats(1e-3, 1e6)
TEXTS = st.lists(TEXT, max_size=3).map(tuple)


def array(shape, elements=ANY):
    return hnp.arrays(np.float64, shape, elements=elements)


def rising(count, low=1e-3):
    return st.lists(st.floats(low, 1e6), min_size=count, max_size=count, unique=True).map(sorted)


def maybe(strategy):
    return st.none() | strategy


def many(strategy):
    return st.lists(strategy, max_size=2).map(tuple)


def texts(count):
    return st.lists(TEXT, min_size=count, max_size=count).map(lambda words: np.array(words, dtype=np.str_))


@st.composite
def gathers(draw):
    receivers, samples = draw(st.integers(1, 3)), draw(st.integers(1, 4))
    return Gather(
        data=draw(array((receivers, samples), NUMBER)),
        interval=draw(POSITIVE),
        receivers=draw(rising(receivers)),
        source=draw(NUMBER),
        delay=draw(NUMBER),
        elevations=draw(maybe(array(receivers, NUMBER))),
        name=draw(TEXT),
        blows=draw(st.integers(-(2**63), 2**63 - 1)),
        notes=draw(TEXTS),
    )


@st.composite
def images(draw):
    rows, columns = draw(st.integers(0, 3)), draw(st.integers(0, 3))
    return DispersionImage(
        frequencies=draw(rising(rows)),
        velocities=draw(rising(columns)),
        spacing=draw(POSITIVE | st.just(np.nan)),
        offsets=draw(rising(2)),
        power=draw(array((rows, columns), st.floats(0, 1))),
        signal_to_noise=draw(maybe(array(rows))),
        name=draw(TEXT),
    )


@st.composite
def picks(draw):
    count = draw(st.integers(0, 3))
    velocity, sigma = draw(array(count)), draw(array(count))
    there = np.isfinite(velocity) & np.isfinite(sigma)
    return Picks(
        frequency=draw(rising(count)),
        velocity=velocity,
        sigma=sigma,
        half_width=draw(array(count)),
        accepted=draw(hnp.arrays(np.bool_, count)) & there,
        reason=draw(texts(count)),
        mode=draw(maybe(st.integers(0, 9))),
        name=draw(TEXT),
    )


@st.composite
def curves(draw):
    count = draw(st.integers(0, 3))
    return DispersionCurve(
        frequency=draw(rising(count)),
        velocity=draw(array(count, POSITIVE)),
        sigma=draw(array(count, POSITIVE)),
        flags=draw(maybe(texts(count))),
        mode=draw(maybe(st.integers(0, 9))),
        notes=draw(TEXTS),
    )


@st.composite
def earths(draw):
    layers = draw(st.integers(1, 3))
    vs = draw(array(layers, POSITIVE))
    thickness = np.append(draw(array(layers - 1, POSITIVE)), np.inf)
    return LayeredEarth(thickness=thickness, vp=2 * vs, vs=vs, density=draw(array(layers, POSITIVE)))


@st.composite
def inversions(draw):
    earth = draw(earths())
    return InversionResult(
        curve=draw(curves()),
        earth=earth,
        ensemble=Ensemble.of([earth] * 7, draw(array(7, POSITIVE))),
        predicted=draw(array(2)),
        chi_square=draw(ANY),
        resolution=draw(array(len(earth.vs))),
        resolved_depth=draw(ANY),
        layerings=draw(TEXTS),
        converged=draw(st.booleans()),
        message=draw(TEXT),
    )


INTERVALS = st.builds(Interval, median=NUMBER, low=NUMBER, high=NUMBER)
RECORDS = st.builds(
    Record,
    file=TEXT,
    sha256=TEXT,
    used=st.booleans(),
    reason=maybe(TEXT),
    traces=maybe(st.integers(0, 99)),
    interval=maybe(ANY),
    delay=maybe(ANY),
    flags=TEXTS,
)


@st.composite
def profiles(draw):
    count = draw(st.integers(0, 3))
    return Profile(
        depth=[0.0, *draw(rising(count))][:count],
        **{name: draw(array(count)) for name in ("median", "low", "high")},
    )


SITES = st.builds(
    SiteResult,
    vs30=INTERVALS,
    vs30_note=TEXT,
    average_velocity=st.dictionaries(TEXT, INTERVALS, max_size=2),
    profile=profiles(),
    shear_modulus=profiles(),
    resolved_depth=ANY,
    site_class=st.dictionaries(TEXT, st.dictionaries(TEXT, ANY, max_size=2), max_size=2),
    median_class=st.dictionaries(TEXT, TEXT, max_size=2),
    class_bounds=st.dictionaries(TEXT, TEXT, max_size=2),
    wavelength_check=maybe(INTERVALS),
    notes=TEXTS,
)

SURVEYS = st.builds(
    SurveyResult,
    title=TEXT,
    settings=TEXT,
    version=TEXT,
    records=many(RECORDS),
    gathers=many(gathers()),
    images=many(images()),
    picks=many(picks()),
    stacked_images=many(images()),
    curve=maybe(curves()),
    inversion=maybe(inversions()),
    site=maybe(SITES),
    logs=many(profiles()),
    warnings=TEXTS,
)
