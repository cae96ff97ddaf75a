"""Kernel of the ridge tracker: the best-scoring path through a grid, with free ends."""

import numpy as np
from numpy.typing import NDArray

from .jit import kernel

Floats = NDArray[np.float64]


@kernel
def best_path(score: Floats, fall: int, rise: int) -> NDArray[np.int64]:
    """Return the path of largest summed score: the column at each row, -1 outside of the path's rows.

    `score` is (n_rows, n_columns). From one row to the next the column changes by -fall to +rise. The path
    may begin and end at any row: a row of negative scores is bridged while what lies beyond outweighs it
    (Smith & Waterman 1981, with rows in the place of letters). All -1 where no score is positive.
    """
    n_rows, n_columns = score.shape
    total = np.zeros((n_rows, n_columns))
    came_from = np.full((n_rows, n_columns), -1)
    top, top_row, top_column = 0.0, -1, -1
    for i in range(n_rows):
        for v in range(n_columns):
            best, origin = 0.0, -1
            if i > 0:
                for u in range(max(v - rise, 0), min(v + fall, n_columns - 1) + 1):
                    if total[i - 1, u] > best:
                        best, origin = total[i - 1, u], u
            total[i, v] = best + score[i, v]
            came_from[i, v] = origin
            if total[i, v] > top:
                top, top_row, top_column = total[i, v], i, v
    path = np.full(n_rows, -1)
    i, v = top_row, top_column
    while i >= 0 and v >= 0:
        path[i] = v
        v = came_from[i, v]
        i -= 1
    return path
