"""Field file to ObsPy stream: the format recognised from content, every way to fail turned into one error."""

from __future__ import annotations

import hashlib
import warnings
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path
from typing import Any

from ..core.errors import FormatError, InputError
from .seg2_layout import check_layout, hide_date

FORMATS = {"SEG-2": "SEG2", "miniSEED": "MSEED", "SAC": "SAC", "SEG-Y": "SEGY", "SU": "SU"}
"""Our names for the formats and ObsPy's, in the order in which content is asked; SU has no mark."""

OPTIONS: dict[str, dict[str, Any]] = {"SAC": {"round_sampling_interval": False}}
"""What ObsPy is asked besides: else it rounds 62.5 microseconds to 62."""

EXPECTED = "a SEG-2, SEG-Y, SU, SAC or miniSEED file"

SEGY_SAMPLE_SIZE = {1: 4, 2: 4, 3: 2, 4: 4, 5: 4, 8: 1}


@dataclass(frozen=True)
class FieldFile:
    """What a field file holds, as ObsPy reads it.

    `said` are the warnings of the reader, for the record's flags.
    """

    name: str
    format: str
    stream: Any
    said: tuple[str, ...]


def existing_file(path: str | Path) -> Path:
    """Return the path of a file that exists.

    Raises
    ------
    InputError
        If there is no such file, or it is a folder.
    """
    file = Path(path)
    if file.is_dir():
        raise InputError(
            f"{file}: is a folder; expected {EXPECTED}; name the files in it, as in {file}/*.dat"
        )
    if not file.exists():
        raise InputError(f"{file}: no such file")
    return file


def read_bytes(path: str | Path) -> bytes:
    """Return the bytes of a file.

    Raises
    ------
    InputError
        If there is no such file, it is a folder, or it may not be read.
    """
    file = existing_file(path)
    try:
        return file.read_bytes()
    except OSError as error:
        raise InputError(f"{file}: cannot be read ({error.strerror})") from error


def digest(content: bytes) -> str:
    """Return the SHA-256 digest of a file's bytes, as hexadecimal text."""
    return hashlib.sha256(content).hexdigest()


def parse(content: bytes, name: str) -> FieldFile:
    """Recognise the format of `content` and read it.

    Raises
    ------
    FormatError
        If the content is none of our formats, is cut short, or contradicts itself.
    """
    if not content:
        raise FormatError(f"{name}: the file is empty; expected {EXPECTED}")
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        kind = _recognise(content, name)
        if kind == "SEG-2":
            check_layout(content, name)
            content = hide_date(content)
        stream = _read(content, kind, name)
        _check_size(stream, len(content), kind, name)
    return FieldFile(name, kind, stream, _worth_telling(caught))


def _recognise(content: bytes, name: str) -> str:
    from obspy.io.mseed.core import _is_mseed
    from obspy.io.sac.core import _is_sac
    from obspy.io.seg2.seg2 import _is_seg2
    from obspy.io.segy.core import _is_segy, _is_su

    tests = {"SEG-2": _is_seg2, "miniSEED": _is_mseed, "SAC": _is_sac, "SEG-Y": _is_segy, "SU": _is_su}
    for kind, test in tests.items():
        try:
            if test(BytesIO(content)):
                return kind
        except Exception:  # noqa: BLE001 - a recogniser that stumbles over foreign bytes has said no
            continue
    found = "text" if _is_text(content) else f"{len(content)} bytes of an unknown format"
    raise FormatError(f"{name}: holds {found}; expected {EXPECTED}")


def _is_text(content: bytes) -> bool:
    head = content[:512]
    return all(32 <= byte < 127 or byte in b"\t\r\n" for byte in head)


def _read(content: bytes, kind: str, name: str) -> Any:
    import obspy

    try:
        # From memory: a path would be taken for a pattern or an address. One named format: the automatic
        # choice would also try formats that run code.
        stream = obspy.read(BytesIO(content), format=FORMATS[kind], **OPTIONS.get(kind, {}))
    except Exception as error:
        what = " ".join(str(error).split()) or type(error).__name__
        raise FormatError(f"{name}: begins like {kind} but cannot be read as such ({what:.120})") from error
    if not stream or not all(len(trace.data) for trace in stream):
        raise FormatError(f"{name}: begins like {kind} but holds no samples")
    return stream


def _check_size(stream: Any, size: int, kind: str, name: str) -> None:
    """Demand that the traces fill the file: ObsPy passes over what is missing at the end of a trace."""
    if kind == "SEG-Y":
        code = stream.stats.binary_file_header.data_sample_format_code
        expected = 3600 + sum(240 + SEGY_SAMPLE_SIZE[code] * trace.stats.npts for trace in stream)
    elif kind == "SU":
        expected = sum(240 + 4 * trace.stats.npts for trace in stream)
    elif kind == "miniSEED":
        length = stream[0].stats.mseed.record_length
        expected = -(-size // length) * length
    else:
        return
    if expected != size:
        raise FormatError(
            f"{name}: {kind} file is cut short: {size} bytes where whole traces end at {expected}"
        )


def _worth_telling(caught: list[warnings.WarningMessage]) -> tuple[str, ...]:
    """What ObsPy said about the file, once each; not its deprecations, nor what we treat ourselves."""
    ours = ("Many companies use custom", "Non-zero value found in Trace's 'DELAY'")
    said = [" ".join(str(warning.message).split()) for warning in caught if _about_the_file(warning)]
    return tuple(dict.fromkeys(f"reader: {text:.200}" for text in said if not text.startswith(ours)))


def _about_the_file(warning: warnings.WarningMessage) -> bool:
    return not issubclass(warning.category, DeprecationWarning | ImportWarning | PendingDeprecationWarning)
