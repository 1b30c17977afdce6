"""Sets of times, and intervals in which something arrives: exact, with no time step.

A set of times says when something *may* be so, over everything that tolerances allow.  What is surely so is what may
not be otherwise.  An arrival is late by every need (the later of two, an intersection) and early by every alternative
(the earlier of two, a union).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final, NamedTuple, TypeAlias

Times: TypeAlias = tuple[tuple[float, float], ...]
"""Disjoint spans of time in s, in order, each with its start and without its end; at either end it may be infinite."""

FOREVER_S: Final = float("inf")
NEVER: Final[Times] = ()
_TOUCHING: Final = 1e-12
"""Share of a time up to which two spans touch."""
ALWAYS: Final[Times] = ((-FOREVER_S, FOREVER_S),)


class Arrival(NamedTuple):
    """The interval in which something arrives, in s: never before the earliest time, not surely before the latest."""

    earliest_s: float
    latest_s: float


def last_arrival(may_be: Times, may_not_be: Times) -> Arrival | None:
    """When something last comes to be so: from the first time it may be, to the last at which it may still not be.

    None where it does not come to be so; the latest is infinite where it may never be.
    """
    starts = [start for start, _ in may_be if start > -FOREVER_S]
    if not starts:
        return None
    since_s = starts[-1]
    latest_s = next((end for start, end in may_not_be if end >= since_s), since_s)
    return Arrival(since_s, latest_s)


def either(first: Times, second: Times) -> Times:
    """When at least one of two is so."""
    if not second or first is second or first is ALWAYS:
        return first
    if not first or second is ALWAYS:
        return second
    if len(first) == 1 and len(second) == 1:  # as it mostly is
        return _either_span(first, second)
    return joined(sorted((*first, *second)))


def _either_span(first: Times, second: Times) -> Times:
    ((start, end),) = first
    ((other_start, other_end),) = second
    if other_start < start:
        return _either_span(second, first)
    if other_start > end and other_start - end > _TOUCHING * abs(end):
        return (*first, *second)
    return first if other_end <= end else ((start, other_end),)


def joined(spans: Sequence[tuple[float, float]]) -> Times:
    """Spans in order of their starts, at least one, those that touch made one; what rounding leaves between, too."""
    done: list[tuple[float, float]] = []
    start, end = spans[0]
    for next_start, next_end in spans:
        if next_start > end and next_start - end > _TOUCHING * abs(end):
            done.append((start, end))
            start, end = next_start, next_end
        elif next_end > end:
            end = next_end
    done.append((start, end))
    return tuple(done)


def both(first: Times, second: Times) -> Times:
    """When both of two are so."""
    if not first or first is second or second is ALWAYS:
        return first
    if not second or first is ALWAYS:
        return second
    if len(first) == 1 and len(second) == 1:  # as it mostly is
        return _both_span(first, second)
    return _overlaps(first, second)


def _overlaps(first: Times, second: Times) -> Times:
    """Where two sets overlap: through both at once, past whichever span ends first."""
    done: list[tuple[float, float]] = []
    ones, others = iter(first), iter(second)
    (start, end), (other_start, other_end) = next(ones), next(others)
    while True:
        both_start = start if start > other_start else other_start
        if end < other_end:
            if both_start < end:
                done.append((both_start, end))
            span = next(ones, None)
            if span is None:
                return tuple(done)
            start, end = span
        else:
            if both_start < other_end:
                done.append((both_start, other_end))
            span = next(others, None)
            if span is None:
                return tuple(done)
            other_start, other_end = span


def _both_span(first: Times, second: Times) -> Times:
    ((start, end),) = first
    ((other_start, other_end),) = second
    if other_start <= start:
        if end <= other_end:
            return first
        return ((start, other_end),) if start < other_end else NEVER
    if other_end <= end:
        return second
    return ((other_start, end),) if other_start < end else NEVER


def outside(times: Times) -> Times:
    """When it is not so."""
    if not times:
        return ALWAYS
    done: list[tuple[float, float]] = []
    end_s = -FOREVER_S
    for start, end in times:
        if start > end_s:
            done.append((end_s, start))
        end_s = end
    if end_s < FOREVER_S:
        done.append((end_s, FOREVER_S))
    return tuple(done)


def delayed(times: Times, *, least_s: float, most_s: float) -> Times:
    """When it may be so after a delay that lies between two times: each span starts by the least, ends by the most.

    Either delay may be negative; a span of which nothing is left falls out.
    """
    if least_s == 0.0 and most_s == 0.0:
        return times
    spans = [(start + least_s, end + most_s) for start, end in times if start + least_s < end + most_s]
    return joined(spans) if len(spans) > 1 else tuple(spans)


def filtered(times: Times, *, least_s: float, most_s: float) -> Times:
    """When it may be so behind a filter that ignores what is shorter than a time between two bounds.

    A gap that the filter may ignore is filled; a span that it surely ignores falls out; the rest comes through late.
    """
    if not times or most_s == 0.0 == least_s:
        return times
    whole: list[tuple[float, float]] = [times[0]]
    for start, end in times[1:]:
        if start - whole[-1][1] < most_s:
            whole[-1] = (whole[-1][0], end)
        else:
            whole.append((start, end))
    seen = tuple((start, end) for start, end in whole if end - start >= least_s)
    return delayed(seen, least_s=least_s, most_s=most_s)


def first_from(times: Times, since_s: float) -> float:
    """The first time from another on that belongs to the set, or ends it; infinite where none does."""
    for start, end in times:
        if end >= since_s or since_s - end <= _TOUCHING * abs(since_s):
            return max(start, since_s)
    return FOREVER_S


def is_in(times: Times, at_s: float) -> bool:
    """Whether a time belongs to the set."""
    return any(start <= at_s < end for start, end in times)
