"""Write SEG-2 files after the open standard (Pullan 1990): a file block, then one block per trace."""

from __future__ import annotations

import struct
from collections.abc import Mapping, Sequence
from datetime import datetime
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..core.checks import FloatArray, all_finite, all_positive, finite, float_array, one_of, positive
from ..core.errors import InputError

FILE_BLOCK_ID = 0x3A55
TRACE_BLOCK_ID = 0x4422
REVISION = 1
STRING_END = b"\0"
LINE_END = b"\n"
LARGEST_BLOCK = 0xFFFF  # block sizes and string offsets are unsigned 16-bit numbers

FORMAT_CODES = {"int32": 2, "float32": 4}
FULL_SCALE = 2**23 - 1
"""Counts that the largest sample becomes in int32 where no descaling factor is given: a 24-bit converter."""

Location = float | Sequence[float]


def write_seg2(
    path: str | Path,
    data: ArrayLike,
    interval: float,
    *,
    receivers: Sequence[Location] | NDArray[np.float64],
    source: Location,
    delay: float = 0.0,
    stack: int = 1,
    descaling: float | ArrayLike | None = None,
    sample_format: str = "float32",
    acquired: datetime | None = None,
    units: str = "METERS",
    file_strings: Mapping[str, str] | None = None,
    trace_strings: Mapping[str, str] | Sequence[Mapping[str, str]] | None = None,
) -> None:
    """Write one shot as a SEG-2 file, little-endian.

    Counts are written as ``data * stack / descaling``, so that physical value = count x DESCALING_FACTOR /
    STACK gives back `data`.

    Parameters
    ----------
    path : path
        File to be written, replaced where it exists.
    data : array (n_receivers, n_samples)
        Ground motion of one blow in the instrument's units.
    interval : float
        Sampling interval [s].
    receivers : sequence (n_receivers,)
        Each a position along the line, or two or three coordinates x, y, z, in `units`.
    source : float or sequence of 1 to 3 floats
        Position of the source, likewise.
    delay : float
        Time of the first sample after the blow [s]; negative where recording began before it.
    stack : int
        Blows summed in the file.
    descaling : float or array (n_receivers,), optional
        DESCALING_FACTOR of all traces or of each; 1 for float32 by default, and for int32 the factor that
        makes the largest sample a full-scale count of 24 bits.
    sample_format : {"float32", "int32"}
    acquired : datetime, optional
        Becomes ACQUISITION_DATE and ACQUISITION_TIME.
    units : str
        UNITS of the positions, "METERS" or "FEET" by custom.
    file_strings, trace_strings : mapping, optional
        Further header strings, for the file, and for all traces or (a sequence of mappings) for each; a key
        given here replaces the one made from the other arguments. A NOTE may hold several lines.

    Raises
    ------
    InputError
        If shapes differ, a value is not finite, a count does not fit its format, or the strings do not fit
        their block.

    References
    ----------
    Pullan (1990), Recommended standard for seismic (/radar) data files in the personal computer
    environment, Geophysics 55(9), 1260-1271.
    """
    samples = float_array(data, "data", ndim=2)
    all_finite(samples, "data")
    positive(interval, "interval")
    code = FORMAT_CODES[one_of(sample_format, "sample_format", list(FORMAT_CODES))]
    places = [_location(place, f"receivers[{index}]") for index, place in enumerate(receivers)]
    if len(places) != len(samples) or samples.size == 0:
        raise InputError(
            f"data must have one row per receiver; got {samples.shape} for {len(places)} receivers"
        )
    factors = _factors(descaling, samples * stack, sample_format)
    shared = {
        "DELAY": _number(delay, "delay"),
        "SAMPLE_INTERVAL": _number(interval, "interval"),
        "SOURCE_LOCATION": _location(source, "source"),
        "STACK": str(int(positive(stack, "stack"))),
    }
    own = _per_trace(trace_strings, len(places))
    blocks = []
    for index, place in enumerate(places):
        strings = shared | {
            "CHANNEL_NUMBER": str(index + 1),
            "DESCALING_FACTOR": _number(factors[index], "descaling"),
            "RECEIVER_LOCATION": place,
        }
        counts = _counts(samples[index] * stack / factors[index], sample_format, index)
        blocks.append(_trace_block(strings | dict(own[index]), counts, code))
    about = {"UNITS": units}
    if acquired is not None:
        about["ACQUISITION_DATE"] = acquired.strftime("%d/%b/%Y")
        about["ACQUISITION_TIME"] = acquired.strftime("%H:%M:%S")
    Path(path).write_bytes(_file_block(about | dict(file_strings or {}), [len(block) for block in blocks]))
    with Path(path).open("ab") as file:
        file.writelines(blocks)


def _number(value: float, name: str) -> str:
    return repr(finite(value, name))


def _location(place: Location, name: str) -> str:
    coordinates = np.atleast_1d(np.asarray(place, dtype=np.float64))
    if coordinates.ndim != 1 or not 1 <= coordinates.size <= 3:
        raise InputError(f"{name} must hold one to three coordinates; got {place!r}")
    return " ".join(_number(value, name) for value in coordinates)


def _factors(descaling: float | ArrayLike | None, sums: FloatArray, sample_format: str) -> FloatArray:
    if descaling is None:
        peak = float(np.max(np.abs(sums)))
        descaling = peak / FULL_SCALE if sample_format == "int32" and peak > 0.0 else 1.0
    factors = float_array(np.broadcast_to(np.asarray(descaling, dtype=np.float64), (len(sums),)), "descaling")
    all_finite(factors, "descaling")
    all_positive(factors, "descaling")
    return factors


def _per_trace(
    strings: Mapping[str, str] | Sequence[Mapping[str, str]] | None, count: int
) -> list[Mapping[str, str]]:
    if strings is None or isinstance(strings, Mapping):
        return [strings or {}] * count
    if len(strings) != count:
        raise InputError(f"trace_strings must hold one mapping per receiver; got {len(strings)} for {count}")
    return list(strings)


def _counts(values: FloatArray, sample_format: str, index: int) -> bytes:
    if sample_format == "float32":
        limit, counts = float(np.finfo(np.float32).max), values
    else:
        limit, counts = 2.0**31 - 1.0, np.rint(values)
    if np.max(np.abs(counts)) > limit:
        raise InputError(
            f"data of receiver {index + 1} must fit {sample_format} after descaling; got a count of "
            f"{np.max(np.abs(counts)):.3g}; choose a larger descaling"
        )
    return counts.astype(np.dtype(sample_format).newbyteorder("<")).tobytes()


def _trace_block(strings: Mapping[str, str], counts: bytes, code: int) -> bytes:
    text = _string_block(strings)
    size = _fits(32 + len(text), "a trace")
    head = struct.pack("<HHIIB", TRACE_BLOCK_ID, size, len(counts), len(counts) // 4, code)
    return head.ljust(32, b"\0") + text + counts


def _file_block(strings: Mapping[str, str], block_sizes: Sequence[int]) -> bytes:
    pointers = _fits(4 * len(block_sizes), "the trace pointers")
    head = struct.pack("<HHHH", FILE_BLOCK_ID, REVISION, pointers, len(block_sizes))
    head += struct.pack("<B2sB2s", len(STRING_END), STRING_END, len(LINE_END), LINE_END)
    text = _string_block(strings)
    first = 32 + pointers + len(text)
    starts = first + np.concatenate([[0], np.cumsum(block_sizes)[:-1]])
    return head.ljust(32, b"\0") + starts.astype("<u4").tobytes() + text


def _string_block(strings: Mapping[str, str]) -> bytes:
    """Strings in alphabetical order, NOTE last, closed by a zero offset and filled to a 4-byte boundary."""
    block = b""
    for key in sorted(strings, key=lambda key: (key == "NOTE", key)):
        try:
            text = f"{key} {strings[key]}".encode("ascii") + STRING_END
        except UnicodeEncodeError as error:
            raise InputError(f"header string {key} must be plain ASCII; got {strings[key]!r}") from error
        block += struct.pack("<H", _fits(2 + len(text), f"header string {key}")) + text
    block += struct.pack("<H", 0)
    return block + b"\0" * (-len(block) % 4)


def _fits(size: int, what: str) -> int:
    if size > LARGEST_BLOCK:
        raise InputError(f"{what} must fit a SEG-2 block of {LARGEST_BLOCK} bytes; got {size}")
    return size
