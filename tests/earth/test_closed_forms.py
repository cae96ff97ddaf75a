"""Closed forms of the half-space against the exact values of their special cases."""

import numpy as np
import pytest

from surfdisp.core import InputError
from surfdisp.earth import half_space_rayleigh_speed


@pytest.mark.parametrize(
    ("poisson", "ratio"),
    [
        (0.0, np.sqrt(3.0 - np.sqrt(5.0))),
        (0.25, np.sqrt(2.0 - 2.0 / np.sqrt(3.0))),
        # Cubic of Rayleigh 1885 solved elsewhere with 40 digits (checks.md, A1)
        (0.1, 0.893106005025),
        (0.2, 0.910995890975),
        (1.0 / 3.0, 0.932525905931),
        (0.4, 0.942195433116),
        (0.49, 0.954074354140),
    ],
)
def test_rayleigh_speed_of_a_half_space(poisson, ratio):
    vp = 200.0 * np.sqrt(2.0 * (1.0 - poisson) / (1.0 - 2.0 * poisson))
    assert half_space_rayleigh_speed(vp, 200.0) == pytest.approx(200.0 * ratio, rel=1e-11)


def test_rayleigh_speed_next_to_an_incompressible_solid():
    assert half_space_rayleigh_speed(1e6, 1.0) == pytest.approx(0.955312501026, rel=1e-11)


def test_velocities_of_no_solid_are_refused():
    with pytest.raises(InputError, match=r"vp must exceed 1\.155 vs"):
        half_space_rayleigh_speed(230.0, 200.0)
