"""Layerings: which layers the velocities are sought in, derived from the curve's wavelengths or given."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..core.checks import FloatArray, all_finite, all_positive, finite, float_array
from ..core.errors import InputError


@dataclass(frozen=True)
class Layering:
    """Fixed interfaces, and which unknown velocity each layer takes.

    Parameters
    ----------
    name : str
    thickness : array (n_layers,)
        [m]; the last one infinite.
    unknown : int array (n_layers,)
        Index of the layer's velocity among the unknowns; two layers share one where only the water table
        parts them.
    """

    name: str
    thickness: FloatArray
    unknown: NDArray[np.intp]

    @classmethod
    def of(cls, name: str, thickness: ArrayLike) -> Layering:
        """Make a layering of finite `thickness` [m], top down, over a half-space."""
        finite_ones = float_array(thickness, "thickness")
        all_finite(finite_ones, "thickness")
        all_positive(finite_ones, "thickness")
        return cls(name, np.append(finite_ones, np.inf), np.arange(finite_ones.size + 1))

    @property
    def top(self) -> FloatArray:
        """Depth of the top of each layer [m], (n_layers,)."""
        return np.concatenate([[0.0], np.cumsum(self.thickness[:-1])])

    @property
    def middle(self) -> FloatArray:
        """Depth of the middle of each layer [m], (n_layers,), the half-space as thick as its neighbour."""
        thickness = self.thickness.copy()
        thickness[-1] = thickness[-2] if thickness.size > 1 else 1.0
        return self.top + 0.5 * thickness

    @property
    def unknown_depth(self) -> FloatArray:
        """Depth that stands for each unknown velocity [m], (n_unknowns,): the mean of its layers' middles."""
        counts = np.bincount(self.unknown)
        depth: FloatArray = np.bincount(self.unknown, weights=self.middle) / counts
        return depth

    def split_at(self, depth: float) -> Layering:
        """Return the layering with one more interface at `depth` [m], velocity the same on both sides."""
        top = self.top
        if not np.isfinite(depth) or depth <= 0.0 or np.any(np.abs(top - depth) < 1e-6 * max(depth, 1.0)):
            return self
        layer = int(np.searchsorted(top, depth) - 1)
        above = depth - top[layer]
        thickness = np.insert(self.thickness, layer, above)
        thickness[layer + 1] -= above
        return Layering(self.name, thickness, np.insert(self.unknown, layer, self.unknown[layer]))


def layering_by_ratio(shortest: float, longest: float, ratio: float, *, bottom: float = 30.0) -> Layering:
    """Return layers that grow with depth by a constant ratio (Cox & Teague 2016, GJI 207:422-438).

    The top layer is a third of the shortest wavelength thick, each deeper one `ratio` times its neighbour.
    Layers reach the longest wavelength, below which it feels nothing, or `bottom` if that is deeper, so that
    the error of what lies below the data can grow with depth.

    Parameters
    ----------
    shortest, longest : float
        Wavelengths [m].
    ratio : float
        At least 1.
    bottom : float
        Least depth of the half-space [m].

    Raises
    ------
    InputError
        If `ratio` is less than 1.
    """
    if not finite(ratio, "layering ratio") >= 1.0:
        raise InputError(f"layering ratio must be at least 1; got {ratio}")
    thickness = [shortest / 3.0]
    while sum(thickness) < max(longest, bottom):
        thickness.append(thickness[-1] * ratio)
    return Layering.of(f"ratio {ratio:g}", thickness)


def layerings(
    shortest: float,
    longest: float,
    *,
    ratios: Sequence[float],
    thickness: Sequence[ArrayLike] | None,
) -> list[Layering]:
    """Return the layerings to be tried: the given ones, else one per ratio."""
    if thickness is None:
        made = [layering_by_ratio(shortest, longest, ratio) for ratio in ratios]
    else:
        made = [Layering.of(f"given {index}", layers) for index, layers in enumerate(thickness, start=1)]
    if not made:
        raise InputError("at least one layering is needed; got none (see layering_ratios and thickness)")
    return made
