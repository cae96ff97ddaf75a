"""How numbers and texts are written for a reader: one spelling for console, figures and report."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

import numpy as np

from ..core import DispersionCurve, DispersionImage, Interval, Profile, Record
from ..core.checks import FloatArray

MODE_NAMES = ("fundamental mode", "first higher mode", "second higher mode", "third higher mode")

LEGIBLE_DEPTHS = (0.0, 1.0, 2.0, 3.0, 4.0, 6.0, 8.0, 10.0, 12.0, 15.0, 20.0, 25.0, 30.0)
"""Depths at which a profile of many steps is quoted [m]; the tenfold ones follow below 30 m."""


def printable(text: str) -> str:
    """Return `text` on one line with control, formatting and undecodable characters spelt as escapes.

    Texts come from file names and headers: shown as they are, they could move a terminal's cursor or
    reverse the reading direction of what follows.
    """
    shown = (letter if letter.isprintable() else _escaped(letter) for letter in text)
    return " ".join("".join(shown).split())


def _escaped(letter: str) -> str:
    return " " if letter.isspace() else letter.encode("unicode_escape").decode("ascii")


def number(value: float | None, digits: int = 3) -> str:
    """Return `value` rounded to significant `digits`, whole digits before the point kept; "–" for nothing."""
    if value is None or not math.isfinite(value):
        return "–"
    decimals = digits - 1 - math.floor(math.log10(abs(value))) if value else 0
    shown = f"{value:.{max(decimals, 0)}f}"
    return shown.rstrip("0").rstrip(".") if "." in shown else shown


def metres(value: float | None) -> str:
    """Return a position or distance in metres to the centimetre, as far as it is not round."""
    return number(value) if value is None or not math.isfinite(value) else f"{round(value, 2):g}"


def without_file(sentence: str, file: str) -> str:
    """Return `sentence` without the file's name at its head, for places where that stands already."""
    return sentence.removeprefix(f"{file}: ")


def whole(value: float) -> str:
    """Return `value` without decimals; "–" for nothing."""
    return f"{value:.0f}" if math.isfinite(value) else "–"


def interval(value: Interval, unit: str = "m/s") -> str:
    """Return a median with its 90 % range, as in "271 m/s (255 to 288)"."""
    return f"{value.median:.0f} {unit} ({value.low:.0f} to {value.high:.0f})"


def percent(fraction: float) -> str:
    """Return a probability as a whole percentage, never rounded to certainty."""
    if not math.isfinite(fraction):
        return "–"
    if 0.0 < fraction < 0.01:
        return "< 1 %"
    return "> 99 %" if 0.99 < fraction < 1.0 else f"{100.0 * fraction:.0f} %"


def probabilities(classes: dict[str, float]) -> str:
    """Return the classes that have a probability, the likeliest first, as in "D 97 %, CD 3 %"."""
    likely = sorted((item for item in classes.items() if item[1] > 0.0), key=lambda item: -item[1])
    return ", ".join(f"{name} {percent(share)}" for name, share in likely)


def observable(curve: DispersionCurve) -> str:
    """Return what the curve is, as in "Rayleigh phase velocity, fundamental mode"."""
    return f"{curve.wave.capitalize()} {curve.kind} velocity, {mode_name(curve.mode)}"


def span(values: FloatArray, unit: str) -> str:
    """Return the range of `values`, as in "8 to 55 Hz"."""
    return f"{number(float(values.min()))} to {number(float(values.max()))} {unit}"


def band_and_wavelengths(curve: DispersionCurve) -> tuple[str, str]:
    """Return how far a curve reaches, as in "8 to 55 Hz" and "wavelengths 2.75 to 33.7 m"."""
    return span(curve.frequency, "Hz"), f"wavelengths {span(curve.wavelength, 'm')}"


def scanned(images: Sequence[DispersionImage]) -> str:
    """Return the frequencies and velocities of the images; those of every spread where they differ."""
    axes = [
        f"{len(image.frequencies)} frequencies from {span(image.frequencies, 'Hz')} and "
        f"{len(image.velocities)} velocities from {span(image.velocities, 'm/s')}"
        for image in images
    ]
    return "; ".join(dict.fromkeys(axes))


def traces_used(record: Record) -> str:
    """Return how many traces a record has, as in "48", or "46 of 48" where some were set aside."""
    if record.traces is None:
        return "–"
    told = "\n".join(record.flags)
    channels = set(re.findall(r"\bchannel (\d+) set aside", told))
    at_the_source = re.findall(r"\breceiver at \S+ m set aside", told)
    sides = re.findall(r"\b(\d+) usable traces [^\n]* set aside", told)
    lost = len(channels) + len(at_the_source) + sum(map(int, sides))
    return f"{record.traces - lost} of {record.traces}" if record.used and lost else f"{record.traces}"


def mode_name(mode: int | None) -> str:
    """Return the name of a mode number."""
    if mode is None:
        return "mode not assigned"
    return MODE_NAMES[mode] if mode < len(MODE_NAMES) else f"mode {mode}"


def profile_at_legible_depths(profile: Profile) -> list[tuple[float, float, float, float]]:
    """Return depth [m] with median, low and high of the step there, at a dozen round depths."""
    deeper = [10.0 * depth for depth in LEGIBLE_DEPTHS if depth > 3.0]
    depths = [
        depth for depth in (*LEGIBLE_DEPTHS, *deeper) if len(profile.depth) and depth <= profile.depth[-1]
    ]
    steps = np.searchsorted(profile.depth, depths, side="right") - 1
    rows = zip(depths, profile.median[steps], profile.low[steps], profile.high[steps], strict=True)
    return [(depth, float(median), float(low), float(high)) for depth, median, low, high in rows]


def shortened(text: str, length: int) -> str:
    """Return `text` with its middle left out where it is longer than `length`."""
    if len(text) <= length:
        return text
    head = (length - 1) // 2
    return f"{text[:head]}…{text[-(length - 1 - head) :]}"
