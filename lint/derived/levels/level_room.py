"""What a rail leaves between the limits of a detector's levels, and what the levels take of it."""

from __future__ import annotations

import msgspec

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.requirements import Requirement, comes_back, protects
from tidegate.lint.derived.levels.trip_levels import (
    End,
    Which,
    falling_window,
    hysteresis_end,
    level_end,
    levels_bound_hysteresis,
    rising_window,
)
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.quantity import Dimension


class LevelRoom(msgspec.Struct, frozen=True):
    """The room between the limit of the level that protects and that of the level that lets go, in V."""

    protects: Requirement
    returns: Requirement
    room: Sum
    """Below 0 where the two limits lie the wrong way round."""
    spread: Sum
    """How far the level that protects lies from end to end."""
    hysteresis: Sum
    """How much further the level that lets go can lie; 0 where there is no hysteresis."""

    @property
    def left(self) -> Sum:
        """What the spread leaves of the room."""
        return self.room.less(self.spread)

    @property
    def spread_fits(self) -> bool:
        """Whether there is room for the spread."""
        return Measure(self.room.value, self.spread.value, Dimension.VOLTAGE, Relation.AT_MOST).holds


def tracks_its_bound(case: Case, comparator: Comparator, found: Requirement) -> bool:
    """Whether a level that is made without a reference moves with temperature as what it protects does."""
    assert found.bound is not None
    return comparator.crossover is not None and found.bound.element not in case.description.loads


@answered_once
def level_room(case: Case, comparator: Comparator) -> LevelRoom | None:
    """The room of a detector; None where nothing leans on it, or where its level tracks what does.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    shipped = as_shipped(case, comparator)
    found, returns = protects(case, shipped), comes_back(case, shipped)
    if found is None or tracks_its_bound(case, comparator, found):
        return None
    over = comparator.role == "over_voltage"
    level = rising_window(case, shipped) if over else falling_window(case, shipped)
    last: End = "least" if over else "most"
    lets_go: Which = "falling" if over else "rising"
    apart = hysteresis_end(case, shipped, "most")
    if levels_bound_hysteresis(shipped, lets_go):
        other = level_end(case, shipped, lets_go, last)
        further = level.end(last).less(other) if over else other.less(level.end(last))
        apart = min(apart, further, key=lambda each: each.value)
    elif shipped.trip is not None and getattr(shipped.trip, lets_go) is None:
        # a level that is not stated lies no further, and may lie less far: which extremes go together is not said
        apart = msgspec.structs.replace(apart, loose=level_end(case, shipped, lets_go, last).loose)
    limits = (found.need, returns.need) if over else (returns.need, found.need)
    return LevelRoom(
        protects=found, returns=returns, room=limits[0].less(limits[1]),
        spread=level.end("most").less(level.end("least")), hysteresis=apart,
    )  # fmt: skip
