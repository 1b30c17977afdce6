"""The lowest supply at which a detector, and what it leans on, must still work."""

from __future__ import annotations

from functools import partial

import msgspec

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import at_code
from tidegate.lint.derived.levels.furthest import lowest
from tidegate.lint.derived.levels.trip_levels import falling_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.quantity import Dimension, show


class LowestDecision(msgspec.Struct, frozen=True):
    """The lowest level of a rail at which something fed from it must work, in V, and why."""

    level: Sum
    why: str
    is_trip_level: bool
    """Whether it is the detector's own falling level, which the designer may move."""

    @property
    def level_v(self) -> float:
        """The level."""
        return self.level.value


@answered_once
def lowest_decision(case: Case, comparator: Comparator, rail: Rail) -> LowestDecision:
    """On the watched rail the lowest falling level, at any code; on another the lowest level at which it is delivered.

    Raises: MissingFactsError: where a fact without which an error has no size is missing.
    """
    if rail.id == comparator.watches:
        levels = case.each(partial(_falling, case, *each) for each in _at_every_code(comparator))
        level, at = lowest([each for each, _ in levels]), min(levels, key=lambda each: each[0].value)[1]
        why = f"decides on {rail.id} down to {show(level.value, Dimension.VOLTAGE)}{at}"
        return LowestDecision(level, why, is_trip_level=True)
    delivered = case.of(rail).delivered
    least = case.sum(plus(f"{rail.id} delivered, least", delivered.least, of=delivered))
    why = f"{rail.id} is delivered down to {show(least.value, Dimension.VOLTAGE)}"
    return LowestDecision(least, why, is_trip_level=False)


def _at_every_code(comparator: Comparator) -> list[tuple[Comparator, str]]:
    """The detector with each set of levels it may have, and words that say at which code."""
    plain = [(comparator, "")] if comparator.trip is not None or not comparator.codes else []
    return [*plain, *((at_code(comparator, code), f" at {code}") for code in comparator.codes)]


def _falling(case: Case, comparator: Comparator, at: str) -> tuple[Sum, str]:
    return falling_window(case, comparator).end("least"), at
