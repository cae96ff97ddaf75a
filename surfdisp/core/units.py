"""Conversions at the door: inside, everything is SI."""

FOOT = 0.3048
"""Metres in an international foot."""

US_SURVEY_FOOT = 1200.0 / 3937.0
"""Metres in a United States survey foot."""
