"""The count of branches: its parity, its monotony, and the points where its matrix is hard to eliminate."""

import math

import numpy as np
import pytest

from surfdisp.kernels.layer_table import layer_table
from surfdisp.kernels.rayleigh_count import (
    negative_eigenvalues,
    nudged_determinant,
    piece_count,
    rayleigh_count,
    rayleigh_counts,
)
from surfdisp.kernels.rayleigh_secular import rayleigh_secular


def random_model(rng):
    n = int(rng.integers(2, 8))
    thickness = rng.uniform(0.5, 8.0, n)
    thickness[-1] = np.inf
    vs = rng.uniform(80.0, 600.0, n)
    return thickness, vs * rng.uniform(1.3, 8.0, n), vs, rng.uniform(1500.0, 2400.0, n)


@pytest.mark.parametrize("seed", range(40))
def test_secular_function_is_positive_where_the_count_is_even(seed):
    rng = np.random.default_rng(seed)
    model = random_model(rng)
    table = layer_table(*model)
    omega = 2.0 * np.pi * rng.uniform(2.0, 60.0)
    counts = []
    for velocity in rng.uniform(0.4 * model[2].min(), 0.999 * model[2][-1], 50):
        counts.append(rayleigh_count(omega, velocity, table))
        assert (rayleigh_secular(omega, velocity, table) > 0.0) == (counts[-1] % 2 == 0)
    assert min(counts) == 0


@pytest.mark.parametrize("seed", range(10))
def test_count_never_falls_with_frequency_at_fixed_wavenumber(seed):
    rng = np.random.default_rng(seed)
    model = random_model(rng)
    k = rng.uniform(0.05, 3.0)
    velocities = np.linspace(0.3 * model[2].min(), model[2][-1] * (1 - 1e-9), 400)
    counts = rayleigh_counts(velocities * k, velocities, layer_table(*model))
    assert (np.diff(counts) >= 0).all()
    assert counts[0] == 0


def test_velocities_equal_to_those_of_the_medium_take_the_limit():
    model = (
        np.array([5.0, 5.0, np.inf]),
        np.array([250.0, 900.0, 900.0]),
        np.array([100.0, 250.0, 400.0]),
        np.full(3, 1900.0),
    )
    table = layer_table(*model)
    for velocity in (100.0, 250.0):
        for omega in (20.0, 200.0, 2000.0):
            around = [rayleigh_count(omega, velocity * (1 + d), table) for d in (-1e-9, 0.0, 1e-9)]
            assert around[0] == around[1] == around[2]


def test_a_layer_is_split_below_its_clamped_resonance():
    assert piece_count(100.0, 2.0, 3.0, 1e-4) == 1  # slower than vs
    omega, k, vs = 1000.0, 2.0, 100.0
    for thickness in (0.1, 1.0, 7.3):
        pieces = piece_count(omega, k, thickness, vs**-2)
        assert vs**2 * (k**2 + (math.pi * pieces / thickness) ** 2) > omega**2
        if pieces > 1:
            assert vs**2 * (k**2 + (math.pi * (pieces - 1) / thickness) ** 2) <= omega**2


@pytest.mark.parametrize(
    ("matrix", "negative"),
    [((2.0, 0.5, 1.0), 0), ((2.0, 3.0, 1.0), 1), ((-2.0, 0.5, -1.0), 2), ((-1.0, 0.0, 1.0), 1)],
)
def test_negative_eigenvalues(matrix, negative):
    xx, xz, zz = matrix
    assert negative == np.sum(np.linalg.eigvalsh([[xx, xz], [xz, zz]]) < 0.0)
    assert negative_eigenvalues(xx, zz, nudged_determinant(xx, xz, zz)) == negative


def test_a_singular_pivot_is_nudged():
    for pivot in ((1.0, 1.0, 1.0), (0.0, 0.0, 0.0), (0.0, 0.0, 5.0)):
        assert nudged_determinant(*pivot) != 0.0
