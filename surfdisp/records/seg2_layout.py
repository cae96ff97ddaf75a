"""Whether the blocks of a SEG-2 file lie inside it, told before a reader trips over what is missing."""

from __future__ import annotations

import struct

from ..core.errors import FormatError

FILE_BLOCK_ID = 0x3A55
TRACE_BLOCK_ID = 0x4422
SAMPLE_BYTES = {1: 2.0, 2: 4.0, 3: 2.5, 4: 4.0, 5: 8.0}
"""Bytes per sample of each data format code; code 3 packs four samples in five 16-bit words."""


def check_layout(content: bytes, name: str) -> None:
    """Demand that every block of a SEG-2 file is there and whole.

    Raises
    ------
    FormatError
        If the file is cut short, or a pointer, a block or a format code is not of the standard.
    """
    order = "<" if content[:2] == b"\x55\x3a" else ">"
    if len(content) < 32:
        raise FormatError(
            f"{name}: SEG-2 file is cut short: {len(content)} bytes, the file block alone has 32"
        )
    pointer_bytes, traces = struct.unpack_from(f"{order}HH", content, 4)
    if traces == 0:
        raise FormatError(f"{name}: SEG-2 file block announces no traces")
    if 4 * traces > pointer_bytes:
        raise FormatError(
            f"{name}: SEG-2 file block announces {traces} traces in {pointer_bytes} pointer bytes"
        )
    if len(content) < 32 + pointer_bytes:
        raise FormatError(f"{name}: SEG-2 file is cut short: {len(content)} bytes end in the trace pointers")
    used = 0
    for index, start in enumerate(struct.unpack_from(f"{order}{traces}I", content, 32)):
        used += _trace_bytes(content, order, start, f"{name}: SEG-2 trace {index + 1} of {traces}")
    if used > len(content):  # else a small file could ask for any amount of memory
        raise FormatError(f"{name}: SEG-2 traces overlap: {used} bytes of traces in {len(content)} bytes")


def _trace_bytes(content: bytes, order: str, start: int, which: str) -> int:
    if start + 32 > len(content):
        raise FormatError(
            f"{which} should begin at byte {start}; the file is cut short at {len(content)} bytes"
        )
    block_id, block_bytes, samples, code = struct.unpack_from(f"{order}HH4xIB", content, start)
    if block_id != TRACE_BLOCK_ID or block_bytes < 32:
        raise FormatError(f"{which} has no trace block at byte {start}, where the file block points")
    if code not in SAMPLE_BYTES:
        raise FormatError(f"{which} has data format code {code}; expected 1 to 5")
    end = start + block_bytes + int(samples * SAMPLE_BYTES[code])
    if end > len(content):
        raise FormatError(f"{which} should end at byte {end}; the file is cut short at {len(content)} bytes")
    return int(end - start)


def hide_date(content: bytes) -> bytes:
    """Rename ACQUISITION_DATE: ObsPy's reader refuses a file whose date is not as it expects.

    Crews write months as numbers, in their own language and in either order; no step uses the clock time of
    a SEG-2 file.
    """
    return content.replace(b"ACQUISITION_DATE", b"ACQUISITION_DAY_")
