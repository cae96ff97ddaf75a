"""RawRecord to LocatedShot: positions from the table or the header, traces in the order of the line."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..core.checks import FloatArray
from ..core.errors import InputError
from ..core.gather import Gather
from .geometry import Geometry, ShotGeometry
from .line import OnLine, project
from .raw_record import RawRecord

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
    labels : tuple of str
        What the header calls the shot.
    from_table : bool
        Whether the source position comes from the user's table rather than the header.
    flags : tuple of str
    """

    gather: Gather
    channels: NDArray[np.int64]
    layout: FloatArray
    labels: tuple[str, ...]
    from_table: bool
    flags: tuple[str, ...]


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


@dataclass(frozen=True)
class _Places:
    """Positions along the line and elevations, of all channels (NaN where unknown) and of the source."""

    positions: FloatArray
    heights: FloatArray
    layout: FloatArray
    source: float
    source_off_line: float
    source_height: float
    bend: float


def _located(raw: RawRecord, table: Geometry) -> LocatedShot:
    shot = table.shots.get(raw.file, ShotGeometry())
    flags, refused = list(raw.flags), dict(raw.refused)
    places = _find_places(raw, table, shot, flags)
    unplaced = np.flatnonzero(np.isnan(places.positions))
    refused |= dict.fromkeys(map(int, unplaced), "no receiver position in the header")
    order = _in_order(places.positions, refused)
    gather = Gather(
        data=raw.data[order],
        interval=raw.interval,
        receivers=places.positions[order],
        source=places.source,
        delay=raw.delay if shot.delay is None else shot.delay,
        source_off_line=places.source_off_line,
        elevations=places.heights[order],
        source_elevation=places.source_height,
        name=raw.file,
        blows=raw.stack,
    )
    flags += _about_the_line(gather, places.bend, places.positions)
    flags += [f"channel {index + 1} set aside: {reason}" for index, reason in sorted(refused.items())]
    return LocatedShot(
        gather=gather,
        channels=order + 1,
        layout=places.layout,
        labels=raw.labels,
        from_table=shot.source is not None,
        flags=tuple(flags),
    )


def _find_places(raw: RawRecord, table: Geometry, shot: ShotGeometry, flags: list[str]) -> _Places:
    receivers, source = _coordinates(raw, table, shot)
    known = np.isfinite(receivers[:, 0])
    _demand_positions(raw, receivers[known, :2], source)
    if shot.source is not None:
        flags.append(f"source position from {table.origin}")
    line = project(receivers[known, :2], source[:2])
    positions = np.full(len(receivers), np.nan)
    positions[known] = line.receivers
    along = line.source if shot.source is None else shot.source
    heights = np.nan_to_num(receivers[:, 2])
    nearest = int(np.nanargmin(np.abs(positions - along)))
    return _Places(
        positions=positions,
        heights=heights,
        layout=np.nan_to_num(receivers),
        source=along,
        source_off_line=_off_line(shot, line, flags),
        source_height=_source_height(shot, source[2], heights, nearest, flags),
        bend=line.bend,
    )


def _coordinates(raw: RawRecord, table: Geometry, shot: ShotGeometry) -> tuple[FloatArray, FloatArray]:
    """x, y, z of all channels and of the source; the table wins, and then its line is straight."""
    receivers, source = raw.receivers.copy(), raw.source.copy()
    positions = table.positions(raw.file, len(receivers))
    if positions is not None:
        receivers[:, 0] = positions
        receivers[:, 1] = source[1] = np.nan  # the header's y has nothing to do with the table's line
    heights = table.heights(raw.file, len(receivers))
    if heights is not None:
        receivers[:, 2] = heights
    if shot.source is not None:
        source[0] = shot.source
    return receivers, source


def _demand_positions(raw: RawRecord, known: FloatArray, source: FloatArray) -> None:
    if len(known) == 0:
        raise InputError(f"no receiver positions in the header; {ADVICE}")
    if len(raw.data) > 1 and len(np.unique(np.nan_to_num(known), axis=0)) < 2:
        raise InputError(f"all {len(known)} receivers are at {known[0, 0]:g} m in the header; {ADVICE}")
    if not np.isfinite(source[0]):
        raise InputError(f"no source position in the header; {ADVICE}")


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
    if distance < SAME_PLACE:
        return 0.0
    flags.append(f"source {distance:.2f} m off the line; slant offsets are used")
    return distance


def _source_height(
    shot: ShotGeometry, header: float, heights: FloatArray, nearest: int, flags: list[str]
) -> float:
    """From the table, else the header, else the ground at the nearest receiver."""
    if shot.source_elevation is not None:
        return shot.source_elevation
    ground = float(heights[nearest])
    if header == 0.0 and np.all(heights != 0.0):
        flags.append(f"source elevation is 0 m in the header; {ground:g} m at the nearest receiver is used")
        return ground
    return float(header) if np.isfinite(header) else ground


def _about_the_line(gather: Gather, bend: float, positions: FloatArray) -> list[str]:
    """What is odd about the receivers' positions."""
    flags = []
    if bend > 0.1 * gather.spacing:
        flags.append(f"receivers lie up to {bend:.2f} m beside their straight line")
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
