"""From a configuration file, or from bare field files, to settings with the paths they mean."""

from __future__ import annotations

import tomllib
from collections.abc import Sequence
from pathlib import Path
from typing import Any, get_args

import tomli_w
from pydantic import ValidationError

from ..core import InputError
from .settings import RecordSettings, Settings


def load_settings(path: Path) -> Settings:
    """Read a survey configuration; file names in it are taken relative to its own folder.

    Raises
    ------
    InputError
        One line naming the file, the field, what was found and what is expected.
    """
    try:
        text = existing_file(path).read_bytes().decode()
        table = tomllib.loads(text)
    except UnicodeDecodeError as error:
        raise InputError(
            f"{path}: not a text file in UTF-8 ({error.reason} at byte {error.start})"
        ) from error
    except OSError as error:
        raise InputError(f"{path}: cannot be read ({error.strerror})") from error
    except tomllib.TOMLDecodeError as error:
        raise InputError(f"{path}: not valid TOML: {error}") from error
    try:
        settings = Settings.model_validate(table)
    except ValidationError as error:
        raise InputError(f"{path}: {_first_complaint(error)}") from error
    return _with_paths(settings, path.parent)


def settings_from(inputs: Sequence[Path]) -> Settings:
    """Return the settings that the user's inputs mean: one configuration, or bare field files."""
    tables = [path for path in inputs if path.suffix.lower() == ".toml"]
    if not tables:
        return settings_for_files(inputs)
    if len(inputs) > 1:
        raise InputError(
            f"{tables[0]}: give one configuration alone, or field files; got {len(inputs)} inputs"
        )
    return load_settings(tables[0])


def settings_for_files(files: Sequence[Path]) -> Settings:
    """Return default settings for bare field files whose headers carry the geometry."""
    names = tuple(str(existing_file(file)) for file in files)
    return Settings(records=RecordSettings(files=names))


def settings_text(settings: Settings) -> str:
    """Write settings as TOML, defaults included; records by base name, so that the text is portable."""
    table = settings.model_dump(exclude_none=True, mode="json")
    named = (("records", "files"), ("records", "geometry_tables"), ("site", "borehole_logs"))
    for section, key in named:
        table[section][key] = [Path(name).name for name in table[section][key]]
    return tomli_w.dumps(table)


def existing_file(path: Path) -> Path:
    """Return `path`, demanding that it is a file."""
    if path.is_dir():
        raise InputError(f"{path}: is a folder; give the field files in it, e.g. {path / '*.dat'}")
    if not path.exists():
        raise InputError(f"{path}: no such file")
    return path


def _with_paths(settings: Settings, folder: Path) -> Settings:
    records = settings.records
    files = [str(file) for pattern in records.files for file in _matches(folder, pattern)]
    changes: dict[str, Any] = {"files": tuple(dict.fromkeys(files))}
    changes["geometry_tables"] = tuple(
        str(existing_file(folder / table)) for table in records.geometry_tables
    )
    logs = tuple(str(existing_file(folder / log)) for log in settings.site.borehole_logs)
    return settings.model_copy(
        update={
            "records": records.model_copy(update=changes),
            "site": settings.site.model_copy(update={"borehole_logs": logs}),
        }
    )


def _matches(folder: Path, pattern: str) -> list[Path]:
    if not any(mark in pattern for mark in "*?["):
        return [existing_file(folder / pattern)]
    whole = folder / pattern
    found = sorted(path for path in whole.parent.glob(whole.name) if path.is_file())
    if not found:
        raise InputError(f"{whole}: no file matches")
    return found


def _known(place: tuple[int | str, ...]) -> list[str]:
    """Names that may stand at a place of the configuration, given as sections and indices."""
    section: Any = Settings
    for part in place:
        if isinstance(part, str):
            section = _section(section.model_fields[part].annotation)
    return list(section.model_fields)


def _section(annotation: Any) -> Any:
    """The section inside an annotation such as tuple[Section, ...] or Section | None."""
    inner = [_section(part) for part in get_args(annotation) if part is not type(None) and part is not ...]
    return inner[0] if inner else annotation


def _first_complaint(error: ValidationError) -> str:
    first = error.errors(include_url=False)[0]
    field = ".".join(str(part) for part in first["loc"]) or "configuration"
    if first["type"] == "extra_forbidden":
        return f"{field}: unknown name; expected one of {', '.join(_known(first['loc'][:-1]))}"
    if first["type"] == "missing":
        return f"{field}: missing; it is required"
    return f"{field}: {first['msg']}; got {first['input']!r:.60}"
