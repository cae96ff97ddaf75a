"""What is known so far about one shot while the files of a survey are prepared."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ..core.errors import InputError
from ..core.gather import Gather
from ..core.record import Record
from .field_file import digest, parse, read_bytes
from .located_shot import LocatedShot
from .raw_record import RawRecord
from .reading import join, shots_of
from .trace_faults import Examination

JOINED_FORMATS = ("SAC", "miniSEED")


@dataclass
class ShotInWork:
    """One shot; `reason` says why it is not used, None so far.

    `files` and `digests` are of the file it came from, or of the files of its single traces. `shape` is that
    of the samples as read; the raw record lets go of them once it is located. `sound` tells which traces of
    the located shot may be used, `flags` what is to be told of the record.
    """

    files: list[str]
    digests: list[str]
    raw: RawRecord | None = None
    shape: tuple[int, int] | None = None
    located: LocatedShot | None = None
    gather: Gather | None = None
    examination: Examination | None = None
    sound: NDArray[np.bool_] = field(default_factory=lambda: np.zeros(0, dtype=np.bool_))
    spread: int = 0
    flags: list[str] = field(default_factory=list)
    reason: str | None = None

    def records(self) -> list[Record]:
        """Return the row of each file."""
        raw, gather = self.raw, self.gather
        spacing = None if gather is None or len(gather.receivers) < 2 else gather.spacing
        return [
            Record(
                file=file,
                sha256=sha256,
                used=self.reason is None,
                reason=self.reason,
                traces=None if self.shape is None else self.shape[0],
                samples=None if self.shape is None else self.shape[1],
                interval=None if raw is None else raw.interval,
                spacing=spacing,
                source=None if gather is None else gather.source,
                delay=None if raw is None else raw.delay if gather is None else gather.delay,
                stack=None if raw is None else raw.stack,
                flags=tuple(self.flags),
            )
            for file, sha256 in zip(self.files, self.digests, strict=True)
        ]


def read_shots(paths: Sequence[Path]) -> list[ShotInWork]:
    """Return the shots of the files, in their order; a file that cannot be used is a shot with its reason.

    Raises
    ------
    InputError
        If a file does not exist or is a folder.
    """
    shots: list[ShotInWork] = []
    seen: dict[str, str] = {}
    for path in paths:
        content = read_bytes(path)
        sha256 = digest(content)
        if sha256 in seen:
            reason = f"{path.name}: has the same content as {seen[sha256]}, which is used already"
            shots.append(ShotInWork([path.name], [sha256], reason=reason))
            continue
        seen[sha256] = path.name
        try:
            records = shots_of(parse(content, path.name))
            shots += [ShotInWork([path.name], [sha256], raw, _shape(raw)) for raw in records]
        except InputError as error:
            shots.append(ShotInWork([path.name], [sha256], reason=str(error)))
    return _joined(shots)


def _shape(raw: RawRecord) -> tuple[int, int]:
    return raw.data.shape[0], raw.data.shape[1]


def _joined(shots: list[ShotInWork]) -> list[ShotInWork]:
    """Put single-trace files of one shot together, at the place of the first of them."""
    joined: dict[object, list[ShotInWork]] = {}
    for index, shot in enumerate(shots):
        raw = shot.raw
        single = raw is not None and raw.format in JOINED_FORMATS and len(raw.data) == 1
        key = (raw.format, raw.started, raw.source.tobytes()) if single and raw is not None else index
        joined.setdefault(key, []).append(shot)
    return [members[0] if len(members) == 1 else _join(members) for members in joined.values()]


def _join(members: list[ShotInWork]) -> ShotInWork:
    files = [file for member in members for file in member.files]
    whole = ShotInWork(files, [sha256 for member in members for sha256 in member.digests])
    try:
        whole.raw = join([member.raw for member in members if member.raw is not None])
        whole.shape = _shape(whole.raw)
    except InputError as error:
        whole.reason = str(error)
    return whole
