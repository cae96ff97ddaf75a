"""Whether the header's source position and delay fit what the traces show."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray
from ..core.gather import Gather
from .arrivals import energy_times, first_arrivals
from .located_shot import LocatedShot
from .rank_correlation import rank_correlation
from .selection import select_traces

LEAST_TRACES = 6
"""Traces below which the data say too little about the source."""

CONTRADICTED = 0.5
"""Rank correlation of energy time with offset below which the header's source does not fit ..."""

CONVINCING = 0.85
"""... if another position reaches this much."""

EARLY = 0.01
"""How far first arrivals may seem to precede the blow [s]: the width of the onset's window and of a pulse."""

LIKELY, POSSIBLE = (100.0, 0.02), (60.0, 0.04)
"""Slowest velocity of a first arrival near the source [m/s], and how much later its pulse may be seen [s].

What is not likely is compared with the opposite sign of the delay; what is not possible is doubted.
"""

FAR_OUT = 2.0
"""Spread lengths outside the spread beyond which a source position is doubted."""

DELAY_MISFIT = 0.15
"""Time at the source, extrapolated from the energy, beyond which position or delay is doubted [s]."""


@dataclass(frozen=True)
class Verdict:
    """The gather, its delay turned where the data say so; what to tell; why to refuse, None if fit to use."""

    gather: Gather
    flags: tuple[str, ...]
    reason: str | None


def check_headers(shot: LocatedShot, sound: NDArray[np.int64]) -> Verdict:
    """Check a shot's header against its `sound` traces (indices).

    A source position from a header that the arrivals contradict is a reason to refuse the record; from the
    user's own table it is only flagged. A delay of the wrong sign is turned, and said.
    """
    if len(sound) < LEAST_TRACES:
        return Verdict(shot.gather, (), None)
    doubts, contradicted = _check_source(select_traces(shot.gather, sound), shot.labels)
    if contradicted and shot.from_table:
        return Verdict(shot.gather, tuple(doubts), None)
    if contradicted:
        return Verdict(shot.gather, (), f"{doubts[0]}; give the position in shots.csv")
    gather, flags = _check_delay(shot.gather, sound)
    return Verdict(gather, (*doubts, *flags, *_check_loudest(select_traces(gather, sound))), None)


def _check_delay(gather: Gather, sound: NDArray[np.int64]) -> tuple[Gather, list[str]]:
    nearest = sound[np.argsort(gather.offsets[sound])[:3]]
    offset = float(np.median(gather.offsets[nearest]))
    arrival = float(np.median(first_arrivals(gather)[nearest]))
    other = arrival - 2.0 * gather.delay
    seen = f"first arrivals at {offset:.1f} m come {1e3 * arrival:.0f} ms after the blow"
    if not _fits(arrival, offset, LIKELY) and _fits(other, offset, POSSIBLE) and abs(other) < abs(arrival):
        return dataclasses.replace(gather, delay=-gather.delay), [
            f"{seen} with the header's delay of {gather.delay:g} s, and {1e3 * other:.0f} ms with the "
            f"opposite sign; {-gather.delay:g} s is used"
        ]
    if _fits(arrival, offset, POSSIBLE):
        return gather, []
    if arrival < 0.0:
        return gather, [f"{seen}: they precede it; check delay and trigger"]
    return gather, [f"{seen}: later than {POSSIBLE[0]:g} m/s; check delay, trigger and source position"]


def _fits(arrival: float, offset: float, slowest: tuple[float, float]) -> bool:
    """Whether an arrival [s] is neither before the blow nor slower than a velocity and the pulse's rise."""
    return -EARLY <= arrival <= offset / slowest[0] + slowest[1]


def _check_source(gather: Gather, labels: tuple[str, ...]) -> tuple[list[str], bool]:
    """What speaks against the source position, and whether that is a contradiction."""
    times = energy_times(gather)
    here = rank_correlation(gather.offsets, times)
    best, place = _best_source(gather, times)
    named = " and equals the shot number" if _is_label(gather.source, labels) else ""
    if here < CONTRADICTED and best >= CONVINCING:
        return [
            f"source position {gather.source:g} m contradicts the arrivals, which come from {place}{named}"
        ], True
    outside = max(gather.receivers[0] - gather.source, gather.source - gather.receivers[-1])
    late = _time_at_source(gather, times)
    doubts = []
    if outside > FAR_OUT * gather.spread_length and abs(late) > DELAY_MISFIT:
        doubts.append(
            f"source position {gather.source:g} m is {outside:g} m outside the spread of "
            f"{gather.spread_length:g} m, which the arrival times do not fit{named}"
        )
        return doubts, True
    if best - here > 0.15 and best >= CONVINCING:
        doubts.append(f"arrivals suggest a source {place} rather than at {gather.source:g} m{named}")
    elif named:
        doubts.append(f"source position {gather.source:g} m equals the shot number; is it in metres?")
    return doubts, False


def _best_source(gather: Gather, times: FloatArray) -> tuple[float, str]:
    """Highest rank correlation of time with distance over sources off both ends and between receivers."""
    x = gather.receivers
    between = 0.5 * (x[2:-1] + x[1:-2])
    places = [(float(x[0]), "off the low end"), (float(x[-1]), "off the high end")]
    places += [(float(place), f"near {place:g} m") for place in between]
    return max((rank_correlation(np.abs(x - place), times), words) for place, words in places)


def _time_at_source(gather: Gather, times: FloatArray) -> float:
    """Energy time extrapolated to the source by the median slope between pairs of receivers [s]."""
    first, second = np.triu_indices(len(times), 1)
    apart = gather.offsets[second] - gather.offsets[first]
    kept = np.abs(apart) > 1e-9
    slope = float(np.median((times[second] - times[first])[kept] / apart[kept]))
    return float(np.median(times - slope * gather.offsets))


def _check_loudest(gather: Gather) -> list[str]:
    """The strongest trace, neighbours smoothed, should lie in the nearest third of the offsets."""
    loudness = np.log(np.maximum(gather.data.std(axis=1), np.finfo(np.float64).tiny))
    smooth = [np.median(loudness[max(0, i - 1) : i + 2]) for i in range(len(loudness))]
    strongest = int(np.argmax(smooth))
    rank = int(np.sum(gather.offsets < gather.offsets[strongest]))
    if rank < max(3, len(loudness) / 3.0):
        return []
    return [
        f"strongest at {gather.receivers[strongest]:g} m, not near the source at {gather.source:g} m; "
        "check source position and gains"
    ]


def _is_label(source: float, labels: tuple[str, ...]) -> bool:
    return source == int(source) and any(label.isdigit() and int(label) == int(source) for label in labels)
