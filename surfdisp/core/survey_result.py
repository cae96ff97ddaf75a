"""SurveyResult: everything one run of the job found, from records to site."""

from __future__ import annotations

from .curve import DispersionCurve
from .gather import Gather
from .image import DispersionImage
from .inversion_result import InversionResult
from .noun import noun
from .picks import Picks
from .profile import Profile
from .record import Record
from .site_result import SiteResult


@noun
class SurveyResult:
    """The products of one run; what could not be made is None, with a sentence in `warnings`.

    Parameters
    ----------
    title : str
        Name of the survey.
    settings : str
        The settings used, as TOML, defaults included.
    version : str
        Version of surfdisp.
    records : tuple of Record
    gathers, images, picks : tuples
        One entry per shot, in the same order.
    stacked_images : tuple of DispersionImage
        One per spread: all its shots stacked.
    curve : DispersionCurve or None
    inversion : InversionResult or None
    site : SiteResult or None
    logs : tuple of Profile
        Borehole shear-velocity logs to be overlaid (low and high equal the median where not given).
    warnings : tuple of str
    """

    title: str
    settings: str
    version: str
    records: tuple[Record, ...]
    gathers: tuple[Gather, ...]
    images: tuple[DispersionImage, ...]
    picks: tuple[Picks, ...]
    stacked_images: tuple[DispersionImage, ...]
    curve: DispersionCurve | None = None
    inversion: InversionResult | None = None
    site: SiteResult | None = None
    logs: tuple[Profile, ...] = ()
    warnings: tuple[str, ...] = ()
