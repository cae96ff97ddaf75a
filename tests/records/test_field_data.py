"""Real hammer shots, against what is known of them independently (their description beside the data)."""

import dataclasses
import hashlib

import numpy as np
import pytest

from surfdisp.records import prepare_records, read_gather, trace_faults

SHOTS = [  # file, receivers from, every, source, interval, samples, blows
    ("spread_4m/2001.dat", 0.0, 4.0, -20.0, 0.000125, 16000, 15),
    ("spread_4m/2002.dat", 0.0, 4.0, -4.0, 0.000125, 16000, 15),
    ("spread_4m/2003.dat", 0.0, 4.0, 46.0, 0.000125, 16000, 15),
    ("spread_4m/2004.dat", 0.0, 4.0, 96.0, 0.000125, 16000, 15),
    ("spread_4m/2005.dat", 0.0, 4.0, 112.0, 0.000125, 16000, 15),
    ("spread_1m/206.dat", 55.0, 1.0, 54.5, 0.0000625, 8000, 1),
    ("no_ridge/102.dat", 0.0, 3.0, -1.5, 0.000125, 4000, 10),
]


@pytest.mark.parametrize("shot", SHOTS, ids=lambda shot: shot[0])
def test_headers_and_samples_are_read_as_described(field_data, obspy_reads, shot):
    name, first, spacing, source, interval, samples, blows = shot
    gather = read_gather(field_data / name)
    np.testing.assert_allclose(gather.receivers, first + spacing * np.arange(24), atol=1e-9)
    assert (gather.source, gather.delay, gather.blows) == (source, 0.0, blows)
    assert gather.interval == pytest.approx(interval, rel=1e-12)
    assert gather.data.shape == (24, samples)
    counts = np.stack([trace.data for trace in obspy_reads(field_data / name)])
    np.testing.assert_allclose(gather.data, counts * 1.6985e-4 / blows, rtol=1e-6)


@pytest.mark.parametrize("shot", SHOTS, ids=lambda shot: shot[0])
def test_good_traces_survive(field_data, shot):
    assert trace_faults(read_gather(field_data / shot[0])) == {}


def test_a_survey_of_one_spread_with_a_shot_inside_it(field_data):
    paths = sorted((field_data / "spread_4m").glob("*.dat"))
    records, gathers = prepare_records(paths)
    assert [record.file for record in records] == [path.name for path in paths]
    assert all(record.used and record.reason is None for record in records)
    digests = [hashlib.sha256(path.read_bytes()).hexdigest() for path in paths]
    assert [record.sha256 for record in records] == digests
    assert [gather.source for gather in gathers] == [-20.0, -4.0, 46.0, 46.0, 96.0, 112.0]
    assert {gather.spread for gather in gathers} == {0}
    low, high = gathers[2:4]
    np.testing.assert_allclose(low.receivers, 4.0 * np.arange(12))
    np.testing.assert_allclose(high.receivers, 48.0 + 4.0 * np.arange(12))
    whole = read_gather(paths[2])
    np.testing.assert_array_equal(np.concatenate([low.data, high.data]), whole.data)


def test_different_layouts_are_different_spreads(field_data):
    names = ["spread_4m/2001.dat", "spread_1m/206.dat", "spread_4m/2005.dat", "no_ridge/102.dat"]
    _, gathers = prepare_records([field_data / name for name in names])
    assert {gather.name: gather.spread for gather in gathers} == {
        "2001.dat": 0,
        "2005.dat": 0,
        "206.dat": 1,
        "102.dat": 2,
    }


@pytest.mark.parametrize("name", ["2001", "2002", "2003", "2004", "2005"])
def test_faults_put_into_real_traces_are_found_and_nothing_else(field_data, name):
    gather = read_gather(field_data / "spread_4m" / f"{name}.dat")
    data = np.array(gather.data)
    data[[7, 21]] *= -1.0
    data[15] = np.random.default_rng(3).normal(scale=data[15].std(), size=data.shape[1])
    data[3] = np.clip(data[3], -0.3 * np.abs(data[3]).max(), None)
    data[11] *= 1e-5
    data *= 10.0 ** np.random.default_rng(4).uniform(-0.5, 0.5, size=(24, 1))
    faults = trace_faults(dataclasses.replace(gather, data=data))
    found = {index: reason.split()[0].rstrip(":") for index, reason in faults.items()}
    assert found == {3: "clipped", 7: "reversed", 11: "dead", 15: "noise", 21: "reversed"}
