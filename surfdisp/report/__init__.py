"""Figures, tables and the report."""

from .console_text import summary_text
from .curve_figure import picks_over_curve
from .figures import write_figures
from .fit_figure import curve_fit
from .image_figure import image_with_picks, shot_images
from .look import write_look
from .outputs import write_outputs
from .pdf import write_report
from .profile_figure import shear_velocity_profile
from .record_figure import record_section
from .records_text import records_text
from .tables import summary, write_tables

__all__ = [
    "curve_fit",
    "image_with_picks",
    "picks_over_curve",
    "record_section",
    "records_text",
    "shear_velocity_profile",
    "shot_images",
    "summary",
    "summary_text",
    "write_figures",
    "write_look",
    "write_outputs",
    "write_report",
    "write_tables",
]
