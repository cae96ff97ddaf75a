"""One field file of each format, written by ObsPy or by our own writer, comes back with its geometry."""

import warnings

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import FormatError, InputError
from surfdisp.records import Geometry, ReceiverLine, ShotGeometry, read_gather, write_seg2

LINE = np.array([0.0, 2.0, 4.5, 6.0])
DATA = np.arange(40.0).reshape(4, 10) - 17.0


def seg2(path, **changes):
    values = {"data": DATA, "interval": 0.0005, "receivers": LINE, "source": -4.0, **changes}
    write_seg2(path, **values)
    return path


def stream_of(data, interval=0.0005):
    import obspy

    return obspy.Stream([obspy.Trace(row.astype(np.float32), {"delta": interval}) for row in data])


def segy(path, kind, *, data=DATA, interval=0.0005, system=1, **per_trace):
    """A SEG-Y or SU file by ObsPy's writer; `per_trace` gives header values, one per trace or for all."""
    from obspy.core import AttribDict
    from obspy.io.segy.segy import SEGYBinaryFileHeader, SEGYTraceHeader

    stream = stream_of(data, interval)
    for index, trace in enumerate(stream):
        header = SEGYTraceHeader()
        for name, values in per_trace.items():
            value = values if np.ndim(values) == 0 else values[index]
            setattr(header, name, int(value))
        trace.stats["su" if kind == "SU" else "segy"] = AttribDict(trace_header=header)
    stream.stats = AttribDict(binary_file_header=SEGYBinaryFileHeader(), textual_file_header=b"")
    stream.stats.binary_file_header.measurement_system = system
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        stream.write(
            str(path), format=kind, byteorder=">", **({"data_encoding": 5} if kind == "SEGY" else {})
        )
    return path


@settings(max_examples=30, deadline=None)
@given(
    seed=st.integers(0, 2**32 - 1),
    traces=st.integers(2, 12),
    samples=st.integers(2, 50),
    delay=st.floats(-0.5, 0.5),
    source=st.floats(-500.0, 500.0),
    stack=st.integers(1, 50),
    sample_format=st.sampled_from(["float32", "int32"]),
)
def test_what_our_writer_puts_down_comes_back(
    tmp_path_factory, seed, traces, samples, delay, source, stack, sample_format
):
    random = np.random.default_rng(seed)
    data = random.normal(size=(traces, samples)).astype(np.float32)
    receivers = np.cumsum(random.uniform(0.1, 5.0, traces))
    path = tmp_path_factory.mktemp("seg2") / "a.dat"
    options = {"delay": delay, "stack": stack, "sample_format": sample_format}
    write_seg2(path, data, 0.00025, receivers=receivers, source=source, **options)
    gather = read_gather(path)
    np.testing.assert_array_equal(gather.receivers, receivers)
    assert (gather.source, gather.delay, gather.interval, gather.blows) == (source, delay, 0.00025, stack)
    np.testing.assert_allclose(gather.data, data, atol=np.abs(data).max() / 2**22, rtol=1e-6)


def test_each_trace_has_its_own_descaling_factor(tmp_path):
    path = seg2(tmp_path / "a.dat", descaling=[1.0, 0.5, 2.0, 0.25], stack=4, sample_format="int32")
    np.testing.assert_array_equal(read_gather(path).data, DATA)


def test_feet_become_metres(tmp_path):
    gather = read_gather(seg2(tmp_path / "a.dat", units="FEET"))
    np.testing.assert_allclose(gather.receivers, LINE * 0.3048, rtol=1e-15)
    assert gather.source == pytest.approx(-4.0 * 0.3048)
    assert any("feet" in note for note in gather.notes)


def test_traces_are_ordered_along_the_line(tmp_path):
    gather = read_gather(seg2(tmp_path / "a.dat", receivers=LINE[::-1]))
    np.testing.assert_array_equal(gather.receivers, LINE)
    np.testing.assert_array_equal(gather.data, DATA[::-1])


def test_a_line_askew_keeps_distances_and_gives_the_source_its_place_off_it(tmp_path):
    along = np.array([0.8, 0.6])
    start = np.array([1000.0, 2000.0])
    places = [(*(start + x * along), 10.0 + 0.1 * x) for x in LINE]
    source = (*(start - 4.0 * along + 3.0 * np.array([-0.6, 0.8])), 9.0)
    gather = read_gather(seg2(tmp_path / "a.dat", receivers=places, source=source))
    np.testing.assert_allclose(gather.receivers, LINE, atol=1e-9)
    assert gather.source == pytest.approx(-4.0, abs=1e-9)
    assert gather.source_off_line == pytest.approx(3.0, abs=1e-9)
    np.testing.assert_allclose(gather.elevations, 10.0 + 0.1 * LINE)
    space = np.linalg.norm(np.array(places) - np.array(source), axis=1)
    np.testing.assert_allclose(gather.offsets, space, rtol=1e-9)
    assert any("3.00 m off the line" in note for note in gather.notes)


def test_a_line_of_equal_y_keeps_its_x(tmp_path):
    places = [(x, 7.0) for x in LINE]
    gather = read_gather(seg2(tmp_path / "a.dat", receivers=places, source=(-4.0, 9.0)))
    np.testing.assert_array_equal(gather.receivers, LINE)
    assert (gather.source, gather.source_off_line) == (-4.0, 2.0)


def test_a_bent_line_is_told(tmp_path):
    places = [(0.0, 0.0), (2.0, 1.0), (4.0, 1.0), (6.0, 0.0)]
    assert any(
        "beside their straight line" in note
        for note in read_gather(seg2(tmp_path / "a.dat", receivers=places)).notes
    )


def test_a_source_without_elevation_stands_on_the_ground(tmp_path):
    places = [(x, 0.0, 5.0 + x) for x in LINE]
    assert read_gather(seg2(tmp_path / "a.dat", receivers=places, source=4.4)).source_elevation == 9.5


@pytest.mark.parametrize("date", ["24/12/2031", "12/24/2031", "24/Dez/2031", "2031", ""])
def test_no_date_makes_a_file_unreadable(tmp_path, date):
    strings = {"ACQUISITION_DATE": date, "ACQUISITION_TIME": "25:61"}
    np.testing.assert_array_equal(read_gather(seg2(tmp_path / "a.dat", file_strings=strings)).data, DATA)


def test_delay_and_private_keys_raise_no_warning(tmp_path):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        gather = read_gather(seg2(tmp_path / "a.dat", delay=-0.01, file_strings={"MAKER_KEY": "1"}))
    assert gather.delay == -0.01
    assert gather.notes == ()


@pytest.mark.parametrize("kind", ["SEGY", "SU"])
@pytest.mark.parametrize(("scalar", "factor"), [(-10, 0.1), (0, 1.0), (2, 2.0)])
def test_segy_coordinates_take_their_scalar(tmp_path, kind, scalar, factor):
    path = segy(
        tmp_path / "a.sgy",
        kind,
        group_coordinate_x=[100, 120, 145, 160],
        source_coordinate_x=60,
        receiver_group_elevation=[10, 20, 30, 40],
        surface_elevation_at_source=5,
        scalar_to_be_applied_to_all_coordinates=scalar,
        scalar_to_be_applied_to_all_elevations_and_depths=-10,
        delay_recording_time=-20,
        number_of_vertically_summed_traces_yielding_this_trace=6,
    )
    gather = read_gather(path)
    np.testing.assert_allclose(gather.receivers, np.array([100, 120, 145, 160]) * factor)
    assert gather.source == pytest.approx(60 * factor)
    np.testing.assert_allclose(gather.elevations, [1.0, 2.0, 3.0, 4.0])
    assert gather.source_elevation == 0.5
    assert (gather.delay, gather.blows, gather.interval) == (-0.02, 6, 0.0005)
    np.testing.assert_array_equal(gather.data, DATA)


def test_segy_in_feet(tmp_path):
    gather = read_gather(segy(tmp_path / "a.sgy", "SEGY", system=2, group_coordinate_x=[0, 10, 20, 30]))
    np.testing.assert_allclose(gather.receivers, np.array([0.0, 10.0, 20.0, 30.0]) * 0.3048)


@pytest.mark.parametrize("kind", ["SEGY", "SU"])
def test_whole_microseconds_that_stand_for_a_broken_number_are_told(tmp_path, kind):
    even = read_gather(segy(tmp_path / "even.sgy", kind, group_coordinate_x=[0, 10, 20, 30]))
    odd = read_gather(segy(tmp_path / "odd.sgy", kind, interval=6.25e-5, group_coordinate_x=[0, 10, 20, 30]))
    assert even.notes == ()
    assert odd.interval == pytest.approx(6.2e-5)
    assert odd.notes == ("sampling interval 62 microseconds: if 16000 Hz is meant, times are 0.8 % off",)


def test_segy_with_offsets_only(tmp_path):
    offset = "distance_from_center_of_the_source_point_to_the_center_of_the_receiver_group"
    gather = read_gather(segy(tmp_path / "a.sgy", "SEGY", **{offset: [4, 6, 8, 10]}))
    np.testing.assert_array_equal(gather.receivers, [4.0, 6.0, 8.0, 10.0])
    assert gather.source == 0.0
    assert any("positions are the offsets" in note for note in gather.notes)


def test_segy_trace_marked_dead_is_set_aside(tmp_path):
    path = segy(
        tmp_path / "a.sgy", "SEGY", group_coordinate_x=[0, 2, 4, 6], trace_identification_code=[1, 1, 2, 1]
    )
    gather = read_gather(path)
    np.testing.assert_array_equal(gather.receivers, [0.0, 2.0, 6.0])
    assert "channel 3 set aside: marked dead in the header" in gather.notes


def test_segy_in_angles_has_no_positions(tmp_path):
    path = segy(tmp_path / "a.sgy", "SEGY", group_coordinate_x=[0, 2, 4, 6], coordinate_units=2)
    with pytest.raises(InputError, match=r"a\.sgy: no receiver positions"):
        read_gather(path)


def test_several_shots_in_one_file_are_told_apart(tmp_path, make_shot):
    from surfdisp.records import prepare_records

    line = 2 * np.arange(12)
    data = np.concatenate([make_shot(line, -4.0), make_shot(line, 26.0)])
    path = segy(
        tmp_path / "line.sgy",
        "SEGY",
        data=data,
        original_field_record_number=[7] * 12 + [8] * 12,
        group_coordinate_x=np.tile(line, 2),
        source_coordinate_x=[-4] * 12 + [26] * 12,
    )
    with pytest.raises(FormatError, match="holds 2 shots"):
        read_gather(path)
    records, gathers = prepare_records([path])
    assert [(record.file, record.source, record.traces) for record in records] == [
        ("line.sgy", -4.0, 12),
        ("line.sgy", 26.0, 12),
    ]
    assert [gather.source for gather in gathers] == [-4.0, 26.0]


def sac(path, row, interval=0.0005, **header):
    import obspy
    from obspy.core import AttribDict

    trace = obspy.Trace(row.astype(np.float32), {"delta": interval, "sac": AttribDict(header)})
    trace.write(str(path), format="SAC")
    return path


def test_sac_traces_of_one_shot_make_one_gather(tmp_path, make_shot):
    from surfdisp.records import prepare_records

    line = 2.0 * np.arange(12)
    data = make_shot(line, -4.0)
    paths = [
        sac(tmp_path / f"{i:02}.sac", row, dist=(4.0 + x) / 1000.0, b=-0.02, o=0.03)
        for i, (row, x) in enumerate(zip(data, line, strict=True))
    ]
    gather = read_gather(paths)
    np.testing.assert_allclose(gather.receivers, 4.0 + line, rtol=1e-6)
    assert gather.source == 0.0
    assert gather.delay == pytest.approx(-0.05)
    np.testing.assert_allclose(gather.data, data, rtol=1e-6, atol=1e-6)
    records, gathers = prepare_records(paths)
    assert len(records) == 12
    assert len(gathers) == 1
    np.testing.assert_array_equal(gathers[0].data, gather.data)


def test_a_damaged_trace_of_several_files_is_named_by_its_channel(tmp_path):
    rows = DATA.copy()
    rows[2, 3] = np.nan
    paths = [sac(tmp_path / f"{i}.sac", row, dist=0.001 * (i + 1)) for i, row in enumerate(rows)]
    gather = read_gather(paths)
    np.testing.assert_allclose(gather.receivers, [1.0, 2.0, 4.0], rtol=1e-6)
    assert gather.notes == ("channel 3 set aside: samples that are no sensible numbers",)


def test_sac_keeps_half_a_microsecond(tmp_path):
    gather = read_gather(sac(tmp_path / "a.sac", DATA[0], 6.25e-5, dist=0.01))
    assert gather.interval == 6.25e-5
    assert gather.notes == ()
    fine = read_gather(sac(tmp_path / "b.sac", DATA[0], 1.0 / 6000.0, dist=0.01))
    assert fine.interval == pytest.approx(1.0 / 6000.0, rel=1e-6)


def test_sac_latitudes_become_metres(tmp_path):
    # On the ellipsoid WGS 84 one degree of latitude at 0 is 110574 m, one of longitude 111320 m [M].
    north = sac(tmp_path / "n.sac", DATA[0], stla=0.01, stlo=0.0, evla=0.0, evlo=0.0)
    east = sac(tmp_path / "e.sac", DATA[0], stla=0.0, stlo=0.01, evla=0.0, evlo=0.0)
    assert read_gather(north).offsets[0] == pytest.approx(1105.74, abs=0.05)
    assert read_gather(east).offsets[0] == pytest.approx(1113.20, abs=0.05)


def miniseed(path, data=DATA):
    stream = stream_of(data)
    for index, trace in enumerate(stream):
        trace.stats.station = f"G{index + 1:02}"
    stream.write(str(path), format="MSEED")
    return path


def test_miniseed_takes_its_positions_from_the_table(tmp_path):
    path = miniseed(tmp_path / "a.mseed")
    with pytest.raises(InputError, match=r"a\.mseed: no receiver positions in the header; give positions"):
        read_gather(path)
    geometry = Geometry(
        line=ReceiverLine(first=1.0, spacing=2.0), shots={"a.mseed": ShotGeometry(source=-3.0)}
    )
    gather = read_gather(path, geometry=geometry)
    np.testing.assert_array_equal(gather.receivers, [1.0, 3.0, 5.0, 7.0])
    assert gather.source == -3.0
    np.testing.assert_array_equal(gather.data, DATA)


def test_miniseed_with_a_gap_is_refused(tmp_path):
    stream = stream_of(DATA[:1])
    late = stream[0].copy()
    late.stats.starttime += 1.0
    stream.append(late)
    stream.write(str(tmp_path / "a.mseed"), format="MSEED")
    with pytest.raises(FormatError, match="recorded in pieces"):
        read_gather(tmp_path / "a.mseed")


def test_a_table_replaces_source_off_line_elevation_and_delay(tmp_path):
    shot = ShotGeometry(source=-6.0, source_off_line=2.5, source_elevation=1.5, delay=-0.03)
    geometry = Geometry(shots={"a.dat": shot}, elevations=[1.0, 2.0, 3.0, 4.0])
    gather = read_gather(seg2(tmp_path / "a.dat"), geometry=geometry)
    assert (gather.source, gather.source_off_line, gather.source_elevation) == (-6.0, 2.5, 1.5)
    assert gather.delay == -0.03
    np.testing.assert_array_equal(gather.receivers, LINE)
    np.testing.assert_array_equal(gather.elevations, [1.0, 2.0, 3.0, 4.0])


def test_a_source_in_the_table_counts_along_an_askew_line(tmp_path):
    places = [tuple(np.array([1000.0, 500.0]) + x * np.array([0.6, 0.8])) for x in LINE]
    path = seg2(tmp_path / "a.dat", receivers=places, source=(0.0, 0.0))
    gather = read_gather(path, geometry=Geometry(shots={"a.dat": ShotGeometry(source=-6.0)}))
    assert (gather.source, gather.source_off_line) == (-6.0, 0.0)
    np.testing.assert_allclose(gather.offsets, LINE + 6.0)


def test_a_table_of_another_length_is_refused(tmp_path):
    with pytest.raises(InputError, match=r"a\.dat: .* as many channels as the file has; got 3 for 4"):
        read_gather(seg2(tmp_path / "a.dat"), geometry=Geometry(receivers=[0.0, 1.0, 2.0]))


@pytest.mark.parametrize(
    ("strings", "demand"),
    [
        ({"RECEIVER_LOCATION": "0.0"}, "all 4 receivers are at 0 m"),
        ({"RECEIVER_LOCATION": ""}, "no receiver positions in the header"),
        ({"SOURCE_LOCATION": "unknown"}, "no source position in the header"),
        ({"SAMPLE_INTERVAL": "-0.001"}, "sampling interval must be positive"),
        ({"SAMPLE_INTERVAL": "quick"}, "begins like SEG-2 but cannot be read"),
    ],
)
def test_a_header_without_geometry_or_interval_is_refused_by_name(tmp_path, strings, demand):
    with pytest.raises(InputError, match=demand) as caught:
        read_gather(seg2(tmp_path / "a.dat", trace_strings=strings))
    assert str(caught.value).startswith("a.dat: ")


def test_odd_positions_are_told(tmp_path):
    line = 2.0 * np.arange(12)
    typo = np.where(line == 10.0, 11.5, line)
    swapped = line[[0, 1, 3, 2, 4, 5, 6, 7, 8, 9, 10, 11]]
    twice = np.where(line == 10.0, 8.0, line)
    data = np.ones((12, 5))
    notes = [
        read_gather(seg2(tmp_path / "a.dat", data=data, receivers=x)).notes
        for x in (line, typo, swapped, twice)
    ]
    assert notes[0] == ()
    assert notes[1] == ("receiver at 11.5 m breaks the even spacing of 2 m; check the header",)
    assert notes[2] == ("receiver positions do not run one way along the channels; check the header",)
    assert notes[3] == ("channel 6 set aside: at 8 m like channel 5",)


def test_a_wider_gap_in_an_even_line_is_no_fault(tmp_path):
    line = np.cumsum([0.0, 2.0, 2.0, 2.0, 2.0, 3.0, 5.0, 2.0, 2.0, 2.0, 2.0, 2.0])
    assert read_gather(seg2(tmp_path / "a.dat", data=np.ones((12, 5)), receivers=line)).notes == ()


def test_uneven_spacing_is_no_fault(tmp_path):
    line = np.array([0.0, 0.5, 1.0, 2.0, 3.0, 5.0, 7.0, 10.0, 14.0, 18.0, 24.0, 30.0])
    gather = read_gather(seg2(tmp_path / "a.dat", data=np.ones((12, 5)), receivers=line))
    np.testing.assert_array_equal(gather.receivers, line)
    assert gather.notes == ()


def test_a_source_elevation_left_at_zero_among_high_receivers_is_doubted(tmp_path):
    places = [(x, 0.0, 120.0 + x) for x in LINE]
    gather = read_gather(seg2(tmp_path / "a.dat", receivers=places, source=(-4.0, 0.0, 0.0)))
    assert gather.source_elevation == 120.0
    assert gather.notes == ("source elevation is 0 m in the header; 120 m at the nearest receiver is used",)


def test_a_table_of_receivers_makes_the_headers_y_of_the_source_meaningless(tmp_path):
    places = [(5000.0 + x, 9000.0) for x in LINE]
    path = seg2(tmp_path / "a.dat", receivers=places, source=(-4.0, 9000.0))
    gather = read_gather(path, geometry=Geometry(receivers=LINE))
    np.testing.assert_array_equal(gather.receivers, LINE)
    assert (gather.source, gather.source_off_line) == (-4.0, 0.0)


def test_the_ground_under_the_source_is_found_along_an_askew_line_too(tmp_path):
    along = np.array([0.6, 0.8])
    places = [(*(np.array([1000.0, 500.0]) + x * along), 5.0 + x) for x in LINE]
    source = tuple(np.array([1000.0, 500.0]) + 4.4 * along)
    assert read_gather(seg2(tmp_path / "a.dat", receivers=places, source=source)).source_elevation == 9.5
