"""The public door of the modes: what it accepts, how it broadcasts, and what it says to wrong input."""

import numpy as np
import pytest

from surfdisp.core import InputError, LayeredEarth
from surfdisp.earth import mode_count, phase_velocity

EARTH = LayeredEarth(
    thickness=[10.0, np.inf], vp=[400.0, 1600.0], vs=[200.0, 800.0], density=[1800.0, 2000.0]
)


def test_frequency_and_velocity_broadcast_element_by_element():
    assert mode_count(EARTH, [10.0, 20.0], 300.0).tolist() == [1, 1]
    assert mode_count(EARTH, 20.0, [180.0, 200.0, 400.0]).tolist() == [0, 1, 2]
    assert mode_count(EARTH, [10.0, 20.0], [200.0, 400.0]).tolist() == [0, 2]
    with pytest.raises(InputError, match="same length"):
        mode_count(EARTH, [10.0, 20.0], [200.0, 300.0, 400.0])


def test_scalar_and_empty_frequencies_give_arrays():
    assert phase_velocity(EARTH, 10.0).shape == (1,)
    assert phase_velocity(EARTH, []).shape == (0,)


@pytest.mark.parametrize("velocity", [800.0, 900.0])
def test_velocities_from_the_half_space_on_are_refused(velocity):
    with pytest.raises(InputError, match=r"below the shear velocity of the half-space, 800.0 m/s; got"):
        mode_count(EARTH, 10.0, velocity)


@pytest.mark.parametrize("bad", [0.0, -1.0, np.nan, np.inf, "ten", [[1.0]]])
def test_wrong_frequencies_are_refused(bad):
    with pytest.raises(InputError, match="frequency"):
        phase_velocity(EARTH, bad)


@pytest.mark.parametrize("bad", [-1, 0.5, True, "0", None])
def test_wrong_mode_numbers_are_refused(bad):
    with pytest.raises(InputError, match="mode must be a whole number"):
        phase_velocity(EARTH, 10.0, mode=bad)


def test_wrong_waves_are_refused():
    with pytest.raises(InputError, match="wave must be one of rayleigh, love; got 'scholte'"):
        phase_velocity(EARTH, 10.0, wave="scholte")
    with pytest.raises(InputError, match="not available yet"):
        mode_count(EARTH, 10.0, 300.0, wave="love")
