"""Where the picks of a ridge stop being one smooth branch: gaps, and jumps to another mode.

A branch of the ground is smooth in the (frequency, wavenumber) plane and its slope there, the group slowness,
stays near the phase slowness. Where the strongest mode changes, the apparent ridge leaves the branch: the
wavenumber steps by more than the array's resolution, or its slope becomes implausible.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray

WIDEST_GAP = 0.25
"""A branch ends at a gap wider than this [octaves]."""
CELLS_PER_OCTAVE = 12
"""Picks are looked at in cells of this width, by their median."""
NEIGHBOURS = 4
"""Cells of the line that is continued across a cell boundary: a third of an octave."""
JUMP = 0.75
"""Step against that line, in main lobes of the array, that is a jump."""
SLOWNESS_RATIOS = (0.3, 5.0)
"""Plausible group slowness over phase slowness, between cells."""


LARGEST_RISE = 0.04
"""A branch ends where its velocity rises with frequency by more than this above its least so far.

A fundamental mode over a soft layer may rise a little (4.7 % in Tokimatsu, Tamura & Kojima 1992, case 2); an
apparent ridge that rises more has usually gone over to higher modes.
"""


def smooth_runs(frequency: FloatArray, velocity: FloatArray, lobe: float) -> list[NDArray[np.int64]]:
    """Split picks (increasing frequency, all finite) into runs that are each one smooth branch.

    Parameters
    ----------
    frequency, velocity : array (n,)
        [Hz], [m/s].
    lobe : float
        Wavenumber resolution of the array [cycles/m].

    Returns
    -------
    list of int arrays
        Indices of each run, together all of 0..n-1.
    """
    if len(frequency) == 0:
        return []
    cell = np.floor(CELLS_PER_OCTAVE * np.log2(frequency)).astype(int)
    members = np.split(np.arange(len(cell)), np.flatnonzero(np.diff(cell)) + 1)
    f = np.array([np.median(frequency[m]) for m in members])
    k = np.array([np.median(frequency[m] / velocity[m]) for m in members])
    cuts = []
    slowest = np.inf
    for i in range(len(members)):
        if i > 0 and (_breaks(f, k, i, lobe) or f[i] / k[i] > (1.0 + LARGEST_RISE) * slowest):
            cuts.append(i)
            slowest = np.inf
        slowest = min(slowest, f[i] / k[i])
    return [np.concatenate(members[a:b]) for a, b in zip([0, *cuts], [*cuts, len(members)], strict=True)]


def _breaks(f: FloatArray, k: FloatArray, i: int, lobe: float) -> bool:
    """Tell whether the branch breaks between cells i - 1 and i."""
    if np.log2(f[i] / f[i - 1]) > WIDEST_GAP:
        return True
    ratio = (k[i] - k[i - 1]) / (f[i] - f[i - 1]) * (f[i] + f[i - 1]) / (k[i] + k[i - 1])
    if not SLOWNESS_RATIOS[0] <= ratio <= SLOWNESS_RATIOS[1]:
        return True
    misses = [
        abs(np.polyval(np.polyfit(f[side], k[side], 1), f[other]) - k[other])
        for side, other in ((slice(max(i - NEIGHBOURS, 0), i), i), (slice(i, i + NEIGHBOURS), i - 1))
        if len(f[side]) >= NEIGHBOURS - 1
    ]
    return bool(misses) and min(misses) > JUMP * lobe
