"""The best path against the best of all paths, written out one by one."""

import itertools

import numpy as np
import pytest

from surfdisp.kernels.tracking import best_path


def total(score, first, columns):
    return sum(score[first + i, v] for i, v in enumerate(columns))


def best_of_all(score, fall, rise):
    n_rows, n_columns = score.shape
    best = 0.0
    for first in range(n_rows):
        for length in range(1, n_rows - first + 1):
            for columns in itertools.product(range(n_columns), repeat=length):
                if all(-fall <= b - a <= rise for a, b in itertools.pairwise(columns)):
                    best = max(best, total(score, first, columns))
    return best


@pytest.mark.parametrize("seed", range(12))
def test_path_has_the_largest_sum_of_all_allowed_paths(seed):
    rng = np.random.default_rng(seed)
    fall, rise = int(rng.integers(0, 3)), int(rng.integers(0, 3))
    score = rng.standard_normal((5, 4)) - 0.3
    path = best_path(score, fall, rise)
    rows = np.flatnonzero(path >= 0)
    assert np.all(np.diff(rows) == 1)
    assert all(-fall <= step <= rise for step in np.diff(path[rows]))
    assert total(score, rows[0], path[rows]) == pytest.approx(best_of_all(score, fall, rise))


def test_a_weak_row_is_bridged_and_a_poor_beginning_left_out():
    score = np.array([[-1.0, -2.0], [2.0, -9.0], [-1.0, -9.0], [-9.0, 2.0]])
    assert best_path(score, 0, 1).tolist() == [-1, 0, 0, 1]


def test_nothing_positive_gives_no_path():
    assert best_path(np.full((3, 3), -1.0), 1, 1).tolist() == [-1, -1, -1]
