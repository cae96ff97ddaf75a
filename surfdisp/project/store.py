"""Writing and reading project files: open, do one thing, close.

A project file is one `SurveyResult` at the root of an HDF5 file, as specified in `codec`. It holds the
settings (TOML, defaults included), the SHA-256 digest of every field file, and the version of surfdisp
beside the products made from them. The root carries the attribute `file`, "surfdisp project".
"""

from __future__ import annotations

import os
import secrets
from pathlib import Path

import h5py

from ..core import StoreError, SurveyResult
from .codec import FORMAT_VERSION, decode, encode_noun

FILE_MARK = "surfdisp project"


def write_project(path: str | os.PathLike[str], survey_result: SurveyResult) -> None:
    """Write `survey_result` to the project file `path`, replacing an older one whole or not at all.

    The new file is written beside the old one under a temporary name, flushed to the disk, and renamed:
    an end at any moment leaves the old file or the new one. The same result gives the same bytes.

    Raises
    ------
    StoreError
        If the folder cannot be written, or the disk is full.
    """
    path = Path(path)
    temporary = path.with_name(f".{path.name}.{secrets.token_hex(4)}.part")
    try:
        _write(temporary, survey_result)
        _flush(temporary)
        temporary.replace(path)
        _flush(path.parent)
    except OSError as error:
        raise StoreError(f"{path}: the project file cannot be written: {_one_line(error)}") from error
    finally:
        temporary.unlink(missing_ok=True)


def read_project(path: str | os.PathLike[str]) -> SurveyResult:
    """Read the project file `path`.

    Raises
    ------
    StoreError
        If there is no such file, or it is no surfdisp project, is damaged, or is of a newer surfdisp.
    """
    path = Path(path)
    if not path.is_file():
        raise StoreError(f"{path}: no such project file")
    try:
        with h5py.File(path, "r") as file:
            return _read(file)
    except StoreError as error:
        raise StoreError(f"{path}: {error}") from error
    except (OSError, KeyError, ValueError, TypeError, IndexError, RuntimeError, MemoryError) as error:
        raise StoreError(
            f"{path}: not a project file, or damaged: {_one_line(error)}; run the survey again to rewrite it"
        ) from error


def _write(path: Path, survey_result: SurveyResult) -> None:
    with h5py.File(path, "x", libver=("v108", "v110")) as file:
        file.attrs["file"] = FILE_MARK
        encode_noun(file, survey_result)


def _read(file: h5py.File) -> SurveyResult:
    if file.attrs.get("file") != FILE_MARK:
        raise StoreError("an HDF5 file, but not a surfdisp project")
    version = int(file.attrs.get("format_version", 0))
    if version > FORMAT_VERSION:
        raise StoreError(
            f"written by a newer surfdisp (format version {version}; this one reads version "
            f"{FORMAT_VERSION}); update surfdisp"
        )
    result = decode(file)
    if not isinstance(result, SurveyResult):
        raise StoreError(f"holds a {type(result).__name__} where a SurveyResult is expected")
    return result


def _flush(path: Path) -> None:
    """Ask the system to bring a file, or a folder's list of names, to the disk."""
    handle = os.open(path, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


def _one_line(error: BaseException) -> str:
    return " ".join(str(error).split())[:200] or type(error).__name__
