"""Stacked images: averages of power, with what they share kept."""

import numpy as np
import pytest

from surfdisp.core import DispersionImage, InputError
from surfdisp.dispersion import stack_images


def image(power, nearest=2.0, **fields):
    values = {
        "frequencies": [10.0, 20.0],
        "velocities": [100.0, 200.0, 300.0],
        "power": np.full((2, 3), power),
        "offsets": nearest + np.arange(4.0),
        "spacing": 1.0,
    }
    return DispersionImage(**{**values, **fields})


def test_stack_is_the_weighted_mean_of_power():
    stack = stack_images([image(0.2), image(0.8)], weights=[3.0, 1.0])
    np.testing.assert_allclose(stack.power, 0.35)
    assert stack.shots == 2


def test_stack_carries_the_nearest_offsets_the_names_and_all_shots():
    stack = stack_images([image(0.2, 9.0, name="far", shots=3), image(0.2, 4.0, name="near")])
    assert stack.offsets[0] == 4.0
    assert stack.name == "far, near"
    assert stack.shots == 4


def test_signal_to_noise_is_averaged_over_the_images_that_state_it():
    stated = [image(0.2, signal_to_noise=[4.0, np.nan]), image(0.2, signal_to_noise=[8.0, np.nan])]
    np.testing.assert_array_equal(stack_images(stated).signal_to_noise, [6.0, np.nan])


@pytest.mark.parametrize(
    ("images", "weights", "demand"),
    [
        ([], None, "at least one"),
        ([image(0.1), image(0.1, frequencies=[10.0, 21.0])], None, "same frequencies"),
        ([image(0.1), image(0.1, method="other")], None, "one method"),
        ([image(0.1)], [-1.0], "non-negative"),
        ([image(0.1)], [1.0, 1.0], "1 non-negative numbers"),
    ],
)
def test_images_that_do_not_match_are_refused(images, weights, demand):
    with pytest.raises(InputError, match=demand):
        stack_images(images, weights=weights)
