"""Where a quantity that goes one way with a number reaches nothing: secants, then kept between brackets."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Final

_MOST_STEPS: Final = 200
_LOOKS: Final = 3
_GROWTH: Final = 8.0
_APART: Final = 4e-16
"""Share by which two neighbouring numbers differ, about: brackets so near hold no other number."""


def monotone_root(
    value: Callable[[float], float], *, start: float, slope: float, low: float, high: float, tolerance: float
) -> float:
    """Where a function that never goes back crosses nothing, between ``low`` and ``high``.

    ``slope`` says which way the function goes, and about how fast; the first step goes by it, the next by secants,
    until the place is between two values of either sign (then regula falsi in the Illinois form, halving where it
    stalls).
    Returns: a place where the value is nothing within ``tolerance``; an infinity, towards the end beyond which it
    would lie, where there is none in between; not a number where the function gives none.
    Raises: whatever the function raises.
    """
    sense = math.copysign(1.0, slope)
    steep = abs(slope)
    here, found = start, sense * value(start)
    below: tuple[float, float] | None = None
    above: tuple[float, float] | None = None
    for _ in range(_MOST_STEPS):
        if math.isnan(found):
            return math.nan
        if abs(found) <= tolerance:
            return here
        below, above = ((here, found), above) if found < 0.0 else (below, (here, found))
        if below is not None and above is not None:
            return _between(lambda place: sense * value(place), below, above, tolerance)
        wanted = here - found / steep if math.isfinite(found) else math.copysign(math.inf, -found)
        then = min(max(wanted, low), high)
        if then == here:
            break
        before, here, found = (here, found), then, sense * value(then)
        secant = (found - before[1]) / (here - before[0])
        steep = secant if 0.0 < secant < math.inf else steep / _GROWTH
    return math.copysign(math.inf, -found)


def _between(
    value: Callable[[float], float], below: tuple[float, float], above: tuple[float, float], tolerance: float
) -> float:
    """Where a function crosses nothing on its way from a place where it is below to one where it is above."""
    (left, under), (right, over) = below, above
    low, high, last = under, over, 0  # values as regula falsi weighs them, and which end moved last
    width = abs(right - left)
    for step in range(1, _MOST_STEPS):
        if abs(right - left) <= _APART * max(abs(left), abs(right)):
            break
        middle = left + (right - left) * low / (low - high) if math.isfinite(high - low) else math.nan
        if step % _LOOKS == 0:  # after a few looks the place must be known twice as well
            if abs(right - left) > width / 2:
                middle, low, high, last = math.nan, under, over, 0
            width = abs(right - left)
        if not min(left, right) < middle < max(left, right):
            middle = (left + right) / 2
        found = value(middle)
        if abs(found) <= tolerance:
            return middle
        if found < 0.0:
            high = high / 2 if last < 0 else high
            left, under, low, last = middle, found, found, -1
        else:
            low = low / 2 if last > 0 else low
            right, over, high, last = middle, found, found, 1
    return right
