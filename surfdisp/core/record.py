"""Record: what became of one field file."""

from __future__ import annotations

from .noun import noun, tagged


@noun
class Record:
    """One row of the record table.

    Numbers are None where the file could not be read that far.

    Parameters
    ----------
    file : str
        Base name of the file.
    sha256 : str
        Digest of its bytes; empty where it could not be read.
    used : bool
    reason : str or None
        Why it was not used.
    traces, samples : int or None
    interval, spacing, source, delay : float or None
        Sampling interval [s], median receiver spacing [m], source position [m], delay of the first
        sample after the blow [s].
    stack : int or None
        Blows already stacked by the instrument.
    flags : tuple of str
        Doubts about the headers, traces set aside with their reason, and what was done about it.
    """

    file: str
    sha256: str = ""
    used: bool = False
    reason: str | None = None
    traces: int | None = None
    samples: int | None = None
    interval: float | None = tagged("s", default=None)
    spacing: float | None = tagged("m", default=None)
    source: float | None = tagged("m", default=None)
    delay: float | None = tagged("s", default=None)
    stack: int | None = None
    flags: tuple[str, ...] = ()
