"""The whole job, from settings to a SurveyResult."""

from .job import look_at, read_records, read_usable, run_survey
from .load import load_settings, settings_for_files, settings_from, settings_text
from .settings import Settings

__all__ = [
    "Settings",
    "load_settings",
    "look_at",
    "read_records",
    "read_usable",
    "run_survey",
    "settings_for_files",
    "settings_from",
    "settings_text",
]
