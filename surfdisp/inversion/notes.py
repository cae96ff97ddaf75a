"""Every assumption of an inversion as one sentence with its numbers, for the reader of the report."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..core import InversionResult, LayeredEarth
from .ensemble import (
    DENSITY_TREND_ERROR,
    POINTS_PER_OCTAVE,
    POISSON_ERROR,
    PRIOR_WANDER,
    independent_points,
)
from .occam import TARGET, WANDERS, Fit
from .starting import VELOCITY_FACTOR, WAVELENGTHS_PER_DEPTH

FEW_LAYERINGS = 3


@dataclass(frozen=True)
class Assumptions:
    """What was given or chosen, beside what the result itself holds."""

    minimum_wavelength: float
    bounds: tuple[float, float]
    water_known: bool
    allow_decrease: bool
    depth_exponent: float
    seed: int


def layering_line(fit: Fit, weight: float) -> str:
    """Return one line about a fit: layering, water, layers, chi-square, smoothness, weight."""
    water = fit.misfit.ground.water_table_depth
    state = "dry" if np.isinf(water) else f"saturated below {water:.1f} m"
    return (
        f"{fit.misfit.layering.name}, {state}: {len(fit.misfit.layering.thickness)} layers, "
        f"chi-square {fit.chi_square:.2f}, steps of {fit.wander:.2f} per e-fold of depth, weight {weight:.2f}"
    )


def notes(result: InversionResult, best: Fit, fits: Sequence[Fit], assumed: Assumptions) -> tuple[str, ...]:
    """Return the sentences that belong beside the result."""
    sentences = [
        *_data(result),
        *_layers(result, fits, assumed),
        *_ground(best, fits, assumed),
        *_fit(result, best, assumed),
        *_ranges(result, assumed),
    ]
    return tuple(sentence for sentence in sentences if sentence)


def _data(result: InversionResult) -> list[str]:
    curve, count = result.curve, len(result.curve.frequency)
    flagged = [flags for flags in (curve.flags if curve.flags is not None else []) if flags]
    kinds = sorted({flag for flags in flagged for flag in flags.split("; ")})
    counted = independent_points(curve)
    return [
        "The curve has no assigned mode and was inverted as the fundamental." if curve.mode is None else "",
        f"{len(flagged)} of {count} points carry flags ({', '.join(kinds)}) and were used with their sigma."
        if flagged
        else "",
        f"The {count} points count as {counted:.0f} independent ones in the ranges, at most "
        f"{POINTS_PER_OCTAVE} per octave, because errors of neighbouring picks go together.",
    ]


def _layers(result: InversionResult, fits: Sequence[Fit], assumed: Assumptions) -> list[str]:
    names = list(dict.fromkeys(fit.misfit.layering.name for fit in fits))
    derived = (
        "layers grow with depth from a third of the shortest wavelength counted "
        f"({assumed.minimum_wavelength:.1f} m; Cox & Teague 2016)"
        if names[0].startswith("ratio")
        else "as given"
    )
    return [
        f"Resolved depth {result.resolved_depth:.1f} m is half the longest wavelength used "
        f"({result.curve.wavelength.max():.1f} m), common practice.",
        f"Layerings tried: {', '.join(names)}; {derived}.",
        f"Only {len(names)} layering(s) were tried: the ranges lack the spread over at least {FEW_LAYERINGS}."
        if len(names) < FEW_LAYERINGS
        else "",
    ]


def _ground(best: Fit, fits: Sequence[Fit], assumed: Assumptions) -> list[str]:
    ground = best.misfit.ground
    poisson = f"Poisson's ratio {ground.poisson_ratio:.2f} +- {POISSON_ERROR:.2f}"
    if np.isfinite(ground.water_table_depth):
        vp = (
            f"Vp follows from {poisson} above the water table at {ground.water_table_depth:.1f} m (given); "
            f"below it water adds its stiffness, Vp^2 = {ground.saturated_vp:.0f}^2 + Vp^2 (Gassmann 1951)."
        )
    else:
        vp = f"Vp follows from {poisson} at all depths."
    density = (
        f"Density follows from Vs and depth (Mayne 2001), with an error of its trend of "
        f"{100.0 * DENSITY_TREND_ERROR:.0f} % per e-fold of depth."
        if ground.density is None
        else f"Density is {ground.density:.0f} kg/m3 in all layers, as given."
    )
    return [vp, "" if assumed.water_known else _water(fits, ground.saturated_vp), density]


def _water(fits: Sequence[Fit], saturated_vp: float) -> str:
    """Tell by computation what an unknown water table does to Vs30."""
    wet = [fit for fit in fits if np.isfinite(fit.misfit.ground.water_table_depth)]
    dry = [fit for fit in fits if not np.isfinite(fit.misfit.ground.water_table_depth)]
    slow = [_vs30(wet_fit) / _vs30(dry_fit) - 1.0 for wet_fit, dry_fit in zip(wet, dry, strict=True)]
    changes = ", ".join(
        f"{100.0 * change:+.0f} % if saturated below {fit.misfit.ground.water_table_depth:.1f} m"
        for fit, change in zip(wet, slow, strict=True)
    )
    return (
        "No water table was given: the best earth is dry, and half of the ensemble's weight is on saturated "
        f"earths (Vp above {saturated_vp:.0f} m/s); Vs30 changes by {changes}. "
        "Its depth would narrow the ranges."
    )


def _vs30(fit: Fit) -> float:
    earth: LayeredEarth = fit.misfit.earth(fit.ln_vs)
    within = np.clip(30.0 - earth.depth, 0.0, earth.thickness)
    return float(30.0 / np.sum(within / earth.vs))


def _fit(result: InversionResult, best: Fit, assumed: Assumptions) -> list[str]:
    low, high = assumed.bounds
    at_bound = np.sum((result.earth.vs <= low * 1.001) | (result.earth.vs >= high / 1.001))
    lost = int(np.isnan(result.predicted).sum())
    return [
        f"The search starts from Vs = {VELOCITY_FACTOR} c at depth wavelength / {WAVELENGTHS_PER_DEPTH} "
        f"(after Tokimatsu et al. 1992) unless given, and stays between {low:.0f} and {high:.0f} m/s.",
        f"{at_bound} layer(s) of the best earth stand at a bound of Vs." if at_bound else "",
        "Vs may fall with depth."
        if assumed.allow_decrease
        else "Vs is held back from falling with depth in the fits, not in the ranges.",
        f"The best earth does not fit to the noise (chi-square {best.chi_square:.2f}): sigma is too small, "
        "or the ground is not layered flat, or the ridge is not the mode assumed; the ranges are widened."
        if not best.fits_the_noise
        else "",
        f"Even the smoothest earths fit better than the noise (chi-square {best.chi_square:.2f}): sigma is "
        "probably larger than the curve's point-to-point error."
        if best.chi_square < 0.5 * TARGET and best.wander == WANDERS[0]
        else "",
        f"At {lost} frequencies the mode does not exist in the best earth; there its half-space's Vs counts."
        if lost
        else "",
    ]


def _ranges(result: InversionResult, assumed: Assumptions) -> list[str]:
    effective = 1.0 / float(np.sum(result.ensemble.weights**2))
    return [
        f"Ranges come from {len(result.ensemble)} earths (seed {assumed.seed}, {effective:.0f} effective) "
        "drawn around all fits from the linearised problem, and weighted by their true fit: they hold the "
        "curve's sigma, the layerings, the assumed Vp and density.",
        f"Below the resolved depth the earths continue {_extension(assumed.depth_exponent)}, with an error "
        f"of ln Vs of {PRIOR_WANDER} per e-fold of depth; above it the same prior yields to the data.",
    ]


def _extension(exponent: float) -> str:
    if exponent == 0.0:
        return "at constant velocity"
    return f"as depth to the power {exponent:g} (stiffness with the root of stress, Hardin & Richart 1963)"
