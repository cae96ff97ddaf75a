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
POISSON_ERROR = 0.06
"""Standard deviation of the assumed Poisson's ratio."""
DENSITY_TREND_ERROR = 0.06
"""Standard deviation of the relative density change over one e-fold of depth, beside the relation's own."""
LEAST_POISSON_RATIO, LARGEST_POISSON_RATIO = 0.05, 0.49
LEAST_RATIO, LARGEST_RATIO = 1e-3, 3.0
"""Limits of a draw's weight: below the first it is dropped; no single earth shall decide a percentile."""
LARGEST_MEND = 3.0
"""Largest miss of the linearisation that is mended, in sigma; where a mode is lost it tells nothing."""


@dataclass(frozen=True)
class Spread:
    """Normal distribution around a fit, of ln Vs, Poisson's ratio and density trend.

    Parameters
    ----------
    fit : Fit
    residuals, jacobian : array (n_points,), (n_points, n_unknowns + 2)
        At the fit.
    share : float
        What one squared residual counts: the share of independent points, over the noise that the misfit
        shows where that exceeds the stated one.
    precision : array (n_unknowns + 2, n_unknowns + 2)
        Inverse covariance.
    """

    fit: Fit
    residuals: FloatArray
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
        return cls(fit, fit.misfit.residuals(fit.ln_vs), jacobian, share, precision)

    @property
    def resolution(self) -> FloatArray:
        """Diagonal of the resolution matrix of ln Vs, the assumptions held, (n_unknowns,)."""
        data = self.share * self.fit.jacobian.T @ self.fit.jacobian
        return np.diag(np.linalg.solve(self.precision[:-2, :-2], data)).copy()

    def draw(
        self, count: int, lower: float, upper: float, random: np.random.Generator
    ) -> tuple[list[LayeredEarth], FloatArray]:
        """Return the fit and the useful ones of `count` draws within the bounds of ln Vs, and their weights.

        A draw is weighted by the ratio of its likelihood to the linearised one it was drawn by, at most 3, so
        that draws which do not fit drop out. The weights sum to 1.
        """
        factor = np.linalg.cholesky(self.precision)
        steps = np.linalg.solve(factor.T, random.standard_normal((len(factor), count))).T
        fit = self.fit
        earths, ratios = [fit.misfit.earth(fit.ln_vs)], [1.0]
        for step in steps:
            member, ln_vs, ratio = self._corrected(step, lower, upper)
            if ratio > LEAST_RATIO:
                earths.append(member.earth(ln_vs))
                ratios.append(min(ratio, LARGEST_RATIO))
        weights = np.array(ratios)
        return earths, weights / weights.sum()

    def _corrected(self, step: FloatArray, lower: float, upper: float) -> tuple[Misfit, FloatArray, float]:
        """Take a step, mend once what the linearisation missed, and return likelihood over linearised one."""
        fit = self.fit
        member = _with_assumptions(fit.misfit, *step[-2:])
        linear = self.residuals + self.jacobian @ step
        missed = np.clip(member.residuals(fit.ln_vs + step[:-2]) - linear, -LARGEST_MEND, LARGEST_MEND)
        mend = np.linalg.solve(self.precision[:-2, :-2], self.share * fit.jacobian.T @ missed)
        ln_vs = np.clip(fit.ln_vs + step[:-2] - mend, lower, upper)
        actual = member.residuals(ln_vs)
        return member, ln_vs, float(np.exp(-0.5 * self.share * (actual @ actual - linear @ linear)))


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
