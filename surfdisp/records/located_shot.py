"""RawRecord to LocatedShot: positions from the table or the header, traces in the order of the line."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.errors import InputError
from ..core.gather import Gather
from .geometry import Geometry, ShotGeometry
from .line import OnLine, project
from .raw_record import RawRecord

FloatArray = NDArray[np.float64]

SAME_PLACE = 0.001
"""Receivers nearer to each other than this are at one place [m]."""

ADVICE = "give positions in shots.csv and receivers.csv beside the file, or in the configuration"


@dataclass(frozen=True, kw_only=True)
class LocatedShot:
    """One shot with positions, ready for quality checks.

    Parameters
    ----------
    gather : Gather
        All traces that have samples and a place of their own, receivers increasing.
    channels : int array (n,)
        Channel number, counted from 1 in the file, of each trace of the gather.
    layout : array (n_channels, 3)
        x, y, z of all channels as given, zero where nothing is: what tells one spread from another.
    stack : int
        Blows already stacked by the instrument.
    labels : tuple of str
        What the header calls the shot.
    from_table : bool
        Whether the source position comes from the user's table rather than the header.
    flags : tuple of str
    format : str
    """

    gather: Gather
    channels: NDArray[np.int64]
    layout: FloatArray
    stack: int
    labels: tuple[str, ...]
    from_table: bool
    flags: tuple[str, ...]
    format: str


def locate(raw: RawRecord, geometry: Geometry | None) -> LocatedShot:
    """Place the traces of a record on the line.

    Raises
    ------
    InputError
        If receivers or source have no position, in the table or the header, no two receivers differ, or a
        number in the header is none. The message begins with the file's name.
    """
    try:
        return _located(raw, geometry or Geometry())
    except InputError as error:
        told = str(error)
        raise InputError(told if told.startswith(raw.file) else f"{raw.file}: {told}") from error


def _located(raw: RawRecord, table: Geometry) -> LocatedShot:
    shot = table.shots.get(raw.file, ShotGeometry())
    flags = list(raw.flags)
    refused = dict(raw.refused)
    places = _receiver_places(raw, table)
    places_known = np.isfinite(places[:, 0])
    _demand_receivers(raw, places[places_known, 0:2])
    for index in np.flatnonzero(~places_known):
        refused[int(index)] = "no receiver position in the header"
    source = raw.source.copy()
    if shot.source is not None:
        source[0] = shot.source
        flags.append(f"source position from {table.origin}")
    if not np.isfinite(source[0]):
        raise InputError(f"no source position in the header; {ADVICE}")
    line = project(places[places_known, :2], source[:2])
    positions = np.full(len(places), np.nan)
    positions[places_known] = line.receivers
    order = _in_order(positions, refused)
    gather = Gather(
        data=raw.data[order],
        interval=raw.interval,
        receivers=positions[order],
        source=line.source if shot.source is None else shot.source,
        delay=raw.delay if shot.delay is None else shot.delay,
        source_off_line=_off_line(shot, line, flags),
        elevations=np.nan_to_num(places[order, 2]),
        source_elevation=_source_elevation(shot, source, places[order, 2], positions[order]),
        name=raw.file,
        blows=raw.stack,
    )
    flags += _about_the_line(gather, line, positions)
    flags += [f"channel {index + 1} set aside: {reason}" for index, reason in sorted(refused.items())]
    return LocatedShot(
        gather=gather,
        channels=order + 1,
        layout=np.nan_to_num(places),
        stack=raw.stack,
        labels=raw.labels,
        from_table=shot.source is not None,
        flags=tuple(flags),
        format=raw.format,
    )


def _receiver_places(raw: RawRecord, table: Geometry) -> FloatArray:
    """x, y, z of all channels; the table wins, and then its line is straight."""
    places = raw.receivers.copy()
    positions = table.positions(raw.file, len(places))
    if positions is not None:
        places[:, 0] = positions
        places[:, 1] = np.nan
    heights = table.heights(raw.file, len(places))
    if heights is not None:
        places[:, 2] = heights
    return places


def _demand_receivers(raw: RawRecord, known: FloatArray) -> None:
    if len(known) == 0:
        raise InputError(f"no receiver positions in the header; {ADVICE}")
    if len(raw.data) > 1 and len(np.unique(np.nan_to_num(known), axis=0)) < 2:
        raise InputError(f"all {len(known)} receivers are at {known[0, 0]:g} m in the header; {ADVICE}")


def _in_order(positions: FloatArray, refused: dict[int, str]) -> NDArray[np.int64]:
    """Indices of the usable traces along the line; of two at one place the first channel is kept."""
    usable = [index for index in np.argsort(positions, kind="stable") if int(index) not in refused]
    kept: list[int] = []
    for index in map(int, usable):
        if kept and positions[index] - positions[kept[-1]] < SAME_PLACE:
            refused[index] = f"at {positions[index]:g} m like channel {kept[-1] + 1}"
        else:
            kept.append(index)
    if not kept:
        raise InputError(
            "no trace has samples and a place; the reasons are: " + "; ".join(set(refused.values()))
        )
    return np.array(kept, dtype=np.int64)


def _off_line(shot: ShotGeometry, line: OnLine, flags: list[str]) -> float:
    if shot.source_off_line is not None:
        distance = abs(shot.source_off_line)
    elif shot.source is not None:
        distance = 0.0
    else:
        distance = line.source_off_line
    if distance > 0.0:
        flags.append(f"source {distance:.2f} m off the line; slant offsets are used")
    return distance


def _source_elevation(
    shot: ShotGeometry, source: FloatArray, heights: FloatArray, positions: FloatArray
) -> float:
    """From the table, else the header, else the ground at the nearest receiver."""
    if shot.source_elevation is not None:
        return shot.source_elevation
    if np.isfinite(source[2]):
        return float(source[2])
    return float(np.nan_to_num(heights[np.argmin(np.abs(positions - source[0]))]))


def _about_the_line(gather: Gather, line: OnLine, positions: FloatArray) -> list[str]:
    """What is odd about the receivers' positions."""
    flags = []
    if line.bend > 0.1 * gather.spacing:
        flags.append(f"receivers lie up to {line.bend:.2f} m beside their straight line")
    known = positions[np.isfinite(positions)]
    steps = np.sign(np.diff(known))
    if len(known) > 2 and np.any(steps > 0) and np.any(steps < 0):
        flags.append("receiver positions do not run one way along the channels; check the header")
    flags += _misplaced(gather.receivers)
    return flags


def _misplaced(receivers: FloatArray) -> list[str]:
    """Receivers off the middle between their neighbours, on a line that is otherwise even."""
    gaps = np.diff(receivers)
    spacing = float(np.median(gaps)) if len(gaps) else 0.0
    even = np.abs(gaps - spacing) < 0.05 * spacing
    if not len(gaps) or even.mean() < 0.7:
        return []
    found = []
    for index in np.flatnonzero(~even[:-1] & ~even[1:]):
        if abs(gaps[index] + gaps[index + 1] - 2.0 * spacing) < 0.05 * spacing:
            place = f"receiver at {receivers[index + 1]:g} m"
            found.append(f"{place} breaks the even spacing of {spacing:g} m; check the header")
    return found
