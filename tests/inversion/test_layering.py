"""Layerings follow the published rule; splitting at the water table changes no velocity."""

import numpy as np
import pytest

from surfdisp.core import InputError
from surfdisp.inversion import Layering, layering_by_ratio


def test_layers_grow_by_the_ratio_from_a_third_of_the_shortest_wavelength():
    # Cox & Teague 2016 [M]: top layer between a third and half of the shortest wavelength
    layering = layering_by_ratio(6.0, 40.0, 1.5)
    assert layering.thickness[0] == pytest.approx(2.0)
    np.testing.assert_allclose(layering.thickness[1:-1] / layering.thickness[:-2], 1.5)


@pytest.mark.parametrize(("longest", "bottom"), [(40.0, 40.0), (12.0, 30.0)])
def test_layers_end_at_the_longest_wavelength_or_thirty_metres(longest, bottom):
    layering = layering_by_ratio(6.0, longest, 1.5)
    assert layering.top[-2] < bottom <= layering.top[-1]


def test_split_adds_one_interface_and_no_unknown():
    layering = Layering.of("given", [2.0, 4.0])
    split = layering.split_at(3.0)
    np.testing.assert_allclose(split.thickness, [2.0, 1.0, 3.0, np.inf])
    np.testing.assert_array_equal(split.unknown, [0, 1, 1, 2])
    assert split.unknown_depth.size == layering.unknown_depth.size
    assert split.top[2] == 3.0


def test_split_in_the_half_space_keeps_it_infinite():
    split = Layering.of("given", [2.0]).split_at(7.0)
    np.testing.assert_allclose(split.thickness, [2.0, 5.0, np.inf])
    np.testing.assert_array_equal(split.unknown, [0, 1, 1])


@pytest.mark.parametrize("depth", [0.0, np.inf, 2.0])
def test_no_split_at_the_surface_at_an_interface_or_without_water(depth):
    layering = Layering.of("given", [2.0, 4.0])
    assert layering.split_at(depth) is layering


@pytest.mark.parametrize("thickness", [[2.0, -1.0], [2.0, np.inf], [0.0]])
def test_thicknesses_must_be_positive_and_finite(thickness):
    with pytest.raises(InputError, match="thickness"):
        Layering.of("given", thickness)


def test_a_ratio_below_one_is_refused():
    with pytest.raises(InputError, match="layering ratio must be at least 1"):
        layering_by_ratio(6.0, 40.0, 0.9)
