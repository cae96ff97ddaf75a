"""Wrong headers, as crews leave them, are told from right ones by the traces."""

import numpy as np
import pytest

from surfdisp.records import Geometry, ShotGeometry, prepare_records, write_seg2

LINE = 2.0 * np.arange(24)


def row(tmp_path, data, source, *, delay=0.0, name="shot.dat", geometry=None, **strings):
    path = tmp_path / name
    write_seg2(path, data, 0.0005, receivers=LINE, source=source, delay=delay, trace_strings=strings)
    records, gathers = prepare_records([path], geometry=geometry)
    return records[0], gathers


@pytest.mark.parametrize("source", [-20.0, -4.0, -0.5, 15.0, 23.0, 47.0, 60.0])
@pytest.mark.parametrize("delay", [0.0, -0.1, -0.01])
def test_right_headers_raise_no_doubt(tmp_path, make_shot, source, delay):
    record, gathers = row(tmp_path, make_shot(LINE, source, delay=delay, noise=0.02), source, delay=delay)
    assert record.used
    assert [flag for flag in record.flags if "split" not in flag and "set aside" not in flag] == []
    assert all(gather.delay == delay for gather in gathers)


@pytest.mark.parametrize(
    ("true", "header"), [(-4.0, 50.0), (50.0, -4.0), (50.0, 7.0), (-4.0, 40.0), (23.0, -4.0)]
)
def test_a_source_that_the_arrivals_contradict_refuses_the_record(tmp_path, make_shot, true, header):
    record, gathers = row(tmp_path, make_shot(LINE, true, noise=0.02), header)
    assert not record.used
    assert gathers == ()
    assert record.reason.startswith(f"shot.dat: source position {header:g} m contradicts the arrivals")
    where = "off the low end" if true < 0 else "off the high end" if true > 46 else "near 23 m"
    assert where in record.reason
    assert "shots.csv" in record.reason
    assert record.flags == ()


def test_a_shot_number_for_a_position_is_recognised(tmp_path, make_shot):
    data = make_shot(LINE, 50.0, noise=0.02)
    record, _ = row(tmp_path, data, 1007.0, SHOT_SEQUENCE_NUMBER="1007")
    assert not record.used
    assert "961 m outside the spread of 46 m" in record.reason
    assert "equals the shot number" in record.reason
    record, _ = row(tmp_path, data, 7.0, name="7.dat")
    assert "equals the shot number" in record.reason


def test_a_position_that_happens_to_equal_the_number_is_only_told(tmp_path, make_shot):
    record, gathers = row(tmp_path, make_shot(LINE, 50.0), 50.0, name="50.dat")
    assert record.used
    assert len(gathers) == 1
    assert record.flags == ("source position 50 m equals the shot number; is it in metres?",)


def test_the_users_own_table_is_doubted_but_followed(tmp_path, make_shot):
    geometry = Geometry(shots={"shot.dat": ShotGeometry(source=50.0)})
    record, gathers = row(tmp_path, make_shot(LINE, -4.0), 0.0, geometry=geometry)
    assert record.used
    assert gathers[0].source == 50.0
    assert any("contradicts the arrivals" in flag for flag in record.flags)


@pytest.mark.parametrize("true", [-0.1, -0.06])
def test_a_delay_of_the_wrong_sign_is_turned_and_told(tmp_path, make_shot, true):
    record, gathers = row(tmp_path, make_shot(LINE, -4.0, delay=true), -4.0, delay=-true)
    assert record.used
    assert record.delay == gathers[0].delay == true
    assert any(f"{true:g} s is used" in flag for flag in record.flags)


def test_arrivals_before_the_blow_are_told(tmp_path, make_shot):
    record, gathers = row(tmp_path, make_shot(LINE, -4.0, delay=0.0), -4.0, delay=-0.2)
    assert record.used
    assert gathers[0].delay == -0.2
    assert any("precede it; check delay and trigger" in flag for flag in record.flags)


def test_a_pretrigger_that_the_header_hides_is_told(tmp_path, make_shot):
    record, _ = row(tmp_path, make_shot(LINE, -4.0, delay=-0.15), -4.0, delay=0.0)
    assert record.used
    assert any("later than 60 m/s; check delay, trigger" in flag for flag in record.flags)


def test_loud_traces_far_from_the_source_are_told(tmp_path, make_shot):
    data = make_shot(LINE, -4.0, noise=0.02)
    data[18:] *= 30.0
    record, _ = row(tmp_path, data, -4.0)
    assert record.used
    told = [flag for flag in record.flags if flag.startswith("strongest at")]
    assert len(told) == 1
    assert "not near the source at -4 m" in told[0]


def test_a_far_source_whose_arrivals_fit_is_believed(tmp_path, make_shot):
    record, gathers = row(tmp_path, make_shot(LINE, 150.0, samples=4000, noise=0.02), 150.0)
    assert record.used
    assert record.flags == ()
    assert gathers[0].source == 150.0


def test_noise_alone_is_refused_and_its_header_not_judged(tmp_path):
    record, gathers = row(tmp_path, np.random.default_rng(1).normal(size=(24, 2000)), 50.0)
    assert not record.used
    assert gathers == ()
    assert not any("contradicts" in text for text in (record.reason, *record.flags))
