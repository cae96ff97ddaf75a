"""Tables of shots and receivers: what the crew wrote down, in metres or feet."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from surfdisp.core import InputError
from surfdisp.records import Geometry, ReceiverLine, ShotGeometry, geometry_beside, read_geometry_csv
from surfdisp.records.line import project


def table(folder, text, name="shots.csv"):
    path = folder / name
    path.write_text(text)
    return path


def test_a_table_of_shots(tmp_path):
    text = (
        "# field notes of the second day\n"
        "file, source_m, source_off_line_m, delay_s, first_receiver_m, receiver_spacing_m\n"
        "a.dat, -4,     , -0.02, 10, 2\n\n"
        "b.dat, 50, 1.5 ,      ,   ,\n"
    )
    geometry = read_geometry_csv(table(tmp_path, text))
    line = ReceiverLine(first=10.0, spacing=2.0)
    assert geometry.shots == {
        "a.dat": ShotGeometry(source=-4.0, delay=-0.02, line=line),
        "b.dat": ShotGeometry(source=50.0, source_off_line=1.5),
    }
    np.testing.assert_array_equal(geometry.positions("a.dat", 3), [10.0, 12.0, 14.0])
    assert geometry.positions("b.dat", 3) is None


def test_both_tables_in_feet(tmp_path):
    shots = table(tmp_path, "file,source_ft\na.dat,-10\n")
    receivers = table(tmp_path, "channel,receiver_ft,elevation_m\n1,0,7\n2,10,8\n", "receivers.csv")
    geometry = read_geometry_csv(shots, receivers)
    assert geometry.shots["a.dat"].source == pytest.approx(-3.048)
    np.testing.assert_allclose(geometry.positions("a.dat", 2), [0.0, 3.048])
    np.testing.assert_allclose(geometry.heights("a.dat", 2), [7.0, 8.0])
    assert geometry.origin == "shots.csv and receivers.csv"


@pytest.mark.parametrize(
    ("text", "demand"),
    [
        ("", "is empty; expected a line of column names"),
        ("name,source_m\na.dat,1\n", "expected a column `file` or `channel`; got name, source_m"),
        ("file,source\na.dat,1\n", r"line 2: column 'source' is not expected; expected file, source_m"),
        ("file,source_m\na.dat,near\n", "line 2: source_m must be a number; got 'near'"),
        ("file,source_m\na.dat,nan\n", "line 2: source_m must be a number; got 'nan'"),
        ("file,source_m\na.dat\n", "line 2: expected 2 cells; got 1"),
        ("file,source_m\na.dat,1\na.dat,2\n", "line 3: `file` must name each file once; got 'a.dat'"),
        ("file,source_m,source_ft\na.dat,1,2\n", "column 'source_ft' is not expected"),
        (
            "file,first_receiver_m,receiver_spacing_m\na.dat,0,-2\n",
            "line 2: receiver spacing must",
        ),
        ("file,first_receiver_m\na.dat,0\n", "must be given together"),
        ("channel,receiver_m\n1,0\n3,4\n", "line 3: `channel` must count 1, 2, 3, ...; got '3'"),
        ("channel,receiver_m\n1,0\n2,\n", "receiver_m is missing for channel 2"),
    ],
)
def test_a_broken_table_is_refused_by_file_line_and_column(tmp_path, text, demand):
    path = table(tmp_path, text)
    with pytest.raises(InputError, match=demand.replace(".", r"\.")) as caught:
        read_geometry_csv(path)
    assert str(caught.value).startswith(str(path))


def test_a_missing_or_binary_table(tmp_path):
    with pytest.raises(InputError, match="cannot be read as a CSV table"):
        read_geometry_csv(tmp_path / "none.csv")
    (tmp_path / "odd.csv").write_bytes(b"\xff\xfe\x00\x81")
    with pytest.raises(InputError, match="cannot be read as a CSV table"):
        read_geometry_csv(tmp_path / "odd.csv")


def test_tables_beside_the_records(tmp_path):
    assert geometry_beside([tmp_path / "a.dat"]) is None
    table(tmp_path, "file,source_m\na.dat,-4\n")
    assert geometry_beside([tmp_path / "a.dat", tmp_path / "b.dat"]).shots["a.dat"].source == -4.0
    other = tmp_path / "day2"
    other.mkdir()
    table(other, "file,source_m\na.dat,-4\n")
    with pytest.raises(InputError, match="in several folders"):
        geometry_beside([tmp_path / "a.dat", other / "a.dat"])


@pytest.mark.parametrize(
    ("make", "demand"),
    [
        (lambda: ReceiverLine(spacing=-2.0), "receiver spacing must be positive; got -2.0"),
        (lambda: ReceiverLine(spacing=float("nan")), "receiver spacing must be finite"),
        (lambda: ShotGeometry(source="here"), "source must be a number"),
        (lambda: Geometry(receivers=[0.0, np.inf]), "receivers must be finite"),
        (lambda: Geometry(receivers=[0.0, 1.0], elevations=[1.0]), "as many entries"),
        (lambda: Geometry(receivers=[0.0], line=ReceiverLine(spacing=1.0)), "not both"),
    ],
)
def test_impossible_positions_are_refused(make, demand):
    with pytest.raises(InputError, match=demand):
        make()


@given(
    angle=st.floats(0.0, 2.0 * np.pi),
    x0=st.floats(-1e4, 1e4),
    y0=st.floats(-1e4, 1e4),
    steps=st.lists(st.floats(0.5, 20.0), min_size=2, max_size=20),
    ahead=st.floats(-50.0, 50.0),
    aside=st.floats(-50.0, 50.0),
)
def test_projection_keeps_all_distances_to_the_source(angle, x0, y0, steps, ahead, aside):
    along = np.array([np.cos(angle), np.sin(angle)])
    across = np.array([-along[1], along[0]])
    marks = np.concatenate([[0.0], np.cumsum(steps)])
    receivers = np.array([x0, y0]) + marks[:, None] * along
    source = np.array([x0, y0]) + ahead * along + aside * across
    line = project(receivers, source)
    flat = np.hypot(line.receivers - line.source, line.source_off_line)
    np.testing.assert_allclose(flat, np.linalg.norm(receivers - source, axis=1), atol=1e-6)
    np.testing.assert_allclose(np.abs(np.diff(line.receivers)), steps, atol=1e-6)
    assert line.bend == pytest.approx(0.0, abs=1e-6)
