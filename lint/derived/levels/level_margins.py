"""The three margins of a detector's levels: the load is protected, service is quiet, and reset lets go again."""

from __future__ import annotations

from typing import Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, guarded_loads, least_supplies
from tidegate.lint.derived.levels.response import response
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.physics.hysteresis import release_droop_v
from tidegate.lint.physics.placement import Level, Side
from tidegate.lint.quantity import Dimension, show

_V: Final = Dimension.VOLTAGE


class LevelMargin(msgspec.Struct, frozen=True):
    """One end of a level against the limit that it must keep."""

    level: Level
    side: Side
    """Whether the level must be at least or at most the limit."""
    end_v: float
    limit_v: float
    why: str
    bound: Bound | None = None
    """What sets the limit, where that is a load or what must work once reset lets go."""
    slew_v_per_s: float = 0.0
    """How fast the rail moves on while the detector answers, where that counts."""

    @property
    def margin_v(self) -> float:
        """How far the level keeps its limit, in V; below 0 it does not."""
        return self.end_v - self.limit_v if self.side is Side.LEAST else self.limit_v - self.end_v

    @property
    def is_kept(self) -> bool:
        """Whether the level keeps its limit; at the limit, it does."""
        relation = Relation.AT_LEAST if self.side is Side.LEAST else Relation.AT_MOST
        return Measure(self.limit_v, self.end_v, _V, relation).holds

    @property
    def says(self) -> str:
        """What is measured."""
        return f"{self.level.value} level at its {'lowest' if self.side is Side.LEAST else 'highest'}"


@answered_once
def protects_nothing(case: Case, comparator: Comparator) -> bool:
    """Whether nothing leans on a detector: no load that needs its rail, nothing that must work once it lets go."""
    if comparator.role == "power_on":
        return case.attempt(lambda: follower_supplies(case, comparator)) == []
    return not any(
        need.rail == comparator.watches
        for load, _ in guarded_loads(case.graph, comparator.id)
        for need in load.needs
    )  # fmt: skip


@answered_once
def guarantee(case: Case, comparator: Comparator) -> LevelMargin | None:
    """The level that protects, against the most demanding of what leans on it; None where nothing does.

    Raises: MissingFactsError: where a fact is missing.
    """
    if protects_nothing(case, comparator):
        return None
    if comparator.role == "power_on":
        return _power_on_guarantee(case, comparator)
    level, answer = case.gather(lambda: _against_load(case, comparator), lambda: response(case, comparator))
    over = level.side is Side.MOST
    why = (
        f"{level.why}; until the answer, {show(answer.time_s, Dimension.DURATION)} later, {comparator.watches} "
        f"{'rises' if over else 'falls'} {show(answer.moved_v, _V)}"
    )
    limit_v = level.limit_v - answer.moved_v if over else level.limit_v + answer.moved_v
    return replace(level, limit_v=limit_v, why=why, slew_v_per_s=answer.slew_v_per_s)


def sampled_too_seldom(case: Case, comparator: Comparator, found: LevelMargin) -> bool:
    """Whether a mode samples a detector so seldom that its rail moves past what the level keeps between two samples."""
    sampled = any(comparator.id in (mode.sampled or ()) for mode in case.description.modes.values())
    if not sampled or comparator.sampling is None or found.bound is None:
        return False
    level = replace(found, limit_v=found.bound.level_v)
    moved_v = response(case, comparator).sampling_s * found.slew_v_per_s
    return level.is_kept and not replace(level, limit_v=_moved(level, moved_v)).is_kept


def _moved(level: LevelMargin, moved_v: float) -> float:
    return level.limit_v + (moved_v if level.side is Side.LEAST else -moved_v)


def short_at_once(case: Case, comparator: Comparator) -> LevelMargin | None:
    """The level that protects, if it is short of its limit even with an answer that takes no time; else None.

    None too where that is not known. For a detector whose answer, or whose rail's slope, is not given.
    """
    unknown = case.lacking(lambda: response(case, comparator))
    if not unknown or comparator.role == "power_on" or protects_nothing(case, comparator):
        return None
    level = case.attempt(lambda: _against_load(case, comparator))
    if level is None or level.is_kept:
        return None
    return replace(level, why=f"{level.why}; what the rail does until the answer would only add to it, and is not "
                   f"known without {' and '.join(unknown)}")  # fmt: skip


def _against_load(case: Case, comparator: Comparator) -> LevelMargin:
    """The level that protects, against the most demanding load itself."""
    over = comparator.role == "over_voltage"
    window, bounds = case.gather(
        lambda: rising_window(case, comparator) if over else falling_window(case, comparator),
        lambda: greatest_supplies(case, comparator) if over else least_supplies(case, comparator),
    )
    first = bounds[0]
    why = f"{first.element} works {'up to' if over else 'from'} {show(first.level_v, _V)}"
    if over:
        return LevelMargin(Level.RISING, Side.MOST, window.most_v, first.level_v, why, first)
    return LevelMargin(Level.FALLING, Side.LEAST, window.least_v, first.level_v, why, first)


def _power_on_guarantee(case: Case, comparator: Comparator) -> LevelMargin:
    bounds, falling, rising = case.gather(
        lambda: follower_supplies(case, comparator),
        lambda: falling_window(case, comparator),
        lambda: rising_window(case, comparator),
    )
    first = bounds[0]
    level = Level.RISING if rising.least_v < falling.least_v else Level.FALLING
    end_v = min(rising.least_v, falling.least_v)
    why = f"{first.element} works from {show(first.level_v, _V)}"
    return LevelMargin(level, Side.LEAST, end_v, first.level_v, why, first)


def hands_over(case: Case, comparator: Comparator, found: LevelMargin) -> bool:
    """Whether what a power-on detector must not let go below is an under-voltage detector of its rail, or its source.

    Whether anything holds reset in between hangs on the whole stack of detectors, and on what they do while they
    cannot decide.
    """
    if comparator.role != "power_on" or found.bound is None:
        return False
    onward = (case.graph.elements[hop.element] for hop in found.bound.path)
    return found.bound.element not in case.description.loads and any(
        isinstance(one, Comparator) and one.role == "under_voltage" and one.watches == comparator.watches
        for one in onward
    )


@answered_once
def quiet(case: Case, comparator: Comparator) -> LevelMargin:
    """The level that asserts, against the supply in service.

    Raises: MissingFactsError: where a fact is missing.
    """
    rail = case.description.rails[comparator.watches]
    facts = case.of(rail)
    half_ripple_v = facts.most("ripple.peak_to_peak") / 2
    if comparator.role == "over_voltage":
        return _above_service(case, comparator, Level.RISING, half_ripple_v)
    delivered_v, step_a, source_ohm = facts.least("delivered"), facts.most("load_step"), facts.most("source_impedance")
    window = falling_window(case, comparator)
    case.settle()
    step_v = release_droop_v(load_step_a=step_a, source_ohm=source_ohm)
    why = (
        f"{rail.id} is delivered down to {show(delivered_v, _V)}, less {show(half_ripple_v, _V)} (half the ripple) and "
        f"{show(step_v, _V)} (load step)"
    )
    limit_v = delivered_v - half_ripple_v - step_v
    return LevelMargin(Level.FALLING, Side.MOST, window.most_v, limit_v, why)


@answered_once
def comes_back(case: Case, comparator: Comparator) -> LevelMargin:
    """The level that lets go, against the supply at which it must.

    Raises: MissingFactsError: where a fact is missing.
    """
    rail = case.description.rails[comparator.watches]
    facts = case.of(rail)
    half_ripple_v = facts.most("ripple.peak_to_peak") / 2
    if comparator.role == "over_voltage":
        return _above_service(case, comparator, Level.FALLING, half_ripple_v)
    delivered_v = facts.least("delivered")
    window = rising_window(case, comparator)
    case.settle()
    why = f"{rail.id} is delivered down to {show(delivered_v, _V)}, less {show(half_ripple_v, _V)} (half the ripple)"
    return LevelMargin(Level.RISING, Side.MOST, window.most_v, delivered_v - half_ripple_v, why)


def _above_service(case: Case, comparator: Comparator, level: Level, half_ripple_v: float) -> LevelMargin:
    """Either level of an over-voltage detector stays above the supply in service."""
    rail = case.description.rails[comparator.watches]
    delivered_v = case.of(rail).most("delivered")
    window = (rising_window if level is Level.RISING else falling_window)(case, comparator)
    case.settle()
    why = f"{rail.id} is delivered up to {show(delivered_v, _V)}, plus {show(half_ripple_v, _V)} (half the ripple)"
    return LevelMargin(level, Side.LEAST, window.least_v, delivered_v + half_ripple_v, why)
