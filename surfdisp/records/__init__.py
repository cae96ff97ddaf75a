"""Field files to gathers."""

from .seg2_writer import write_seg2

__all__ = ["write_seg2"]
