"""Interval: a median with its 90 % range."""

from __future__ import annotations

from .checks import finite
from .noun import noun, set_field


@noun
class Interval:
    """Median, 5th and 95th percentile of one quantity, in the SI unit of that quantity."""

    median: float
    low: float
    high: float

    def __post_init__(self) -> None:
        for field in ("median", "low", "high"):
            set_field(self, field, finite(getattr(self, field), field))
