"""Earths around the fits: what the covariance, the assumptions and the extension leave open."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ..core import DispersionCurve, LayeredEarth
from ..core.checks import FloatArray
from .misfit import Misfit
from .occam import TARGET, Fit
from .smoothness import Smoothness

PRIOR_WANDER = 0.5
"""Prior standard deviation of ln Vs over one e-fold of depth; what lies below the data errs by as much."""
POINTS_PER_OCTAVE = 8
"""Errors of picks nearer than this count as one: they come from the same records, smoothly in frequency."""
POISSON_ERROR = 0.07
"""Standard deviation of the assumed Poisson's ratio."""
DENSITY_TREND_ERROR = 0.05
"""Standard deviation of the relative density change over one e-fold of depth, beside the relation's own."""
LEAST_POISSON_RATIO, LARGEST_POISSON_RATIO = 0.05, 0.49
LARGEST_RATIO = 3.0
"""Limit of a draw's weight, so that no single earth decides a percentile."""


@dataclass(frozen=True)
class Spread:
    """Normal distribution around a fit, of ln Vs, Poisson's ratio and density trend.

    Parameters
    ----------
    fit : Fit
    jacobian : array (n_points, n_unknowns + 2)
        Of the residuals.
    share : float
        What one squared residual counts: the share of independent points, over the noise that the misfit
        shows where that exceeds the stated one.
    precision : array (n_unknowns + 2, n_unknowns + 2)
        Inverse covariance.
    """

    fit: Fit
    jacobian: FloatArray
    share: float
    precision: FloatArray

    @classmethod
    def around(cls, fit: Fit) -> Spread:
        """Join what the data say with the prior: J^T J of the data plus the prior's inverse covariance."""
        jacobian = np.hstack([fit.jacobian, fit.misfit.by_assumptions(fit.ln_vs)])
        curve = fit.misfit.curve
        share = independent_points(curve) / len(curve.frequency) / max(fit.chi_square, TARGET)
        prior = Smoothness(fit.misfit.layering.unknown_depth, float(fit.ln_vs.mean()), PRIOR_WANDER)
        rows = prior.jacobian(fit.ln_vs)
        precision = share * jacobian.T @ jacobian
        precision[:-2, :-2] += rows.T @ rows
        precision[-2, -2] += POISSON_ERROR**-2
        precision[-1, -1] += DENSITY_TREND_ERROR**-2
        return cls(fit, jacobian, share, precision)

    @property
    def resolution(self) -> FloatArray:
        """Diagonal of the resolution matrix of ln Vs, the assumptions held, (n_unknowns,)."""
        data = self.share * self.fit.jacobian.T @ self.fit.jacobian
        return np.diag(np.linalg.solve(self.precision[:-2, :-2], data)).copy()

    def draw(
        self, count: int, lower: FloatArray, upper: FloatArray, random: np.random.Generator
    ) -> tuple[list[LayeredEarth], FloatArray]:
        """Return `count` earths cut at the bounds of ln Vs, and their weights, which sum to 1.

        A draw is weighted by the ratio of its likelihood to the linearised one it was drawn by, at most 3.
        """
        factor = np.linalg.cholesky(self.precision)
        steps = np.linalg.solve(factor.T, random.standard_normal((len(factor), count))).T
        earths, weights = [], np.empty(count)
        at_fit = self.fit.misfit.residuals(self.fit.ln_vs)
        for index, step in enumerate(steps):
            ln_vs = np.clip(self.fit.ln_vs + step[:-2], lower, upper)
            member = _with_assumptions(self.fit.misfit, *step[-2:])
            linear = at_fit + self.jacobian @ step
            actual = member.residuals(ln_vs)
            weights[index] = np.exp(-0.5 * self.share * (actual @ actual - linear @ linear))
            earths.append(member.earth(ln_vs))
        weights = np.minimum(weights, LARGEST_RATIO)
        return earths, weights / weights.sum()


def _with_assumptions(misfit: Misfit, poisson_step: float, density_trend: float) -> Misfit:
    ratio = np.clip(misfit.ground.poisson_ratio + poisson_step, LEAST_POISSON_RATIO, LARGEST_POISSON_RATIO)
    return replace(
        misfit, ground=replace(misfit.ground, poisson_ratio=float(ratio), density_trend=float(density_trend))
    )


def independent_points(curve: DispersionCurve) -> float:
    """Return how many points of the curve count as independent: at most 8 per octave."""
    octaves = float(np.log2(curve.frequency[-1] / curve.frequency[0]))
    return min(float(len(curve.frequency)), 1.0 + POINTS_PER_OCTAVE * octaves)


def likelihoods(fits: Sequence[Fit], curve: DispersionCurve) -> FloatArray:
    """Return the likelihood of each fit relative to the best; all that reach the noise count alike."""
    chi_square = np.maximum([fit.chi_square for fit in fits], TARGET)
    least = chi_square.min()
    relative: FloatArray = np.exp(-0.5 * independent_points(curve) * (chi_square - least) / least)
    return relative
