"""The spread around a fit: closed-form covariances, weights, bounds."""

from dataclasses import replace

import numpy as np
import pytest

from surfdisp.core import DispersionCurve
from surfdisp.earth import phase_velocity
from surfdisp.inversion import Layering
from surfdisp.inversion.ensemble import (
    DENSITY_TREND_ERROR,
    LARGEST_RATIO,
    LEAST_RATIO,
    POISSON_ERROR,
    Spread,
    independent_points,
    likelihoods,
)
from surfdisp.inversion.ground import Ground
from surfdisp.inversion.misfit import Misfit
from surfdisp.inversion.occam import Fit

LN_VS = np.log([140.0, 200.0, 380.0])


def fit(points=12, noise=0.02, chi_square=1.0):
    """A fit at the truth, of a curve on 6 to 60 Hz."""
    layering, ground = Layering.of("given", [2.0, 5.0]), Ground(1.0 / 3.0, np.inf, 1500.0, None)
    frequency = np.geomspace(6.0, 60.0, points)
    velocity = phase_velocity(ground.earth(np.exp(LN_VS), layering), frequency)
    curve = DispersionCurve(frequency=frequency, velocity=velocity, sigma=noise * velocity)
    misfit = Misfit(curve, ground, layering)
    return Fit(misfit, LN_VS, chi_square, misfit.linearised(LN_VS)[1], 0.3, ((1.0,),), True, "converged")


def drawn(spread, count=400, low=20.0, high=3000.0, seed=1):
    return spread.draw(count, np.log(low), np.log(high), np.random.default_rng(seed))


def test_points_closer_than_an_eighth_of_an_octave_count_as_one():
    frequency = np.geomspace(5.0, 40.0, 200)  # three octaves
    dense = DispersionCurve(frequency=frequency, velocity=np.full(200, 200.0), sigma=np.full(200, 4.0))
    assert independent_points(dense) == pytest.approx(25.0)
    sparse = DispersionCurve(frequency=[5.0, 10.0, 40.0], velocity=[200.0] * 3, sigma=[4.0] * 3)
    assert independent_points(sparse) == 3.0


def test_more_points_in_the_same_band_do_not_narrow_the_ranges_without_end():
    few, many = Spread.around(fit(points=40)), Spread.around(fit(points=160))
    narrow = np.sqrt(np.diag(np.linalg.inv(many.precision))) / np.sqrt(np.diag(np.linalg.inv(few.precision)))
    np.testing.assert_allclose(narrow, 1.0, atol=0.05)


def test_a_misfit_above_the_noise_widens_the_data_part_by_its_chi_square():
    plain, missed = Spread.around(fit()), Spread.around(fit(chi_square=4.0))
    assert missed.share == pytest.approx(plain.share / 4.0)
    assert Spread.around(fit(chi_square=0.2)).share == plain.share


def test_resolution_runs_from_nought_to_one_with_the_noise():
    precise, vague = Spread.around(fit(noise=1e-4)).resolution, Spread.around(fit(noise=100.0)).resolution
    np.testing.assert_allclose(precise, 1.0, atol=1e-2)
    np.testing.assert_allclose(vague, 0.0, atol=1e-2)


def test_draws_have_the_covariance_of_the_precision_where_the_problem_is_linear():
    spread = Spread.around(fit(noise=0.002))  # small steps: the curve is linear in them
    earths, weights = drawn(spread, 1500)
    ln_vs = np.log([earth.vs for earth in earths])
    expected = np.sqrt(np.diag(np.linalg.inv(spread.precision))[:3])
    mean = weights @ ln_vs
    np.testing.assert_allclose(np.sqrt(weights @ (ln_vs - mean) ** 2), expected, rtol=0.15)
    np.testing.assert_allclose(mean, LN_VS, atol=0.3 * expected.max())


def test_draws_keep_fitting_the_curve_each_with_its_own_vp_and_density():
    found = fit()
    earths, weights = drawn(Spread.around(found))
    curve = found.misfit.curve
    chi_square = []
    for earth in earths:
        velocity = phase_velocity(earth, curve.frequency)
        velocity = np.where(np.isnan(velocity), earth.vs[-1], velocity)
        chi_square.append(np.mean(((velocity - curve.velocity) / curve.sigma) ** 2))
    assert weights @ np.array(chi_square) < 1.0  # about 5 unknowns / 12 points
    assert len({round(float(earth.vp[0] / earth.vs[0]), 6) for earth in earths}) > 300


def test_negative_control_draws_around_a_wrong_model_do_not_fit():
    found = fit()
    wrong = Spread.around(replace(found, ln_vs=LN_VS + 0.2))
    earths, weights = drawn(wrong, 100)
    residuals = [
        np.mean(
            (
                (phase_velocity(earth, found.misfit.curve.frequency) - found.misfit.curve.velocity)
                / found.misfit.curve.sigma
            )
            ** 2
        )
        for earth in earths
    ]
    assert np.nanmedian(residuals) > 10.0
    assert weights.sum() == pytest.approx(1.0)


def test_draws_stay_inside_the_bounds_and_no_weight_dominates():
    earths, weights = drawn(Spread.around(fit(noise=0.3)), low=120.0, high=400.0)
    vs = np.array([earth.vs for earth in earths])
    assert np.all((vs >= 120.0 * (1.0 - 1e-12)) & (vs <= 400.0 * (1.0 + 1e-12)))
    assert weights.sum() == pytest.approx(1.0)
    assert weights.max() / weights.min() <= LARGEST_RATIO / LEAST_RATIO


def test_the_same_seed_gives_the_same_bits_and_another_one_others():
    spread = Spread.around(fit())
    first, again, other = drawn(spread, 20), drawn(spread, 20), drawn(spread, 20, seed=2)
    assert first[0] == again[0]
    np.testing.assert_array_equal(first[1], again[1])
    assert first[0] != other[0]


def test_fits_to_the_noise_count_alike_and_worse_ones_less():
    found = fit()
    curve = found.misfit.curve
    relative = likelihoods([replace(found, chi_square=value) for value in (0.4, 1.0, 1.5)], curve)
    np.testing.assert_allclose(relative, [1.0, 1.0, np.exp(-0.5 * independent_points(curve) * 0.5)])


def test_draws_spread_poissons_ratio_and_density_trend_as_assumed():
    # data so vague that both keep their priors
    spread = Spread.around(fit(noise=0.5))
    ground, layering = spread.fit.misfit.ground, spread.fit.misfit.layering
    earths, _ = drawn(spread, 600)
    ratios = np.array([earth.vp[0] / earth.vs[0] for earth in earths]) ** 2
    poisson = (ratios - 2.0) / (2.0 * (ratios - 1.0))
    assert np.std(poisson) == pytest.approx(POISSON_ERROR, rel=0.15)
    assert np.mean(poisson) == pytest.approx(1.0 / 3.0, abs=0.02)
    depth_ratio = np.log(layering.middle[2] / layering.middle[0])
    trends = []
    for earth in earths:
        untilted, _ = ground.densities(earth.vs, layering)
        trends.append(np.log(earth.density[2] / untilted[2]) / depth_ratio)
    assert np.std(trends) == pytest.approx(DENSITY_TREND_ERROR, rel=0.15)


def steps_of(spread, count=40):
    factor = np.linalg.cholesky(spread.precision)
    normal = np.random.default_rng(5).standard_normal((len(factor), count))
    return np.linalg.solve(factor.T, normal).T


def test_mending_brings_the_true_residuals_closer_to_the_linearised_ones():
    spread = Spread.around(fit(noise=0.06))
    before, after = [], []
    for step in steps_of(spread):
        member, ln_vs, _ = spread._corrected(step, 0.0, 9.0)
        linear = spread.residuals + spread.jacobian @ step
        after.append(np.linalg.norm(member.residuals(ln_vs) - linear))
        before.append(np.linalg.norm(member.residuals(LN_VS + step[:-2]) - linear))
    assert np.median(after) < 0.5 * np.median(before)


def test_weight_of_a_draw_is_its_likelihood_over_the_linearised_one():
    spread = Spread.around(fit(noise=0.06, points=30))
    ratios, expected = [], []
    for step in steps_of(spread):
        member, ln_vs, ratio = spread._corrected(step, 0.0, 9.0)
        true, linear = member.residuals(ln_vs), spread.residuals + spread.jacobian @ step
        effective = independent_points(member.curve) / 30.0  # of each squared residual, chi-square being 1
        ratios.append(np.log(ratio))
        expected.append(0.5 * effective * (np.sum(linear**2) - np.sum(true**2)))
    np.testing.assert_allclose(ratios, expected, atol=1e-9)
    assert np.std(expected) > 0.1
