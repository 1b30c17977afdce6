"""Where the levels of a detector may lie, what limits each end, and how the levels of today keep their limits."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.derived.levels.placement_facts import PlacementFacts, limits, nominal_limits, spread_of
from tidegate.lint.physics.placement import (
    Level,
    Limit,
    Placement,
    Requirement,
    Side,
    largest_hysteresis_v,
    placement,
)
from tidegate.lint.physics.trip_window import Window

_MOST_STEPS: Final = 60


class LevelPlacement(msgspec.Struct, frozen=True):
    """The answer for one detector.

    Symbols:
        falling                  interval of the nominal falling level; the rising one lies the hysteresis above
        below, above             the limits that set its ends, as limits on the level itself
        largest_hysteresis_v  V  largest nominal hysteresis that leaves a place for the levels
        margins_v             V  of the levels of today, by requirement; empty where the levels are not given
    """

    facts: PlacementFacts
    falling: Placement
    below: Limit
    above: Limit
    largest_hysteresis_v: float
    margins_v: Mapping[Requirement, float]

    @property
    def room_v(self) -> float:
        """How far the levels can be moved, in V; below 0 by what is short."""
        return self.falling.most_v - self.falling.least_v

    @property
    def middle_v(self) -> float:
        """The falling level that leaves the same room to either side, in V."""
        return (self.falling.most_v + self.falling.least_v) / 2


def place_levels(facts: PlacementFacts) -> LevelPlacement:
    """Solve the limits for the levels."""
    hysteresis_v = facts.levels.hysteresis_v
    raw, nominal = limits(facts), nominal_limits(facts)
    found = placement(nominal, hysteresis_v=hysteresis_v)
    return LevelPlacement(
        facts=facts,
        falling=found,
        below=_setting(raw, nominal, Side.LEAST, found.least_v, hysteresis_v),
        above=_setting(raw, nominal, Side.MOST, found.most_v, hysteresis_v),
        largest_hysteresis_v=_largest_hysteresis_v(facts),
        margins_v=_margins_today_v(facts),
    )


def _setting(
    raw: tuple[Limit, ...], nominal: tuple[Limit, ...], side: Side, end_v: float, hysteresis_v: float
) -> Limit:
    """The limit behind an end, before the error was taken off."""
    ends_v = (limit.nominal_v - (hysteresis_v if limit.level is Level.RISING else 0.0) for limit in nominal)
    return next(limit for limit, at_v in zip(raw, ends_v, strict=True) if limit.side is side and at_v == end_v)


def _largest_hysteresis_v(facts: PlacementFacts) -> float:
    """By steps: where one level is stated as the other and the hysteresis, its limits depend on it a little."""
    hysteresis_v = largest_hysteresis_v(nominal_limits(facts))
    for _ in range(_MOST_STEPS):
        before_v = hysteresis_v
        hysteresis_v = largest_hysteresis_v(nominal_limits(with_hysteresis(facts, hysteresis_v)))
        if abs(hysteresis_v - before_v) <= 1e-12:
            break
    return hysteresis_v


def with_hysteresis(facts: PlacementFacts, hysteresis_v: float) -> PlacementFacts:
    """The same detector with another nominal hysteresis."""
    levels = facts.levels
    more_v = hysteresis_v - levels.hysteresis_v
    falling, rising = levels.falling, levels.rising
    if falling.above_base_v:
        falling = replace(falling, above_base_v=falling.above_base_v - more_v)
    if rising.above_base_v:
        rising = replace(rising, above_base_v=rising.above_base_v + more_v)
    return replace(facts, levels=replace(levels, hysteresis_v=hysteresis_v, falling=falling, rising=rising))


def windows_at(facts: PlacementFacts, falling_v: float, rising_v: float) -> Mapping[Level, Window]:
    """Where the levels lie, in V, with their nominals placed."""
    found = {}
    for level, nominal_v in ((Level.FALLING, falling_v), (Level.RISING, rising_v)):
        error_v = spread_of(facts, level).at_v(nominal_v)
        found[level] = Window(nominal_v - error_v, nominal_v + error_v)
    return found


def margins_v(facts: PlacementFacts, windows: Mapping[Level, Window]) -> Mapping[Requirement, float]:
    """How far the levels keep each requirement, in V; below 0 they do not."""
    found: dict[Requirement, float] = {}
    for limit in limits(facts):
        window = windows[limit.level]
        margin_v = window.least_v - limit.nominal_v if limit.side is Side.LEAST else limit.nominal_v - window.most_v
        found[limit.by] = min(margin_v, found.get(limit.by, math.inf))
    return found


def _margins_today_v(facts: PlacementFacts) -> Mapping[Requirement, float]:
    levels = facts.levels
    if levels.falling_v is None or levels.rising_v is None:
        return {}
    return margins_v(facts, windows_at(facts, levels.falling_v, levels.rising_v))
