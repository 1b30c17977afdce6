"""The supply between two levels at which a detector surely holds reset."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from typing import Literal

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.supply.lowest_supply import lowest_supply
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.sources_of import reach_of_sources, sources_in
from tidegate.lint.description.model.detector import Bias, Comparator, Reference

Way = Literal["up", "down"]


class HeldSpan(msgspec.Struct, frozen=True):
    """Where a detector holds reset on the way up or down: from the level at which it decides to the one at which it
    lets go, at the extremes, in V."""

    detector: str
    from_v: float
    by: str
    """What sets the level from which on it decides: itself, its bias or a reference; empty where nothing does."""
    to_v: float
    typical_from_v: float | None
    typical_to_v: float | None


class Step(msgspec.Struct, frozen=True):
    """Where one detector of a stack takes over from another, seen from the lowest supply up."""

    below: HeldSpan
    above: HeldSpan
    way: Way

    @property
    def overlap_v(self) -> float:
        """How far both hold reset, in V; below 0, how far neither does."""
        return self.below.to_v - self.above.from_v

    @property
    def typical_overlap_v(self) -> float | None:
        """The same at the typical values; None where they are not given."""
        if self.below.typical_to_v is None or self.above.typical_from_v is None:
            return None
        return self.below.typical_to_v - self.above.typical_from_v


def held_span(case: Case, detector: Comparator, way: Way) -> HeldSpan:
    """The span of one detector.

    A detector that asserts while it cannot decide holds from 0 V on. What another rail feeds is taken to be up.
    Raises: MissingFactsError: where a fact is missing.
    """
    shipped = as_shipped(case, detector)
    window = rising_window if way == "up" else falling_window
    if detector.undecided == "asserts":
        to_v = window(case, shipped).least_v
        return HeldSpan(detector.id, 0.0, "", to_v, 0.0, _typical_to_v(shipped, way))
    to, froms = case.gather(lambda: window(case, shipped), lambda: _works_from(case, detector))
    by, from_v, typical_v = max(froms, key=lambda found: found[1], default=("", 0.0, 0.0))
    return HeldSpan(detector.id, from_v, by, to.least_v, typical_v, _typical_to_v(shipped, way))


def _typical_to_v(detector: Comparator, way: Way) -> float | None:
    level = None if detector.trip is None else detector.trip.rising if way == "up" else detector.trip.falling
    return None if level is None else level.middle


def _works_from(case: Case, detector: Comparator) -> list[tuple[str, float, float | None]]:
    """From which supply on a detector and its sources work, as far as the watched rail feeds them."""
    found = [detector, *(one for one in sources_in(case, reach_of_sources(case, detector)) if one.kind != "external")]
    levels = case.gather_all(partial(_level, case, element, detector.watches) for element in found)
    return [level for level in levels if level is not None]


def _level(case: Case, element: Comparator | Bias | Reference, rail: str) -> tuple[str, float, float | None] | None:
    if rail_of(case, element).id != rail:
        return None
    works = element.works_from
    typical_v = None if works is None else works.typical
    if isinstance(element, Comparator):
        level_v = case.of(element).most("works_from")
        case.settle()
        return element.id, level_v, typical_v
    return element.id, lowest_supply(case, element).level_v, typical_v


def steps(spans: Sequence[HeldSpan], way: Way) -> list[Step]:
    """Where the detectors of a stack take over from each other, from the lowest supply up.

    A detector that holds nothing beyond those below it takes over nothing.
    """
    found: list[Step] = []
    holding: HeldSpan | None = None
    for span in sorted(spans, key=lambda span: (span.from_v, -span.to_v)):
        if span.to_v <= span.from_v:
            continue
        if holding is None:
            holding = span
        elif span.to_v > holding.to_v:
            found.append(Step(holding, span, way))
            holding = span
    return found
