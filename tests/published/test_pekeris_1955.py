"""Lamb's problem at Poisson's ratio 1/4: Pekeris 1955, PNAS 41:469-480 (formula from memory).

The table was computed from the formula with 40 digits; the tail is Boussinesq's static solution.
"""

from itertools import pairwise

import numpy as np
import pytest

from surfdisp.core import LayeredEarth
from surfdisp.earth import half_space_rayleigh_speed, hammer_blow, lamb_step_response, synthesize

VS, DENSITY = 200.0, 1800.0
MU = DENSITY * VS**2


def half_space() -> LayeredEarth:
    return LayeredEarth(thickness=[np.inf], vp=[np.sqrt(3.0) * VS], vs=[VS], density=[DENSITY])


def closed_form_velocity(times: np.ndarray, offset: float, central_frequency: float) -> np.ndarray:
    """Step response convolved with the second derivative of the hammer blow."""
    tau = np.sqrt(3.0) / (2.0 * np.pi * central_frequency)

    def bend(time: np.ndarray) -> np.ndarray:
        z = time / tau - 4.0
        return np.where(time >= 0.0, (4.0 * z * z - 2.0) / tau**2 * np.exp(-z * z), 0.0)

    def slope(time: np.ndarray) -> np.ndarray:
        z = time / tau - 4.0
        return np.where(time >= 0.0, -2.0 * z / tau * np.exp(-z * z), 0.0)

    arrivals = offset / VS * np.array([1.0 / np.sqrt(3.0), 1.0, 0.5 * np.sqrt(3.0 + np.sqrt(3.0))])
    velocity = slope(times - arrivals[2]) * 0.375 / (np.pi * MU * offset)  # static from the Rayleigh wave on
    nodes, weights = np.polynomial.legendre.leggauss(400)
    angle = 0.25 * np.pi * (nodes + 1.0)
    for start, end in pairwise(arrivals):
        s = start + (end - start) * np.sin(angle) ** 2  # takes the root singularities at both ends out
        weight = weights * 0.25 * np.pi * (end - start) * np.sin(2.0 * angle)
        velocity += (bend(times[:, np.newaxis] - s) * lamb_step_response(s, offset, VS, DENSITY)) @ weight
    return velocity


@pytest.mark.parametrize(
    ("tau", "expected"),
    [
        (0.5, 0.0),
        (0.6, -0.01895656),
        (0.7, -0.00957765),
        (0.8, -0.01023365),
        (0.9, -0.02850109),
        (1.0, -0.09150635),
        (1.02, -0.15346846),
        (1.05, -0.32834107),
        (1.08, -1.17338174),
        (1.0877, 0.375),
        (3.0, 0.375),
    ],
)
def test_step_response_matches_the_tabulated_closed_form(tau, expected):
    offset = 7.0
    displacement = lamb_step_response(tau * offset / VS, offset, VS, DENSITY)
    assert displacement * np.pi * MU * offset == pytest.approx(expected, abs=6e-9)


def test_step_response_turns_at_the_rayleigh_arrival():
    arrival = 10.0 / half_space_rayleigh_speed(np.sqrt(3.0) * VS, VS)
    before, after = lamb_step_response(arrival * np.array([1.0 - 1e-9, 1.0 + 1e-9]), 10.0, VS, DENSITY)
    assert before < 0.0
    assert after == pytest.approx(0.375 / (np.pi * MU * 10.0))


@pytest.mark.parametrize("offset", [5.0, 20.0, 60.0])
def test_synthetic_wavefield_is_the_closed_form_convolved_with_the_blow(offset):
    gather = synthesize(half_space(), [offset], 0.6, 0.001)
    expected = closed_form_velocity(gather.times, offset, 30.0)
    assert np.abs(gather.data[0] - expected).max() < 1e-3 * np.abs(expected).max()  # the default tolerance


def test_tail_of_a_lasting_push_is_the_static_solution_of_boussinesq():
    def push(time):
        return np.cumsum(hammer_blow(time))  # rises smoothly to a constant force

    gather = synthesize(half_space(), [4.0, 9.0], 0.4, 0.0005, pulse=push, tolerance=1e-4)
    force = push(gather.times)[-1]
    displacement = gather.data.sum(axis=1) * gather.interval
    static = force * (1.0 - 0.25) / (2.0 * np.pi * MU * gather.receivers)
    np.testing.assert_allclose(displacement, static, rtol=1e-3)
