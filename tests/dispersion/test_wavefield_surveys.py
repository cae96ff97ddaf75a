"""Surveys of random earths from the full wavefield: the curve against the exact fundamental mode."""

import importlib.util
from pathlib import Path

import numpy as np
import pytest

from surfdisp.dispersion import curve_from_gathers

MODULE = Path(__file__).parents[1] / "benchmarks" / "random_surveys.py"


@pytest.fixture(scope="module")
def surveys():
    spec = importlib.util.spec_from_file_location("random_surveys", MODULE)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.mark.slow
def test_curves_meet_the_exact_mode_where_the_image_shows_it_and_know_their_error(surveys):
    several = []
    for seed in range(100, 106):
        earth = surveys.random_earth(seed)
        clean = surveys.clean_gathers(earth)
        curve = curve_from_gathers(surveys.noisy_gathers(clean, seed)).curve
        several.append(surveys.agreement(curve, clean, earth))
    errors = np.abs(np.concatenate([a.errors for a in several]))
    assert np.mean([a.coverage for a in several]) > 0.7
    assert np.median(errors) < 0.01
    assert np.mean([a.inside for a in several]) > 0.8


@pytest.mark.slow
def test_a_curve_that_is_5_percent_off_would_be_found_out(surveys):
    earth = surveys.random_earth(100)
    clean = surveys.clean_gathers(earth)
    curve = curve_from_gathers(surveys.noisy_gathers(clean, 100)).curve
    off = type(curve)(frequency=curve.frequency, velocity=1.05 * curve.velocity, sigma=curve.sigma)
    assert surveys.agreement(off, clean, earth).coverage < 0.2
