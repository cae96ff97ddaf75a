"""How nouns become HDF5, and come back: the written specification of the project file, format version 1.

Every value is one HDF5 object whose attribute `type` says how it is read:

========== ===========================================================================================
type       stored as
========== ===========================================================================================
(a noun)   group; `type` is the noun's name ("Gather"), `format_version` the integer 1; one member per
           field of the noun, named as the field
tuple      group with members "0", "1", ... in order
dict       group with members "0", "1", ... in order; each carries its key in the attribute `key`
texts      tuple of text only: string dataset (n,)
array      dataset of 64-bit numbers, booleans (an HDF5 enumeration) or UTF-8 strings; the attribute
           `axes` names its axes, joined by commas
float, int scalar dataset, 64-bit
bool, text scalar dataset
none       empty dataset
========== ===========================================================================================

Fields that have an SI unit carry it in the attribute `unit`. Text that an HDF5 string cannot hold (it has a
zero character, or half of a surrogate pair) is written in ASCII with backslash escapes (`\\x00`, `\\udce9`,
`\\\\`) and marked by the attribute `escaped` (`key_escaped` for a key). Arrays of more than 4 KiB are
compressed: gzip with byte shuffling, built into every HDF5. Nothing in the file depends on the time, the
machine or the order of a hash. Only hard links within the file are followed.
"""

from __future__ import annotations

import dataclasses
from typing import Any

import h5py
import numpy as np
from numpy.typing import NDArray

from ..core import (
    DispersionCurve,
    DispersionImage,
    Ensemble,
    Gather,
    Interval,
    InversionResult,
    LayeredEarth,
    Picks,
    Profile,
    Record,
    SiteResult,
    StoreError,
    SurveyResult,
)
from ..core.noun import axes_of, unit_of

FORMAT_VERSION = 1
NOUNS: dict[str, Any] = {
    noun.__name__: noun
    for noun in (
        DispersionCurve,
        DispersionImage,
        Ensemble,
        Gather,
        Interval,
        InversionResult,
        LayeredEarth,
        Picks,
        Profile,
        Record,
        SiteResult,
        SurveyResult,
    )
}
TEXT = h5py.string_dtype()
SMALL = 4096
"""Arrays up to this many bytes are stored as they are."""


def encode_noun(group: h5py.Group, noun: Any) -> None:
    """Write `noun` into the empty `group`."""
    group.attrs["type"] = type(noun).__name__
    group.attrs["format_version"] = FORMAT_VERSION
    for field in dataclasses.fields(noun):
        written = _encode(group, field.name, getattr(noun, field.name))
        if field.metadata.get("unit"):
            written.attrs["unit"] = unit_of(noun, field.name)
        if field.metadata.get("axes"):
            written.attrs["axes"] = ",".join(axes_of(noun, field.name))


def decode(item: h5py.Group | h5py.Dataset) -> Any:
    """Return the value that `item` holds.

    Raises
    ------
    StoreError
        If the item is of a type or version that this surfdisp does not know, or lacks or adds a field.
    """
    kind = _kind_of(item)
    if isinstance(item, h5py.Dataset):
        return _decode_dataset(item, kind)
    if kind == "tuple":
        return tuple(decode(member) for member in _members(item))
    if kind == "dict":
        return {_key_of(member): decode(member) for member in _members(item)}
    return _decode_noun(item, kind)


def _encode(group: h5py.Group, name: str, value: Any) -> h5py.Group | h5py.Dataset:
    if type(value).__name__ in NOUNS:
        written = group.create_group(name)
        encode_noun(written, value)
    elif isinstance(value, tuple) and not (value and all(isinstance(entry, str) for entry in value)):
        written = _container(group, name, "tuple")
        for index, entry in enumerate(value):
            _encode(written, str(index), entry)
    elif isinstance(value, dict):
        written = _container(group, name, "dict")
        for index, (key, entry) in enumerate(value.items()):
            _set_key(_encode(written, str(index), entry), key)
    else:
        written = _encode_dataset(group, name, value)
    return written


def _container(group: h5py.Group, name: str, kind: str) -> h5py.Group:
    made = group.create_group(name)
    made.attrs["type"] = kind
    return made


def _encode_dataset(group: h5py.Group, name: str, value: Any) -> h5py.Dataset:
    value = value.item() if isinstance(value, np.generic) else value
    if value is None:
        return _dataset(group, name, "none", h5py.Empty("f8"))
    if isinstance(value, tuple):
        return _text_dataset(group, name, "texts", np.array(value, dtype=object))
    if isinstance(value, str):
        return _text_dataset(group, name, "text", np.array(value, dtype=object))
    if isinstance(value, np.ndarray) and value.dtype.kind == "U":
        return _text_dataset(group, name, "array", value.astype(object))
    if isinstance(value, np.ndarray) and value.dtype in (np.float64, np.int64, np.bool_):
        return _dataset(group, name, "array", value)
    if isinstance(value, bool | int | float):
        kind = type(value).__name__
        return _dataset(group, name, kind, np.array(value, {"bool": "?", "int": "i8", "float": "f8"}[kind]))
    raise StoreError(
        f"{group.name}/{name} must be a noun, array, text, number or a tuple or dict of these; "
        f"got {type(value).__name__}"
    )


def _dataset(group: h5py.Group, name: str, kind: str, value: Any, dtype: Any = None) -> h5py.Dataset:
    big = isinstance(value, np.ndarray) and value.dtype != object and value.nbytes > SMALL
    packing = {"compression": "gzip", "compression_opts": 4, "shuffle": True} if big else {}
    made = group.create_dataset(name, data=value, dtype=dtype, track_times=False, **packing)
    made.attrs["type"] = kind
    return made


def _text_dataset(group: h5py.Group, name: str, kind: str, texts: NDArray[np.object_]) -> h5py.Dataset:
    escaped = any(map(_needs_escape, texts.ravel()))
    if escaped:
        texts = np.array([_escape(text) for text in texts.ravel()], dtype=object).reshape(texts.shape)
    made = _dataset(group, name, kind, texts, TEXT)
    if escaped:
        made.attrs["escaped"] = True
    return made


def _set_key(item: h5py.Group | h5py.Dataset, key: str) -> None:
    escaped = _needs_escape(key)
    item.attrs.create("key", _escape(key) if escaped else key, dtype=TEXT)
    if escaped:
        item.attrs["key_escaped"] = True


def _needs_escape(text: str) -> bool:
    return "\0" in text or any("\ud800" <= character <= "\udfff" for character in text)


def _escape(text: str) -> str:
    return text.encode("unicode_escape").decode("ascii")


def _unescape(text: str) -> str:
    return text.encode("ascii").decode("unicode_escape")


def _kind_of(item: h5py.Group | h5py.Dataset) -> str:
    kind = item.attrs.get("type")
    if not isinstance(kind, str):
        raise StoreError(f"{item.name} has no type")
    return kind


def _key_of(item: h5py.Group | h5py.Dataset) -> str:
    key = str(item.attrs["key"])
    return _unescape(key) if item.attrs.get("key_escaped") else key


def _members(group: h5py.Group) -> list[h5py.Group | h5py.Dataset]:
    return [_member(group, str(index)) for index in range(len(group))]


def _member(group: h5py.Group, name: str) -> h5py.Group | h5py.Dataset:
    if not isinstance(group.get(name, getlink=True), h5py.HardLink):
        raise StoreError(f"{group.name} has no member {name}")
    return group[name]


def _decode_noun(group: h5py.Group, kind: str) -> Any:
    noun = NOUNS.get(kind)
    if noun is None:
        raise StoreError(f"{group.name} is of unknown type {kind!r:.40}")
    version = int(group.attrs.get("format_version", 0))
    if version != FORMAT_VERSION:
        raise StoreError(
            f"{group.name} has format version {version}; this surfdisp reads version {FORMAT_VERSION}"
        )
    expected = {field.name for field in dataclasses.fields(noun)}
    if set(group) != expected:
        odd = ", ".join(sorted(set(group) ^ expected))
        raise StoreError(f"{group.name} ({kind}) has missing or unknown fields: {odd:.80}")
    return noun(**{name: decode(_member(group, name)) for name in group})


def _decode_dataset(dataset: h5py.Dataset, kind: str) -> Any:
    if kind == "none":
        return None
    if h5py.check_string_dtype(dataset.dtype) is not None:
        return _decode_text(dataset, kind)
    value = dataset[()]
    if kind == "array":
        return value
    if kind not in ("bool", "int", "float"):
        raise StoreError(f"{dataset.name} is of unknown type {kind!r:.40}")
    return {"bool": bool, "int": int, "float": float}[kind](value)


def _decode_text(dataset: h5py.Dataset, kind: str) -> Any:
    read = np.asarray(dataset.asstr()[()], dtype=object)
    back = _unescape if dataset.attrs.get("escaped") else str
    texts = [back(text) for text in read.ravel()]
    if kind == "text":
        return texts[0]
    return tuple(texts) if kind == "texts" else np.array(texts, dtype=np.str_).reshape(read.shape)
