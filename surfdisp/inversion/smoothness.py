"""The prior: Vs follows a power of depth, and how far it may wander from it is the smoothness.

Steps of ln Vs between neighbouring unknowns have mean exponent x ln(depth ratio) and variance
wander^2 x ln(depth ratio): a Brownian motion in ln depth about a power law, so that the same ground is as
probable in fine layers as in coarse ones. Below the data the power law is the extension, and the wander what
it errs by. Least squares with it is the first-difference roughness of Constable, Parker & Constable (1987) in
ln depth, on what departs from the power law.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..core.checks import FloatArray

LEVEL = 1.0
"""Standard deviation of the mean of ln Vs about that of the starting model: a factor of 2.7."""
UNWANTED_FALL = 0.02
"""Standard deviation of a fall of ln Vs over one e-fold of depth where a decrease is not wanted."""


@dataclass(frozen=True)
class Smoothness:
    """Rows that pull neighbouring unknowns together, in units of their prior standard deviation.

    Parameters
    ----------
    depth : array (n_unknowns,)
        [m], increasing.
    level : float
        Prior mean of the mean of ln Vs.
    wander : float
        Standard deviation of ln Vs over one e-fold of depth.
    exponent : float
        Of the power of depth that Vs follows.
    decrease : bool
        Whether velocity may fall with depth as easily as it rises.
    """

    depth: FloatArray
    level: float
    wander: float
    exponent: float = 0.0
    decrease: bool = True

    def residuals(self, ln_vs: FloatArray) -> FloatArray:
        """Return the rows at `ln_vs`, (n_unknowns,)."""
        steps = np.diff(ln_vs) * self._weights(ln_vs) - self.exponent * self._spacing / self.wander
        return np.append(steps, (ln_vs.mean() - self.level) / LEVEL)

    def jacobian(self, ln_vs: FloatArray) -> FloatArray:
        """Return the derivative of `residuals`, (n_unknowns, n_unknowns)."""
        count = ln_vs.size
        rows = np.zeros((count, count))
        index = np.arange(count - 1)
        weights = self._weights(ln_vs)
        rows[index, index], rows[index, index + 1] = -weights, weights
        rows[-1] = 1.0 / (count * LEVEL)
        return rows

    @property
    def _spacing(self) -> FloatArray:
        """Square root of the ln depth between neighbours, (n_unknowns - 1,)."""
        spacing: FloatArray = np.sqrt(np.diff(np.log(self.depth)))
        return spacing

    def _weights(self, ln_vs: FloatArray) -> FloatArray:
        unwanted = (np.diff(ln_vs) < 0.0) & (not self.decrease)
        weights: FloatArray = 1.0 / (np.where(unwanted, UNWANTED_FALL, self.wander) * self._spacing)
        return weights
