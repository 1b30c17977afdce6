"""The lowest supply at which a detector, and what it leans on, must still work."""

from __future__ import annotations

from functools import partial

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import at_code
from tidegate.lint.derived.levels.trip_levels import falling_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.quantity import Dimension, show


class LowestDecision(msgspec.Struct, frozen=True):
    """The lowest level of a rail at which something fed from it must work, and why."""

    level_v: float
    why: str
    is_trip_level: bool
    """Whether it is the detector's own falling level, which the designer may move."""


@answered_once
def lowest_decision(case: Case, comparator: Comparator, rail: Rail) -> LowestDecision:
    """On the watched rail the lowest falling level, at any code; on another the lowest level at which it is delivered.

    Raises: MissingFactsError: where a fact is not given.
    """
    if rail.id == comparator.watches:
        level_v, at = min(case.gather_all(partial(_falling, case, *each) for each in _at_every_code(comparator)))
        return LowestDecision(level_v, f"decides on {rail.id} down to {show(level_v, Dimension.VOLTAGE)}{at}", True)
    level_v = case.of(rail).least("delivered")
    case.settle()
    return LowestDecision(level_v, f"{rail.id} is delivered down to {show(level_v, Dimension.VOLTAGE)}", False)


def _at_every_code(comparator: Comparator) -> list[tuple[Comparator, str]]:
    """The detector with each set of levels it may have, and words that say at which code."""
    plain = [(comparator, "")] if comparator.trip is not None or not comparator.codes else []
    return [*plain, *((at_code(comparator, code), f" at {code}") for code in comparator.codes)]


def _falling(case: Case, comparator: Comparator, at: str) -> tuple[float, str]:
    return falling_window(case, comparator).least_v, at
