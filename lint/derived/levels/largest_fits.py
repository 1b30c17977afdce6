"""The largest hysteresis and the largest errors with which the levels of a detector still have a place."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from functools import cache, partial
from typing import Final

from tidegate.lint.derived.levels.placing import AS_STATED, Changes, Placing
from tidegate.lint.derived.monotone_root import monotone_root
from tidegate.lint.facts.reading import Corner
from tidegate.lint.quantity import Voltage

_MOST_TIMES: Final = 1e9
_SETTLED: Final = 1e-10


def largest_hysteresis_v(placing: Placing, corner: Corner) -> float | None:
    """The largest hysteresis that leaves a place for the levels, in V, as a nominal value.

    Returns: below 0 where not even none fits; None where nothing limits it, or not enough is known.
    """
    now_v = placing.stated.hysteresis_v
    if now_v is None:
        return None
    room_v = placing.room_v(corner)
    if not math.isfinite(room_v):
        return None
    more_v = monotone_root(
        lambda more_v: placing.room_v(corner, apart_v=more_v), start=0.0, slope=-1.0, low=-2.0 * placing.scale_v,
        high=2.0 * placing.scale_v, tolerance=_SETTLED * placing.scale_v,
    )  # fmt: skip
    if more_v == -math.inf:
        return -math.inf
    return now_v + more_v if math.isfinite(more_v) else None


def largest_errors(placing: Placing, corner: Corner, *, anywhere: bool) -> float | None:
    """How many times as large all errors, and ranges, may be: with the levels at their best place, or where they stand.

    Returns: None where nothing limits them, where there are none, or where not enough is known; below 0 where levels
    without any error would not do.
    """
    if not anywhere and not placing.stated.placed:
        return None
    kept = cache(partial(_room_v if anywhere else _least_margin_v, placing, corner))
    if not math.isfinite(now_v := kept(1.0)) or kept(0.0) == now_v:
        return None
    times = monotone_root(
        kept, start=1.0, slope=-abs(kept(0.0) - now_v), low=0.0, high=_MOST_TIMES, tolerance=_SETTLED * placing.scale_v
    )
    return None if times == math.inf or math.isnan(times) else times


def _room_v(placing: Placing, corner: Corner, times: float) -> float:
    return placing.room_v(corner, changes=dict(error_changes(placing, times)))


def _least_margin_v(placing: Placing, corner: Corner, times: float) -> float:
    changes = dict(error_changes(placing, times))
    return min(placing.margin(due, corner, AS_STATED, changes).margin_v for due in placing.dues)


def error_changes(placing: Placing, times: float) -> Iterator[tuple[str, Callable[[float], float]]]:
    """All errors, and the ranges in which levels are stated, so many times as large."""
    for name in placing.detector.errors:
        yield from one_error(placing, name, times).items()
    yield from range_changes(placing, times).items()


def one_error(placing: Placing, name: str, times: float) -> Changes:
    """One error, so many times as large."""
    base = f"comparators.{placing.detector.id}.errors.{name}"
    return {f"{base}.share": lambda value: value * times, f"{base}.amount": lambda value: value * times}


def range_changes(placing: Placing, times: float) -> Changes:
    """The ranges in which levels are stated, so many times as wide about their points."""
    trip = placing.detector.trip
    spans = () if trip is None else ((placing.falling, trip.falling), (placing.rising, trip.rising))
    return {path: wider for path, span in spans if (wider := widened(span, times)) is not None}


def widened(span: Voltage | None, times: float) -> Callable[[float], float] | None:
    """A range so many times as wide about its point; None where it has not two ends."""
    if span is None or span.plain or span.least is None or span.most is None:
        return None
    middle_v = span.middle
    assert middle_v is not None
    return lambda value: middle_v + (value - middle_v) * times
