"""Modes of random earths against the independent solver by finite elements in depth."""

import sys
from pathlib import Path

import numpy as np
import pytest

sys.path.insert(0, str(Path(__file__).parents[1]))
from twins.depth_elements import DepthElements
from twins.random_earths import disagreements, random_earth

from surfdisp.core import LayeredEarth
from surfdisp.earth import phase_velocity

# Models NGV-A and NGV-B of the collected theory values: branch 1 turns back at 6.33495 and 7.00271 Hz.
TURNING = {"A": (300.0, 6.33495), "B": (500.0, 7.00271)}


@pytest.mark.parametrize("name", TURNING)
def test_a_curve_jumps_where_its_branch_turns_back(name):
    """Followed over 120 frequencies, the slowest root is that of the elements on both sides of the turn."""
    vp, turn = TURNING[name]
    model = [10.0, np.inf], [vp, 3500.0], [100.0, 2000.0], [1800.0, 2400.0]
    earth = LayeredEarth(thickness=model[0], vp=model[1], vs=model[2], density=model[3])
    frequency = np.linspace(0.8 * turn, 1.2 * turn, 121)
    velocity = phase_velocity(earth, frequency, mode=1)
    assert (velocity[frequency < turn] > 1000.0).all()
    assert (velocity[frequency > turn] < 420.0).all()
    for i in range(1, 121, 12):
        roots = DepthElements(*model, frequency[i]).roots()
        expected = next(c for c, branch in roots if branch == 1)
        assert velocity[i] == pytest.approx(expected, rel=1e-5)


@pytest.mark.parametrize("seed", range(20))
def test_no_mode_is_lost_or_misnumbered(seed):
    earth, frequency = random_earth(np.random.default_rng([11, seed]))
    faults, _ = disagreements(earth, frequency)
    assert faults == []


def test_the_twin_itself_on_a_backward_branch():
    """Velocities of model NGV-A of the collected theory values at 6.5 Hz, computed with 40 digits."""
    elements = DepthElements(
        [10.0, np.inf], [300.0, 3500.0], [100.0, 2000.0], [1800.0, 2400.0], 6.5, fineness=0.3
    )
    velocities, branches = zip(*elements.roots(), strict=True)
    assert velocities == pytest.approx([104.439393, 273.182387, 553.882503, 1643.83938], rel=1e-8)
    assert branches == (0, 1, 1, 1)
    assert [elements.count(c) for c in (100.0, 170.0, 390.0, 950.0, 1900.0)] == [0, 1, 2, 1, 2]
