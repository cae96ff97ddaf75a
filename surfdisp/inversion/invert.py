"""One dispersion curve to the earths that explain it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from ..core import SILENT, DispersionCurve, Ensemble, InversionResult, LayeredEarth, Progress, StepError
from ..core.checks import FloatArray, finite, positive
from ..core.errors import InputError
from .ensemble import Spread, likelihoods
from .ground import Ground
from .layering import Layering, layerings
from .misfit import Misfit
from .notes import Assumptions, layering_line, notes
from .occam import TARGET, WANDERS, Fit, smoothest_fit
from .smoothness import Smoothness
from .starting import starting_ln_vs

LAYERING_RATIOS = (1.25, 1.5, 2.0)
FEWEST_POINTS = 4
BEYOND_HALF_SPACING = "beyond half the spacing's wavenumber"
"""Flag of points beyond 1 / (2 spacing), as the picking spells it."""
RESOLVED_WAVELENGTHS = 0.5
"""Resolved depth in longest wavelengths, common practice."""
LOWER_BOUND, UPPER_BOUND = 0.5, 4.0
"""Bounds of Vs in slowest and fastest phase velocities of the curve."""
SATURATED_WEIGHT = 0.5
"""Weight of saturated ground where nobody says whether there is a water table."""
DEPTH_EXPONENT = 0.25
"""Of Vs with depth: stiffness of soil goes with the root of effective stress (Hardin & Richart 1963)."""
SATURATED_DEPTHS = (2.0, 10.0)
"""Water tables tried then [m], one per layering, log-spaced between these."""


@dataclass(frozen=True)
class Trial:
    """One layering under one assumption about water, and its prior weight."""

    layering: Layering
    ground: Ground
    weight: float


def invert(
    curve: DispersionCurve,
    *,
    layering_ratios: Sequence[float] = LAYERING_RATIOS,
    thickness: Sequence[ArrayLike] | None = None,
    minimum_wavelength: float | None = None,
    poisson_ratio: float = 1.0 / 3.0,
    water_table_depth: float | None = None,
    saturated_vp: float = 1500.0,
    density: float | None = None,
    vs_bounds: tuple[float, float] | None = None,
    allow_decrease: bool = True,
    depth_exponent: float = DEPTH_EXPONENT,
    start: LayeredEarth | None = None,
    n_earths: int = 500,
    seed: int = 0,
    progress: Progress = SILENT,
) -> InversionResult:
    """Find the smoothest layered earth that explains a Rayleigh phase-velocity curve, and those around it.

    Regularised least squares in ln Vs with analytic derivatives inside bounds (Levenberg-Marquardt), the
    smoothest earth whose chi-square is at most 1 (Constable, Parker & Constable 1987) in each of several
    layerings (Cox & Teague 2016). The ensemble holds seeded draws around every fit; its spread joins the
    curve's sigma, the layerings, the assumed Vp and density, and below the data the extension's error.

    Parameters
    ----------
    curve : DispersionCurve
        Rayleigh, phase; a curve without a mode counts as the fundamental.
    layering_ratios : sequence of float
        Growth of layer thickness with depth, one layering for each.
    thickness : sequence of array, optional
        Layerings of your own instead: finite thicknesses [m] over a half-space, each top down.
    minimum_wavelength : float, optional
        What the thinnest layer is derived from [m]; where not given the shortest of the curve that is not
        flagged as beyond half the spacing's wavenumber (shorter than twice the spacing).
    poisson_ratio : float
        Above the water table; it gives Vp from Vs.
    water_table_depth : float, optional
        [m]; infinite for ground known to be dry. Where not given the best earth is dry, and part of the
        ensemble's weight goes to saturated earths.
    saturated_vp : float
        Least Vp below the water table [m/s].
    density : float, optional
        [kg/m3] of all layers; where not given it follows Vs and depth (Mayne 2001).
    vs_bounds : tuple of float, optional
        Least and greatest Vs [m/s]; where not given 0.5 times the slowest and 4 times the fastest velocity.
    allow_decrease : bool
        Whether Vs may fall with depth; if not, the smoothness of the fits resists a fall, which only strong
        data overcome.
    depth_exponent : float
        Of the power of depth that Vs follows where the data say nothing, above all below them; 0 extends at
        constant velocity.
    start : LayeredEarth, optional
        Starting velocities; where not given they are read off the curve.
    n_earths : int
        Number of draws; those that turn out not to fit are left out of the ensemble.
    seed : int
        Of the draws.
    progress : Progress

    Returns
    -------
    InversionResult
        A search that did not converge or does not reach the noise says so in `message`.

    Raises
    ------
    InputError
        If an argument breaks its contract.
    StepError
        If the curve is no Rayleigh phase velocity or has fewer than 4 points.
    """
    _check_curve(curve)
    if n_earths < 1:
        raise InputError(f"n_earths must be at least 1; got {n_earths}")
    if minimum_wavelength is None:
        minimum_wavelength = shortest_wavelength(curve)
    made = layerings(
        positive(minimum_wavelength, "minimum_wavelength"),
        float(curve.wavelength.max()),
        ratios=layering_ratios,
        thickness=thickness,
    )
    water = np.inf if water_table_depth is None else water_table_depth
    trials = _trials(made, Ground(poisson_ratio, water, saturated_vp, density), water_table_depth is not None)
    bounds = _bounds(curve, vs_bounds)
    exponent = finite(depth_exponent, "depth_exponent")

    progress.start("inverting", 2 * len(trials))
    fits = []
    for trial in trials:
        misfit = Misfit(curve, trial.ground, trial.layering)
        fits.append(_fit(misfit, start, bounds, exponent, allow_decrease))
        progress.advance()
    best = min(fits[: len(made)], key=_rank)
    weights = likelihoods(fits, curve) * [trial.weight for trial in trials]
    weights /= weights.sum()
    resolution = Spread.around(best).resolution[best.misfit.layering.unknown]
    found = InversionResult(
        curve=curve,
        earth=best.misfit.earth(best.ln_vs),
        ensemble=_ensemble(fits, weights, bounds, n_earths, seed, progress),
        predicted=best.misfit.predicted(best.ln_vs),
        chi_square=best.chi_square,
        resolution=resolution,
        resolved_depth=RESOLVED_WAVELENGTHS * float(curve.wavelength.max()),
        layerings=tuple(layering_line(fit, weight) for fit, weight in zip(fits, weights, strict=True)),
        converged=best.converged,
        message=_message(best),
        iterations=sum(fit.iterations for fit in fits),
    )
    assumed = Assumptions(
        minimum_wavelength=minimum_wavelength,
        bounds=bounds,
        water_known=water_table_depth is not None,
        allow_decrease=allow_decrease,
        depth_exponent=exponent,
        seed=seed,
    )
    return replace(found, notes=notes(found, best, fits, assumed))


def _check_curve(curve: DispersionCurve) -> None:
    if (curve.wave, curve.kind) != ("rayleigh", "phase"):
        raise StepError(
            f"only Rayleigh phase velocity can be inverted; got a curve of {curve.wave} {curve.kind}"
        )
    if len(curve.frequency) < FEWEST_POINTS:
        raise StepError(
            f"an inversion needs at least {FEWEST_POINTS} points; the curve has {len(curve.frequency)}"
        )


def shortest_wavelength(curve: DispersionCurve) -> float:
    """Return the curve's shortest wavelength [m] of those that the receiver spacing samples twice.

    Points beyond 1 / (2 spacing) are valid velocities, but the top layer cannot be resolved to them.
    """
    sampled = [BEYOND_HALF_SPACING not in flags for flags in curve.flags] if curve.flags is not None else []
    wavelengths = curve.wavelength[sampled] if any(sampled) else curve.wavelength
    return float(wavelengths.min())


def _bounds(curve: DispersionCurve, given: tuple[float, float] | None) -> tuple[float, float]:
    if given is None:
        return LOWER_BOUND * float(curve.velocity.min()), UPPER_BOUND * float(curve.velocity.max())
    low, high = positive(given[0], "vs_bounds"), positive(given[1], "vs_bounds")
    if not low < high:
        raise InputError(f"vs_bounds must increase; got {given} m/s")
    return low, high


def _trials(made: Sequence[Layering], ground: Ground, water_known: bool) -> list[Trial]:
    """Every layering with the ground as given, and where the water is unknown each once more saturated."""
    given = [Trial(layering.split_at(ground.water_table_depth), ground, 1.0) for layering in made]
    if water_known:
        return given
    depths = np.geomspace(*SATURATED_DEPTHS, len(made))
    odds = SATURATED_WEIGHT / (1.0 - SATURATED_WEIGHT)
    saturated = [
        Trial(layering.split_at(depth), replace(ground, water_table_depth=float(depth)), odds)
        for layering, depth in zip(made, depths, strict=True)
    ]
    return [*given, *saturated]


def _fit(
    misfit: Misfit,
    start: LayeredEarth | None,
    bounds: tuple[float, float],
    exponent: float,
    allow_decrease: bool,
) -> Fit:
    depth = misfit.layering.unknown_depth
    if start is None:
        ln_vs = starting_ln_vs(misfit.curve, misfit.layering)
    else:
        ln_vs = np.log(start.vs[np.searchsorted(start.depth, depth, side="right") - 1])
    lower, upper = (np.full(depth.size, np.log(bound)) for bound in bounds)
    prior = Smoothness(depth, float(ln_vs.mean()), WANDERS[0], exponent, allow_decrease)
    return smoothest_fit(misfit, prior, ln_vs, lower, upper)


def _rank(fit: Fit) -> tuple[bool, float, float]:
    """Order of fits: those that reach the noise first, then the smoothest, then the closest."""
    missed = fit.chi_square > TARGET
    return missed, fit.chi_square if missed else fit.wander, fit.chi_square


def _ensemble(
    fits: Sequence[Fit],
    weights: FloatArray,
    bounds: tuple[float, float],
    n_earths: int,
    seed: int,
    progress: Progress,
) -> Ensemble:
    """Draw around every fit, as often as its weight asks, each from a stream of its own."""
    earths: list[LayeredEarth] = []
    shares: list[FloatArray] = []
    lower, upper = np.log(bounds[0]), np.log(bounds[1])
    counts = np.ceil(n_earths * weights).astype(int)
    for index, (fit, weight, count) in enumerate(zip(fits, weights, counts, strict=True)):
        random = np.random.default_rng(np.random.SeedSequence(seed, spawn_key=(index,)))
        drawn, share = Spread.around(fit).draw(max(int(count), 1), lower, upper, random)
        earths += drawn
        shares.append(weight * share)
        progress.advance()
    return Ensemble.of(earths, np.concatenate(shares))


def _message(best: Fit) -> str:
    fitted = (
        f"fits to the noise, chi-square {best.chi_square:.2f}"
        if best.fits_the_noise
        else f"does not fit to the noise: chi-square {best.chi_square:.2f}"
    )
    return f"{best.message}; {fitted}"
