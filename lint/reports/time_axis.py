"""A time axis for a row of characters: stretched where edges crowd, so that every edge can be seen."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterable, Sequence
from typing import Final, NamedTuple

import msgspec

_STRETCH: Final = 0.6
"""Share of the width that edges divide evenly among them; the rest goes by time alone."""
_ALIKE: Final = 1e-6
"""Share of the whole span below which two edges count as one."""

_RESOLVED: Final = 1e-9
"""Least span as a share of the times on it: a float tells no finer ones apart."""


class Column(NamedTuple):
    """The times between which a column lies, and the one in its middle, in s."""

    start_s: float
    end_s: float
    middle_s: float


class TimeAxis(msgspec.Struct, frozen=True):
    """Columns over time: ``knots`` are times and the column, a fraction included, at which each stands."""

    knots: Sequence[tuple[float, float]]
    width: int

    def column(self, at_s: float) -> int:
        """The column in which a time lies; times outside stand at the ends."""
        index = min(max(bisect_right(self.knots, at_s, key=lambda knot: knot[0]), 1), len(self.knots) - 1)
        (from_s, from_column), (to_s, to_column) = self.knots[index - 1], self.knots[index]
        place = from_column + (to_column - from_column) * (at_s - from_s) / (to_s - from_s)
        return int(min(max(place, 0.0), self.width - 1))

    def column_at(self, number: int) -> Column:
        """The times of a column; the first and the last have no end."""
        return Column(
            -float("inf") if number == 0 else self._time_s(number),
            float("inf") if number == self.width - 1 else self._time_s(number + 1),
            self._time_s(number + 0.5),
        )

    def _time_s(self, place: float) -> float:
        index = min(max(bisect_right(self.knots, place, key=lambda knot: knot[1]), 1), len(self.knots) - 1)
        (from_s, from_column), (to_s, to_column) = self.knots[index - 1], self.knots[index]
        return from_s + (to_s - from_s) * (place - from_column) / (to_column - from_column)


def time_axis(edges: Iterable[float], width: int) -> TimeAxis:
    """An axis that shows all edges, with some room on either side."""
    times = sorted({edge for edge in edges if abs(edge) != float("inf")}) or [0.0]
    span_s = max(times[-1] - times[0], 1e-12, _RESOLVED * max(abs(times[0]), abs(times[-1])))
    distinct = [times[0]]
    for time in times[1:]:
        if time - distinct[-1] > _ALIKE * span_s:
            distinct.append(time)
    before_s, after_s = distinct[0] - 0.05 * span_s, distinct[-1] + 0.05 * span_s
    inside = [before_s, *distinct, after_s]
    whole_s = after_s - before_s
    steps = len(inside) - 1
    knots = [
        (at_s, width * ((1.0 - _STRETCH) * (at_s - before_s) / whole_s + _STRETCH * number / steps))
        for number, at_s in enumerate(inside)
    ]
    return TimeAxis(knots, width)
