"""The nouns of surfdisp, its errors, and the checks at its doors; needs numpy only."""

from .curve import DispersionCurve
from .ensemble import Ensemble
from .errors import FormatError, InputError, StepError, StoreError, SurfdispError
from .gather import Gather
from .image import DispersionImage
from .interval import Interval
from .inversion_result import InversionResult
from .layered_earth import LayeredEarth
from .picks import Picks
from .profile import Profile
from .progress import SILENT, Progress
from .record import Record
from .sensitivity import Sensitivity
from .site_result import SiteResult
from .survey_result import SurveyResult

__all__ = [
    "SILENT",
    "DispersionCurve",
    "DispersionImage",
    "Ensemble",
    "FormatError",
    "Gather",
    "InputError",
    "Interval",
    "InversionResult",
    "LayeredEarth",
    "Picks",
    "Profile",
    "Progress",
    "Record",
    "Sensitivity",
    "SiteResult",
    "StepError",
    "StoreError",
    "SurfdispError",
    "SurveyResult",
]
