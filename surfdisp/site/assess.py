"""From the earths of an inversion to what the site engineer reads."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from ..core import Ensemble, InversionResult, SiteResult
from ..core.checks import one_of, positive
from .averages import average_velocities
from .classes import EUROPEAN, STANDARDS, UNITS, Standard, standard
from .notes import extension_note, notes
from .percentiles import interval, weighted_percentiles
from .profiles import profiles
from .rock_cover import RULES, with_rock_rules
from .wavelength_check import wavelength_check

DEPTHS = (5.0, 10.0, 15.0, 20.0, 25.0, 50.0, 100.0)
"""Depths of the further averages, reported where they are resolved [m]."""

VELOCITY_ONLY = "velocity criterion only: soft-clay and special-study classes not checked"


def site_result(
    inversion: InversionResult, *, units: str = "SI", depths: Sequence[float] = DEPTHS
) -> SiteResult:
    """Return the site quantities of one inverted curve, each with its 90 % range from the ensemble.

    Parameters
    ----------
    inversion : InversionResult
    units : str
        Which limits of the American standards apply: "SI" (rounded, m/s, average over 30 m) or "ft/s"
        (average over 100 ft).
    depths : sequence of float
        Depths of further travel-time averages [m]; those below the resolved depth are left out.

    Raises
    ------
    InputError
        If `units` is neither, or a depth is not positive.
    """
    one_of(units, "units", UNITS)
    ensemble, resolved = inversion.ensemble, inversion.resolved_depth
    wanted = [positive(depth, "depths") for depth in depths]
    averages = {
        f"{depth:g}": interval(average_velocities(ensemble, depth), ensemble.weights)
        for depth in wanted
        if depth <= resolved
    }
    tables = [standard(name, units) for name in STANDARDS]
    profile, shear_modulus = profiles(ensemble, max(30.0, resolved))
    vs30 = interval(average_velocities(ensemble, 30.0), ensemble.weights)
    check = wavelength_check(inversion.curve)
    return SiteResult(
        vs30=vs30,
        vs30_note=extension_note(ensemble, resolved),
        average_velocity=averages,
        profile=profile,
        shear_modulus=shear_modulus,
        resolved_depth=resolved,
        site_class={table.name: class_probabilities(ensemble, table) for table in tables},
        median_class={table.name: median_class(ensemble, table) for table in tables},
        class_bounds={table.name: _bounds(table) for table in tables},
        wavelength_check=check,
        notes=notes(ensemble, resolved, vs30, check, units),
    )


def class_probabilities(ensemble: Ensemble, table: Standard) -> dict[str, float]:
    """Return the share of the ensemble's weight in each class that has any, softest first."""
    names = _classes(ensemble, table)
    shares = {name: float(ensemble.weights[names == name].sum()) for name in (*table.classes, "E")}
    return {name: share for name, share in shares.items() if share > 0.0}


def median_class(ensemble: Ensemble, table: Standard) -> str:
    """Return the class of the median average velocity, corrected where most earths obey a rule about rock."""
    velocities = average_velocities(ensemble, table.depth)
    median = weighted_percentiles(velocities, ensemble.weights, (50.0,))
    name = table.classes[int(table.index(median)[0])]
    if table.name != EUROPEAN:
        return name
    shares = class_probabilities(ensemble, table)
    if shares.get("E", 0.0) > 0.5:
        return "E"
    return "B" if name == "A" and shares.get("A", 0.0) <= 0.5 else name


def _classes(ensemble: Ensemble, table: Standard) -> NDArray[np.str_]:
    names = np.array(table.classes)[table.index(average_velocities(ensemble, table.depth))]
    return with_rock_rules(names, ensemble) if table.name == EUROPEAN else names


def _bounds(table: Standard) -> str:
    rules = f"; {RULES}" if table.name == EUROPEAN else ""
    return f"{table.bounds}{rules}; {VELOCITY_ONLY}"
