"""From gathers to dispersion images, from images to picks, from picks to the curve."""

from .axes import default_frequencies, default_velocities
from .image import dispersion_image
from .stacking import stack_images
from .transforms import TRANSFORMS

__all__ = [
    "TRANSFORMS",
    "default_frequencies",
    "default_velocities",
    "dispersion_image",
    "stack_images",
]
