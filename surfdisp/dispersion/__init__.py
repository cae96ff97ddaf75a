"""From gathers to dispersion images, from images to picks, from picks to the curve."""

from .axes import common_axes, default_frequencies, default_velocities
from .chain import CurveFromGathers, curve_from_gathers
from .combining import combine_picks
from .comparing import BandDifference, compare_curves
from .image import dispersion_image
from .joining import join_curves
from .lateral import halves
from .picking import Guide, pick
from .stacking import stack_images
from .transforms import TRANSFORMS

__all__ = [
    "TRANSFORMS",
    "BandDifference",
    "CurveFromGathers",
    "Guide",
    "combine_picks",
    "common_axes",
    "compare_curves",
    "curve_from_gathers",
    "default_frequencies",
    "default_velocities",
    "dispersion_image",
    "halves",
    "join_curves",
    "pick",
    "stack_images",
]
