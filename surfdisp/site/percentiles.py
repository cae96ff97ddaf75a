"""Percentiles of weighted samples, and the Interval made of them."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..core import Interval
from ..core.checks import FloatArray


def weighted_percentiles(values: FloatArray, weights: FloatArray, percents: Sequence[float]) -> FloatArray:
    """Return percentiles of the samples along the first axis.

    Each sorted sample stands at the middle of its share of the total weight, and the line between
    neighbours is straight: Hazen's plotting position carried over to unequal weights. Samples of zero
    weight count for nothing.

    Parameters
    ----------
    values : array (n_samples,) or (n_samples, n_columns)
    weights : array (n_samples,)
        Not negative, not all zero.
    percents : sequence of float
        0 to 100.

    Returns
    -------
    array (n_percents,) or (n_percents, n_columns)
    """
    held = weights > 0.0
    columns = np.atleast_2d(values[held].T)
    share = weights[held] / weights[held].sum()
    found = np.empty((len(percents), len(columns)))
    for index, column in enumerate(columns):
        order = np.argsort(column, kind="stable")
        position = np.cumsum(share[order]) - 0.5 * share[order]
        found[:, index] = np.interp(np.asarray(percents) / 100.0, position, column[order])
    return found[:, 0] if values.ndim == 1 else found


def interval(values: FloatArray, weights: FloatArray) -> Interval:
    """Return median, 5th and 95th percentile of weighted samples (n_samples,)."""
    low, median, high = weighted_percentiles(values, weights, (5.0, 50.0, 95.0))
    return Interval(median=float(median), low=float(low), high=float(high))
