"""Curve to earths: parameterisation, misfit, least squares, ensemble."""

from .bounded_least_squares import Minimum, minimise
from .invert import invert
from .layering import Layering, layering_by_ratio

__all__ = ["Layering", "Minimum", "invert", "layering_by_ratio", "minimise"]
