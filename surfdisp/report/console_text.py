"""The summary that a run prints: plain text for a person at a terminal."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator, Sequence

from ..core import DispersionCurve, Profile, Record, SiteResult, SurveyResult
from ..site.assess import VELOCITY_ONLY
from ..site.wavelength_check import agrees
from .tables import sorted_notes
from .words import (
    band_and_wavelengths,
    interval,
    metres,
    number,
    observable,
    printable,
    probabilities,
    profile_at_legible_depths,
    scanned,
    span,
    traces_used,
    whole,
    without_file,
)

WIDTH = 100


def summary_text(result: SurveyResult) -> str:
    """Return the whole outcome as text: records, curve, resolved depth, profile, Vs30, class, warnings."""
    lines = [f"{printable(result.title)} (surfdisp {printable(result.version)})", ""]
    lines += _records(result.records)
    if result.images:
        lines += ["", *_wrapped("", f"Scanned: {scanned(result.images)}")]
    lines += ["", *_curve(result.curve)]
    if result.site is None:
        lines += ["", "Profile: none", "Vs30: not stated", "Site class: not stated"]
    else:
        lines += ["", *_site(result.site)]
    warnings, assumptions, remarks = sorted_notes(result)
    lines += _list("Warnings", warnings)
    lines += _list("Assumptions and limits of the inversion", assumptions) if assumptions else []
    lines += _list("Remarks on the site quantities", remarks) if remarks else []
    return "\n".join(lines) + "\n"


def _list(title: str, sentences: Sequence[str]) -> list[str]:
    items = [line for sentence in sentences for line in _wrapped("  - ", printable(sentence))]
    return ["", f"{title}: {len(sentences) or 'none'}", *items]


def _records(records: tuple[Record, ...]) -> Iterator[str]:
    used = sum(record.used for record in records)
    yield f"Records: {used} used, {len(records) - used} not used"
    width = min(max((len(printable(record.file)) for record in records), default=0), 40)
    for record in records:
        word = "used    " if record.used else "not used"
        yield from _wrapped(f"  {word}  ", f"{printable(record.file):<{width}}  {_record_words(record)}")


def _record_words(record: Record) -> str:
    if not record.used:
        return printable(without_file(record.reason or "no reason given", record.file))
    words = [f"{traces_used(record)} traces"] if record.traces is not None else []
    words += [f"source at {metres(record.source)} m"] if record.source is not None else []
    words += ["1 flag"] if len(record.flags) == 1 else []
    words += [f"{len(record.flags)} flags"] if len(record.flags) > 1 else []
    return ", ".join(words)


def _curve(curve: DispersionCurve | None) -> Iterator[str]:
    if curve is None or not len(curve.frequency):
        yield "Curve: none, nothing could be picked"
        return
    band, wavelengths = band_and_wavelengths(curve)
    yield f"Curve: {band}, {wavelengths}, {len(curve.frequency)} points"
    yield (
        f"  {observable(curve)}, {span(curve.velocity, 'm/s')}, "
        f"median sigma {number(100.0 * sorted(curve.sigma / curve.velocity)[len(curve.sigma) // 2], 2)} %"
    )


def _site(site: SiteResult) -> Iterator[str]:
    yield f"Resolved depth: {number(site.resolved_depth)} m"
    yield "Shear velocity in m/s, median and 90 % range (every step is in profile.csv):"
    yield from _profile(site.profile, site.resolved_depth)
    yield f"Vs30: {interval(site.vs30)}, 90 % range in brackets"
    if site.vs30_note:
        yield from _wrapped("  ", printable(site.vs30_note))
    yield from _check(site)
    for depth, value in site.average_velocity.items():
        yield f"Vs over {printable(depth)} m: {interval(value)}"
    yield f"Site class ({VELOCITY_ONLY}):"
    for standard, classes in site.site_class.items():
        name = printable(site.median_class.get(standard, "–"))
        bounds = printable(site.class_bounds.get(standard, "")).split(":")[0]
        yield from _wrapped("  ", f"{printable(standard):<18} {name:<3} {probabilities(classes)}; {bounds}")


def _check(site: SiteResult) -> Iterator[str]:
    check = site.wavelength_check
    if check is not None:
        verdict = "agrees" if agrees(site.vs30, check) else "does NOT agree"
        yield (
            f"  check from the phase velocity at 36 m wavelength (Brown, Diehl & Nigbor 2000): "
            f"{interval(check)}, {verdict}"
        )


def _profile(profile: Profile, resolved_depth: float) -> Iterator[str]:
    yield f"  {'depth m':>8} {'median':>8} {'low':>6} {'high':>6}"
    for depth, median, low, high in profile_at_legible_depths(profile):
        extended = "  below the resolved depth" if depth > resolved_depth else ""
        yield f"  {depth:8.0f} {whole(median):>8} {whole(low):>6} {whole(high):>6}{extended}"


def _wrapped(lead: str, text: str) -> list[str]:
    return textwrap.wrap(
        text, WIDTH, initial_indent=lead, subsequent_indent=" " * len(lead), break_on_hyphens=False
    )
