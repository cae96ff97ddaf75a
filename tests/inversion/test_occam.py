"""The smoothest fit: as smooth as the noise allows, never worse than its start, optimal at its smoothness."""

from dataclasses import replace

import numpy as np
import pytest
from scipy.optimize import least_squares

from surfdisp.core import DispersionCurve, LayeredEarth
from surfdisp.earth import phase_velocity
from surfdisp.inversion import Layering, layering_by_ratio
from surfdisp.inversion.ground import Ground
from surfdisp.inversion.misfit import Misfit
from surfdisp.inversion.occam import ENOUGH, TARGET, WANDERS, fits_the_noise, smoothest_fit
from surfdisp.inversion.smoothness import Smoothness
from surfdisp.inversion.starting import VELOCITY_FACTOR, WAVELENGTHS_PER_DEPTH, starting_ln_vs

# Tokimatsu, Tamura & Kojima 1992, case 2: a stiff crust over soft ground; layer numbers from memory [M]
CRUST = LayeredEarth(
    thickness=[2.0, 4.0, 8.0, np.inf],
    vs=[180.0, 120.0, 180.0, 360.0],
    vp=[300.0, 1000.0, 1400.0, 1400.0],
    density=[1800.0] * 4,
)


def problem(earth=CRUST, sigma=0.02, noise=0.0, seed=1, ratio=1.5, points=25):
    frequency = np.geomspace(4.0, 50.0, points)
    exact = phase_velocity(earth, frequency)
    exact = np.where(np.isnan(exact), earth.vs[-1], exact)
    velocity = exact * (1.0 + noise * np.random.default_rng(seed).standard_normal(points))
    curve = DispersionCurve(frequency=frequency, velocity=velocity, sigma=sigma * exact)
    layering = layering_by_ratio(float(curve.wavelength.min()), float(curve.wavelength.max()), ratio)
    misfit = Misfit(curve, Ground(1.0 / 3.0, 2.0, 1500.0, 1800.0), layering.split_at(2.0))
    start = starting_ln_vs(curve, misfit.layering)
    prior = Smoothness(misfit.layering.unknown_depth, float(start.mean()), WANDERS[0], 0.25)
    lower = np.full(start.size, np.log(0.5 * velocity.min()))
    upper = np.full(start.size, np.log(4.0 * velocity.max()))
    return misfit, prior, start, lower, upper


def random_earth(seed):
    random = np.random.default_rng(seed)
    layers = int(random.integers(2, 6))
    vs = random.uniform(80.0, 500.0, size=layers)  # reversals and half-spaces slower than layers included
    return LayeredEarth(
        thickness=[*random.uniform(1.0, 8.0, size=layers - 1), np.inf],
        vs=vs,
        vp=2.0 * vs,
        density=np.full(layers, 1800.0),
    )


def test_the_smoothness_found_fits_to_the_noise_and_the_next_smoother_one_does_not():
    misfit, prior, start, lower, upper = problem(sigma=0.007)
    fit = smoothest_fit(misfit, prior, start, lower, upper)
    assert fit.chi_square <= TARGET
    index = WANDERS.index(fit.wander)
    assert index > 0
    # an independent search at the next smoother setting
    smoother = replace(prior, wander=WANDERS[index - 1])
    found = least_squares(
        lambda x: np.append(misfit.residuals(x), smoother.residuals(x)), fit.ln_vs, bounds=(lower, upper)
    )
    assert np.mean(misfit.residuals(found.x) ** 2) > TARGET


def test_smaller_sigma_asks_for_a_rougher_earth():
    wanders = [smoothest_fit(*problem(sigma=sigma)).wander for sigma in (0.1, 0.02, 0.005)]
    assert wanders[0] <= wanders[1] <= wanders[2]
    assert wanders[0] < wanders[2]


@pytest.mark.parametrize("seed", range(5))
def test_optimum_agrees_with_a_derivative_free_one(seed):
    misfit, prior, start, lower, upper = problem(noise=0.02, seed=seed, ratio=2.0)
    fit = smoothest_fit(misfit, prior, start, lower, upper)
    at = replace(prior, wander=fit.wander)

    def residuals(ln_vs):
        return np.append(misfit.residuals(ln_vs), at.residuals(ln_vs))

    free = least_squares(residuals, start, bounds=(lower, upper), jac="3-point")  # differences, trust region
    ours = 0.5 * np.sum(residuals(fit.ln_vs) ** 2)
    assert ours == pytest.approx(free.cost, rel=1e-3)
    np.testing.assert_allclose(fit.ln_vs, free.x, atol=0.05)


@pytest.mark.slow
def test_misfit_never_rises_and_bounds_hold_in_200_random_problems():
    seen, fitted = [], 0
    for seed in range(200):
        misfit, prior, start, lower, upper = problem(
            random_earth(seed), noise=0.03, sigma=0.03, seed=seed, ratio=2.5, points=10
        )
        fit = smoothest_fit(misfit, prior, start, lower, upper)
        for costs in fit.costs:
            assert np.all(np.diff(costs) < 0.0)
        assert np.all((fit.ln_vs >= lower) & (fit.ln_vs <= upper))
        before = np.mean(misfit.residuals(np.clip(start, lower, upper)) ** 2)
        seen.append(fit.chi_square <= max(ENOUGH * before, TARGET))
        fitted += fit.chi_square <= TARGET
    assert all(seen)
    assert fitted > 100  # the layering is coarse and fixed: many, not all, can be fitted


def test_chi_square_scatters_by_the_root_of_two_over_n():
    random = np.random.default_rng(3)
    share = np.mean([fits_the_noise(np.mean(random.standard_normal(40) ** 2), 40) for _ in range(4000)])
    assert 0.95 < share < 0.98  # one-sided two standard deviations of a slightly skewed distribution
    assert not fits_the_noise(1.5, 40)


def test_start_is_one_point_one_times_the_velocity_at_its_wavelength_over_two_and_a_half():
    # Tokimatsu, Tamura & Kojima 1992 quote Vs = 1.1 c at a third or half the wavelength
    frequency = np.array([10.0, 20.0, 40.0])
    curve = DispersionCurve(frequency=frequency, velocity=[300.0, 200.0, 160.0], sigma=[6.0, 4.0, 3.0])
    # wavelengths 30, 10, 4 m: depths 12, 4, 1.6 m
    layering = Layering.of("given", [3.2, 1.6])  # middles at 1.6 m, 4.0 m; half-space
    found = np.exp(starting_ln_vs(curve, layering))
    assert (VELOCITY_FACTOR, WAVELENGTHS_PER_DEPTH) == (1.1, 2.5)
    np.testing.assert_allclose(found[:2], [176.0, 220.0])
    assert found[2] == pytest.approx(330.0)
