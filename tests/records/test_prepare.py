"""A survey's files become gathers; what cannot be used is listed with its reason and stops nothing."""

import numpy as np
import pytest

from surfdisp.core import InputError
from surfdisp.records import Geometry, ReceiverLine, ShotGeometry, prepare_records, write_seg2

LINE = 2.0 * np.arange(24)


@pytest.fixture
def write(tmp_path, make_shot):
    """Write a shot as SEG-2 and return its path."""

    def written(name, source, *, receivers=LINE, data=None, **header):
        shot = make_shot(receivers, source) if data is None else data
        path = tmp_path / name
        options = {"receivers": receivers, "source": source, **header}
        write_seg2(path, shot, 0.0005, **options)
        return path

    return written


def test_the_rows_tell_what_was_read(write):
    records, gathers = prepare_records([write("a.dat", -4.0, stack=3), write("b.dat", 50.0)])
    assert [(r.file, r.traces, r.samples, r.interval) for r in records] == [
        ("a.dat", 24, 2000, 0.0005),
        ("b.dat", 24, 2000, 0.0005),
    ]
    assert [(r.spacing, r.source, r.delay, r.stack) for r in records] == [
        (2.0, -4.0, 0.0, 3),
        (2.0, 50.0, 0.0, 1),
    ]
    assert all(record.used and record.flags == () for record in records)
    assert [(g.source, g.blows, g.name) for g in gathers] == [(-4.0, 3, "a.dat"), (50.0, 1, "b.dat")]


def test_one_bad_file_stops_nothing(write, tmp_path):
    broken = tmp_path / "broken.dat"
    broken.write_text("these are notes of the crew, not samples\n" * 20)
    records, gathers = prepare_records([broken, write("a.dat", -4.0)])
    assert [record.used for record in records] == [False, True]
    assert "broken.dat: holds text; expected a SEG-2" in records[0].reason
    assert [gather.name for gather in gathers] == ["a.dat"]


@pytest.mark.parametrize("wanted", ["missing.dat", "."])
def test_a_missing_file_or_a_folder_is_told_at_once(write, tmp_path, wanted):
    with pytest.raises(InputError, match=r"no such file|is a folder"):
        prepare_records([write("a.dat", -4.0), tmp_path / wanted])


def test_repeated_blows_are_aligned_to_a_fraction_of_a_sample_and_averaged(write, make_shot):
    late = 0.0031  # 6.2 samples
    paths = [
        write("a.dat", -4.0, data=make_shot(LINE, -4.0, noise=0.05, seed=1)),
        write("b.dat", -4.0, data=make_shot(LINE, -4.0, noise=0.05, seed=2, delay=-late)),
        write("c.dat", -4.0, data=make_shot(LINE, -4.0, noise=0.05, seed=3)),
    ]
    records, gathers = prepare_records(paths)
    assert all(record.used for record in records)
    assert len(gathers) == 1
    assert gathers[0].blows == 3
    assert gathers[0].name == "a.dat + b.dat + c.dat"
    moved = float(records[1].flags[0].split("moved ")[1].split(" ms")[0])
    assert moved == pytest.approx(-1e3 * late, abs=0.05)
    clean = make_shot(LINE, -4.0, noise=0.0)
    error = np.std(gathers[0].data - clean, axis=1) / np.abs(clean).max(axis=1)
    assert np.all(error < 0.05 * 0.7)  # one blow has 0.05, three have 0.05 / sqrt(3) = 0.58 of it


def test_a_blow_unlike_the_others_is_left_out(write, make_shot):
    alien = np.random.default_rng(5).normal(size=(24, 2000))
    paths = [write("a.dat", -4.0), write("b.dat", -4.0, data=make_shot(LINE, -4.0, seed=2)),
             write("c.dat", -4.0, data=alien)]  # fmt: skip
    records, gathers = prepare_records(paths)
    assert [record.used for record in records] == [True, True, False]
    assert "unlike the other blows" in records[2].reason
    assert gathers[0].blows == 2


def test_a_trace_bad_in_one_blow_comes_from_the_other(write, make_shot):
    first, second = make_shot(LINE, -4.0, seed=1), make_shot(LINE, -4.0, seed=2)
    first[5] = 0.0
    records, gathers = prepare_records([write("a.dat", -4.0, data=first), write("b.dat", -4.0, data=second)])
    np.testing.assert_array_equal(gathers[0].receivers, LINE)
    assert any("channel 6 set aside: dead" in flag for flag in records[0].flags)
    assert not any("channel 6" in flag for flag in records[1].flags)


def test_bad_traces_are_set_aside_with_their_reason(write, make_shot):
    data = make_shot(LINE, -4.0)
    data[3] = 0.0
    data[9] *= -1.0
    records, gathers = prepare_records([write("a.dat", -4.0, data=data)])
    np.testing.assert_array_equal(gathers[0].receivers, np.delete(LINE, [3, 9]))
    assert [flag.split(" against")[0] for flag in records[0].flags] == [
        "channel 4 set aside: dead: no signal",
        "channel 10 set aside: reversed polarity",
    ]
    assert all(note.startswith("a.dat: ") for note in gathers[0].notes)


@pytest.mark.parametrize(
    ("source", "sides"),
    [(23.0, [12, 12]), (15.0, [8, 16]), (13.0, [17]), (24.0, [12, 11]), (-1.0, [24])],
)
def test_a_source_inside_the_spread_gives_the_sides_that_have_eight_traces(write, source, sides):
    records, gathers = prepare_records([write("a.dat", source)])
    assert [len(gather.receivers) for gather in gathers] == sides
    assert all(np.all(g.receivers < source) or np.all(g.receivers > source) for g in gathers)
    set_aside = [flag for flag in records[0].flags if "expected at least 8" in flag]
    assert len(set_aside) == (source == 13.0)


def test_too_few_traces_everywhere_refuse_the_record(write):
    records, gathers = prepare_records([write("a.dat", 7.0, receivers=LINE[:8])])
    assert gathers == ()
    assert not records[0].used
    assert records[0].reason.startswith("a.dat: ")
    assert records[0].reason.count("expected at least 8") == 2


def test_layouts_form_spreads_in_order_of_appearance(write):
    paths = [write("a.dat", -4.0), write("b.dat", -1.0, receivers=LINE / 4.0), write("c.dat", 50.0)]
    _, gathers = prepare_records(paths)
    assert [(gather.name, gather.spread) for gather in gathers] == [("a.dat", 0), ("c.dat", 0), ("b.dat", 1)]


def test_the_same_content_is_used_once(write, tmp_path):
    first = write("a.dat", -4.0)
    copy = tmp_path / "copy.dat"
    copy.write_bytes(first.read_bytes())
    records, gathers = prepare_records([first, copy])
    assert [record.used for record in records] == [True, False]
    assert "same content as a.dat" in records[1].reason
    assert gathers[0].blows == 1


def test_a_table_wins_over_the_header(write, make_shot):
    path = write("a.dat", 7.0, receivers=np.arange(24.0), data=make_shot(LINE, -4.0))
    geometry = Geometry(line=ReceiverLine(spacing=2.0), shots={"a.dat": ShotGeometry(source=-4.0)})
    records, gathers = prepare_records([path], geometry=geometry)
    np.testing.assert_array_equal(gathers[0].receivers, LINE)
    assert gathers[0].source == -4.0
    assert "source position from the geometry table" in records[0].flags


def test_tables_beside_the_records_are_found(write, make_shot, tmp_path):
    path = write("a.dat", 7.0, data=make_shot(LINE, -4.0))
    (tmp_path / "shots.csv").write_text("file,source_m\na.dat,-4\n")
    records, gathers = prepare_records([path])
    assert gathers[0].source == -4.0
    assert "source position from shots.csv" in records[0].flags


def test_order_of_files_does_not_matter(write):
    paths = [write("a.dat", -4.0), write("b.dat", 23.0), write("c.dat", 50.0)]
    _, forwards = prepare_records(paths)
    _, backwards = prepare_records(paths[::-1])
    assert list(forwards) == list(backwards)


def test_a_reversed_geophone_is_set_aside_where_one_record_alone_cannot_tell(write, make_shot):
    shots = {name: make_shot(LINE, source, noise=0.02) for name, source in SOURCES.items()}
    for data in shots.values():
        data[10] *= -1.0
    noisy = shots["d.dat"]
    noisy += (
        1.5 * np.abs(noisy).max(axis=1, keepdims=True) * np.random.default_rng(1).normal(size=noisy.shape)
    )
    records, gathers = prepare_records([write(n, SOURCES[n], data=d) for n, d in shots.items()])
    assert all("channel 11 set aside: reversed" in " ".join(record.flags) for record in records)
    assert "in 3 of 3 records that can tell" in " ".join(records[3].flags)
    assert all(20.0 not in gather.receivers for gather in gathers)


SOURCES = {"a.dat": -4.0, "b.dat": -10.0, "c.dat": 50.0, "d.dat": 56.0}


def test_polarity_is_left_alone_where_a_record_can_tell_or_only_one_other_calls_it_reversed(write, make_shot):
    shots = {name: make_shot(LINE, source, noise=0.02) for name, source in SOURCES.items()}
    for name in ("a.dat", "b.dat", "c.dat"):
        shots[name][10] *= -1.0  # plugged the right way for the last shot
    shots["a.dat"][3] *= -1.0
    burst = np.exp(-(((np.arange(2000) - 700) / 99.0) ** 2))
    for seed, name in enumerate(("b.dat", "c.dat", "d.dat"), start=3):
        shots[name][3] = np.random.default_rng(seed).normal(size=2000) * burst  # cannot tell
    _, gathers = prepare_records([write(n, SOURCES[n], data=d) for n, d in shots.items()])
    missing = {gather.name: set(LINE) - set(gather.receivers) for gather in gathers}
    assert missing == {"a.dat": {6.0, 20.0}, "b.dat": {20.0}, "c.dat": {20.0}, "d.dat": set()}


def test_one_source_position_on_two_spreads_is_two_gathers(write):
    paths = [
        write("a.dat", -4.0),
        write("b.dat", -4.0, receivers=LINE[:12]),
        write("c.dat", -4.0, receivers=LINE / 2),
    ]
    _, gathers = prepare_records(paths)
    assert [(gather.name, gather.spread, len(gather.receivers)) for gather in gathers] == [
        ("a.dat", 0, 24),
        ("b.dat", 1, 12),
        ("c.dat", 2, 24),
    ]


@pytest.mark.parametrize(
    "other", [ShotGeometry(source=-4.0, source_off_line=3.0), ShotGeometry(delay=-0.005)]
)
def test_blows_aside_of_each_other_or_of_another_delay_are_not_stacked(write, make_shot, other):
    paths = [write("a.dat", -4.0), write("b.dat", -4.0, data=make_shot(LINE, -4.0, seed=2))]
    _, gathers = prepare_records(paths, geometry=Geometry(shots={"b.dat": other}))
    assert [gather.name for gather in gathers] == ["a.dat", "b.dat"]


def test_two_blows_that_recorded_different_lengths_are_kept_apart(write, make_shot):
    paths = [write("a.dat", -4.0), write("b.dat", -4.0, data=make_shot(LINE, -4.0, samples=1500))]
    records, gathers = prepare_records(paths)
    assert all(record.used for record in records)
    assert [gather.data.shape[1] for gather in gathers] == [2000, 1500]


def test_blows_weigh_by_what_the_instrument_had_stacked(write, make_shot):
    first, second = make_shot(LINE, -4.0, noise=0.0), 3.0 * make_shot(LINE, -4.0, noise=0.0)
    paths = [write("a.dat", -4.0, data=first, stack=3), write("b.dat", -4.0, data=second, stack=1)]
    _, gathers = prepare_records(paths)
    np.testing.assert_allclose(gathers[0].data, 1.5 * first, atol=1e-6)
    assert gathers[0].blows == 4


def test_progress_is_told_once_per_file(write):
    class Counter:
        total, done = 0, 0

        def start(self, title, total):
            self.total = total

        def advance(self, count=1):
            self.done += count

    counter = Counter()
    prepare_records([write("a.dat", -4.0), write("b.dat", 50.0)], progress=counter)
    assert (counter.total, counter.done) == (2, 2)
