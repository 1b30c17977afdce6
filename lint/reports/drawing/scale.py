"""Scales of pictures: where a value lies, which values are marked, how much room a text takes."""

from __future__ import annotations

import math
from bisect import bisect_right
from collections.abc import Iterable, Sequence
from itertools import pairwise
from typing import Final

import msgspec

from tidegate.lint.reports.columns import columns

_WIDE: Final = 0.61
"""Width of a character as a share of the size of its type: that of a wide plain face, so that no label is too short
of room in any."""


class Linear(msgspec.Struct, frozen=True):
    """A straight scale: ``low`` lies at ``start``, ``high`` at ``end``, both in pixels."""

    low: float
    high: float
    start: float
    end: float

    def at(self, value: float) -> float:
        """Where a value lies; one beyond the scale lies at its end."""
        if self.high <= self.low:
            return self.start
        share = (min(max(value, self.low), self.high) - self.low) / (self.high - self.low)
        return round(self.start + share * (self.end - self.start), 2)

    def holds(self, value: float) -> bool:
        """Whether a value lies on the scale."""
        return self.low <= value <= self.high


class Stretched(msgspec.Struct, frozen=True):
    """A scale that is straight between knots and gives short stretches more room than long ones.

    ``knots`` are values in order, ``places`` where they lie in pixels.
    """

    knots: tuple[float, ...]
    places: tuple[float, ...]

    def at(self, value: float) -> float:
        """Where a value lies; one beyond the scale lies at its end."""
        if value <= self.knots[0]:
            return self.places[0]
        if value >= self.knots[-1]:
            return self.places[-1]
        after = bisect_right(self.knots, value)
        low, high = self.knots[after - 1], self.knots[after]
        share = (value - low) / (high - low)
        return round(self.places[after - 1] + share * (self.places[after] - self.places[after - 1]), 2)


def stretched(values: Iterable[float], *, start: float, end: float, power: float) -> Stretched:
    """A scale with a knot at each of two values or more.

    A stretch has room in proportion to a power, below 1, of its length.
    """
    knots = sorted(set(values))
    weights = [(high - low) ** power for low, high in pairwise(knots)]
    whole = sum(weights) or 1.0
    places = [start]
    for weight in weights:
        places.append(places[-1] + (end - start) * weight / whole)
    places[-1] = end
    return Stretched(tuple(knots), tuple(places))


def round_values(*, low: float, high: float, most: int) -> list[float]:
    """Round values (1, 2 or 5 times a power of ten apart) on a stretch, at most so many."""
    if high <= low:
        return [low]
    least_step = (high - low) / most
    power = 10.0 ** math.floor(math.log10(least_step))
    step = next(times * power for times in (1.0, 2.0, 5.0, 10.0, 20.0) if times * power >= least_step)
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    return [number * step for number in range(first, last + 1)][:most]


def text_width(text: str, size: float) -> float:
    """Room that a text takes at most, in pixels."""
    return _WIDE * size * columns(text)


def shortened(text: str, *, width: float, size: float) -> str:
    """A text that fits a width, its middle left out where it is too long."""
    most = max(int(width / (_WIDE * size)), 3)
    if columns(text) <= most:
        return text
    tail = (most - 1) // 3
    return f"{_first(text, most - 1 - tail)}…{_first(text[::-1], tail)[::-1]}"


def _first(text: str, most: int) -> str:
    """As much of the beginning of a text as has room in so many columns."""
    start = text[:most]
    while columns(start) > most:
        start = start[:-1]
    return start


def kept_apart(places: Sequence[tuple[float, float]], *, gap: float) -> list[int]:
    """Which of some labels can stand without touching: each has a middle and a width, the first ones go first."""
    taken: list[tuple[float, float]] = []
    kept: list[int] = []
    for number, (middle, width) in enumerate(places):
        left, right = middle - width / 2 - gap, middle + width / 2 + gap
        if all(right <= other_left or left >= other_right for other_left, other_right in taken):
            taken.append((left + gap, right - gap))
            kept.append(number)
    return kept
