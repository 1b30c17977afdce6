"""What the description says about where the levels of a detector may lie, and the limits that follow."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, least_supplies
from tidegate.lint.derived.levels.level_spread import LevelSpread, LevelSpreads, level_spreads
from tidegate.lint.derived.levels.response import Response, response
from tidegate.lint.derived.levels.trip_levels import rising_window
from tidegate.lint.derived.reset_path.guarding_nets import watching
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.physics import placement
from tidegate.lint.physics.placement import Level, LevelError, Limit, Side
from tidegate.lint.physics.trip_window import Combination

PLACED_ROLES: Final = ("power_on", "under_voltage", "over_voltage")
"""Roles of the detectors whose levels can be placed."""

NOT_PLACED: Final = "watches whether a reference is ready, not the range of a supply"
"""Why the levels of any other detector cannot."""

_NO_ERROR: Final = LevelError(0.0, share=0.0, method=Combination.WORST_CASE)


class PlacementFacts(msgspec.Struct, frozen=True):
    """All that limits the levels of one detector, as numbers; what moves one of them moves the placement.

    ``bounds`` and ``under_voltage`` stand with the most demanding first.
    """

    role: str
    levels: LevelSpreads
    bounds: tuple[Bound, ...]
    """What the guarantee is given to: loads, for a power-on detector what must work once it lets go."""
    response: Response | None
    """None for a power-on detector, whose guarantee allows for no move of the rail."""
    delivered: Bound
    """The end of the range delivered that the detector must not reach."""
    nominal_v: float | None
    ripple_v: float
    load_step_a: float
    source_ohm: float
    under_voltage: tuple[Bound, ...]
    """Lowest rising levels of the under-voltage detectors of the same rail, which release after a power-on detector."""


def placement_facts(case: Case, comparator: Comparator) -> PlacementFacts:
    """Gather what limits the levels of a detector, at the code it ships with where its levels are chosen by code.

    Raises: MissingFactsError: with all that is missing.
    """
    shipped = as_shipped(case, comparator)
    rail = case.description.rails[comparator.watches]
    over, power_on = comparator.role == "over_voltage", comparator.role == "power_on"
    facts = case.of(rail)
    delivered_v = facts.most("delivered") if over else facts.least("delivered")
    ripple_v = facts.most("ripple.peak_to_peak")
    load_step_a = 0.0 if over else facts.most("load_step")
    source_ohm = 0.0 if over else facts.most("source_impedance")
    levels, bounds, answer, under_voltage = case.gather(
        lambda: level_spreads(case, shipped),
        lambda: _bounds(case, comparator, rail),
        lambda: None if power_on else response(case, comparator),
        lambda: _under_voltage(case, rail) if power_on else (),
    )
    return PlacementFacts(
        role=comparator.role,
        levels=levels,
        bounds=bounds,
        response=answer,
        delivered=Bound(delivered_v, rail.id, facts.path("delivered"), ()),
        nominal_v=None if rail.nominal is None else rail.nominal.middle,
        ripple_v=ripple_v,
        load_step_a=load_step_a,
        source_ohm=source_ohm,
        under_voltage=under_voltage,
    )


def limits(facts: PlacementFacts) -> tuple[Limit, ...]:
    """The limits on the levels themselves, no error taken off."""
    guarantee_v, delivered_v = facts.bounds[0].level_v, facts.delivered.level_v
    if facts.role == "over_voltage":
        assert facts.response is not None
        return placement.over_voltage_limits(
            falling_error=_NO_ERROR,
            rising_error=_NO_ERROR,
            load_most_v=guarantee_v,
            rise_v=facts.response.moved_v,
            delivered_most_v=delivered_v,
            ripple_v=facts.ripple_v,
        )
    # The lowest supply at which the chip must start is the lowest that is delivered.
    return _below_service(facts)(
        falling_error=_NO_ERROR,
        rising_error=_NO_ERROR,
        delivered_least_v=delivered_v,
        start_least_v=delivered_v,
        ripple_v=facts.ripple_v,
        load_step_v=facts.load_step_a * facts.source_ohm,
    )


def _below_service(facts: PlacementFacts) -> Callable[..., tuple[Limit, ...]]:
    """The limits of a detector whose levels lie below the supply in service, its guarantee filled in."""
    guarantee_v = facts.bounds[0].level_v
    if facts.role == "power_on":
        first_v = facts.under_voltage[0].level_v if facts.under_voltage else None
        return partial(placement.power_on_limits, working_least_v=guarantee_v, under_voltage_rising_least_v=first_v)
    assert facts.response is not None
    return partial(placement.under_voltage_limits, load_least_v=guarantee_v, droop_v=facts.response.moved_v)


def nominal_limits(facts: PlacementFacts) -> tuple[Limit, ...]:
    """The limits on the nominal levels, the error of each taken off."""
    return tuple(
        Limit(limit.by, limit.level, limit.side, _nominal_v(limit, spread_of(facts, limit.level)))
        for limit in limits(facts)
    )


def spread_of(facts: PlacementFacts, level: Level) -> LevelSpread:
    """The spread of one of the two levels."""
    return facts.levels.rising if level is Level.RISING else facts.levels.falling


def _nominal_v(limit: Limit, spread: LevelSpread) -> float:
    if limit.side is Side.LEAST:
        return spread.lowest_nominal_v(limit.nominal_v)
    return spread.highest_nominal_v(limit.nominal_v)


def _bounds(case: Case, comparator: Comparator, rail: Rail) -> tuple[Bound, ...]:
    """What the guarantee is given to; the rail's own range where the detector guards nothing that needs the rail."""
    facts = case.of(rail)
    if comparator.role == "power_on":
        found = follower_supplies(case, comparator)
    elif comparator.role == "under_voltage":
        found = least_supplies(case, comparator)
    else:
        found = greatest_supplies(case, comparator)
    if not found:
        over = comparator.role == "over_voltage"
        level_v = facts.most("guaranteed") if over else facts.least("guaranteed")
        found = [Bound(level_v, rail.id, facts.path("guaranteed"), ())]
    case.settle()
    return tuple(found)


def _under_voltage(case: Case, rail: Rail) -> tuple[Bound, ...]:
    found = []
    for other in watching(case.graph, rail.id, ("under_voltage",)):
        level_v = rising_window(case, as_shipped(case, other)).least_v
        found.append(Bound(level_v, other.id, case.of(other).path("trip.rising"), ()))
    return tuple(sorted(found, key=lambda bound: bound.level_v))
