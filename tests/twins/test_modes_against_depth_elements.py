"""Modes of random earths against the independent solver by finite elements in depth."""

import sys
from pathlib import Path

import numpy as np
import pytest

sys.path.insert(0, str(Path(__file__).parents[1]))
from twins.depth_elements import DepthElements
from twins.random_earths import disagreements, random_earth


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
