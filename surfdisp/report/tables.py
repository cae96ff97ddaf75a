"""The tables other programs read: summary.json, curve.csv and profile.csv, in SI units."""

from __future__ import annotations

import csv
import json
import math
import os
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

from ..core import DispersionCurve, Interval, Profile, Record, SiteResult, SurveyResult

CURVE_COLUMNS = ("frequency_hz", "velocity_m_s", "sigma_m_s", "wave", "kind", "mode")
PROFILE_COLUMNS = ("depth_m", "median_m_s", "low_m_s", "high_m_s")

NOT_STATED = {
    "vs30": "Vs30 cannot be stated: there is no velocity profile.",
    "resolved_depth": "The resolved depth cannot be stated: there is no velocity profile.",
    "site_class": "The site class cannot be stated: there is no velocity profile.",
}
UNASSIGNED = "The ridge is not assigned to a mode: `mode` is null."


def summary(result: SurveyResult) -> dict[str, Any]:
    """Return what summary.json holds: plain numbers in SI units, None where a thing cannot be stated.

    Each None that stands for a missing result has a sentence in `warnings`.
    """
    site, curve = result.site, result.curve
    made: dict[str, Any] = {
        "title": result.title,
        "version": result.version,
        "vs30": None if site is None else _interval(site.vs30),
        "resolved_depth": None if site is None else site.resolved_depth,
        "site_class": None if site is None else site.site_class,
        **({} if site is None else _site_details(site)),
        **({} if result.inversion is None else {"chi_square": result.inversion.chi_square}),
        "profile": [] if site is None else _profile_rows(site.profile),
        "curve": [] if curve is None else _curve_rows(curve),
        "records": [_record_row(record) for record in result.records],
    }
    made = {key: _strict(value) for key, value in made.items()}
    return {**made, "warnings": [*warnings_of(result), *_sentences(made)]}


def warnings_of(result: SurveyResult) -> list[str]:
    """Return every warning of the result once: its own, then those that the products carry."""
    products = (result.curve, result.inversion, result.site)
    notes = [note for product in products if product is not None for note in product.notes]
    return list(dict.fromkeys([*result.warnings, *notes]))


def sorted_notes(result: SurveyResult) -> tuple[list[str], tuple[str, ...], tuple[str, ...]]:
    """Return all that summary.json lists under `warnings` in three parts.

    Warnings proper come first, then what the inversion assumed, then remarks on the site quantities.
    """
    assumptions = () if result.inversion is None else result.inversion.notes
    remarks = () if result.site is None else result.site.notes
    others = {*assumptions, *remarks}
    return [warning for warning in summary(result)["warnings"] if warning not in others], assumptions, remarks


def write_tables(folder: str | os.PathLike[str], result: SurveyResult) -> None:
    """Write summary.json, curve.csv and profile.csv into the existing `folder`."""
    folder = Path(folder)
    made = summary(result)
    text = json.dumps(made, indent=1, allow_nan=False) + "\n"
    (folder / "summary.json").write_text(text, encoding="utf-8")
    _write_csv(folder / "curve.csv", CURVE_COLUMNS, [row.values() for row in made["curve"]])
    _write_csv(folder / "profile.csv", PROFILE_COLUMNS, [row.values() for row in made["profile"]])


def _write_csv(path: Path, columns: Sequence[str], rows: Sequence[Any]) -> None:
    with path.open("w", encoding="utf-8", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(columns)
        for row in rows:
            writer.writerow([f"{value:.6g}" if isinstance(value, float) else value for value in row])


def _interval(value: Interval) -> dict[str, float]:
    return {"median": value.median, "low": value.low, "high": value.high}


def _site_details(site: SiteResult) -> dict[str, Any]:
    check = site.wavelength_check
    return {
        "median_class": site.median_class,
        "class_bounds": site.class_bounds,
        "vs30_note": site.vs30_note,
        "average_velocity": {depth: _interval(value) for depth, value in site.average_velocity.items()},
        **({} if check is None else {"wavelength_check": _interval(check)}),
    }


def _profile_rows(profile: Profile) -> list[dict[str, Any]]:
    columns = {name: getattr(profile, name).tolist() for name in ("depth", "median", "low", "high")}
    return [dict(zip(columns, row, strict=True)) for row in zip(*columns.values(), strict=True)]


def _curve_rows(curve: DispersionCurve) -> list[dict[str, Any]]:
    columns = (curve.frequency.tolist(), curve.velocity.tolist(), curve.sigma.tolist())
    labels = {"wave": curve.wave, "kind": curve.kind, "mode": curve.mode}
    return [
        {"frequency": frequency, "velocity": velocity, "sigma": sigma, **labels}
        for frequency, velocity, sigma in zip(*columns, strict=True)
    ]


def _record_row(record: Record) -> dict[str, Any]:
    return {"file": record.file, "sha256": record.sha256, "used": record.used, "reason": record.reason}


def _strict(value: Any) -> Any:
    """Return `value` with None for what JSON has no word for: NaN and the infinities."""
    if isinstance(value, dict):
        return {key: _strict(entry) for key, entry in value.items()}
    if isinstance(value, list):
        return [_strict(entry) for entry in value]
    return None if isinstance(value, float) and not math.isfinite(value) else value


def _sentences(made: dict[str, Any]) -> Iterator[str]:
    for key, value in made.items():
        if key in NOT_STATED and value is None:
            yield NOT_STATED[key]
        elif key == "curve" and value and value[0]["mode"] is None:
            yield UNASSIGNED
        elif key != "records" and (gaps := _count_of_none(value)):
            yield f"{gaps} of the values under `{key}` cannot be stated and are null."


def _count_of_none(value: Any) -> int:
    if isinstance(value, dict | list):
        return sum(map(_count_of_none, value.values() if isinstance(value, dict) else value))
    return int(value is None)
