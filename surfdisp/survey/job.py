"""The whole job: each step is one call that takes the left thing and returns the right thing."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from .. import __version__
from ..core import (
    SILENT,
    DispersionCurve,
    Gather,
    InputError,
    InversionResult,
    Progress,
    Record,
    SiteResult,
    StepError,
    SurveyResult,
)
from ..dispersion import CurveFromGathers, curve_from_gathers
from ..inversion import invert
from ..records import STACKED, condition, prepare_records
from ..site import site_result
from .axes import image_axes
from .borehole import read_borehole_log
from .geometry import geometry_of
from .load import settings_text
from .settings import ConditioningSettings, ImageSettings, InversionSettings, Settings, SiteSettings

Read = tuple[tuple[Record, ...], tuple[Gather, ...]]

FILES_NAMED = 3
"""How many of the files that share a doubt are named in its warning; the table of records has them all."""

NOTHING_PICKED = "Nothing could be picked: no curve, so no profile, no Vs30 and no site class."


def run_survey(settings: Settings, *, read: Read | None = None, progress: Progress = SILENT) -> SurveyResult:
    """Do the whole job, from field files to site quantities.

    Parameters
    ----------
    settings : Settings
    read : tuple, optional
        What `read_usable` returned for these settings, where that is known already.
    progress : Progress

    Raises
    ------
    InputError
        If no record can be used; the message names the first file and its reason.
    """
    logs = tuple(read_borehole_log(Path(log)) for log in settings.site.borehole_logs)
    seen = look_at(settings, read=read, progress=progress)
    seen = replace(seen, logs=logs)
    if seen.curve is None:
        return replace(seen, warnings=(*seen.warnings, NOTHING_PICKED))
    try:
        inversion = invert_curve(seen.curve, settings.inversion, progress=progress)
    except StepError as error:
        return replace(seen, warnings=(*seen.warnings, f"No profile, no Vs30 and no site class: {error}."))
    return replace(seen, inversion=inversion, site=state_site(inversion, settings.site))


def look_at(settings: Settings, *, read: Read | None = None, progress: Progress = SILENT) -> SurveyResult:
    """Do the first half of the job, from field files to the curve; see `run_survey`."""
    records, gathers = read_usable(settings, progress=progress) if read is None else read
    gathers = condition_gathers(gathers, settings.conditioning)
    seen = see(gathers, settings.image, progress=progress)
    return SurveyResult(
        title=settings.title,
        settings=settings_text(settings),
        version=__version__,
        records=_without_spreads(records, gathers, seen.left_out),
        gathers=gathers,
        images=seen.images,
        picks=seen.picks,
        stacked_images=seen.stacked_images,
        curve=seen.curve,
        warnings=_once([*_record_warnings(records), *seen.notes]),
    )


def read_usable(settings: Settings, *, progress: Progress = SILENT) -> Read:
    """Read, check and sort the field files of a survey, demanding that one of them can be used.

    Raises
    ------
    InputError
        If no record can be used; the message names the first file and its reason.
    """
    records, gathers = read_records(settings, progress=progress)
    if not gathers:
        raise InputError(_nothing_usable(records))
    return records, gathers


def read_records(settings: Settings, *, progress: Progress = SILENT) -> Read:
    """Read, check and sort the field files of a survey."""
    return prepare_records(
        settings.records.files,
        geometry=geometry_of(settings.records),
        minimum_traces=settings.records.minimum_traces,
        progress=progress,
    )


def condition_gathers(gathers: Sequence[Gather], settings: ConditioningSettings) -> tuple[Gather, ...]:
    """Trim, detrend, filter, window and taper as the settings say."""
    return tuple(
        condition(
            gather,
            band=settings.band,
            window=settings.window,
            slowest_velocity=settings.slowest_wave_m_s,
        )
        for gather in gathers
    )


def see(
    gathers: Sequence[Gather], settings: ImageSettings, *, progress: Progress = SILENT
) -> CurveFromGathers:
    """Make images, pick them, and combine the picks in one curve."""
    frequencies, velocities = image_axes(gathers, settings)
    return curve_from_gathers(gathers, frequencies=frequencies, velocities=velocities, progress=progress)


def invert_curve(
    curve: DispersionCurve, settings: InversionSettings, *, progress: Progress = SILENT
) -> InversionResult:
    """Find the earths that explain the curve."""
    bounds = None
    if settings.minimum_vs_m_s is not None and settings.maximum_vs_m_s is not None:
        bounds = (settings.minimum_vs_m_s, settings.maximum_vs_m_s)
    chosen: dict[str, Any] = {
        "layering_ratios": settings.layering_ratios,
        "thickness": settings.layer_thicknesses_m,
        "poisson_ratio": settings.poisson_ratio,
        "water_table_depth": math.inf if settings.dry else settings.water_table_depth_m,
        "saturated_vp": settings.saturated_vp_m_s,
        "density": settings.density_kg_m3,
        "vs_bounds": bounds,
        "n_earths": settings.earths,
    }
    given = {name: value for name, value in chosen.items() if value is not None}
    return invert(
        curve,
        **given,
        allow_decrease=settings.allow_decrease,
        seed=settings.seed,
        progress=progress,
    )


def state_site(inversion: InversionResult, settings: SiteSettings) -> SiteResult:
    """Return the site quantities."""
    return site_result(inversion, units=settings.class_bounds)


def _without_spreads(
    records: Sequence[Record], gathers: Sequence[Gather], left_out: Sequence[int]
) -> tuple[Record, ...]:
    """Mark the records of spreads that are no part of the curve as not used."""
    outside = {file for g in gathers if g.spread in left_out for file in _files_of(g)}
    outside -= {file for g in gathers if g.spread not in left_out for file in _files_of(g)}
    why = "its spread is left out of the curve, see the warnings; run it alone for a profile of its own"
    return tuple(
        replace(r, used=False, reason=f"{r.file}: {why}") if r.file in outside else r for r in records
    )


def _files_of(gather: Gather) -> list[str]:
    """Files behind a gather, by the name that the records room gives it."""
    return re.split(r" \+ |, ", gather.name)


def _record_warnings(records: Sequence[Record]) -> list[str]:
    """Refusals by file; then each doubt once, with the files that share it."""
    refused = [f"{record.file}: not used: {_bare(record)}" for record in records if not record.used]
    sharing: dict[str, list[str]] = {}
    for record in records:
        for flag in record.flags:
            if flag.startswith(STACKED):
                continue
            files = sharing.setdefault(flag.removeprefix(f"{record.file}: "), [])
            files.append(record.file)
    return [*refused, *(f"{_files(files)}: {flag}" for flag, files in sharing.items())]


def _files(names: Sequence[str]) -> str:
    if len(names) <= FILES_NAMED:
        return ", ".join(names)
    return f"{', '.join(names[:FILES_NAMED])} and {len(names) - FILES_NAMED} more"


def _nothing_usable(records: Sequence[Record]) -> str:
    first = records[0]
    others = f" ({len(records) - 1} further records are unusable too)" if len(records) > 1 else ""
    return f"{first.file}: {_bare(first)}{others}"


def _bare(record: Record) -> str:
    return (record.reason or "no usable trace").removeprefix(f"{record.file}: ")


def _once(sentences: Sequence[str]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(sentences))
