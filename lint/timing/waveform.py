"""Piecewise-linear supplies, solved exactly: their level at a time, and where they cross one."""

from __future__ import annotations

from bisect import bisect_right

import msgspec

from tidegate.lint.physics.domain import DomainError, require_finite
from tidegate.lint.timing.interval import FOREVER_S, Times


class Waveform(msgspec.Struct, frozen=True):
    """A supply over time: straight between its points, constant before the first and after the last.

    Two points at one time are a step.
    Symbols:
        points  (t, v)  s, V  in order of time
    Raises: DomainError: no point, points out of order, or a number that is not finite.
    """

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        if not self.points:
            raise DomainError("points must hold at least one point (found none)")
        before_s = -FOREVER_S
        for at_s, level_v in self.points:
            require_finite(at_s=at_s, level_v=level_v)
            if at_s < before_s:
                raise DomainError(f"at_s must not go back: {at_s!r} comes after {before_s!r}")
            before_s = at_s

    def level_v(self, at_s: float) -> float:
        """The supply at a time, in V; at a step, the level after it."""
        index = bisect_right(self.points, at_s, key=lambda point: point[0])
        if index == 0:
            return self.points[0][1]
        if index == len(self.points):
            return self.points[-1][1]
        (from_s, from_v), (to_s, to_v) = self.points[index - 1], self.points[index]
        return from_v + (to_v - from_v) * ((at_s - from_s) / (to_s - from_s))

    def above(self, *, rising_v: float, falling_v: float) -> Times:
        """When a detector with these two levels takes the supply for high.

        It does from where the supply reaches the rising level to where it falls below the falling one; before the
        first point, it does if the supply has reached the rising level.
        """
        spans: list[tuple[float, float]] = []
        from_s, from_v = self.points[0]
        is_above = from_v >= rising_v
        start_s = -FOREVER_S
        for to_s, to_v in self.points[1:]:
            if is_above:
                if to_v < falling_v:
                    end_s = _crossing_s(falling_v, from_s, from_v, to_s, to_v)
                    if end_s > start_s:
                        spans.append((start_s, end_s))
                    is_above = False
            elif to_v >= rising_v:
                start_s = _crossing_s(rising_v, from_s, from_v, to_s, to_v)
                is_above = True
            from_s, from_v = to_s, to_v
        if is_above:
            spans.append((start_s, FOREVER_S))
        return tuple(spans)


def _crossing_s(level_v: float, from_s: float, from_v: float, to_s: float, to_v: float) -> float:
    """When a straight piece passes a level that lies between its ends, or at one of them."""
    if from_v == to_v:
        return from_s
    share = (level_v - from_v) / (to_v - from_v)
    return from_s + (to_s - from_s) * min(max(share, 0.0), 1.0)
