"""Alignment follows the sound traces, to a fraction of a sample; averages weigh by blows."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from surfdisp.core import Gather
from surfdisp.records.stacking import merge_blows, stack_blows

TIMES = 0.001 * np.arange(800)


def blow(late=0.0, *, name="a", blows=1, scale=1.0, swapped=0.0):
    """Three traces; the last one, of another cause, is late by `swapped`."""
    centres = np.array([0.2, 0.3, 0.4]) + np.array([late, late, swapped])
    lag = TIMES - centres[:, None]
    data = scale * np.cos(2.0 * np.pi * 20.0 * lag) * np.exp(-((lag / 0.03) ** 2))
    return Gather(data=data, interval=0.001, receivers=[1.0, 2.0, 3.0], source=0.0, name=name, blows=blows)


ALL = np.array([True, True, True])


@settings(max_examples=30, deadline=None)
@given(late=st.floats(-0.015, 0.015))
def test_a_late_blow_is_moved_back_by_as_much(late):
    stack = stack_blows([blow(), blow(late, swapped=late)], [ALL, ALL])
    assert stack.shifts == (0.0, pytest.approx(late, abs=5e-5))
    assert np.all(stack.filled)
    assert stack.used == (True, True)
    np.testing.assert_allclose(stack.data, blow().data, atol=5e-3)


def test_unsound_traces_have_no_say_in_the_alignment_and_no_part_in_the_stack():
    sound = np.array([True, True, False])
    blows = [blow(), blow(0.004, swapped=-0.012)]
    both = stack_blows(blows, [ALL, sound])
    assert both.shifts[1] == pytest.approx(0.004, abs=5e-5)
    np.testing.assert_allclose(both.data[2], blow().data[2], atol=1e-12)


def test_weights_are_the_blows_already_stacked():
    parts = [blow(blows=3, name="a"), blow(blows=1, name="b", scale=5.0)]
    stack = stack_blows(parts, [ALL, ALL])
    np.testing.assert_allclose(stack.data, 2.0 * blow().data, atol=1e-9)
    merged = merge_blows(parts, stack)
    assert (merged.blows, merged.name) == (4, "a + b")


def test_a_trace_sound_in_no_blow_is_not_filled():
    neither = np.array([True, False, True])
    stack = stack_blows([blow(), blow()], [neither, neither])
    np.testing.assert_array_equal(stack.filled, neither)


def test_the_odd_one_of_three_is_left_out_wherever_it_stands():
    noise = np.random.default_rng(2).normal(size=(3, 800))
    odd = Gather(data=noise, interval=0.001, receivers=[1.0, 2.0, 3.0], source=0.0)
    for place in range(3):
        blows = [blow(), blow()]
        blows.insert(place, odd)
        assert stack_blows(blows, [ALL] * 3).used == tuple(index != place for index in range(3))
