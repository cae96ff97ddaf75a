"""Site classes by average shear velocity: the tables of three standards, in m/s and in ft/s.

Only the velocity criterion is here. Soft-clay rules, alternates by blow count or undrained strength, and the
classes that demand a study of their own (F; S1, S2) need a borehole, not a dispersion curve.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray, one_of
from ..core.units import FOOT

UNITS = ("SI", "ft/s")


@dataclass(frozen=True)
class Standard:
    """A table of classes, from the softest to the stiffest.

    Parameters
    ----------
    classes : tuple of str
        One more than there are limits.
    limits : tuple of float
        Average velocity between neighbouring classes, in m/s or ft/s as `units` says.
    stiffer_takes : tuple of float
        The limits whose exact value belongs to the stiffer class; every other one goes to the softer.
    units : str
        "SI" or "ft/s".
    """

    name: str
    classes: tuple[str, ...]
    limits: tuple[float, ...]
    stiffer_takes: tuple[float, ...]
    units: str

    @property
    def depth(self) -> float:
        """Depth of the average [m]: 30 m, or 100 ft with a table in feet."""
        return 30.0 if self.units == "SI" else 100.0 * FOOT

    def index(self, velocity: FloatArray) -> NDArray[np.intp]:
        """Return the place in `classes` of each average velocity [m/s]."""
        unit = 1.0 if self.units == "SI" else FOOT
        place = np.zeros(np.shape(velocity), dtype=np.intp)
        for limit in self.limits:
            reached = velocity >= limit * unit if limit in self.stiffer_takes else velocity > limit * unit
            place += reached
        return place

    @property
    def bounds(self) -> str:
        """The limits in words, for the report."""
        unit = "m/s" if self.units == "SI" else "ft/s"
        depth = "30 m" if self.units == "SI" else "100 ft (30.48 m)"
        above = [f"{'>=' if limit in self.stiffer_takes else '>'} {limit:g}" for limit in self.limits]
        below = [f"{'<' if limit in self.stiffer_takes else '<='} {limit:g}" for limit in self.limits]
        between = [f"{low} and {high}" for low, high in zip(above[:-1], below[1:], strict=True)]
        ranges = [below[0], *between, above[-1]]
        parts = [f"{name} {limits}" for name, limits in zip(self.classes, ranges, strict=True)]
        return f"limits in {unit} of the average over {depth}: {'; '.join(parts)}"


_ASCE_22 = ("E", "DE", "D", "CD", "C", "BC", "B", "A")
_ASCE_16 = ("E", "D", "C", "B", "A")
_EN_2004 = ("D", "C", "B", "A")

# ASCE 7-22, Table 20.2-1: upper limit inclusive, lower exclusive.
# ASCE 7-16, Table 20.3-1: D has both ends inclusive, C and B their upper one.
# EN 1998-1:2004, Table 3.1: prints 360 for both B and C; the softer one takes it here.
_TABLES = {
    ("ASCE 7-22", "SI"): (_ASCE_22, (150.0, 210.0, 300.0, 440.0, 640.0, 900.0, 1500.0), ()),
    ("ASCE 7-22", "ft/s"): (_ASCE_22, (500.0, 700.0, 1000.0, 1450.0, 2100.0, 3000.0, 5000.0), ()),
    ("ASCE 7-16", "SI"): (_ASCE_16, (180.0, 360.0, 760.0, 1500.0), (180.0,)),
    ("ASCE 7-16", "ft/s"): (_ASCE_16, (600.0, 1200.0, 2500.0, 5000.0), (600.0,)),
    ("EN 1998-1:2004", "SI"): (_EN_2004, (180.0, 360.0, 800.0), (180.0,)),
}
EUROPEAN = "EN 1998-1:2004"
STANDARDS = ("ASCE 7-22", "ASCE 7-16", EUROPEAN)


def standard(name: str, units: str = "SI") -> Standard:
    """Return the table of a standard.

    Parameters
    ----------
    name : str
        "ASCE 7-22", "ASCE 7-16" or "EN 1998-1:2004".
    units : str
        "SI" for the rounded limits in m/s, "ft/s" for those in feet per second; the European standard
        has metres only and keeps them.

    Raises
    ------
    InputError
        If the standard or the units are not in the table.
    """
    one_of(name, "standard", STANDARDS)
    one_of(units, "units", UNITS)
    if (name, units) not in _TABLES:
        units = "SI"
    classes, limits, stiffer_takes = _TABLES[name, units]
    return Standard(name=name, classes=classes, limits=limits, stiffer_takes=stiffer_takes, units=units)


def site_class(velocity: float, name: str, *, units: str = "SI") -> str:
    """Return the class of one average velocity [m/s] by the velocity criterion alone.

    `velocity` is the average over 30 m, with `units` "ft/s" over 100 ft. See `standard` for the other
    arguments and for what is raised.
    """
    table = standard(name, units)
    return table.classes[int(table.index(np.asarray(velocity)))]
