"""The bounded least-squares search: it finds known minima, never diverges and never leaves its bounds."""

import numpy as np
import pytest
from scipy.optimize import least_squares, minimize

from surfdisp.inversion import minimise

FAR = np.full(2, 100.0)


def search(residuals, jacobian, start, lower, upper, **options):
    def linearised(x):
        return residuals(x), jacobian(x)

    return minimise(linearised, residuals, np.asarray(start), np.asarray(lower), np.asarray(upper), **options)


def rosenbrock(x):
    return np.array([10.0 * (x[1] - x[0] ** 2), 1.0 - x[0]])


def rosenbrock_jacobian(x):
    return np.array([[-20.0 * x[0], 10.0], [-1.0, 0.0]])


def test_rosenbrocks_valley_is_followed_to_its_minimum_at_one_one():
    found = search(rosenbrock, rosenbrock_jacobian, [-1.2, 1.0], -FAR, FAR)
    assert found.converged
    np.testing.assert_allclose(found.x, [1.0, 1.0], atol=1e-6)


def test_minimum_on_a_bound_of_rosenbrocks_valley():
    # with x0 <= 1/2 the minimum is at x0 = 1/2, x1 = 1/4: cost (1 - 1/2)^2 / 2
    found = search(rosenbrock, rosenbrock_jacobian, [-1.2, 1.0], -FAR, [0.5, 100.0])
    assert found.converged
    np.testing.assert_allclose(found.x, [0.5, 0.25], atol=1e-6)
    assert found.costs[-1] == pytest.approx(0.125)


def test_a_linear_problem_takes_the_normal_equations_solution():
    rng = np.random.default_rng(1)
    A, b = rng.normal(size=(12, 4)), rng.normal(size=12)
    found = search(lambda x: A @ x - b, lambda x: A, np.zeros(4), np.full(4, -9.0), np.full(4, 9.0))
    np.testing.assert_allclose(found.x, np.linalg.solve(A.T @ A, A.T @ b), atol=1e-4)


def random_problem(seed):
    """A smooth nonlinear problem with bounds, some of which cut the way to the free minimum."""
    rng = np.random.default_rng(seed)
    count = int(rng.integers(2, 6))
    A = rng.normal(size=(count + 3, count))
    B = rng.normal(size=(count + 3, count))
    target = rng.normal(size=count + 3)

    def residuals(x):
        return A @ x + 0.5 * np.sin(B @ x) - target

    def jacobian(x):
        return A + 0.5 * np.cos(B @ x)[:, None] * B

    lower = rng.uniform(-1.0, 0.0, size=count)
    return residuals, jacobian, lower + rng.uniform(size=count), lower, lower + 1.5


def test_cost_never_rises_and_bounds_are_never_left_in_300_random_problems():
    converged = 0
    for seed in range(300):
        residuals, jacobian, start, lower, upper = random_problem(seed)
        seen = []

        def watched(x, residuals=residuals, seen=seen):
            seen.append(x)
            return residuals(x)

        found = search(watched, jacobian, start, lower, upper)
        assert np.all(np.diff(found.costs) < 0.0)
        assert found.costs[0] == pytest.approx(0.5 * np.sum(residuals(start) ** 2))
        assert all(np.all((x >= lower) & (x <= upper)) for x in seen)
        converged += found.converged
    assert converged == 300


@pytest.mark.parametrize("seed", range(20))
def test_optimum_agrees_with_a_derivative_free_and_a_trust_region_search(seed):
    residuals, jacobian, start, lower, upper = random_problem(seed)
    found = search(residuals, jacobian, start, lower, upper, tolerance=1e-12)
    bounds = list(zip(lower, upper, strict=True))
    free = minimize(
        lambda x: 0.5 * np.sum(residuals(x) ** 2),
        found.x,
        method="Powell",
        bounds=bounds,
        options={"xtol": 1e-10, "ftol": 1e-14},
    )
    assert found.costs[-1] <= free.fun * (1.0 + 1e-9)
    region = least_squares(residuals, np.clip(start, lower + 1e-9, upper - 1e-9), jacobian, (lower, upper))
    if np.allclose(region.x, found.x, atol=0.1):  # the same valley, of possibly several
        assert found.costs[-1] == pytest.approx(region.cost, rel=1e-6)
    assert found.costs[-1] <= found.costs[0]


def test_a_search_cut_short_says_so():
    found = search(rosenbrock, rosenbrock_jacobian, [-1.2, 1.0], -FAR, FAR, most_iterations=3)
    assert not found.converged
    assert found.iterations == 3
    assert "3 iterations" in found.message


def test_a_wrong_jacobian_stalls_without_making_things_worse():
    found = search(rosenbrock, lambda x: -rosenbrock_jacobian(x), [-1.2, 1.0], -FAR, FAR)
    assert not found.converged
    assert found.costs == (found.costs[0],)
    assert "no step lowers the cost" in found.message


def test_a_start_outside_is_moved_inside():
    found = search(rosenbrock, rosenbrock_jacobian, [5.0, 5.0], [0.0, 0.0], [0.5, 0.5])
    np.testing.assert_allclose(found.x, [0.5, 0.25], atol=1e-6)
