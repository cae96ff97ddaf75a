"""Whatever bytes a file holds, it is read, or refused in one line that begins with its name."""

import struct
import warnings

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import FormatError, InputError
from surfdisp.records import prepare_records, read_gather, write_seg2


def whole_seg2(folder):
    path = folder / "whole.dat"
    data = np.random.default_rng(1).normal(size=(4, 30))
    write_seg2(path, data, 0.001, receivers=[0.0, 1.0, 2.0, 3.0], source=-1.0)
    return path.read_bytes()


def written_by_obspy(folder, kind):
    import obspy

    rows = np.random.default_rng(1).normal(size=(1 if kind == "SAC" else 4, 30)).astype(np.float32)
    traces = [obspy.Trace(row, {"delta": 0.001, "station": f"G{i}"}) for i, row in enumerate(rows)]
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        obspy.Stream(traces).write(str(folder / "whole"), format=kind)
    return (folder / "whole").read_bytes()


def outcome(folder, content):
    """The gather, or the one-line refusal; any other exception or warning fails the test."""
    path = folder / "odd.dat"
    path.write_bytes(content)
    try:
        return read_gather(path)
    except InputError as error:
        message = str(error)
        assert message.startswith("odd.dat: ")
        assert "\n" not in message
        return message


def test_an_empty_file(tmp_path):
    assert "the file is empty; expected a SEG-2" in outcome(tmp_path, b"")


def test_text_is_called_text(tmp_path):
    assert "holds text; expected a SEG-2" in outcome(tmp_path, b"shot 1 at -4 m\n" * 400)


def test_a_missing_file_and_a_folder(tmp_path):
    with pytest.raises(InputError, match=r"nowhere\.dat: no such file"):
        read_gather(tmp_path / "nowhere.dat")
    with pytest.raises(InputError, match="is a folder; expected a SEG-2"):
        read_gather(tmp_path)


def test_a_seg2_file_cut_at_any_byte_is_refused(tmp_path):
    content = whole_seg2(tmp_path)
    assert not isinstance(outcome(tmp_path, content), str)
    for size in range(len(content)):
        assert isinstance(outcome(tmp_path, content[:size]), str), size


@pytest.mark.parametrize("kind", ["SEGY", "SU", "SAC", "MSEED"])
def test_other_files_cut_anywhere_are_refused_as_unreadable(tmp_path, kind):
    content = written_by_obspy(tmp_path, kind)
    steps = range(0, len(content), 1 if len(content) < 2000 else 37)
    whole_traces = {240 * n + 4 * 30 * n for n in range(1, 4)} if kind == "SU" else set()
    whole_traces |= {3600 + 360 * n for n in range(1, 4)} if kind == "SEGY" else set()
    whole_traces |= {len(content) // 4 * n for n in range(1, 4)} if kind == "MSEED" else set()
    for size in set(steps) - whole_traces:
        (tmp_path / "odd.dat").write_bytes(content[:size])
        with pytest.raises(FormatError):
            read_gather(tmp_path / "odd.dat")


@settings(max_examples=80, deadline=None)
@given(position=st.integers(0, 10_000), value=st.integers(0, 255), second=st.integers(0, 10_000))
def test_a_seg2_file_with_wrong_bytes_never_gives_a_traceback(tmp_path_factory, position, value, second):
    folder = tmp_path_factory.mktemp("odd")
    content = bytearray(whole_seg2(folder))
    content[position % len(content)] = value
    content[second % len(content)] ^= 0xFF
    found = outcome(folder, bytes(content))
    assert isinstance(found, str) or found.data.size


@settings(max_examples=40, deadline=None)
@given(
    kind=st.sampled_from(["SEGY", "SU", "SAC", "MSEED"]),
    positions=st.lists(st.integers(0, 10_000), min_size=1, max_size=4),
    value=st.integers(0, 255),
)
def test_other_files_with_wrong_bytes_never_give_a_traceback(tmp_path_factory, kind, positions, value):
    folder = tmp_path_factory.mktemp("odd")
    content = bytearray(written_by_obspy(folder, kind))
    for position in positions:
        content[position % len(content)] = value
    found = outcome(folder, bytes(content))
    assert isinstance(found, str) or found.data.size


@settings(max_examples=40, deadline=None)
@given(
    content=st.binary(max_size=6000),
    head=st.sampled_from([b"", b"\x55\x3a\x01\x00", b"000001D ", b"\x3a\x55\x00\x01"]),
)
def test_random_bytes_never_give_a_traceback(tmp_path_factory, content, head):
    found = outcome(tmp_path_factory.mktemp("odd"), head + content)
    assert isinstance(found, str) or found.data.size


def test_a_small_file_cannot_ask_for_any_amount_of_memory(tmp_path):
    content = bytearray(whole_seg2(tmp_path))
    first = struct.unpack_from("<I", content, 32)[0]
    struct.pack_into("<4I", content, 32, first, first, first, first)
    struct.pack_into("<I", content, first + 8, (len(content) - first) // 4 - 60)
    assert "overlap" in outcome(tmp_path, bytes(content))


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
def test_samples_that_are_no_numbers_set_the_trace_aside(tmp_path, value):
    content = bytearray(whole_seg2(tmp_path))
    struct.pack_into("<f", content, len(content) - 8, value)
    gather = outcome(tmp_path, bytes(content))
    np.testing.assert_array_equal(gather.receivers, [0.0, 1.0, 2.0])
    assert gather.notes == ("channel 4 set aside: samples that are no sensible numbers",)


def test_a_trace_of_another_length_is_set_aside(tmp_path):
    content = bytearray(whole_seg2(tmp_path))
    second = struct.unpack_from("<I", content, 36)[0]
    struct.pack_into("<I", content, second + 8, 20)
    gather = outcome(tmp_path, bytes(content))
    np.testing.assert_array_equal(gather.receivers, [0.0, 2.0, 3.0])
    assert gather.notes == (
        "channel 2 set aside: 20 samples every 0.001 s where the others have 30 every 0.001 s",
    )


def test_a_survey_of_nothing_but_broken_files_has_only_reasons(tmp_path):
    contents = [b"", b"notes\n" * 100, whole_seg2(tmp_path)[:300]]
    paths = [tmp_path / f"{index}.dat" for index in range(3)]
    for path, content in zip(paths, contents, strict=True):
        path.write_bytes(content)
    records, gathers = prepare_records(paths)
    assert gathers == ()
    assert [record.used for record in records] == [False] * 3
    assert all(record.reason.startswith(f"{record.file}: ") for record in records)
    assert all(len(record.sha256) == 64 for record in records)
