"""What would give the levels of a detector more room, and how much: the placement once more with one thing changed."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.derived.levels.level_placement import LevelPlacement, place_levels, with_hysteresis
from tidegate.lint.derived.levels.level_spread import LevelSpread
from tidegate.lint.derived.levels.placement_facts import PlacementFacts
from tidegate.lint.quantity import Dimension, show

_STEP_V: Final = 0.010
"""By how much a sign-off or another detector's level is moved, to see what it buys."""

_WORTH_V: Final = 5e-5
"""What buys less is not named."""

_V: Final = Dimension.VOLTAGE
_S: Final = Dimension.DURATION


class Lever(msgspec.Struct, frozen=True):
    """One change: what, from which value to which, the fact it changes, and the room it adds, in V."""

    what: str
    change: str
    fact: str
    gain_v: float


def levers(found: LevelPlacement, *, detector: str, rail: str, least_hysteresis_v: float | None) -> list[Lever]:
    """Every lever that buys room, the best first.

    ``least_hysteresis_v`` is what the hysteresis must at least be, None where that is not known.
    """
    base = f"comparators.{detector}"
    tried = [
        *_errors(found.facts, base),
        *_response(found.facts, base, f"rails.{rail}"),
        *_supply(found.facts, f"rails.{rail}"),
        *_bounds(found.facts),
        *_hysteresis(found.facts, base, least_hysteresis_v),
    ]
    solved = [
        Lever(what, change, fact, place_levels(facts).room_v - found.room_v) for what, change, fact, facts in tried
    ]
    return sorted((lever for lever in solved if lever.gain_v >= _WORTH_V), key=lambda lever: -lever.gain_v)


_Tried = tuple[str, str, str, PlacementFacts]


def _errors(facts: PlacementFacts, base: str) -> Iterator[_Tried]:
    names = list(dict.fromkeys(e.at_zero.name for s in _spreads(facts) for e in s.errors))
    for name in names:
        yield f"{name} error halved", _halved_error(facts, name), f"{base}.errors.{name}", _scaled(facts, {name})
    if len(names) > 1:
        yield "all errors halved, as by trim", "", f"{base}.errors", _scaled(facts, set(names))
    if any(spread.half_v for spread in _spreads(facts)):
        levels = facts.levels
        narrower = replace(
            levels,
            falling=replace(levels.falling, half_v=levels.falling.half_v / 2),
            rising=replace(levels.rising, half_v=levels.rising.half_v / 2),
        )
        widest_v = max(spread.half_v for spread in _spreads(facts))
        change = f"+-{show(widest_v, _V)} to +-{show(widest_v / 2, _V)}"
        fact = f"{base}.trip" if levels.ranged else f"{base}.hysteresis.amount"
        what = "range of the levels halved" if levels.ranged else "tolerance of the hysteresis halved"
        yield what, change, fact, replace(facts, levels=narrower)


def _spreads(facts: PlacementFacts) -> tuple[LevelSpread, LevelSpread]:
    return facts.levels.falling, facts.levels.rising


def _halved_error(facts: PlacementFacts, name: str) -> str:
    error = next(e for s in _spreads(facts) for e in s.errors if e.at_zero.name == name)
    parts = []
    if error.share:
        parts.append((error.share, Dimension.RATIO))
    if error.at_zero.at_rail_v:
        parts.append((error.at_zero.at_rail_v, _V))
    sizes = ", ".join(f"{show(size, unit)} to {show(size / 2, unit)}" for size, unit in parts)
    return f"{sizes} at the rail"


def _scaled(facts: PlacementFacts, names: set[str]) -> PlacementFacts:
    def narrower(spread: LevelSpread) -> LevelSpread:
        errors = tuple(e.scaled(0.5) if e.at_zero.name in names else e for e in spread.errors)
        return replace(spread, errors=errors)

    levels = facts.levels
    return replace(facts, levels=replace(levels, falling=narrower(levels.falling), rising=narrower(levels.rising)))


def _response(facts: PlacementFacts, base: str, rail: str) -> Iterator[_Tried]:
    now = facts.response
    if now is None:
        return
    for what, fact, size_s, faster in (
        ("delay", "delay", now.delay_s, replace(now, delay_s=now.delay_s / 2)),
        ("filter", "filter", now.filter_s, replace(now, filter_s=now.filter_s / 2)),
        ("sampling period", "sampling", now.sampling_s, replace(now, sampling_s=now.sampling_s / 2)),
    ):
        change = f"{show(size_s, _S)} to {show(size_s / 2, _S)}"
        yield f"{what} halved", change, f"{base}.{fact}", replace(facts, response=faster)
    slower = replace(now, slew_v_per_s=now.slew_v_per_s / 2)
    change = f"{show(now.slew_v_per_s, Dimension.SLOPE)} to {show(slower.slew_v_per_s, Dimension.SLOPE)}"
    over = facts.role == "over_voltage"
    what, fact = ("slower overshoot", "overshoot") if over else ("slower collapse, by hold-up", "collapse")
    yield what, change, f"{rail}.{fact}", replace(facts, response=slower)


def _supply(facts: PlacementFacts, rail: str) -> Iterator[_Tried]:
    if facts.nominal_v is not None:
        now_v = facts.delivered.level_v
        tighter = replace(facts.delivered, level_v=(now_v + facts.nominal_v) / 2)
        change = f"{show(now_v, _V)} to {show(tighter.level_v, _V)}"
        yield "tolerance of the source halved", change, f"{rail}.delivered", replace(facts, delivered=tighter)
    change = f"{show(facts.ripple_v, _V)} to {show(facts.ripple_v / 2, _V)}"
    calmer = replace(facts, ripple_v=facts.ripple_v / 2)
    yield "ripple halved, by decoupling", change, f"{rail}.ripple.peak_to_peak", calmer
    stiffer = replace(facts, source_ohm=facts.source_ohm / 2)
    unit = Dimension.RESISTANCE
    change = f"{show(facts.source_ohm, unit)} to {show(stiffer.source_ohm, unit)}"
    yield "source impedance halved", change, f"{rail}.source_impedance", stiffer


def _bounds(facts: PlacementFacts) -> Iterator[_Tried]:
    first, over = facts.bounds[0], facts.role == "over_voltage"
    wider_v = first.level_v + (_STEP_V if over else -_STEP_V)
    moved = [bound for bound in facts.bounds if (bound.level_v < wider_v if over else bound.level_v > wider_v)]
    ends = [replace(bound, level_v=wider_v) if bound in moved else bound for bound in facts.bounds]
    names = ", ".join(dict.fromkeys(bound.element for bound in moved))
    change = f"{show(first.level_v, _V)} to {show(wider_v, _V)}"
    step = show(_STEP_V, _V)
    what = f"{names} working from {step} less" if facts.role == "power_on" else f"{names} signed off {step} wider"
    yield what, change, first.fact, replace(facts, bounds=tuple(ends))
    if facts.under_voltage:
        after = facts.under_voltage[0]
        higher = replace(after, level_v=after.level_v + _STEP_V)
        others = tuple(sorted((higher, *facts.under_voltage[1:]), key=lambda bound: bound.level_v))
        change = f"{show(after.level_v, _V)} to {show(higher.level_v, _V)} at least"
        yield f"{after.element} placed higher", change, after.fact, replace(facts, under_voltage=others)


def _hysteresis(facts: PlacementFacts, base: str, least_v: float | None) -> Iterator[_Tried]:
    now_v = facts.levels.hysteresis_v
    if least_v is not None and 0.0 <= least_v < now_v:
        change = f"{show(now_v, _V)} to {show(least_v, _V)}"
        yield "hysteresis no larger than needed", change, f"{base}.hysteresis", with_hysteresis(facts, least_v)
