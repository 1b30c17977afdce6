"""How long a detector asserts at least when a dip takes a load out of its range."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import least_supplies
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.reset_path.path_gaps import unsaid_ways
from tidegate.lint.derived.supply.steepest_fall import steepest_fall
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.paths import Reach, drives
from tidegate.lint.physics.domain import product, require_positive


class ShortestAssertion(msgspec.Struct, frozen=True):
    """The shortest time in s for which a detector asserts, and the load whose range such a dip leaves."""

    time_s: float
    detector: str
    load: str
    loose_s: float = 0.0
    """By how much longer it may last, where it is not said which extremes of a level and its hysteresis go together."""


def shortest_assertion(case: Case, detector: Comparator) -> ShortestAssertion | None:
    """A dip just out of the range of the most demanding load, as steep as the rail can fall and rise.

    t = (F - L)/s_down + (R - L)/s_up, with the lowest falling and rising levels F and R, the least supply L of the
    load, and the steepest slopes. None where no load needs the rail, or where the level lies below what it needs.
    Of a level of which it is not known whether it lies below, and of loads of which it is not said whether it guards
    them, it is no time at all at the sure corner, and any at the best one.
    Raises: DomainError: where the rail is said never to move.
    """
    bounds = least_supplies(case, detector)
    gaps = unsaid_ways(case, Reach(detector.id, drives(case.graph)))
    case.reading.block(gaps)
    if gaps and not case.at_best:
        return ShortestAssertion(0.0, detector.id, "a load that it may guard")
    if not bounds:
        return None
    shipped, least_v = as_shipped(case, detector), bounds[0].level_v
    log = case.reading.listen()
    falling, rising = falling_window(case, shipped).end("least"), rising_window(case, shipped).end("least")
    case.reading.unlisten()
    falling_v, rising_v = falling.value, rising.value
    exact = not log and not any(bound.waits for bound in bounds)
    if min(falling_v, rising_v) <= least_v or (not exact and case.at_best):
        return None if exact or case.at_best else ShortestAssertion(0.0, detector.id, bounds[0].element)
    time_s = _down_s(case, detector, falling_v - least_v) + _up_s(case, detector, rising_v - least_v)
    loose_s = _down_s(case, detector, falling.loose) + _up_s(case, detector, rising.loose)
    return ShortestAssertion(time_s, detector.id, bounds[0].element, loose_s)


def _down_s(case: Case, detector: Comparator, by_v: float) -> float:
    """How long the rail takes at the least to fall so far."""
    log = case.reading.listen()
    slope_v_per_s = steepest_fall(case, case.description.rails[detector.watches]).v_per_s
    case.reading.unlisten()
    if not log:
        require_positive(down_v_per_s=slope_v_per_s)
    return by_v / slope_v_per_s if slope_v_per_s else product(by_v, float("inf"))


def _up_s(case: Case, detector: Comparator, by_v: float) -> float:
    """How long the rail takes at the least to rise so far."""
    facts = case.of(case.description.rails[detector.watches])
    nominal_v, rise_s = facts.nominal.typical(), facts.rise.least()
    if facts.nominal.given is not None and facts.nominal.given.typical is not None:
        require_positive(nominal_v=nominal_v)
    return product(by_v / nominal_v, rise_s) if nominal_v > 0.0 else product(by_v, float("inf"))
