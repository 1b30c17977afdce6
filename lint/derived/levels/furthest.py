"""The lowest and the highest of several levels, of which each may be known loosely only."""

from __future__ import annotations

import math
from collections.abc import Sequence

from tidegate.lint.account import Sum


def lowest(levels: Sequence[Sum]) -> Sum:
    """The lowest level, with how much higher it may be where extremes need not meet."""
    found = min(levels, key=lambda level: level.value)
    return Sum(found.value, found.lines, _loose(found, min(level.value + level.loose for level in levels)))


def highest(levels: Sequence[Sum]) -> Sum:
    """The highest level, with how much lower it may be where extremes need not meet."""
    found = max(levels, key=lambda level: level.value)
    return Sum(found.value, found.lines, _loose(found, max(level.value - level.loose for level in levels)))


def _loose(found: Sum, best: float) -> float:
    return abs(best - found.value) if math.isfinite(best) and math.isfinite(found.value) else 0.0
