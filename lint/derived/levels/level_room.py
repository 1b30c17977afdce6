"""What a rail leaves between the limits of a detector's levels, and what the levels take of it."""

from __future__ import annotations

from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.level_margins import LevelMargin, comes_back, guarantee, protects_nothing
from tidegate.lint.derived.levels.trip_levels import (
    falling_window,
    has_no_hysteresis,
    hysteresis_window,
    levels_bound_hysteresis,
    rising_window,
)
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.quantity import Dimension

NEVER_APART: Final = "what it guards does not work in all the range delivered (description/loads says so)"
"""Why there is no room to judge, where the description itself leaves none."""


class LevelRoom(msgspec.Struct, frozen=True):
    """The room between the limit of the level that protects and that of the level that lets go, in V."""

    protects: LevelMargin
    returns: LevelMargin
    room_v: float
    """Below 0 where the two limits lie the wrong way round."""
    spread_v: float
    """How far the level that protects lies from end to end."""
    hysteresis_v: float
    """How much further the level that lets go can lie; 0 where there is no hysteresis."""
    apart_by_description: bool
    """Whether the load and what the rail delivers contradict each other, whatever the levels are."""

    @property
    def left_v(self) -> float:
        """What the spread leaves of the room."""
        return self.room_v - self.spread_v

    @property
    def spread_fits(self) -> bool:
        """Whether there is room for the spread."""
        return Measure(self.room_v, self.spread_v, Dimension.VOLTAGE, Relation.AT_MOST).holds

    @property
    def hysteresis_fits(self) -> bool:
        """Whether what the spread leaves is enough for the hysteresis."""
        return Measure(self.left_v, self.hysteresis_v, Dimension.VOLTAGE, Relation.AT_MOST).holds


def tracks_its_bound(case: Case, comparator: Comparator, protects: LevelMargin) -> bool:
    """Whether a level that is made without a reference moves with temperature as what it protects does."""
    assert protects.bound is not None
    return comparator.crossover is not None and protects.bound.element not in case.description.loads


@answered_once
def level_room(case: Case, comparator: Comparator) -> LevelRoom | None:
    """The room of a detector; None where nothing leans on it, or where its level tracks what does.

    Raises: MissingFactsError: where a fact is missing.
    """
    if protects_nothing(case, comparator):
        return None
    shipped = as_shipped(case, comparator)
    over = comparator.role == "over_voltage"
    protects, returns, level, apart = case.gather(
        lambda: guarantee(case, shipped),
        lambda: comes_back(case, shipped),
        lambda: rising_window(case, shipped) if over else falling_window(case, shipped),
        lambda: Window(0.0, 0.0) if has_no_hysteresis(shipped) else hysteresis_window(case, shipped),
    )
    assert protects is not None and protects.bound is not None
    if tracks_its_bound(case, comparator, protects):
        return None
    onward = -1.0 if over else 1.0
    last_v = level.least_v if over else level.most_v
    hysteresis_v = apart.most_v
    if levels_bound_hysteresis(shipped, "falling" if over else "rising", "least" if over else "most"):
        hysteresis_v = min(hysteresis_v, onward * (returns.end_v - last_v))
    delivered = case.description.rails[comparator.watches].delivered
    assert delivered is not None
    service_v = delivered.most if over else delivered.least
    assert service_v is not None
    return LevelRoom(
        protects=protects,
        returns=returns,
        room_v=onward * (returns.limit_v - protects.limit_v),
        spread_v=level.most_v - level.least_v,
        hysteresis_v=hysteresis_v,
        apart_by_description=protects.bound.element in case.description.loads
        and onward * (service_v - protects.bound.level_v) < 0.0,
    )
