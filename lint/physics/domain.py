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


def require_within(*, least: float, most: float, **symbols: float) -> None:
    """Refuse any symbol outside the closed range from ``least`` to ``most``.

    Raises: DomainError: naming the symbol, the value found and the range.
    """
    for name, value in symbols.items():
        if not (math.isfinite(value) and least <= value <= most):
            raise DomainError(f"{name} must lie in {least!r} to {most!r} (found {value!r})")
