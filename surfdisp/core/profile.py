"""Profile: shear velocity against depth with its 90 % range, as steps."""

from __future__ import annotations

from .checks import FloatArray, float_array, increasing, same_length
from .errors import InputError
from .noun import noun, set_field, tagged


@noun
class Profile:
    """Each row holds from its depth down to the next row's depth.

    Parameters
    ----------
    depth : array (n,)
        Top of each step [m], starting at 0.
    median, low, high : array (n,)
        Shear velocity: median, 5th and 95th percentile [m/s].
    """

    depth: FloatArray = tagged("m", "step")
    median: FloatArray = tagged("m/s", "step")
    low: FloatArray = tagged("m/s", "step")
    high: FloatArray = tagged("m/s", "step")

    def __post_init__(self) -> None:
        fields = ("depth", "median", "low", "high")
        for field in fields:
            set_field(self, field, float_array(getattr(self, field), field))
        same_length([(field, getattr(self, field)) for field in fields])
        increasing(self.depth, "depth")
        if self.depth.size and self.depth[0] != 0.0:
            raise InputError(f"depth must start at 0; got {self.depth[0]}")
