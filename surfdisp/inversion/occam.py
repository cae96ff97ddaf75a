"""The smoothest earth that fits the curve to its noise (Constable, Parker & Constable 1987)."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from ..core.checks import FloatArray
from .bounded_least_squares import Minimum, minimise
from .misfit import Misfit
from .smoothness import Smoothness

WANDERS = tuple(0.1 * 2.0 ** (index / 2.0) for index in range(6))
"""Standard deviations of ln Vs per e-fold of depth that are tried, smoothest first: 0.1 to 0.57."""
TARGET = 1.0
"""Chi-square that counts as a fit to the noise."""
TOLERANCE = 1e-3
"""Of the cost: less than the noise can tell apart."""
MOST_ITERATIONS = 30
"""In one search; each starts from the result of the next smoother one."""
ENOUGH = 1.1
"""Where none reaches the target: the smoothest within this factor of the least chi-square."""


def fits_the_noise(chi_square: float, count: int) -> bool:
    """Tell whether the mean squared residual of `count` points lies within two standard deviations of 1.

    The mean of n squared standard normal numbers scatters by sqrt(2 / n).
    """
    return chi_square <= TARGET + 2.0 * math.sqrt(2.0 / count)


@dataclass(frozen=True)
class Fit:
    """The smoothest fit in one layering.

    Parameters
    ----------
    misfit : Misfit
    ln_vs : array (n_unknowns,)
    chi_square : float
        Mean squared residual in units of sigma.
    jacobian : array (n_points, n_unknowns)
        Of the residuals at `ln_vs`.
    wander : float
        The smoothness that was needed.
    costs : tuple of tuple of float
        Course of the cost of each search.
    """

    misfit: Misfit
    ln_vs: FloatArray
    chi_square: float
    jacobian: FloatArray
    wander: float
    costs: tuple[tuple[float, ...], ...]
    converged: bool
    message: str

    @property
    def fits_the_noise(self) -> bool:
        """Whether chi-square is what the stated noise would leave."""
        return fits_the_noise(self.chi_square, len(self.misfit.curve.frequency))

    @property
    def iterations(self) -> int:
        """Accepted steps of all searches."""
        return sum(len(costs) - 1 for costs in self.costs)


def smoothest_fit(
    misfit: Misfit, prior: Smoothness, start: FloatArray, lower: FloatArray, upper: FloatArray
) -> Fit:
    """Return the smoothest earth whose chi-square is at most 1, or the closest fit where none reaches it.

    Each search starts from the result of the next smoother one.
    """
    fits: list[Fit] = []
    costs: tuple[tuple[float, ...], ...] = ()
    for wander in WANDERS:
        found = _search(misfit, replace(prior, wander=wander), start, lower, upper)
        costs = (*costs, found.costs)
        fits.append(_fit(misfit, found, wander, costs))
        if fits[-1].chi_square <= TARGET:
            return fits[-1]
        start = found.x
    least = min(fit.chi_square for fit in fits)
    smoothest = next(fit for fit in fits if fit.chi_square <= ENOUGH * least)
    return replace(smoothest, costs=costs)


def _fit(misfit: Misfit, found: Minimum, wander: float, costs: tuple[tuple[float, ...], ...]) -> Fit:
    count = len(misfit.curve.frequency)
    return Fit(
        misfit=misfit,
        ln_vs=found.x,
        chi_square=float(np.mean(found.residuals[:count] ** 2)),
        jacobian=found.jacobian[:count],
        wander=wander,
        costs=costs,
        converged=found.converged,
        message=found.message,
    )


def _search(
    misfit: Misfit, prior: Smoothness, start: FloatArray, lower: FloatArray, upper: FloatArray
) -> Minimum:
    def linearised(ln_vs: FloatArray) -> tuple[FloatArray, FloatArray]:
        r, J = misfit.linearised(ln_vs)
        return np.append(r, prior.residuals(ln_vs)), np.vstack([J, prior.jacobian(ln_vs)])

    def residuals(ln_vs: FloatArray) -> FloatArray:
        return np.append(misfit.residuals(ln_vs), prior.residuals(ln_vs))

    return minimise(
        linearised, residuals, start, lower, upper, tolerance=TOLERANCE, most_iterations=MOST_ITERATIONS
    )
