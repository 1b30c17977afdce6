"""Trip windows: each level protects what it must, is quiet in service and lets go again, at every code."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from typing import Any, Final, TypeVar

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, least_supplies
from tidegate.lint.derived.levels.level_room import level_room, tracks_its_bound
from tidegate.lint.derived.levels.placed_roles import NOT_PLACED, PLACED_ROLES
from tidegate.lint.derived.levels.requirements import (
    Requirement,
    comes_back,
    guard_gaps,
    protects,
    protects_down_to_v,
    protects_nothing,
    quiet,
)
from tidegate.lint.derived.levels.response import moved_v, slope
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import TripLevel, falling_window, rising_window
from tidegate.lint.derived.other_corner import read_at
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, MissingFactsError
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hysteresis, trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.rules import trip_codes, trip_crossover, trip_order

_A = TypeVar("_A")
_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: the levels of a supply detector, their errors taken off, keep "
_LEVELS: Final = (
    "comparators.*.trip (or codes and ships_with), with errors or ranges", "conditions.combine", "conditions.coverage",
)  # fmt: skip
_RESPONSE: Final = ("comparators.*.delay, filter, sampling", "rails.*.collapse, or overshoot")


def _not_placed(comparator: Comparator, case: Case) -> Judgement | None:
    if comparator.role in PLACED_ROLES:
        return None
    return case.not_applicable(NOT_PLACED)


def _nothing_leans(comparator: Comparator, case: Case) -> Judgement:
    rail = comparator.watches
    if comparator.role == "power_on":
        return case.not_applicable(f"nothing on {rail} waits for it that no under-voltage detector looks after")
    return case.not_applicable(f"guards no load that needs {rail}")


def _loads_of(comparator: Any, description: Description) -> Iterator[str]:
    """The loads that need the rail of a detector."""
    for load in description.loads.values():
        if any(need.rail == comparator.watches for need in load.needs):
            yield load.id


def _its_rail(comparator: Any, _: Description) -> tuple[str, ...]:
    """The rail that a detector watches."""
    return (comparator.watches,)


_UNWORKABLE: Final = Yield("description/loads", _loads_of)


def _at(comparator: Comparator, level: str) -> str:
    return f"trip.{level}" if comparator.trip is not None else f"codes.{comparator.ships_with}.{level}"


def _judged(comparator: Comparator, case: Case, found: Requirement, mend: str) -> Judgement:
    """Compare the end of a level with its limit."""
    answer = case.at_least if found.end == "least" else case.at_most
    return answer(
        need=found.need, have=found.have, dimension=_V, says=found.says, why=found.why, mend=mend,
        at=_at(comparator, found.which), path=found.path,
    )  # fmt: skip


def _move(case: Case, comparator: Comparator, found: Requirement) -> str:
    """By how much the levels, or their error, must change."""
    by = show_up(-found.margin_v, _V)
    if not found.is_kept:
        room = case.if_known(lambda: level_room(case, comparator))
        if room is not None and room.room.value > 0.0 and not room.spread_fits:
            return f"an error {by} smaller; to move the levels will not do"
    return f"levels {by} further {'up' if found.end == 'least' else 'down'}, or an error that much smaller"


@rule(
    "trip_window/guarantee",
    title="what the detector guards is in reset before the supply leaves its range",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Under-voltage: F_lo - s t >= the least supply of the most demanding load that the detector guards and that "
    "needs the rail. Over-voltage: R_hi + s t <= the greatest supply of the most demanding load. Power-on: F_lo and "
    "R_lo >= the least supply of all that must work once it lets go: the detectors that judge the same reset nets "
    "after it with their references and bias, and loads for which no under-voltage detector stands. F and R are the "
    "falling and the rising level at the end that is worst, s is the steepest collapse or overshoot of the rail and t "
    "the longest delay plus filter plus sampling period. A load that does not say from or up to which supply it works "
    "leaves this open. Levels that were placed the wrong way round are left to trip_window/placement_sense, "
    "a detector that a mode samples too seldom to modes/sampling, and what a power-on detector lets go of before an "
    "under-voltage detector decides to hand_over/no_hole.",
    facts=(*_LEVELS, *_RESPONSE, "loads.*.needs.*.works", "works_from of what follows a power-on detector"),
    mend="levels further in, a smaller error, or a faster answer",
    sources=(_COMMON_PRACTICE + "what they guard inside its working range until the detector has answered",),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.652 V, falling: 1.602 V}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V, falling: 1.627 V}}}",
    ),
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
    yields=("trip_window/placement_sense", "modes/sampling", Yield("hand_over/no_hole", _its_rail), _UNWORKABLE),
)  # fmt: skip
def guarded_before_out_of_range(comparator: Comparator, case: Case) -> Judgement:
    """Compare the protecting level with the most demanding load, or follower, and the move of the rail."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    if protects_nothing(case, comparator):
        return _nothing_leans(comparator, case)
    found = protects(case, as_shipped(case, comparator))
    assert found is not None and found.bound is not None
    if not found.is_kept and tracks_its_bound(case, comparator, found):
        best = read_at(case, Corner.BEST, lambda: protects(case, as_shipped(case, comparator)))
        if best is None or not best.is_kept:
            return case.not_applicable(
                f"extreme against extreme {_below(best or found)}; both move with temperature, and "
                "trip_window/crossover_tracks compares them at the same one"
            )
    if math.isinf(found.bound.level_v):
        found = msgspec.structs.replace(found, why=_capability(comparator, case))
    return _judged(comparator, case, found, f"{_move(case, comparator, found)}{_faster(comparator, case, found)}")


def _capability(comparator: Comparator, case: Case) -> str:
    """What the detector protects whatever it guards, where it is not known what that needs."""
    level_v = protects_down_to_v(case, as_shipped(case, comparator))
    if math.isinf(level_v):
        return ""
    return f"protects what works {'up' if comparator.role == 'over_voltage' else 'down'} to {show(level_v, _V)}"


def _below(found: Requirement) -> str:
    assert found.bound is not None
    return f"its {found.which} level can lie {show(-found.margin_v, _V)} below what {found.bound.element} works from"


def _faster(comparator: Comparator, case: Case, found: Requirement) -> str:
    """The response that would do, where one would."""
    slew_v_per_s = case.if_known(slope(case, comparator).most)
    left_v = found.margin_v + (case.if_known(lambda: moved_v(case, comparator)) or 0.0)
    if comparator.role == "power_on" or not slew_v_per_s or not 0.0 < left_v < math.inf:
        return ""
    return f"; or an answer within {show_down(left_v / slew_v_per_s, Dimension.DURATION)}"


@rule(
    "trip_window/nuisance",
    title="the detector stays quiet in service",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Under-voltage and power-on: F_hi <= lowest supply delivered - ripple/2 - load step times source impedance. "
    "Over-voltage: R_lo >= highest supply delivered + ripple/2. F and R are the falling and the rising level at the "
    "end that is worst.",
    facts=(
        *_LEVELS, "rails.*.delivered", "rails.*.ripple.peak_to_peak", "rails.*.load_step", "rails.*.source_impedance",
    ),
    mend="levels further out, a smaller error, or a supply that stays in a smaller range",
    sources=(_COMMON_PRACTICE + "clear of the supply in service",),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.736 V, falling: 1.686 V}, "
        "divider: {ratio: 0.351, top: 3.88 Mohm, bottom: 2.1 Mohm}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V, falling: 1.627 V}, "
        "divider: {ratio: 0.367, top: 3.8 Mohm, bottom: 2.2 Mohm}}}",
    ),
    formulas=(
        *LEVEL_FORMULAS, trip_window.response_time_s,
        trip_window.droop_during_response_v, hysteresis.release_droop_v,
    ),
)  # fmt: skip
def quiet_in_service(comparator: Comparator, case: Case) -> Judgement:
    """Compare the asserting level with the supply in service."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    shipped = as_shipped(case, comparator)
    found = quiet(case, shipped)
    returns = case.if_known(lambda: comes_back(case, shipped))
    furthest = found if returns is None else min(found, returns, key=lambda level: level.margin_v)
    also = "" if furthest is found else " (so that it lets go in service too)"
    return _judged(comparator, case, found, f"{_move(case, comparator, furthest)}{also}")


@rule(
    "trip_window/release",
    title="the detector lets go at the end of the supply's range",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Under-voltage and power-on: R_hi <= lowest supply delivered - ripple/2, so that the chip starts on the "
    "lowest supply it may get. Over-voltage: F_lo >= highest supply delivered + ripple/2, so that a report ends once "
    "the supply is back in service. R and F are the rising and the falling level at the end that is worst. Where no "
    "place of the levels would keep this and trip_window/guarantee, trip_window/spread or hysteresis/fits_window says "
    "so instead; where the detector trips in service already, trip_window/nuisance does.",
    facts=(*_LEVELS, "rails.*.delivered", "rails.*.ripple.peak_to_peak"),
    mend="levels further out, less hysteresis, or a smaller error",
    sources=(_COMMON_PRACTICE + "a way back into service",),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.696 V, falling: 1.646 V}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V, falling: 1.627 V}}}",
    ),
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
    yields=("trip_window/nuisance", "trip_window/spread", "hysteresis/fits_window"),
)  # fmt: skip
def lets_go_in_range(comparator: Comparator, case: Case) -> Judgement:
    """Compare the releasing level with the end of the range delivered."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    found = comes_back(case, as_shipped(case, comparator))
    return _judged(comparator, case, found, f"{_move(case, comparator, found)}, or less hysteresis")


@rule(
    "trip_window/placement_sense",
    title="the level that asserts, not the one that lets go, is placed against what is guarded",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Not both: F_hi below the least supply of the most demanding load, and R_hi at or above it. Levels placed "
    "so that the detector surely has let go above the load's least supply leave it silent below, down to F_lo less the "
    "move of the rail until the answer. Over-voltage is the mirror image: not R_lo above the load's greatest supply "
    "with F_lo at or below it.",
    facts=(*_LEVELS, *_RESPONSE, "loads.*.needs.*.works"),
    mend="move both levels by what the asserting level is short of",
    sources=(
        "common practice, no source: signed off from 1.60 V, error 10 mV, hysteresis 50 mV; placed by its release the "
        "detector may stay silent down to 1.53 V",
    ),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.61 V, falling: 1.56 V}, "
        "divider: {ratio: 0.378, top: 3.73 Mohm, bottom: 2.27 Mohm}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V, falling: 1.627 V}, "
        "divider: {ratio: 0.367, top: 3.8 Mohm, bottom: 2.2 Mohm}}}",
    ),
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
)
def asserted_level_is_placed(comparator: Comparator, case: Case) -> Judgement:
    """Fail if what is guarded lies between the two levels, on the side of the releasing one."""
    if comparator.role not in ("under_voltage", "over_voltage"):
        return case.not_applicable("is placed by what must work once it lets go (trip_window/guarantee)")
    if protects_nothing(case, comparator):
        return _nothing_leans(comparator, case)
    over, shipped = comparator.role == "over_voltage", as_shipped(case, comparator)
    asserts, lets_go = rising_window(case, shipped), falling_window(case, shipped)
    if not over:
        asserts, lets_go = lets_go, asserts
    first = _known(case, lambda: _most_demanding(case, comparator))
    nearest_v = _known(case, lambda: asserts.least_v if over else asserts.most_v)
    if (nearest_v <= first.level_v) if over else (nearest_v >= first.level_v):
        return case.passes(
            f"is placed by the level that asserts, against {first.element} at {show(first.level_v, _V)}",
            at=_at(comparator, asserts.which),
        )
    furthest_v = _known(case, lambda: lets_go.least_v if over else lets_go.most_v)
    if (furthest_v > first.level_v) if over else (furthest_v < first.level_v):
        return case.passes(f"is not placed by the level that lets go, which {first.element} does not reach either")
    return _placed_by_release(case, comparator, asserts, first)


def _known(case: Case, ask: Callable[[], _A]) -> _A:
    """What is exactly known; the rule says how levels are meant, which bounds do not tell.

    Raises: MissingFactsError: with what keeps it from being known.
    """
    log = case.reading.listen()
    try:
        found = ask()
    finally:
        case.reading.unlisten()
    if log:
        raise MissingFactsError(log)
    return found


def _most_demanding(case: Case, comparator: Comparator) -> Bound:
    """The load that asks most of a detector.

    Raises: MissingFactsError: where it is not said what the detector guards.
    """
    over = comparator.role == "over_voltage"
    bounds = greatest_supplies(case, comparator) if over else least_supplies(case, comparator)
    if not bounds:
        raise MissingFactsError(guard_gaps(case, comparator))
    return bounds[0]


def _placed_by_release(case: Case, comparator: Comparator, asserts: TripLevel, first: Bound) -> Judgement:
    """The finding: what is guarded lies between the two levels."""
    over, level_v = comparator.role == "over_voltage", first.level_v
    moves_v = case.if_known(lambda: moved_v(case, comparator)) or 0.0
    end_v = asserts.most_v + moves_v if over else asserts.least_v - moves_v
    side, up_to = ("up", "up to") if over else ("down", "from")
    answer = case.at_most if over else case.at_least
    return answer(
        need=level_v, have=end_v, dimension=_V,
        says=f"is placed by the level that lets go: until the answer {comparator.watches} may come {side} to",
        why=f"{first.element} works {up_to} {show(level_v, _V)}; asserts at {_text(asserts)}",
        mend=f"both levels {show_up(abs(end_v - level_v), _V)} further {'down' if over else 'up'}",
        at=_at(comparator, asserts.which), path=first.path,
    )  # fmt: skip


def _text(window: TripLevel) -> str:
    if window.least_v == window.most_v:
        return show(window.least_v, _V)
    return f"{show(window.least_v, _V)} to {show(window.most_v, _V)}"


@rule(
    "trip_window/spread",
    title="the rail has room for the spread of the levels",
    level=Level.ERROR,
    applies_to="comparators",
    proves="F_hi - F_lo (over-voltage: R_hi - R_lo), the error of the level that protects either way, is at most the "
    "room between the limit of trip_window/guarantee and that of trip_window/release. With less room than that no "
    "place of the levels keeps both, with the least hysteresis. What is left must hold the hysteresis: "
    "hysteresis/fits_window judges it.",
    facts=("the facts of trip_window/guarantee and of trip_window/release",),
    mend="a smaller error, a faster answer, or a load that works with more",
    sources=("the two inequalities added (derived)",),
    example=Example(
        fails="comparators: {uv: {errors: {reference: {share: 3 %}}}}",
        holds="comparators: {uv: {errors: {reference: {share: 0.4 %}}}}",
    ),
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
    yields=(_UNWORKABLE,),
)
def spread_has_room(comparator: Comparator, case: Case) -> Judgement:
    """Compare the spread of the level that protects with what the rail leaves between its limits."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    if protects_nothing(case, comparator):
        return _nothing_leans(comparator, case)
    room = level_room(case, comparator)
    if room is None:
        return case.not_applicable(
            "its level and what follows it move together with temperature (trip_window/crossover_tracks compares them)"
        )
    return case.at_most(
        need=room.room, have=room.spread, dimension=_V, says=f"spread of its {room.protects.which} level",
        why=f"{room.protects.why}; {room.returns.why}",
        mend=f"an error {show_up((room.spread.value - room.room.value) / 2, _V)} smaller either way, and room for "
        "hysteresis" if room.room.value > 0.0
        else "a faster answer, or a load that works with more: as it is, no level keeps both limits",
        at="errors" if comparator.errors else "trip",
    )  # fmt: skip


RULES: Final[tuple[Rule, ...]] = (
    guarded_before_out_of_range,
    quiet_in_service,
    lets_go_in_range,
    asserted_level_is_placed,
    spread_has_room,
    *trip_codes.RULES,
    *trip_order.RULES,
    *trip_crossover.RULES,
)
