"""How long a detector asserts at least when a dip takes a load out of its range."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import least_supplies
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.domain import require_positive
from tidegate.lint.physics.ramp import ramp_slope_v_per_s


class ShortestAssertion(msgspec.Struct, frozen=True):
    """The shortest time in s for which a detector asserts, and the load whose range such a dip leaves."""

    time_s: float
    detector: str
    load: str


def shortest_assertion(case: Case, detector: Comparator) -> ShortestAssertion | None:
    """A dip just out of the range of the most demanding load, as steep as the rail can fall and rise.

    t = (F - L)/s_down + (R - L)/s_up, with the lowest falling and rising levels F and R, the least supply L of the
    load, and the steepest slopes. None where no load needs the rail, or where the level lies below what it needs.
    Raises:
        MissingFactsError: where a fact is missing.
        DomainError: where the rail is said never to move.
    """
    bounds = least_supplies(case, detector)
    if not bounds:
        return None
    shipped = as_shipped(case, detector)
    falling, rising, down_v_per_s, up_v_per_s = case.gather(
        lambda: falling_window(case, shipped),
        lambda: rising_window(case, shipped),
        lambda: _steepest_fall_v_per_s(case, detector),
        lambda: _steepest_rise_v_per_s(case, detector),
    )
    least_v = bounds[0].level_v
    if falling.least_v <= least_v or rising.least_v <= least_v:
        return None
    require_positive(down_v_per_s=down_v_per_s, up_v_per_s=up_v_per_s)
    time_s = (falling.least_v - least_v) / down_v_per_s + (rising.least_v - least_v) / up_v_per_s
    return ShortestAssertion(time_s, detector.id, bounds[0].element)


def _steepest_fall_v_per_s(case: Case, detector: Comparator) -> float:
    rail = case.description.rails[detector.watches]
    facts, slopes = case.of(rail), []
    if rail.collapse is not None:
        slopes.append(facts.most("collapse"))
    if rail.fall is not None or not slopes:
        nominal_v, fall_s = facts.most("nominal"), facts.least("fall")
        case.settle()
        slopes.append(ramp_slope_v_per_s(rise_v=nominal_v, rise_s=fall_s))
    case.settle()
    return max(slopes)


def _steepest_rise_v_per_s(case: Case, detector: Comparator) -> float:
    facts = case.of(case.description.rails[detector.watches])
    nominal_v, rise_s = facts.most("nominal"), facts.least("rise")
    case.settle()
    return ramp_slope_v_per_s(rise_v=nominal_v, rise_s=rise_s)
