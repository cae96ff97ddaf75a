"""Conditioning takes away what it is asked to, and nothing of the wave."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from surfdisp.core import Gather, InputError
from surfdisp.records import condition

LINE = np.array([4.0, 10.0, 40.0])


def gather_of(data, delay=0.0, interval=0.001):
    return Gather(
        data=np.atleast_2d(data), interval=interval, receivers=LINE[: len(data)], source=0.0, delay=delay
    )


def rows(function, samples=1000, delay=0.0):
    times = delay + 0.001 * np.arange(samples)
    return gather_of(np.stack([function(times)] * 3), delay)


@given(level=st.floats(-1e3, 1e3), slope=st.floats(-1e3, 1e3))
def test_a_straight_line_disappears(level, slope):
    found = condition(rows(lambda t: level + slope * t), taper=0.0)
    np.testing.assert_allclose(found.data, 0.0, atol=1e-9 * (1.0 + abs(level) + abs(slope)))


def test_with_everything_off_nothing_changes():
    gather = rows(lambda t: np.sin(60.0 * t) + 3.0)
    assert condition(gather, detrend=False, taper=0.0) == gather


def test_the_taper_ends_at_zero_and_leaves_the_beginning_after_the_blow():
    found = condition(rows(np.ones_like), detrend=False, taper=0.1)
    np.testing.assert_array_equal(found.data[0, :899], 1.0)
    assert found.data[0, -1] == 0.0
    assert np.all(np.diff(found.data[0, 899:]) <= 0.0)


def test_the_taper_at_the_beginning_is_over_by_the_blow():
    found = condition(rows(np.ones_like, delay=-0.03), detrend=False, taper=0.1)
    assert found.data[0, 0] == 0.0
    assert found.data[0, 30] == pytest.approx(1.0)
    assert found.data[0, 15] == pytest.approx(0.5)  # a cosine is at half its height in its middle


@pytest.mark.parametrize(
    ("frequency", "gain"), [(5.0, 0.0), (12.0, 1.0), (20.0, 1.0), (29.0, 1.0), (60.0, 0.0)]
)
def test_the_band_keeps_its_inside_and_stops_half_an_octave_out(frequency, gain):
    wave = rows(
        lambda t: np.sin(2.0 * np.pi * frequency * t) * np.exp(-(((t - 1.0) / 0.25) ** 2)), samples=2000
    )
    found = condition(wave, band=(10.0, 30.0), taper=0.0, detrend=False)
    np.testing.assert_allclose(found.data, gain * wave.data, atol=5e-3)


def test_an_open_side_of_the_band_keeps_all_of_it():
    wave = rows(lambda t: np.sin(2.0 * np.pi * 200.0 * t) * np.exp(-(((t - 0.5) / 0.1) ** 2)))
    found = condition(wave, band=(10.0, None), taper=0.0, detrend=False)
    np.testing.assert_allclose(found.data, wave.data, atol=1e-6)


def test_the_filter_does_not_move_a_pulse():
    wave = rows(lambda t: np.exp(-(((t - 0.5) / 0.02) ** 2)))
    found = condition(wave, band=(5.0, 40.0), taper=0.0)
    assert np.all(np.argmax(found.data, axis=1) == 500)


def test_the_filter_does_not_carry_the_end_of_a_record_to_its_beginning():
    found = condition(rows(lambda t: np.exp(-(((t - 0.99) / 0.005) ** 2))), band=(5.0, 40.0), taper=0.0)
    assert np.max(np.abs(found.data[:, :200])) < 0.02 * np.max(np.abs(found.data))


def test_the_window_keeps_each_receivers_own_times():
    found = condition(
        rows(np.ones_like, delay=-0.1), detrend=False, taper=0.0, window=(100.0, 400.0), window_edge=0.05
    )
    for row, offset in zip(found.data, LINE, strict=True):
        begin, end = offset / 400.0, offset / 100.0 + 0.15
        times = found.times
        inside = (times >= begin) & (times <= end)
        np.testing.assert_array_equal(row[inside], 1.0)
        np.testing.assert_allclose(row[(times <= begin - 0.05) | (times >= end + 0.05)], 0.0, atol=1e-12)
        edge = (times > begin - 0.05) & (times < begin)
        assert np.all(np.diff(row[edge]) > 0.0)


def test_trimming_keeps_the_slowest_wave_at_the_farthest_receiver():
    found = condition(
        rows(np.ones_like, samples=3000, delay=-0.1), detrend=False, taper=0.05, slowest_velocity=50.0
    )
    arrival = 40.0 / 50.0
    kept = found.times <= arrival + 0.15
    np.testing.assert_allclose(found.data[2, kept & (found.times >= 0.0)], 1.0)
    assert arrival + 0.15 < found.times[-1] < arrival + 0.30
    assert found.delay == -0.1


def test_a_short_record_is_not_lengthened():
    gather = rows(np.ones_like, samples=100)
    assert condition(gather, slowest_velocity=20.0).data.shape == gather.data.shape


@pytest.mark.parametrize(
    ("options", "demand"),
    [
        ({"taper": 0.6}, "taper must lie between 0 and 0.5; got 0.6"),
        ({"band": (30.0, 10.0)}, "band limits must increase; got 30 and 10"),
        ({"band": (-1.0, None)}, "band limit must be positive"),
        ({"window": (400.0, 100.0)}, "window limits must increase"),
        ({"window_edge": 0.0}, "window_edge must be positive"),
        ({"slowest_velocity": -1.0}, "slowest_velocity must be positive"),
    ],
)
def test_impossible_options_are_refused(options, demand):
    with pytest.raises(InputError, match=demand):
        condition(rows(np.ones_like), **options)
