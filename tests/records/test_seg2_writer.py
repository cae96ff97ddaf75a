"""What our SEG-2 writer puts down, ObsPy's independent reader and the standard's byte layout find again."""

import struct
import warnings
from datetime import datetime

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import InputError
from surfdisp.records import write_seg2

RECEIVERS = np.array([0.0, 2.0, 5.5])
DATA = np.array([[1.0, -2.0, 3.5, 0.25], [0.0, 4.0, -8.0, 16.0], [1.5, 1.25, -1.125, 7.0]])


def obspy_reads(path):
    import obspy

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # a general remark on private header keys, and one per DELAY
        return obspy.read(str(path))


def write(path, data=DATA, **changes):
    values = {"interval": 0.0005, "receivers": RECEIVERS, "source": -4.0}
    write_seg2(path, data, **{**values, **changes})
    return path


def test_obspy_finds_samples_interval_and_geometry(tmp_path):
    stream = obspy_reads(write(tmp_path / "a.dat", acquired=datetime(2031, 3, 7, 14, 5, 59)))
    assert len(stream) == 3
    for trace, row, place in zip(stream, DATA, RECEIVERS, strict=True):
        np.testing.assert_array_equal(trace.data, row)
        assert trace.stats.delta == 0.0005
        assert float(trace.stats.seg2.RECEIVER_LOCATION) == place
        assert float(trace.stats.seg2.SOURCE_LOCATION) == -4.0
        assert trace.stats.starttime.isoformat() == "2031-03-07T14:05:59"
    assert [trace.stats.seg2.CHANNEL_NUMBER for trace in stream] == ["1", "2", "3"]


@pytest.mark.parametrize("sample_format", ["float32", "int32"])
def test_count_times_descaling_over_stack_is_the_physical_value(tmp_path, sample_format):
    factors = [0.5, 0.25, 0.125]
    path = write(tmp_path / "a.dat", stack=4, descaling=factors, sample_format=sample_format)
    for trace, row, factor in zip(obspy_reads(path), DATA, factors, strict=True):
        assert trace.data.dtype == np.dtype(sample_format)
        assert float(trace.stats.seg2.DESCALING_FACTOR) == factor
        assert int(trace.stats.seg2.STACK) == 4
        np.testing.assert_array_equal(trace.data * factor / 4, row)


def test_int32_fills_24_bits_by_default(tmp_path):
    stream = obspy_reads(write(tmp_path / "a.dat", sample_format="int32"))
    assert max(np.max(np.abs(trace.data)) for trace in stream) == 2**23 - 1
    for trace, row in zip(stream, DATA, strict=True):
        factor = float(trace.stats.seg2.DESCALING_FACTOR)
        np.testing.assert_allclose(trace.data * factor, row, atol=0.51 * factor)


def test_the_bytes_follow_the_standard(tmp_path):
    raw = write(tmp_path / "a.dat", file_strings={"NOTE": "one\ntwo", "OPERATOR": "crew"}).read_bytes()
    assert struct.unpack_from("<HHHH", raw) == (0x3A55, 1, 12, 3)
    pointers = struct.unpack_from("<3I", raw, 32)
    assert all(pointer % 4 == 0 for pointer in pointers)
    for pointer in pointers:
        name, size, data_size, samples, code = struct.unpack_from("<HHIIB", raw, pointer)
        assert (name, data_size, samples, code) == (0x4422, 16, 4, 4)
        assert size % 4 == 0
    assert pointers[-1] + size + data_size == len(raw)
    keys, place = [], 32 + 12
    while length := struct.unpack_from("<H", raw, place)[0]:
        text = raw[place + 2 : place + length]
        assert text.endswith(b"\0")
        keys.append(text.split(b" ")[0].decode())
        place += length
    assert keys == ["OPERATOR", "UNITS", "NOTE"]


def test_coordinates_extra_strings_and_replaced_keys_are_kept(tmp_path):
    path = write(
        tmp_path / "a.dat",
        receivers=[(0.0, 1.0, 10.25), (2.0, 1.0, 10.5), (4.0, 1.0, 11.0)],
        source=(-4.0, 2.0),
        trace_strings=[{"SKEW": "0.1"}, {"SKEW": "0.2"}, {"SKEW": "0.3", "STACK": "nine"}],
    )
    headers = [trace.stats.seg2 for trace in obspy_reads(path)]
    assert headers[0].RECEIVER_LOCATION == "0.0 1.0 10.25"
    assert headers[0].SOURCE_LOCATION == "-4.0 2.0"
    assert [header.SKEW for header in headers] == ["0.1", "0.2", "0.3"]
    assert headers[2].STACK == "nine"


@settings(max_examples=40, deadline=None)
@given(
    traces=st.integers(1, 6),
    samples=st.integers(1, 40),
    interval=st.floats(1e-5, 0.1),
    delay=st.floats(-1.0, 1.0),
    source=st.floats(-1e4, 1e4),
    seed=st.integers(0, 2**32 - 1),
)
def test_any_shot_comes_back(tmp_path_factory, traces, samples, interval, delay, source, seed):
    data = np.random.default_rng(seed).normal(size=(traces, samples)).astype(np.float32)
    path = tmp_path_factory.mktemp("seg2") / "a.dat"
    write_seg2(path, data, interval, receivers=np.arange(traces) * 1.5, source=source, delay=delay)
    stream = obspy_reads(path)
    np.testing.assert_array_equal(np.stack([trace.data for trace in stream]), data)
    assert repr(interval) == stream[0].stats.seg2.SAMPLE_INTERVAL
    assert float(stream[0].stats.seg2.DELAY) == delay
    assert float(stream[0].stats.seg2.SOURCE_LOCATION) == source


@pytest.mark.parametrize(
    ("changes", "demand"),
    [
        ({"data": DATA[:2]}, "one row per receiver"),
        ({"interval": 0.0}, "interval must be positive"),
        ({"sample_format": "int12"}, "sample_format must be one of"),
        ({"sample_format": "int32", "descaling": 1e-12}, "choose a larger descaling"),
        ({"descaling": -1.0}, "descaling must be positive"),
        ({"source": (1.0, 2.0, 3.0, 4.0)}, "one to three coordinates"),
        ({"source": float("nan")}, "source must be finite"),
        ({"stack": 0}, "stack must be positive"),
        ({"file_strings": {"NOTE": "x" * 70000}}, "must fit a SEG-2 block"),
        ({"file_strings": {"NOTE": "gr\u00fcn"}}, "plain ASCII"),
        ({"trace_strings": [{}]}, "one mapping per receiver"),
    ],
)
def test_what_does_not_fit_is_refused_and_nothing_written(tmp_path, changes, demand):
    with pytest.raises(InputError, match=demand):
        write(tmp_path / "a.dat", **changes)
    assert not list(tmp_path.iterdir())
