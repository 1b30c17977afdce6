"""The supply between two levels at which a detector surely holds reset."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from itertools import permutations
from typing import Literal

import msgspec

from tidegate.lint.account import Sum
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
    from_known: bool = True
    """Whether it is exactly known from where on it decides; else it stands at a corner."""
    to_known: bool = True
    """The same of the level at which it lets go."""
    to: Sum | None = None
    """That level with its account, where it was worked out."""

    @property
    def known(self) -> bool:
        """Whether both are exactly known."""
        return self.from_known and self.to_known


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
    Raises: MissingFactsError: where it is not said what a detector, or one of its sources, leans on.
    """
    shipped = as_shipped(case, detector)
    window = rising_window if way == "up" else falling_window
    log = case.reading.listen()
    to = window(case, shipped).end("least")
    case.reading.unlisten()
    to_v, typical_to_v = to.value, _typical_to_v(shipped, way)
    if detector.undecided == "asserts":
        return HeldSpan(detector.id, 0.0, "", to_v, 0.0, typical_to_v, to_known=not log, to=to)
    since = case.reading.listen()
    froms = _works_from(case, detector)
    case.reading.unlisten()
    by, from_v, typical_v = max(froms, key=lambda found: found[1], default=("", 0.0, 0.0))
    return HeldSpan(
        detector.id, from_v, by, to_v, typical_v, typical_to_v, from_known=not since, to_known=not log, to=to
    )


def _typical_to_v(detector: Comparator, way: Way) -> float | None:
    level = None if detector.trip is None else detector.trip.rising if way == "up" else detector.trip.falling
    return None if level is None else level.middle


def _works_from(case: Case, detector: Comparator) -> list[tuple[str, float, float | None]]:
    """From which supply on a detector and its sources work, as far as the watched rail feeds them."""
    found = [detector, *(one for one in sources_in(case, reach_of_sources(case, detector)) if one.kind != "external")]
    levels = case.each(partial(_level, case, element, detector.watches) for element in found)
    return [level for level in levels if level is not None]


def _level(case: Case, element: Comparator | Bias | Reference, rail: str) -> tuple[str, float, float | None] | None:
    if rail_of(case, element).id != rail:
        return None
    works = element.works_from
    typical_v = None if works is None else works.typical
    if isinstance(element, Comparator):
        level_v = case.of(element).works_from.most()
        return element.id, level_v, typical_v
    return element.id, lowest_supply(case, element).level_v, typical_v


def steps(spans: Sequence[HeldSpan], way: Way, *, sure: bool = False) -> list[Step]:
    """Where the detectors of a stack take over from each other, from the lowest supply up.

    A detector that is known to hold nothing beyond those below it takes over nothing.  ``sure``: one of which that is
    not known may take over from any, and any from it that may reach further.
    """
    real = [span for span in spans if span.to_v > span.from_v and (span.known or not sure)]
    found: list[Step] = []
    holding: HeldSpan | None = None
    for span in sorted(real, key=lambda span: (span.from_v, -span.to_v, span.detector)):
        if holding is None:
            holding = span
        elif span.to_v > holding.to_v:
            found.append(Step(holding, span, way))
            holding = span
    if sure:
        found += [
            Step(below, above, way)
            for below, above in permutations(spans, 2)
            if not (below.known and above.known) and (above.to_v > below.to_v or not above.to_known)
        ]
    return found
