"""The whole job, from settings to a SurveyResult."""

from .load import load_settings, settings_for_files, settings_from, settings_text
from .settings import Settings

__all__ = ["Settings", "load_settings", "settings_for_files", "settings_from", "settings_text"]
