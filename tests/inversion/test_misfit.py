"""Residuals and their derivatives: Taylor tests, lost modes, shared unknowns."""

import numpy as np
import pytest

from surfdisp.core import DispersionCurve
from surfdisp.earth import phase_velocity
from surfdisp.inversion import Layering
from surfdisp.inversion.ground import Ground
from surfdisp.inversion.misfit import Misfit
from surfdisp.inversion.smoothness import Smoothness

LN_VS = np.log([130.0, 190.0, 170.0, 420.0])


def misfit(water=3.0, density=None, mode=0, frequency=None):
    frequency = np.geomspace(6.0, 60.0, 12) if frequency is None else np.asarray(frequency)
    curve = DispersionCurve(
        frequency=frequency,
        velocity=np.full(frequency.size, 160.0),
        sigma=np.linspace(2.0, 8.0, frequency.size),
        mode=mode,
    )
    layering = Layering.of("given", [2.0, 3.0, 6.0]).split_at(water)
    return Misfit(curve, Ground(0.3, water, 1500.0, density), layering)


def test_residuals_are_predicted_less_observed_in_units_of_sigma():
    problem = misfit()
    expected = phase_velocity(problem.earth(LN_VS), problem.curve.frequency) - 160.0
    np.testing.assert_allclose(problem.residuals(LN_VS), expected / problem.curve.sigma, rtol=1e-12)
    np.testing.assert_allclose(problem.linearised(LN_VS)[0], problem.residuals(LN_VS), rtol=1e-8)


@pytest.mark.parametrize("water", [np.inf, 3.0, 0.0])
@pytest.mark.parametrize("density", [None, 1900.0])
def test_taylor_remainder_of_the_residuals_is_of_second_order(water, density):
    problem = misfit(water, density)
    direction = np.array([0.3, -0.7, 0.5, 0.4])
    residuals, jacobian = problem.linearised(LN_VS)
    remainders = [
        np.linalg.norm(problem.residuals(LN_VS + h * direction) - residuals - h * jacobian @ direction)
        for h in (0.0016, 0.0008, 0.0004)
    ]
    assert remainders[0] / remainders[1] == pytest.approx(4.0, rel=0.1)
    assert remainders[1] / remainders[2] == pytest.approx(4.0, rel=0.1)


@pytest.mark.parametrize("decrease", [True, False])
def test_taylor_remainder_of_the_whole_objective_is_of_second_order(decrease):
    problem = misfit()
    prior = Smoothness(problem.layering.unknown_depth, 5.0, 0.3, 0.25, decrease)
    direction = np.array([0.3, -0.7, 0.5, 0.4])

    def objective(ln_vs):
        return 0.5 * np.sum(problem.residuals(ln_vs) ** 2) + 0.5 * np.sum(prior.residuals(ln_vs) ** 2)

    residuals, jacobian = problem.linearised(LN_VS)
    gradient = jacobian.T @ residuals + prior.jacobian(LN_VS).T @ prior.residuals(LN_VS)
    remainders = [
        abs(objective(LN_VS + h * direction) - objective(LN_VS) - h * gradient @ direction)
        for h in (0.0016, 0.0008, 0.0004)
    ]
    assert remainders[0] / remainders[1] == pytest.approx(4.0, rel=0.1)
    assert remainders[1] / remainders[2] == pytest.approx(4.0, rel=0.1)


@pytest.mark.parametrize("water", [np.inf, 3.0])
def test_derivatives_by_the_assumptions_match_differences(water):
    from dataclasses import replace

    problem, step = misfit(water), 1e-5
    found = problem.by_assumptions(LN_VS)
    for column, field in enumerate(("poisson_ratio", "density_trend")):
        ends = [
            replace(
                problem,
                ground=replace(problem.ground, **{field: getattr(problem.ground, field) + side * step}),
            ).residuals(LN_VS)
            for side in (1.0, -1.0)
        ]
        np.testing.assert_allclose(found[:, column], (ends[0] - ends[1]) / (2.0 * step), rtol=1e-4, atol=1e-6)


def test_where_the_mode_is_lost_the_half_space_stands_in_continuously():
    # mode 1 of this ground does not exist at 3 Hz
    problem = misfit(np.inf, mode=1, frequency=[3.0, 20.0, 40.0, 50.0])
    assert np.isnan(problem.predicted(LN_VS)[0])
    residuals, jacobian = problem.linearised(LN_VS)
    assert np.all(np.isfinite(residuals))
    assert np.all(np.isfinite(jacobian))
    assert residuals[0] == pytest.approx((420.0 - 160.0) / problem.curve.sigma[0])
    np.testing.assert_allclose(jacobian[0], [0.0, 0.0, 0.0, 420.0 / problem.curve.sigma[0]])


def test_layers_that_share_an_unknown_add_their_derivatives():
    plain = misfit(np.inf)
    split = Misfit(plain.curve, plain.ground, plain.layering.split_at(3.0))
    # the density relation sees other depths, so it must not take part
    fixed = Ground(0.3, np.inf, 1500.0, 1900.0)
    whole = Misfit(plain.curve, fixed, plain.layering).linearised(LN_VS)[1]
    np.testing.assert_allclose(
        Misfit(plain.curve, fixed, split.layering).linearised(LN_VS)[1], whole, rtol=1e-6
    )
