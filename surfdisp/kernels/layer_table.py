"""What the Rayleigh kernels need of a layered earth, computed once for all frequencies and velocities."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .jit import kernel

Array = NDArray[np.float64]

# Columns: thickness, 1/vp^2, 1/vs^2, shear modulus, density below over density here (eps), and
# 2 (vs^2 - eps vs_below^2).
THICKNESS, P_SLOWNESS, S_SLOWNESS, MODULUS, CONTRAST, STEP = range(6)


@kernel
def layer_table(thickness: Array, vp: Array, vs: Array, density: Array) -> Array:
    """Return the table, one row per layer from the top down; slownesses are squared."""
    n = thickness.size
    table = np.zeros((n, 6))
    for i in range(n):
        table[i, THICKNESS] = thickness[i]
        table[i, P_SLOWNESS] = 1.0 / (vp[i] * vp[i])
        table[i, S_SLOWNESS] = 1.0 / (vs[i] * vs[i])
        table[i, MODULUS] = density[i] * vs[i] * vs[i]
        if i < n - 1:
            eps = density[i + 1] / density[i]
            table[i, CONTRAST] = eps
            table[i, STEP] = 2.0 * (vs[i] * vs[i] - eps * vs[i + 1] * vs[i + 1])
    return table
