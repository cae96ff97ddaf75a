"""SiteResult: what the site engineer reads, with ranges and the words that must stand beside it."""

from __future__ import annotations

from .interval import Interval
from .noun import noun, set_field, tagged
from .profile import Profile


@noun
class SiteResult:
    """Site quantities of one location.

    Parameters
    ----------
    vs30 : Interval
        Time-averaged shear velocity of the upper 30 m [m/s].
    vs30_note : str
        How Vs30 was reached where the resolved depth is less than 30 m, else empty.
    average_velocity : dict
        Time-averaged velocity over other depths, keyed by depth in metres as text ("10").
    profile : Profile
        Steps reaching max(30 m, resolved depth).
    shear_modulus : Profile
        Small-strain shear modulus over the same steps [Pa].
    resolved_depth : float
        [m].
    site_class : dict
        Per standard: probability of each class.
    median_class : dict
        Per standard: class of the median Vs30.
    class_bounds : dict
        Per standard: which limits were used, in words.
    wavelength_check : Interval or None
        Vs30 from the phase velocity at 36 m wavelength (Brown, Diehl & Nigbor 2000), None where not reached.
    notes : tuple of str
        Warnings and cautions for the reader of the report.
    """

    vs30: Interval
    vs30_note: str = ""
    average_velocity: dict[str, Interval]
    profile: Profile
    shear_modulus: Profile
    resolved_depth: float = tagged("m")
    site_class: dict[str, dict[str, float]]
    median_class: dict[str, str]
    class_bounds: dict[str, str]
    wavelength_check: Interval | None = None
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        set_field(self, "notes", tuple(self.notes))
