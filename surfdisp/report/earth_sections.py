"""Report sections on the ground: inversion, profile, site quantities."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from ..core import InversionResult, LayeredEarth, SiteResult
from ..site.assess import VELOCITY_ONLY
from .blocks import NUMBER, TEXT, WIDE, Block, beside, bullets, figures_named, heading, paragraph, table
from .words import interval, number, printable, probabilities, profile_at_legible_depths, whole

LAYERING_LINES = 8
ASSUMPTION_LINES = 14

EARTH_COLUMNS = tuple(
    (name, NUMBER)
    for name in (
        "top (m)",
        "thickness (m)",
        "Vs (m/s)",
        "Vp (m/s)",
        "Poisson's ratio",
        "density (kg/m³)",
        "resolution",
    )
)
PROFILE_COLUMNS = tuple((name, NUMBER) for name in ("depth (m)", "Vs (m/s)", "90 % range", "G0 (MPa)"))
CLASS_COLUMNS = (
    ("standard", TEXT),
    ("class of the median", TEXT),
    ("probabilities", TEXT),
    ("limits used", WIDE),
)


def inversion(found: InversionResult, figures: Sequence[str]) -> Iterator[Block]:
    """Yield how the curve was inverted, the best earth, and how well it fits."""
    yield heading("Inversion")
    state = "converged" if found.converged else "did NOT converge"
    yield paragraph(
        f"The search {state} after {found.iterations} iterations: {found.message or 'no further message'}.",
        f"Mean squared misfit {number(found.chi_square)} in units of the variance (1 is a fit to the noise).",
        "Layerings tried:",
        leads_on=True,
    )
    yield bullets(found.layerings, LAYERING_LINES, "project.h5")
    if found.notes:
        yield paragraph("Assumptions and limits:", leads_on=True)
        yield bullets(found.notes, ASSUMPTION_LINES, "summary.json")
    yield paragraph(
        "Best earth; resolution 1 means that the data decide a layer's velocity, 0 that the prior does. Vp "
        "and density are assumed as the settings say, not measured:",
        leads_on=True,
    )
    yield table(EARTH_COLUMNS, _earth_rows(found.earth, found.resolution.tolist()))
    yield from figures_named(
        "figure_fit",
        figures,
        "The curve and what the best earth and others of the ensemble predict, and the misfit by frequency "
        "with one standard deviation shaded.",
        width=80,
    )


def _earth_rows(earth: LayeredEarth, resolution: Sequence[float]) -> list[list[str]]:
    ratio = np.square(earth.vp / earth.vs)
    poisson = (ratio - 2.0) / (2.0 * (ratio - 1.0))
    rows = zip(
        earth.depth, earth.thickness, earth.vs, earth.vp, poisson, earth.density, resolution, strict=True
    )
    return [
        [
            number(depth),
            "half-space" if np.isinf(thickness) else number(thickness),
            *map(number, others),
            f"{decided:.2f}",
        ]
        for depth, thickness, *others, decided in rows
    ]


def profile(site: SiteResult, figures: Sequence[str]) -> Iterator[Block]:
    """Yield the profile as a short table beside its figure."""
    yield heading("Profile")
    yield paragraph(
        f"The data resolve the ground to {number(site.resolved_depth)} m, half the longest wavelength used "
        "(common practice); depths with an asterisk lie below it. The table quotes the step that holds at "
        "each depth; every step is in profile.csv. G0 is the small-strain shear modulus, density times the "
        "square of Vs.",
        leads_on=True,
    )
    steps = table(PROFILE_COLUMNS, _profile_rows(site))
    picture = figures_named(
        "figure_profile",
        figures,
        "Shear velocity with its 90 % range and the earths behind it, and how far the data decide each "
        "layer of the best earth.",
        width=100,
    )
    yield beside(steps, picture[0]) if picture else steps


def _profile_rows(site: SiteResult) -> list[list[str]]:
    velocities = profile_at_legible_depths(site.profile)
    moduli = profile_at_legible_depths(site.shear_modulus)
    rows = []
    for (depth, median, low, high), (_, modulus, _, _) in zip(velocities, moduli, strict=True):
        mark = " *" if depth > site.resolved_depth else ""
        rows.append(
            [f"{depth:.0f}{mark}", whole(median), f"{whole(low)} to {whole(high)}", number(modulus / 1e6)]
        )
    return rows


def site_quantities(site: SiteResult) -> Iterator[Block]:
    """Yield Vs30 with its range and how it was reached, other averages, the check, and the site classes."""
    yield heading("Site quantities")
    averages = [
        f"{interval(value)} over {printable(depth)} m" for depth, value in site.average_velocity.items()
    ]
    yield paragraph(
        f"Vs30 is {interval(site.vs30)}, 90 % range in brackets.",
        site.vs30_note,
        f"Travel-time averages over other depths: {'; '.join(averages)}." if averages else "",
        _check(site),
        f"Site classes ({VELOCITY_ONLY}):",
        leads_on=True,
    )
    rows = [
        [
            standard,
            site.median_class.get(standard, "–"),
            probabilities(classes),
            site.class_bounds.get(standard, "").removesuffix(f"; {VELOCITY_ONLY}"),
        ]
        for standard, classes in site.site_class.items()
    ]
    yield table(CLASS_COLUMNS, rows)


def _check(site: SiteResult) -> str:
    if site.wavelength_check is None:
        return (
            "Vs30 cannot be checked by the phase velocity at 36 m wavelength: the curve is no fundamental "
            "Rayleigh curve that reaches it."
        )
    return (
        "Check from the curve alone, 1.076 times the phase velocity at 36 m wavelength (Brown, Diehl & "
        f"Nigbor 2000): {interval(site.wavelength_check)}."
    )
