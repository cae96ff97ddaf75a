"""Which shots belong together: one receiver layout is a spread, one source position in it a stack."""

from __future__ import annotations

import dataclasses
from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from ..core.gather import Gather
from .shot_in_work import ShotInWork

SAME_PLACE = 0.05
"""Share of the receiver spacing within which positions are the same."""


def number_spreads(shots: Iterable[ShotInWork]) -> None:
    """Give each located shot the number of its spread, counted from 0 in order of appearance."""
    layouts: list[NDArray[np.float64]] = []
    for shot in shots:
        if shot.located is None or shot.gather is None:
            continue
        layout = shot.located.layout
        tolerance = SAME_PLACE * shot.gather.spacing
        for number, known in enumerate(layouts):
            if known.shape == layout.shape and np.max(np.abs(known - layout)) <= tolerance:
                shot.spread = number
                break
        else:
            shot.spread = len(layouts)
            layouts.append(layout)


def repeated_blows(shots: Iterable[ShotInWork]) -> list[list[ShotInWork]]:
    """Sort the usable shots into groups of one spread, source position, interval, length and delay."""
    groups: list[list[ShotInWork]] = []
    for shot in shots:
        if shot.reason is not None or shot.gather is None:
            continue
        for group in groups:
            if _repeats(shot, group[0]):
                group.append(shot)
                break
        else:
            groups.append([shot])
    return groups


def _repeats(shot: ShotInWork, first: ShotInWork) -> bool:
    a, b = shot.gather, first.gather
    if a is None or b is None or shot.spread != first.spread:
        return False
    tolerance = SAME_PLACE * b.spacing
    places = ((a.source, b.source), (a.source_off_line, b.source_off_line))
    if any(abs(one - other) > tolerance for one, other in places):
        return False
    alike = a.interval == b.interval and a.data.shape[1] == b.data.shape[1]
    return alike and abs(a.delay - b.delay) < 0.5 * a.interval


def common_channels(group: list[ShotInWork]) -> tuple[list[Gather], list[NDArray[np.bool_]]]:
    """Put the blows of a group on all channels that any of them has; a missing trace is not sound."""
    place: dict[int, tuple[float, float]] = {}
    for shot in group:
        if shot.located is not None and shot.gather is not None:
            heights = np.asarray(shot.gather.elevations)
            for channel, x, z in zip(shot.located.channels, shot.gather.receivers, heights, strict=True):
                place.setdefault(int(channel), (float(x), float(z)))
    order = sorted(place, key=lambda channel: place[channel])
    blows, sound = [], []
    for shot in group:
        if shot.located is None or shot.gather is None:
            continue
        row = {int(channel): index for index, channel in enumerate(shot.located.channels)}
        data = np.zeros((len(order), shot.gather.data.shape[1]))
        fit = np.zeros(len(order), dtype=np.bool_)
        for index, channel in enumerate(order):
            if channel in row:
                data[index] = shot.gather.data[row[channel]]
                fit[index] = shot.sound[row[channel]]
        receivers, elevations = np.array([place[channel] for channel in order]).T
        blows.append(dataclasses.replace(shot.gather, data=data, receivers=receivers, elevations=elevations))
        sound.append(fit)
    return blows, sound
