"""Spearman's rank correlation: whether two quantities grow together, whatever their scales."""

from __future__ import annotations

import numpy as np

from ..core.checks import FloatArray


def rank_correlation(a: FloatArray, b: FloatArray) -> float:
    """Return the correlation of the ranks of `a` and `b` (n,), -1 to 1; 0 where either is constant.

    Equal values share their mean rank (Spearman 1904).
    """
    ranks = np.stack([_ranks(a), _ranks(b)])
    ranks -= ranks.mean(axis=1, keepdims=True)
    scale = float(np.sqrt(np.prod(np.sum(np.square(ranks), axis=1))))
    return float(ranks[0] @ ranks[1]) / scale if scale > 0.0 else 0.0


def _ranks(values: FloatArray) -> FloatArray:
    ordered = np.sort(values)
    below, upto = (np.searchsorted(ordered, values, side) for side in ("left", "right"))
    return 0.5 * (below + upto).astype(np.float64)
