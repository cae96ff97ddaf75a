"""The demo survey is what its script makes, and reads like a day's field files."""

import importlib.util
from pathlib import Path

import numpy as np
import pytest

from surfdisp.records import prepare_records, read_gather

FOLDER = Path(__file__).parents[2] / "synthetic_records"
FILES = sorted(FOLDER.glob("blow_*.sg2"))


@pytest.fixture(scope="module")
def script():
    spec = importlib.util.spec_from_file_location("make_records", FOLDER / "make_records.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_the_survey_is_small_and_shot_off_both_ends():
    gathers = [read_gather(path) for path in FILES]
    assert sum(path.stat().st_size for path in FILES) < 5e6
    assert len({gather.source for gather in gathers if gather.source < gather.receivers[0]}) == 3
    assert len({gather.source for gather in gathers if gather.source > gather.receivers[-1]}) == 3
    for gather in gathers:
        np.testing.assert_allclose(gather.receivers, 1.5 * np.arange(48), rtol=1e-12)
        assert gather.delay == -0.02
        assert gather.data.shape == (48, 1000)


def test_the_accidents_of_the_day_are_found():
    records, gathers = prepare_records(FILES)
    assert [record.file for record in records if not record.used] == ["blow_05.sg2"]
    assert len(gathers) == 6
    lost = {1.5 * 8, 1.5 * 30}  # dead and reversed
    for gather in gathers:
        assert set(1.5 * np.arange(48)) - set(gather.receivers.tolist()) == lost


def test_the_noise_is_as_loud_as_stated():
    gather = next(g for g in map(read_gather, FILES) if g.source == -15.0)
    middle = gather.data[18:31:2]
    after_the_waves = middle[:, gather.times > 0.8]
    ratio = 20.0 * np.log10(np.std(middle, axis=1) / np.std(after_the_waves, axis=1))
    assert np.median(ratio) == pytest.approx(20.0, abs=3.0)  # dB; blows differ by up to 1.6 dB in strength


@pytest.mark.slow
def test_the_files_are_those_that_the_script_writes(script, tmp_path):
    again = script.write_survey(tmp_path, script.true_earth())
    assert [path.name for path in again] == [path.name for path in FILES]
    for old, new in zip(FILES, again, strict=True):
        kept, made = read_gather(old), read_gather(new)
        assert kept.source == made.source
        peaks = np.abs(kept.data).max(axis=1, keepdims=True)
        counts = 3e-7 * peaks.max()  # rounding to 24 bits
        assert np.all(np.abs(kept.data - made.data) < 1e-3 * peaks + counts)  # the tolerance of synthesis


def test_perturbed_earths_stay_within_their_bounds_and_differ(script):
    earth = script.true_earth()
    others = [script.perturbed_earth(earth, seed) for seed in range(10)]
    ratios = np.array([other.vs / earth.vs for other in others])
    assert np.all(np.abs(ratios - 1.0) <= 0.2)
    assert np.all(np.ptp(ratios, axis=0) > 0.1)
    assert all(np.all(other.vp[earth.vp > 1400.0] == earth.vp[earth.vp > 1400.0]) for other in others)
