"""How far a number that is missing may go before a margin is used up."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Final

import msgspec

from tidegate.lint.derived.monotone_root import monotone_root
from tidegate.lint.facts.reading import Better, Corner, Reading, Wait

_FIRST_STEP: Final = 1e-3
_FIRST_SIZE: Final = 1e-9
_FURTHEST: Final = 1e15
_SETTLED: Final = 1e-12


class BreakEven(msgspec.Struct, frozen=True):
    """The value that a missing fact must keep: at most, or at least, so much."""

    fact: str
    """The path of the fact."""
    value: float
    """In the kept unit of its dimension."""
    at_most: bool
    """Whether the fact must be at most the value; else at least."""
    alone: bool
    """Whether nothing else is missing: what keeps it then holds."""


def break_even(
    margin: Callable[[Reading], float], wait: Wait, chosen: Mapping[str, object], *, alone: bool
) -> BreakEven | None:
    """Where a margin reaches nothing as one end that waits moves from its best towards its worst, all else at its best.

    Returns: None where it does not, or is below nothing already: a factor of a product whose other factor may be
    nothing has no such value by itself.
    """
    at_most = wait.better is Better.LESS
    if not math.isfinite(wait.best):
        return None

    def at(value: float) -> float:
        return margin(Reading(Corner.BEST, chosen=chosen, tried={wait.path: value}))

    room = at(wait.best)
    if not 0.0 <= room < math.inf:
        return None
    step = _FIRST_STEP * abs(wait.best) or _FIRST_SIZE
    value = monotone_root(
        at, start=wait.best, slope=(-1.0 if at_most else 1.0) * (room or 1.0) / step, low=max(wait.lo, -_FURTHEST),
        high=min(wait.hi, _FURTHEST), tolerance=_SETTLED * room,
    )  # fmt: skip
    return BreakEven(wait.path, value, at_most, alone) if math.isfinite(value) else None
