"""The lowest supply at which a detector, and what it leans on, must still work."""

from __future__ import annotations

from dataclasses import dataclass

from tidegate.lint.case import Case
from tidegate.lint.derived.trip_levels import falling_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.quantity import Dimension, show


@dataclass(frozen=True, slots=True)
class LowestDecision:
    """The lowest level of a rail at which something fed from it must work, and why."""

    level_v: float
    why: str
    is_trip_level: bool
    """Whether it is the detector's own falling level, which the designer may move."""


def lowest_decision(case: Case, comparator: Comparator, rail: Rail) -> LowestDecision:
    """On the watched rail down to the lowest falling level; on another as far down as that rail is delivered.

    Raises: MissingFactsError: where a fact is not given.
    """
    if rail.id == comparator.watches:
        level_v = falling_window(case, comparator).least_v
        return LowestDecision(level_v, f"decides on {rail.id} down to {show(level_v, Dimension.VOLTAGE)}", True)
    level_v = case.of(rail).least("delivered")
    case.settle()
    return LowestDecision(level_v, f"{rail.id} is delivered down to {show(level_v, Dimension.VOLTAGE)}", False)
