"""The gather keeps its promises: immutable, checked once, true distances."""

import copy
import pickle

import numpy as np
import pytest

from surfdisp.core import Gather, InputError


def make(**changes):
    values = {
        "data": np.arange(12.0).reshape(3, 4),
        "interval": 0.001,
        "receivers": np.array([0.0, 3.0, 4.0]),
        "source": -4.0,
    }
    return Gather(**{**values, **changes})


def test_slant_offset_is_the_space_diagonal_of_its_three_legs():
    gather = make(source=0.0, receivers=[1.0, 2.0, 4.0], source_off_line=2.0, elevations=[2.0, 3.0, 4.0])
    # 1-2-2, 2-2-3 and 4-2-4 boxes: diagonals 3, sqrt(17), 6
    np.testing.assert_allclose(gather.offsets, [3.0, np.sqrt(17.0), 6.0], rtol=1e-15)


def test_negative_delay_puts_the_first_sample_before_the_blow():
    np.testing.assert_allclose(make(delay=-0.002).times, [-0.002, -0.001, 0.0, 0.001], atol=1e-15)


def test_the_callers_array_stays_writable_and_the_gather_does_not_follow_it():
    data = np.zeros((3, 4))
    gather = make(data=data)
    data[0, 0] = 7.0
    assert gather.data[0, 0] == 0.0
    with pytest.raises(ValueError, match="read-only"):
        gather.data[0, 0] = 1.0


@pytest.mark.parametrize("copied", [lambda g: pickle.loads(pickle.dumps(g)), copy.deepcopy])
def test_copies_are_equal_and_still_read_only(copied):
    gather = make()
    again = copied(gather)
    assert again == gather
    assert not again.data.flags.writeable


@pytest.mark.parametrize(
    ("changes", "demand"),
    [
        ({"interval": -0.001}, "interval must be positive"),
        ({"receivers": [0.0, 3.0]}, "as many entries"),
        ({"receivers": [0.0, 0.0, 3.0]}, "receivers must increase"),
        ({"data": np.full((3, 4), np.nan)}, "data must be finite"),
        ({"source": "here"}, "source must be a number"),
    ],
)
def test_broken_input_is_refused_with_the_demand_by_name(changes, demand):
    with pytest.raises(InputError, match=demand):
        make(**changes)
