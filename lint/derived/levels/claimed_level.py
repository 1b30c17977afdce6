"""An end of a level as a claim that something else is held against: the wider it lies, the less it claims."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import End, TripLevel
from tidegate.lint.description.model.detector import Comparator


def claimed_v(case: Case, comparator: Comparator, level: TripLevel, end: End) -> float:
    """An end of a level, in V, further in where that is less sure; one that is not stated may lie further in."""
    found = case.turned(lambda: level.end(end))
    if found.loose == 0.0:
        return found.value
    place = "trip" if comparator.trip is not None else f"codes.{comparator.ships_with}"
    case.reading.block((comparator.fact(f"{place}.{level.which}"),))
    inwards_v = 0.0 if case.at_best else found.loose
    return found.value + (inwards_v if end == "least" else -inwards_v)
