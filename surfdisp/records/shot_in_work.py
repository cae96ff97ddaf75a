"""What is known so far about one shot while the files of a survey are prepared."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ..core.errors import InputError
from ..core.gather import Gather
from ..core.record import Record
from .field_file import digest, parse
from .located_shot import LocatedShot
from .raw_record import RawRecord
from .reading import join, shots_of

JOINED_FORMATS = ("SAC", "miniSEED")


@dataclass
class ShotInWork:
    """One shot; `reason` says why it is not used, None so far.

    `files` and `digests` are of the file it came from, or of the files of its single traces. `sound` tells
    which traces of the located shot's gather may be used, `flags` what is to be told of the record.
    """

    files: list[str]
    digests: list[str]
    raw: RawRecord | None = None
    located: LocatedShot | None = None
    gather: Gather | None = None
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
                traces=None if raw is None else len(raw.data),
                samples=None if raw is None else raw.data.shape[1],
                interval=None if raw is None else raw.interval,
                spacing=spacing,
                source=None if gather is None else gather.source,
                delay=None if raw is None else raw.delay if gather is None else gather.delay,
                stack=None if raw is None else raw.stack,
                flags=tuple(self.flags),
            )
            for file, sha256 in zip(self.files, self.digests, strict=True)
        ]


def read_shots(contents: list[tuple[Path, bytes]]) -> list[ShotInWork]:
    """Return the shots of the files, in their order; a file that cannot be read is a shot with its reason."""
    shots: list[ShotInWork] = []
    seen: dict[str, str] = {}
    for path, content in contents:
        sha256 = digest(content)
        if sha256 in seen:
            reason = f"{path.name}: has the same content as {seen[sha256]}, which is used already"
            shots.append(ShotInWork([path.name], [sha256], reason=reason))
            continue
        seen[sha256] = path.name
        try:
            shots += [ShotInWork([path.name], [sha256], raw) for raw in shots_of(parse(content, path.name))]
        except InputError as error:
            shots.append(ShotInWork([path.name], [sha256], reason=str(error)))
    return _joined(shots)


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
    except InputError as error:
        whole.reason = str(error)
    return whole
