"""Refusing arrays with an entry outside the range in which a formula holds."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from tidegate.lint.physics.domain import DomainError

FloatArray: TypeAlias = NDArray[np.float64]
BoolArray: TypeAlias = NDArray[np.bool_]
Reals: TypeAlias = float | FloatArray


def finite(name: str, value: Reals) -> FloatArray:
    """Array of a symbol, every entry a finite number.

    Raises: DomainError: naming the symbol, and the value and place of the first entry that is not.
    """
    array = np.asarray(value, dtype=np.float64)
    _require(name, array, np.isfinite(array), "a finite number")
    return array


def positive(name: str, value: Reals) -> FloatArray:
    """Array of a symbol, every entry finite and greater than zero.

    Raises: DomainError: naming the symbol, and the value and place of the first entry that is not.
    """
    array = np.asarray(value, dtype=np.float64)
    _require(name, array, np.isfinite(array) & (array > 0.0), "greater than 0")
    return array


def not_negative(name: str, value: Reals) -> FloatArray:
    """Array of a symbol, every entry finite and at least zero.

    Raises: DomainError: naming the symbol, and the value and place of the first entry that is not.
    """
    array = np.asarray(value, dtype=np.float64)
    _require(name, array, np.isfinite(array) & (array >= 0.0), "at least 0")
    return array


def between_0_and_1(name: str, value: Reals) -> FloatArray:
    """Array of a symbol, every entry greater than zero and below one.

    Raises: DomainError: naming the symbol, and the value and place of the first entry that is not.
    """
    array = np.asarray(value, dtype=np.float64)
    _require(name, array, (array > 0.0) & (array < 1.0), "between 0 and 1, ends excluded")
    return array


def _require(name: str, array: FloatArray, good: BoolArray, what: str) -> None:
    if np.all(good):
        return
    place = tuple(int(i) for i in np.argwhere(~np.asarray(good))[0])
    where = f" at index {place}" if place else ""
    raise DomainError(f"{name} must be {what} (found {float(array[place])!r}{where})")
