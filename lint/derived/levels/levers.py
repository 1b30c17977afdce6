"""What would give the levels of a detector more room, and how much: the placement once more with one fact changed."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, least_supplies
from tidegate.lint.derived.levels.largest_fits import error_changes, one_error, range_changes, widened
from tidegate.lint.derived.levels.level_placement import Ends, LevelPlacement
from tidegate.lint.derived.levels.placing import Changes, Placing
from tidegate.lint.derived.levels.response import slope
from tidegate.lint.derived.levels.trip_causes import cause
from tidegate.lint.derived.levels.trip_levels import rising_window
from tidegate.lint.derived.reset_path.guarding_nets import watching
from tidegate.lint.description.model.detector import Comparator, Hysteresis, Trip
from tidegate.lint.facts.reading import Corner, Reading
from tidegate.lint.facts.view import Number
from tidegate.lint.judgement import Level
from tidegate.lint.quantity import Dimension, Voltage, show

_STEP_V: Final = 0.010
"""By how much a sign-off, a supply or another detector's level is moved, to see what it buys."""

_WORTH_V: Final = 5e-5
"""What buys less is not named."""

_V: Final = Dimension.VOLTAGE


class Lever(msgspec.Struct, frozen=True):
    """One change: what, from which value to which, the fact it changes, and the room it adds, in V."""

    what: str
    change: str
    fact: str
    gain_v: float


class _Tried(msgspec.Struct, frozen=True):
    what: str
    change: str
    fact: str
    changes: Changes
    apart_v: float = 0.0


def levers(placing: Placing, found: LevelPlacement, *, least_hysteresis_v: float | None) -> tuple[Lever, ...]:
    """Every lever that buys room, the best first; what is missing stands at its best.

    ``least_hysteresis_v`` is what the hysteresis must at least be, None where that is not known.
    """
    case = Case(
        subject=placing.detector, rule="", level=Level.NOTE, description=placing.description, graph=placing.graph,
        reading=Reading(Corner.BEST),
    )  # fmt: skip
    tried = [
        *_errors(placing, case),
        *_response(placing, case),
        *_supply(placing, case),
        *_bounds(placing, case),
        *_hysteresis(placing, least_hysteresis_v),
    ]
    solved = [Lever(each.what, each.change, each.fact, _gain_v(placing, found.best, each)) for each in tried]
    return tuple(sorted((lever for lever in solved if lever.gain_v >= _WORTH_V), key=lambda lever: -lever.gain_v))


def _gain_v(placing: Placing, now: Ends, tried: _Tried) -> float:
    """By how much either end moves out, in V."""
    then = placing.interval_v(Corner.BEST, apart_v=tried.apart_v, changes=tried.changes)
    gains = (now.least_v - then[0], then[1] - now.most_v)
    return sum(gain_v for gain_v in gains if math.isfinite(gain_v))


def _halved(value: float) -> float:
    return value / 2


def _errors(placing: Placing, case: Case) -> Iterator[_Tried]:
    detector = placing.detector
    base = f"comparators.{detector.id}"
    for name in detector.errors:
        yield _Tried(
            f"{name} error halved", _halved_error(case, placing, name), f"{base}.errors.{name}",
            one_error(placing, name, 0.5),
        )  # fmt: skip
    if len(detector.errors) > 1:
        yield _Tried("all errors halved, as by trim", "", f"{base}.errors", dict(error_changes(placing, 0.5)))
    ranges = range_changes(placing, 0.5)
    if ranges:
        trip = detector.trip or Trip()
        widest_v = max(_half_v(span) for span in (trip.falling, trip.rising) if span is not None)
        yield _Tried("range of the levels halved", _half_widths(widest_v), f"{base}.trip", ranges)
    amount = detector.hysteresis.amount if isinstance(detector.hysteresis, Hysteresis) else None
    narrower = widened(amount, 0.5)
    if amount is not None and narrower is not None:
        change, fact = _half_widths(_half_v(amount)), placing.amount
        yield _Tried("tolerance of the hysteresis halved", change, fact, {fact: narrower})


def _half_v(span: Voltage) -> float:
    return 0.0 if span.least is None or span.most is None else (span.most - span.least) / 2


def _half_widths(half_v: float) -> str:
    return f"+-{show(half_v, _V)} to +-{show(half_v / 2, _V)}"


def _halved_error(case: Case, placing: Placing, name: str) -> str:
    found = case.if_known(lambda: cause(case, placing.detector, name))
    if found is None:
        return ""
    parts = [(found.share, Dimension.RATIO), (found.amount_v, _V)]
    sizes = ", ".join(f"{show(size, unit)} to {show(size / 2, unit)}" for size, unit in parts if size)
    return f"{sizes} at the rail"


def _response(placing: Placing, case: Case) -> Iterator[_Tried]:
    own = case.of(placing.detector)
    if placing.detector.role != "power_on":
        for what, fact in (("delay", own.delay), ("filter", own.filter), ("sampling period", own.sampling)):
            yield from _halves(case, f"{what} halved", fact, Dimension.DURATION)
        over = placing.detector.role == "over_voltage"
        what = "slower overshoot" if over else "slower collapse, by hold-up"
        yield from _halves(case, what, slope(case, placing.detector), Dimension.SLOPE)


def _halves(case: Case, what: str, fact: Number, dimension: Dimension) -> Iterator[_Tried]:
    """A fact halved, where it is known."""
    now = case.if_known(fact.most)
    if now is not None:
        change = f"{show(now, dimension)} to {show(now / 2, dimension)}"
        yield _Tried(what, change, fact.path, {fact.path: _halved})


def _supply(placing: Placing, case: Case) -> Iterator[_Tried]:
    detector = placing.detector
    over = detector.role == "over_voltage"
    rail = case.of(case.description.rails[detector.watches])
    now_v = case.if_known(rail.delivered.most if over else rail.delivered.least)
    if now_v is not None:
        nominal_v = None if rail.nominal.given is None else rail.nominal.given.middle
        inwards_v = -_STEP_V if over else _STEP_V
        what, then_v = f"source {show(_STEP_V, _V)} tighter", now_v + inwards_v
        if nominal_v is not None:
            what, then_v = "tolerance of the source halved", (now_v + nominal_v) / 2
        change = f"{show(now_v, _V)} to {show(then_v, _V)}"
        path, by_v = rail.delivered.path, then_v - now_v
        yield _Tried(what, change, path, {path: lambda value: value + by_v})
    yield from _halves(case, "ripple halved, by decoupling", rail.ripple.peak_to_peak, _V)
    yield from _halves(case, "source impedance halved", rail.source_impedance, Dimension.RESISTANCE)


def _bounds(placing: Placing, case: Case) -> Iterator[_Tried]:
    detector = placing.detector
    over, power_on = detector.role == "over_voltage", detector.role == "power_on"
    ask = follower_supplies if power_on else greatest_supplies if over else least_supplies
    bounds = case.if_known(partial(ask, case, detector)) or _signed_off(placing, case)
    if bounds:
        first = bounds[0]
        wider_v = first.level_v + (_STEP_V if over else -_STEP_V)
        moved = [bound for bound in bounds if (bound.level_v < wider_v if over else bound.level_v > wider_v)]
        names = ", ".join(dict.fromkeys(bound.element for bound in moved))
        step = show(_STEP_V, _V)
        what = f"{names} working from {step} less" if power_on else f"{names} signed off {step} wider"
        change = f"{show(first.level_v, _V)} to {show(wider_v, _V)}"
        yield _Tried(what, change, first.fact, {bound.fact: _by(wider_v - bound.level_v) for bound in moved})
    if power_on:
        yield from _under_voltage(placing, case)


def _by(more: float) -> Callable[[float], float]:
    return lambda value: value + more


def _signed_off(placing: Placing, case: Case) -> Sequence[Bound]:
    """The range that its rail is signed off for, where nothing leans on a detector."""
    rail = case.description.rails[placing.detector.watches]
    guaranteed = case.of(rail).guaranteed
    level_v = case.if_known(guaranteed.most if placing.detector.role == "over_voltage" else guaranteed.least)
    return () if level_v is None else (Bound(level_v, rail.id, guaranteed.path, ()),)


def _under_voltage(placing: Placing, case: Case) -> Iterator[_Tried]:
    """The under-voltage detector that lets go first, placed higher."""
    others = watching(case.graph, placing.detector.watches, ("under_voltage",))
    levels = [(case.if_known(partial(_lets_go_from_v, case, other)), other) for other in others]
    known = [(level_v, other) for level_v, other in levels if level_v is not None]
    if known:
        level_v, other = min(known, key=lambda each: each[0])
        moved = Placing(placing.description, placing.graph, other)
        change = f"{show(level_v, _V)} to {show(level_v + _STEP_V, _V)} at least"
        changes = {moved.falling: _by(_STEP_V), moved.rising: _by(_STEP_V)}
        yield _Tried(f"{other.id} placed higher", change, moved.rising, changes)


def _lets_go_from_v(case: Case, other: Comparator) -> float:
    return rising_window(case, other).least_v


def _hysteresis(placing: Placing, least_v: float | None) -> Iterator[_Tried]:
    now_v = placing.stated.hysteresis_v
    if least_v is not None and now_v is not None and 0.0 <= least_v < now_v:
        change = f"{show(now_v, _V)} to {show(least_v, _V)}"
        fact = f"comparators.{placing.detector.id}.hysteresis"
        yield _Tried("hysteresis no larger than needed", change, fact, {}, least_v - now_v)
