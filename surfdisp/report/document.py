"""What the report says, from the outcome on its first page to the sources on its last, as blocks."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

from ..core import SurveyResult
from ..site.notes import CAUTION, CLASS_CAUTION
from . import curve_sections, earth_sections, field_sections
from .blocks import Block, bullets, heading, keys, new_page, paragraph, shown, signature
from .sources import sources
from .tables import sorted_notes
from .words import band_and_wavelengths, number, printable, shortened

WARNING_LINES = 10

CAUTIONS = (
    CAUTION,
    CLASS_CAUTION,
    "Surface waves average the ground under the whole line of receivers; where layers dip or change along "
    "the line, the profile is a mean, not a borehole.",
    "Thin layers, and layers softer than the one above them, are resolved worse with depth; other earths "
    "than those shown can fit the same curve.",
    "Below the resolved depth the profile is an extension, not a measurement.",
    "The inversion is elastic: attenuation disperses velocities by about ln(f/f0)/(pi Q) (Aki & Richards), "
    "about 1 % per factor of 4 in frequency at Q of 35, which is not corrected.",
)


def document(result: SurveyResult, figures: Sequence[str]) -> dict[str, Any]:
    """Return everything the report shows as plain data; `figures` are the names of the figures' files."""
    title = shown(result.title, 120)
    return {
        "title": title,
        "subtitle": "Shear-velocity profile from surface waves of hammer blows",
        "header": shortened(title, 70),
        "made_by": f"surfdisp {printable(result.version)}",
        "footer": "Ranges hold 90 % (5th to 95th percentile)",
        "blocks": list(_blocks(result, figures)),
    }


def _blocks(result: SurveyResult, figures: Sequence[str]) -> Iterator[Block]:
    yield keys([*_ground_keys(result), _curve_key(result)])
    yield from _purpose(result)
    yield from field_sections.geometry(result.gathers)
    yield from field_sections.records(result.records)
    yield from field_sections.processing(result, figures)
    if result.inversion is None:
        yield new_page()  # what little there is to show gets room of its own
    if result.picks:
        yield from curve_sections.picking(result, figures)
    if result.curve is not None and len(result.curve.frequency):
        yield from curve_sections.curve(result.curve)
    if result.inversion is not None:
        yield from earth_sections.inversion(result.inversion, figures)
    if result.site is not None:
        yield from earth_sections.profile(result.site, figures)
        yield from earth_sections.site_quantities(result.site)
    else:
        yield new_page()
    yield from _closing(result)


def _ground_keys(result: SurveyResult) -> Iterator[tuple[str, str, str]]:
    site = result.site
    if site is None:
        yield "Vs30, site class", "not stated", "no velocity profile could be made"
        return
    extended = ", extended below the resolved depth" if site.vs30_note else ""
    yield "Vs30", f"{site.vs30.median:.0f} m/s", f"{site.vs30.low:.0f} to {site.vs30.high:.0f} m/s{extended}"
    first, *others = [f"{standard}: {name}" for standard, name in site.median_class.items()] or ["–"]
    yield "Site class of the median", first, "; ".join(others)
    yield "Resolved depth", f"{number(site.resolved_depth)} m", "below it: extension, not data"


def _curve_key(result: SurveyResult) -> tuple[str, str, str]:
    curve = result.curve
    if curve is None or not len(curve.frequency):
        return "Curve", "none", "nothing could be picked"
    return ("Curve", *band_and_wavelengths(curve))


def _purpose(result: SurveyResult) -> Iterator[Block]:
    used = sum(record.used for record in result.records)
    yield heading("Purpose and outcome")
    yield paragraph(
        "The survey was made to find how shear velocity changes with depth beneath a line of geophones, "
        "and from it the time-averaged velocity and the site class.",
        f"Field files used: {used} of {len(result.records)}.",
        _outcome(result),
    )


def _outcome(result: SurveyResult) -> str:
    if result.inversion is None:
        reason = (
            result.warnings[-1] if result.warnings else "Nothing could be picked"
        )  # the last one ended it
        return f"No profile is given. {reason.rstrip('.')}."
    return (
        "The profile explains the measured curve with a mean squared misfit of "
        f"{number(result.inversion.chi_square)} in units of its variance."
    )


def _closing(result: SurveyResult) -> Iterator[Block]:
    in_records = tuple(text for record in result.records for text in (record.reason, *record.flags) if text)
    warnings = [warning for warning in sorted_notes(result)[0] if not warning.endswith(in_records)]
    yield heading("Warnings")
    if in_records:
        yield paragraph("What was doubtful about single records stands with them, on the first pages.")
    yield bullets(warnings, WARNING_LINES, "summary.json") if warnings else paragraph("No others.")
    yield heading("Cautions")
    yield bullets(CAUTIONS, len(CAUTIONS), "")
    yield heading("Methods and their sources")
    methods = sources(result)
    yield bullets(methods, len(methods), "")
    yield signature("Prepared by", "Checked by", "Date")
