"""Geometry: positions that the crew wrote down, which win over what the headers say."""

from __future__ import annotations

from dataclasses import field

import numpy as np

from ..core.checks import FloatArray, all_finite, finite, float_array, positive, same_length
from ..core.errors import InputError
from ..core.noun import noun, set_field, tagged


@noun
class ReceiverLine:
    """Receivers at even distances; how many there are the record tells.

    Parameters
    ----------
    first : float
        Position of the first channel along the line [m].
    spacing : float
        Distance from each channel to the next [m].

    Raises
    ------
    InputError
        If the spacing is not positive.
    """

    first: float = tagged("m", default=0.0)
    spacing: float = tagged("m")

    def __post_init__(self) -> None:
        set_field(self, "first", finite(self.first, "first receiver position"))
        set_field(self, "spacing", positive(self.spacing, "receiver spacing"))

    def positions(self, count: int) -> FloatArray:
        """Return the positions of `count` receivers [m]."""
        return self.first + self.spacing * np.arange(count, dtype=np.float64)


@noun
class ShotGeometry:
    """Where one shot was; None where the header's word stands.

    Parameters
    ----------
    source : float, optional
        Position of the source along the line [m].
    source_off_line : float, optional
        Horizontal distance of the source from the line [m].
    source_elevation : float, optional
        [m].
    delay : float, optional
        Time of the first sample after the blow [s]; negative where recording began before it.
    line : ReceiverLine, optional
        Receivers of this shot, where the spread was moved.
    """

    source: float | None = tagged("m", default=None)
    source_off_line: float | None = tagged("m", default=None)
    source_elevation: float | None = tagged("m", default=None)
    delay: float | None = tagged("s", default=None)
    line: ReceiverLine | None = None

    def __post_init__(self) -> None:
        for name in ("source", "source_off_line", "source_elevation", "delay"):
            value = getattr(self, name)
            set_field(self, name, None if value is None else finite(value, name))

    def over(self, lower: ShotGeometry, moved: bool) -> ShotGeometry:
        """Return both in one; a line of `lower` does not count where receivers were `moved` for all shots."""
        names = ("source", "source_off_line", "source_elevation", "delay")
        given = {name: getattr(self, name) for name in names}
        values = {name: getattr(lower, name) if value is None else value for name, value in given.items()}
        line = self.line if moved or self.line is not None else lower.line
        return ShotGeometry(**values, line=line)


@noun
class Geometry:
    """Positions of a survey; everything is optional, and what is missing comes from the headers.

    Parameters
    ----------
    shots : dict of ShotGeometry
        By base name of the field file.
    line : ReceiverLine, optional
        Receivers at even distances.
    receivers : array (n,), optional
        Or else the position of each channel along the line, in the order of the channels [m].
    elevations : array (n,), optional
        Elevation of each channel [m].
    origin : str
        Where the table came from, for the record's flags.

    Raises
    ------
    InputError
        If receivers are given twice, or arrays differ in length or are not finite.
    """

    shots: dict[str, ShotGeometry] = field(default_factory=dict)
    line: ReceiverLine | None = None
    receivers: FloatArray | None = tagged("m", "channel", default=None)
    elevations: FloatArray | None = tagged("m", "channel", default=None)
    origin: str = "the geometry table"

    def __post_init__(self) -> None:
        if self.line is not None and self.receivers is not None:
            raise InputError("receivers must be given as a line or as positions, not both")
        for name in ("receivers", "elevations"):
            if getattr(self, name) is not None:
                set_field(self, name, float_array(getattr(self, name), name))
                all_finite(getattr(self, name), name)
        if self.receivers is not None and self.elevations is not None:
            same_length([("receivers", self.receivers), ("elevations", self.elevations)])

    def over(self, lower: Geometry) -> Geometry:
        """Return both geometries in one: what this one gives wins, field by field, over `lower`."""
        moved = self.line is not None or self.receivers is not None
        shots = {
            file: self.shots.get(file, ShotGeometry()).over(lower.shots.get(file, ShotGeometry()), moved)
            for file in {**lower.shots, **self.shots}
        }
        return Geometry(
            shots=shots,
            line=self.line if moved else lower.line,
            receivers=self.receivers if moved else lower.receivers,
            elevations=lower.elevations if self.elevations is None else self.elevations,
            origin=f"{self.origin} over {lower.origin}",
        )

    def positions(self, file: str, count: int) -> FloatArray | None:
        """Return the positions of the `count` channels of a file [m], None where only the header knows.

        Raises
        ------
        InputError
            If the table holds another number of channels than the file.
        """
        shot = self.shots.get(file)
        line = shot.line if shot is not None and shot.line is not None else self.line
        if line is not None and (self.receivers is None or (shot is not None and shot.line is not None)):
            return line.positions(count)
        return self._of_channels("receivers", file, count)

    def heights(self, file: str, count: int) -> FloatArray | None:
        """Return the elevations of the `count` channels of a file [m], None where only the header knows."""
        return self._of_channels("elevations", file, count)

    def _of_channels(self, name: str, file: str, count: int) -> FloatArray | None:
        values: FloatArray | None = getattr(self, name)
        if values is not None and len(values) != count:
            raise InputError(
                f"{file}: {self.origin} must give {name} of as many channels as the file has; "
                f"got {len(values)} for {count}"
            )
        return values
