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


SMALL_RISE, LARGE_RISE = 0.04, 0.10
"""A branch ends where its velocity rises with frequency by more above its least so far: by the small rise if
its power dips in between, by the large one in any case.

A fundamental mode over a soft layer may rise a little (4.7 % in Tokimatsu, Tamura & Kojima 1992, case 2); an
apparent ridge that goes over to a higher mode rises too, through a stretch where both share the power.
"""
DIP = 0.85
"""Power against both sides that is a dip."""
STEEP = -1.5
"""Slope d ln c / d ln f of a ridge that may be leaving its mode, at long wavelengths."""


def smooth_runs(
    frequency: FloatArray, velocity: FloatArray, power: FloatArray, lobe: float
) -> list[NDArray[np.int64]]:
    """Split picks (increasing frequency, all finite) into runs that are each one smooth branch.

    Parameters
    ----------
    frequency, velocity, power : array (n,)
        [Hz], [m/s], and the image's power there.
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
    f, k, p = (
        np.array([np.median(values[m]) for m in members])
        for values in (frequency, frequency / velocity, power)
    )
    cuts: list[int] = []
    for i in range(1, len(members)):
        first = cuts[-1] if cuts else 0
        if _breaks(f, k, i, lobe):
            cuts.append(i)
        elif (risen := _rise(f[first : i + 1] / k[first : i + 1], p[first : i + 1])) is not None:
            cuts.append(first + risen)
    return [np.concatenate(members[a:b]) for a, b in zip([0, *cuts], [*cuts, len(members)], strict=True)]


def steep_below(frequency: FloatArray, velocity: FloatArray, longest: float) -> float:
    """Return the highest frequency where a ridge of wavelength beyond `longest` [m] is steep; 0 if nowhere.

    Where modes come closer than the array's resolution the ridge can leave the fundamental for a faster one
    on a smooth, steep path: from there on down it may be another mode.
    """
    x, y = np.log(frequency), np.log(velocity)
    for i in np.flatnonzero(velocity / frequency > longest)[::-1]:
        near = np.abs(x - x[i]) <= 0.18  # a quarter of an octave to both sides
        if np.count_nonzero(near) > 3 and np.polyfit(x[near], y[near], 1)[0] < STEEP:
            return float(frequency[i])
    return 0.0


def _rise(velocity: FloatArray, power: FloatArray) -> int | None:
    """Return where a branch ends that rises too much up to its last cell, None where it does not."""
    slowest = int(np.argmin(velocity))
    rise = velocity[-1] / velocity[slowest] - 1.0
    if rise <= SMALL_RISE:
        return None
    dip = slowest + int(np.argmin(power[slowest:]))
    if dip > slowest and power[dip] < DIP * min(power[slowest], power[dip:].max()):
        return dip
    return len(velocity) - 1 if rise > LARGE_RISE else None


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
