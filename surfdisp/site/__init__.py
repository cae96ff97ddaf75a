"""Earths to site quantities."""

from .assess import site_result
from .averages import average_velocity, vs30
from .classes import STANDARDS, site_class
from .percentiles import weighted_percentiles
from .wavelength_check import wavelength_check

__all__ = [
    "STANDARDS",
    "average_velocity",
    "site_class",
    "site_result",
    "vs30",
    "wavelength_check",
    "weighted_percentiles",
]
