"""Least squares inside bounds, by steps that can neither diverge nor leave them.

Levenberg-Marquardt (Levenberg 1944; Marquardt 1963) on the unknowns that are free to move: one that stands at
a bound and is pushed outwards is held, the step of the others is cut at their bounds, and a step counts only
if it lowers the cost. The damping follows the ratio of the actual to the predicted decrease (Nielsen 1999).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray

Linearised = Callable[[FloatArray], tuple[FloatArray, FloatArray]]
Residuals = Callable[[FloatArray], FloatArray]

FIRST_DAMPING = 1e-3
LARGEST_DAMPING = 1e12
LEAST_GAIN = 1e-4
"""Share of the predicted decrease that a step must reach."""
LEVEL_STEPS = 4


@dataclass(frozen=True)
class Minimum:
    """Where a search ended.

    Parameters
    ----------
    x : array (n_unknowns,)
    residuals, jacobian : array (n_residuals,), (n_residuals, n_unknowns)
        At `x`.
    costs : tuple of float
        Half the sum of squared residuals at the start and after every accepted step; it never rises.
    converged : bool
    message : str
    """

    x: FloatArray
    residuals: FloatArray
    jacobian: FloatArray
    costs: tuple[float, ...]
    converged: bool
    message: str

    @property
    def iterations(self) -> int:
        """Accepted steps."""
        return len(self.costs) - 1


def minimise(
    linearised: Linearised,
    residuals: Residuals,
    start: FloatArray,
    lower: FloatArray,
    upper: FloatArray,
    *,
    tolerance: float = 1e-8,
    longest_step: float = 0.7,
    most_iterations: int = 60,
) -> Minimum:
    """Minimise half the sum of squared residuals for lower <= x <= upper.

    Parameters
    ----------
    linearised, residuals : callable
        Residuals with their Jacobian, and residuals alone, at x.
    start, lower, upper : array (n_unknowns,)
        The start is moved inside the bounds.
    tolerance : float
        The search has converged when a full step promises to lower the cost by less than this share of it, or
        the last four steps together did not lower it by more.
    longest_step : float
        No unknown moves further in one step.
    most_iterations : int
        Accepted steps after which the search ends, not converged.
    """
    x = np.clip(start, lower, upper)
    r, J = linearised(x)
    costs = [_cost(r)]
    damping, growth = FIRST_DAMPING, 2.0
    while True:
        gradient = J.T @ r
        free = ~(((x <= lower) & (gradient > 0.0)) | ((x >= upper) & (gradient < 0.0)))
        promise = _promise(J, r, free)
        if promise <= tolerance * costs[-1]:
            return Minimum(x, r, J, tuple(costs), True, "converged")
        if len(costs) > LEVEL_STEPS and costs[-1 - LEVEL_STEPS] - costs[-1] <= tolerance * costs[-1]:
            return Minimum(x, r, J, tuple(costs), True, "converged: the cost is level")
        if len(costs) > most_iterations:
            return Minimum(x, r, J, tuple(costs), False, f"stopped after {most_iterations} iterations")
        while True:  # until a step lowers the cost
            trial: FloatArray = np.clip(x + _step(J, r, free, damping, longest_step), lower, upper)
            step = trial - x
            expected = -float(gradient @ step + 0.5 * np.sum((J @ step) ** 2))
            gain = (costs[-1] - _cost(residuals(trial))) / expected if expected > 0.0 else -1.0
            if gain > LEAST_GAIN:
                break
            damping, growth = damping * growth, growth * 2.0
            if damping > LARGEST_DAMPING:
                flat = promise <= math.sqrt(tolerance) * costs[-1]
                return Minimum(x, r, J, tuple(costs), flat, "no step lowers the cost any further")
        r_next, J_next = linearised(trial)
        x, r, J = trial, r_next, J_next
        costs.append(_cost(r))
        damping, growth = damping * max(1.0 / 3.0, 1.0 - (2.0 * gain - 1.0) ** 3), 2.0


def _cost(r: FloatArray) -> float:
    cost = 0.5 * float(r @ r)
    return cost if np.isfinite(cost) else np.inf


def _promise(J: FloatArray, r: FloatArray, free: NDArray[np.bool_]) -> float:
    """How much an undamped step of the free unknowns would lower the linearised cost."""
    step = np.linalg.lstsq(J[:, free], r, rcond=None)[0]
    return 0.5 * float(np.sum((J[:, free] @ step) ** 2))


def _step(
    J: FloatArray, r: FloatArray, free: NDArray[np.bool_], damping: float, longest: float
) -> FloatArray:
    """Damped step of the free unknowns, shortened to the longest that is allowed."""
    inner = J[:, free]
    size = np.sqrt(np.sum(inner**2, axis=0))
    damped = np.vstack([inner, np.diag(np.sqrt(damping) * np.maximum(size, 1e-8 * size.max(initial=1.0)))])
    step = np.zeros(J.shape[1])
    step[free] = -np.linalg.lstsq(damped, np.append(r, np.zeros(size.size)), rcond=None)[0]
    largest = float(np.max(np.abs(step), initial=0.0))
    shortened: FloatArray = step * min(1.0, longest / largest) if largest > 0.0 else step
    return shortened
