"""The sentences that must stand beside the site quantities."""

from __future__ import annotations

import numpy as np

from ..core import Ensemble, Interval
from .averages import average_velocities, travel_times
from .classes import STANDARDS, UNITS, standard
from .percentiles import weighted_percentiles
from .rock_cover import cover_thickness
from .wavelength_check import RANGE_95, WAVELENGTH, agrees

CAUTION = (
    "The result depends on the site engineer's judgement; local codes and licensed practice prevail over "
    "this report."
)
CLASS_CAUTION = (
    "Site classes follow the velocity criterion only: soft-clay and special-study classes not checked "
    "(plasticity, water content, strength, blow counts, liquefaction)."
)


def extension_note(ensemble: Ensemble, resolved: float) -> str:
    """Tell how Vs30 was reached where the resolved depth [m] is less than 30 m; else an empty text."""
    if resolved >= 30.0:
        return ""
    times = travel_times(ensemble.thickness, ensemble.vs, [resolved, 30.0])
    share = weighted_percentiles(1.0 - times[:, 0] / times[:, 1], ensemble.weights, (50.0,))[0]
    return (
        f"Vs30 is extended: the curve resolves {resolved:.1f} m, and the ground from there to 30 m, "
        f"which holds {100.0 * share:.0f} % of the travel time, comes from the inversion's extension of its "
        "earths with depth and that extension's error, not from data."
    )


def notes(
    ensemble: Ensemble, resolved: float, vs30: Interval, check: Interval | None, units: str
) -> tuple[str, ...]:
    """Return warnings and cautions for the reader of the report, one sentence each."""
    sentences = [
        f"Medians and ranges (5th to 95th percentile) come from the {len(ensemble)} weighted earths of the "
        "inversion.",
        "Averages over depth are travel-time averages; the shear modulus is density x Vs^2 at small strain, "
        "with the density of the inversion.",
        f"Site classes use the {units} limits of the American standards.",
        CLASS_CAUTION,
        _other_units(ensemble, units),
        _rock(ensemble, resolved),
        _agreement(vs30, check),
        CAUTION,
    ]
    return tuple(sentence for sentence in sentences if sentence)


def _other_units(ensemble: Ensemble, units: str) -> str:
    """Tell where the other set of limits would give another class of the median (304 m/s is CD and D)."""
    other = next(name for name in UNITS if name != units)
    parts = []
    for name in STANDARDS:
        found = []
        for table in (standard(name, units), standard(name, other)):
            velocities = average_velocities(ensemble, table.depth)
            median = weighted_percentiles(velocities, ensemble.weights, (50.0,))
            found.append(table.classes[int(table.index(median)[0])])
        if found[0] != found[1]:
            parts.append(f"{name} would be {found[1]} instead of {found[0]}")
    return f"With the {other} limits the class of the median by {'; by '.join(parts)}." if parts else ""


def _rock(ensemble: Ensemble, resolved: float) -> str:
    cover = cover_thickness(ensemble)
    share = float(ensemble.weights[np.isfinite(cover)].sum())
    if share == 0.0:
        return ""
    below = float(ensemble.weights[np.isfinite(cover) & (cover > resolved)].sum())
    return (
        f"{100.0 * share:.0f} % of the earths reach 800 m/s above 30 m ({100.0 * below:.0f} % below the "
        f"resolved depth of {resolved:.1f} m): classes A and E of EN 1998-1:2004 rest on where that rock "
        "begins, which surface waves place less well than an average."
    )


def _agreement(vs30: Interval, check: Interval | None) -> str:
    source = (
        f"Check from the curve alone, Vs30 from the phase velocity at {WAVELENGTH:g} m wavelength "
        "(Brown, Diehl & Nigbor 2000)"
    )
    if check is None:
        return f"{source}: not available, the curve is no fundamental Rayleigh curve that reaches it."
    difference = 100.0 * (vs30.median / check.median - 1.0)
    return (
        f"{source}: {check.median:.0f} m/s, 90 % range {check.low:.0f} to {check.high:.0f} m/s (regression, "
        f"+-{100.0 * RANGE_95:.0f} % at 95 %); the inverted Vs30 differs by {difference:+.0f} % and lies "
        f"{'inside' if agrees(vs30, check) else 'OUTSIDE'} it."
    )
