"""What all nouns share: frozen keyword-only dataclasses whose array fields carry unit and axis names."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import Any, TypeVar, dataclass_transform

import numpy as np

T = TypeVar("T")


def tagged(unit: str, *axes: str, default: Any = dataclasses.MISSING) -> Any:
    """Declare a field with its SI unit and the names of its axes (none for a scalar)."""
    metadata = {"unit": unit, "axes": axes}
    if default is dataclasses.MISSING:
        return dataclasses.field(metadata=metadata)
    return dataclasses.field(default=default, metadata=metadata)


def _reduce(self: Any) -> tuple[Callable[..., Any], tuple[Any, ...]]:
    return _rebuild, (type(self), {f.name: getattr(self, f.name) for f in dataclasses.fields(self)})


def _rebuild(cls: type[T], values: dict[str, Any]) -> T:
    # Through the constructor: unpickled and deep-copied arrays would otherwise come back writable.
    return cls(**values)


def _equal(self: Any, other: Any) -> bool:
    if type(self) is not type(other):
        return False
    names = [f.name for f in dataclasses.fields(self)]
    return all(same(getattr(self, name), getattr(other, name)) for name in names)


def same(a: Any, b: Any) -> bool:
    """Tell whether two field values are equal, arrays and nested containers included (NaN equals NaN)."""
    if isinstance(a, np.ndarray) and isinstance(b, np.ndarray):
        kinds = a.dtype.kind == "f" and b.dtype.kind == "f"
        return a.shape == b.shape and bool(np.array_equal(a, b, equal_nan=kinds))
    if isinstance(a, tuple) and isinstance(b, tuple):
        return len(a) == len(b) and all(same(x, y) for x, y in zip(a, b, strict=True))
    if isinstance(a, dict) and isinstance(b, dict):
        return a.keys() == b.keys() and all(same(a[key], b[key]) for key in a)
    if isinstance(a, float) and isinstance(b, float):
        return a == b or (a != a and b != b)
    return bool(a == b)


@dataclass_transform(
    kw_only_default=True, frozen_default=True, eq_default=False, field_specifiers=(tagged, dataclasses.field)
)
def noun(cls: type[T]) -> type[T]:
    """Make `cls` a noun: a frozen, slotted, keyword-only dataclass that compares and pickles by value."""
    made = dataclasses.dataclass(frozen=True, slots=True, kw_only=True, eq=False)(cls)
    made.__reduce__ = _reduce  # type: ignore[method-assign]
    made.__eq__ = _equal  # type: ignore[method-assign]
    made.__hash__ = None  # type: ignore[assignment]
    return made


def unit_of(cls: Any, name: str) -> str:
    """Return the unit of field `name`, an empty string where the field has none."""
    return str(_field(cls, name).metadata.get("unit", ""))


def axes_of(cls: Any, name: str) -> tuple[str, ...]:
    """Return the axis names of array field `name`."""
    return tuple(_field(cls, name).metadata.get("axes", ()))


def _field(cls: Any, name: str) -> dataclasses.Field[Any]:
    return next(f for f in dataclasses.fields(cls) if f.name == name)


def set_field(instance: Any, name: str, value: Any) -> None:
    """Set a field of a frozen noun while it is being constructed, and only then."""
    object.__setattr__(instance, name, value)
