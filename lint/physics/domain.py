"""Refusing input outside the range in which a formula holds."""

from __future__ import annotations

import math


class DomainError(ValueError):
    """A number lies outside the range in which a formula holds; the message names the symbol."""


def require_finite(**symbols: float) -> None:
    """Refuse any symbol that is not a finite number.

    Raises: DomainError: naming the symbol and the value found.
    """
    for name, value in symbols.items():
        if not math.isfinite(value):
            raise DomainError(f"{name} must be a finite number (found {value!r})")


def require_positive(**symbols: float) -> None:
    """Refuse any symbol that is not finite and greater than zero.

    Raises: DomainError: naming the symbol and the value found.
    """
    for name, value in symbols.items():
        if not (math.isfinite(value) and value > 0.0):
            raise DomainError(f"{name} must be greater than 0 (found {value!r})")


def require_not_negative(**symbols: float) -> None:
    """Refuse any symbol that is not finite and at least zero.

    Raises: DomainError: naming the symbol and the value found.
    """
    for name, value in symbols.items():
        if not (math.isfinite(value) and value >= 0.0):
            raise DomainError(f"{name} must be at least 0 (found {value!r})")


def require_size(**symbols: float) -> None:
    """Refuse any symbol that is below zero or no number; one that has no known end may be infinite.

    Raises: DomainError: naming the symbol and the value found.
    """
    for name, value in symbols.items():
        if not value >= 0.0:
            raise DomainError(f"{name} must be at least 0 (found {value!r})")


def product(first: float, second: float) -> float:
    """A product in which zero times anything, however large, is zero (IEEE 1788-2015, 10.5.3, multiplication)."""
    return 0.0 if first == 0.0 or second == 0.0 else first * second


def quotient(first: float, second: float) -> float:
    """A quotient of sizes: nothing over anything is nothing, and anything over nothing has no end.

    What has no end below the line leaves nothing, unless what stands above it has none either (IEEE 1788-2015, 10.5.3,
    division, at the end that is the greater).
    """
    if first == 0.0 or (math.isinf(second) and math.isfinite(first)):
        return 0.0
    return math.inf if second == 0.0 or math.isinf(first) else first / second


def share(part: float, rest: float) -> float:
    """The share of a whole that a part is, 0 to 1: all of it where the part has no end, none where it is nothing."""
    return 1.0 if math.isinf(part) else quotient(part, part + rest)


def require_within(*, least: float, most: float, **symbols: float) -> None:
    """Refuse any symbol outside the closed range from ``least`` to ``most``.

    Raises: DomainError: naming the symbol, the value found and the range.
    """
    for name, value in symbols.items():
        if not (math.isfinite(value) and least <= value <= most):
            raise DomainError(f"{name} must lie in {least!r} to {most!r} (found {value!r})")
