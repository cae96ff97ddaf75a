"""The prior: ln Vs wanders with ln depth, and how far it may wander is the smoothness.

Steps between neighbouring unknowns have mean 0 and variance wander^2 x ln(depth ratio): a Brownian motion in
ln depth, so that the same ground is as probable in fine layers as in coarse ones. Below the data the same
wander is what the extension errs by. Least squares with it is the first-difference roughness of Constable,
Parker & Constable (1987), eq. 2, in ln depth.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..core.checks import FloatArray

LEVEL = 1.0
"""Standard deviation of the mean of ln Vs about that of the starting model: a factor of 2.7."""
STIFFNESS_OF_DECREASE = 10.0
"""How many times less a velocity may fall than rise where a decrease with depth is not wanted."""


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
    decrease : bool
        Whether velocity may fall with depth as easily as it rises.
    """

    depth: FloatArray
    level: float
    wander: float
    decrease: bool = True

    def residuals(self, ln_vs: FloatArray) -> FloatArray:
        """Return the rows at `ln_vs`, (n_unknowns,)."""
        steps = np.diff(ln_vs) * self._weights(ln_vs)
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

    def _weights(self, ln_vs: FloatArray) -> FloatArray:
        weights: FloatArray = 1.0 / (self.wander * np.sqrt(np.diff(np.log(self.depth))))
        if self.decrease:
            return weights
        return np.where(np.diff(ln_vs) < 0.0, STIFFNESS_OF_DECREASE * weights, weights)
