"""Argument checks, made once at the public door; each failure names the demand and what was got."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .errors import InputError

FloatArray = NDArray[np.float64]


def frozen(values: ArrayLike, name: str, *, ndim: int = 1, dtype: type = np.float64) -> NDArray[np.generic]:
    """Return a read-only, C-ordered copy of `values` with the wanted number of axes.

    A copy is frozen, never a view, so that the caller's own array stays as it was.

    Raises
    ------
    InputError
        If `values` is not numeric or has another number of axes.
    """
    try:
        array: NDArray[np.generic] = np.array(values, dtype=dtype, order="C", copy=True)
    except (TypeError, ValueError) as error:
        raise InputError(f"{name} must be an array of {np.dtype(dtype).name}; got {values!r:.80}") from error
    if array.ndim != ndim:
        raise InputError(f"{name} must have {ndim} axis or axes; got shape {array.shape}")
    array.setflags(write=False)
    return array


def float_array(values: ArrayLike, name: str, *, ndim: int = 1) -> FloatArray:
    """Return a frozen float64 copy of `values`."""
    return frozen(values, name, ndim=ndim)  # type: ignore[return-value]


def all_finite(array: FloatArray, name: str) -> None:
    """Demand that no value is NaN or infinite."""
    bad = np.flatnonzero(~np.isfinite(array.ravel()))
    if bad.size:
        raise InputError(f"{name} must be finite; got {array.ravel()[bad[0]]} at index {bad[0]}")


def all_positive(array: FloatArray, name: str) -> None:
    """Demand that every value is greater than zero (infinity is allowed, NaN is not)."""
    bad = np.flatnonzero(~(array.ravel() > 0.0))
    if bad.size:
        raise InputError(f"{name} must be positive; got {array.ravel()[bad[0]]} at index {bad[0]}")


def increasing(array: FloatArray, name: str) -> None:
    """Demand strictly increasing values."""
    bad = np.flatnonzero(~(np.diff(array) > 0.0))
    if bad.size:
        raise InputError(
            f"{name} must increase; got {array[bad[0]]} before {array[bad[0] + 1]} at index {bad[0]}"
        )


def positive(value: float, name: str) -> float:
    """Return `value` as float, demanding a finite number greater than zero."""
    number = finite(value, name)
    if not number > 0.0:
        raise InputError(f"{name} must be positive; got {value}")
    return number


def finite(value: float, name: str) -> float:
    """Return `value` as float, demanding a finite number."""
    try:
        number = float(value)
    except (TypeError, ValueError) as error:
        raise InputError(f"{name} must be a number; got {value!r}") from error
    if not math.isfinite(number):
        raise InputError(f"{name} must be finite; got {value}")
    return number


def same_length(arrays: Sequence[tuple[str, NDArray[np.generic]]]) -> None:
    """Demand that all named arrays have the same first axis."""
    first_name, first = arrays[0]
    for name, array in arrays[1:]:
        if array.shape[0] != first.shape[0]:
            raise InputError(
                f"{name} must have as many entries as {first_name}; got {array.shape[0]} and {first.shape[0]}"
            )


def one_of(value: str, name: str, allowed: Sequence[str]) -> str:
    """Return `value`, demanding that it is one of the `allowed` words."""
    if value not in allowed:
        raise InputError(f"{name} must be one of {', '.join(allowed)}; got {value!r}")
    return value
