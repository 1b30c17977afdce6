"""Trip windows: each level protects what it must, is quiet in service and lets go again, at every code."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, least_supplies
from tidegate.lint.derived.levels.level_margins import (
    LevelMargin,
    comes_back,
    guarantee,
    hands_over,
    protects_nothing,
    quiet,
    sampled_too_seldom,
    short_at_once,
)
from tidegate.lint.derived.levels.level_room import NEVER_APART, level_room, tracks_its_bound
from tidegate.lint.derived.levels.placement_facts import NOT_PLACED, PLACED_ROLES
from tidegate.lint.derived.levels.response import response
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import trip_margin, trip_window
from tidegate.lint.physics.placement import Side
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.rules import trip_codes, trip_crossover, trip_order

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: the levels of a supply detector, their errors taken off, keep "
_LEVELS: Final = (
    "comparators.*.trip (or codes and ships_with), with errors or ranges",
    "conditions.combine",
    "conditions.coverage",
)
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


def _at(comparator: Comparator, level: str) -> str:
    return f"trip.{level}" if comparator.trip is not None else f"codes.{comparator.ships_with}.{level}"


def _measured(comparator: Comparator, case: Case, found: LevelMargin, mend: str) -> Judgement:
    """Compare the end of a level with its limit."""
    answer = case.at_least if found.side is Side.LEAST else case.at_most
    return answer(
        need=found.limit_v, have=found.end_v, dimension=_V, says=found.says, why=found.why, mend=mend,
        at=_at(comparator, found.level.value), path=found.bound.path if found.bound is not None else (),
    )  # fmt: skip


def _move(case: Case, comparator: Comparator, found: LevelMargin) -> str:
    """By how much the levels, or their error, must change."""
    by = show_up(-found.margin_v, _V)
    if not found.is_kept:
        room = case.attempt(lambda: level_room(case, comparator))
        if room is not None and not room.apart_by_description and not room.spread_fits:
            return f"an error {by} smaller; to move the levels will not do (trip_window/spread says so)"
    return f"levels {by} further {'up' if found.side is Side.LEAST else 'down'}, or an error that much smaller"


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
    formulas=(
        trip_margin.under_voltage_guarantee_v, trip_margin.over_voltage_guarantee_v, trip_margin.power_on_guarantee_v,
        trip_window.response_time_s, trip_window.droop_during_response_v,
    ),
)  # fmt: skip
def guarded_before_out_of_range(comparator: Comparator, case: Case) -> Judgement:
    """Compare the protecting level with the most demanding load, or follower, and the move of the rail."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    if protects_nothing(case, comparator):
        return _nothing_leans(comparator, case)
    shipped = as_shipped(case, comparator)
    if case.attempt(lambda: _placed_by_release(case, comparator)) is not None:
        return case.not_applicable("is placed by the level that lets go (trip_window/placement_sense says so)")
    short = short_at_once(case, shipped)
    if short is not None:
        return _measured(comparator, case, short, _move(case, comparator, short))
    found = guarantee(case, shipped)
    assert found is not None and found.bound is not None
    if not found.is_kept and tracks_its_bound(case, comparator, found):
        return case.not_applicable(
            f"extreme against extreme {_below(found)}; both move with temperature, and trip_window/crossover_tracks "
            "compares them at the same one"
        )
    if not found.is_kept and hands_over(case, comparator, found):
        return case.not_applicable(f"{_below(found)} (hand_over/no_hole judges what holds reset there)")
    if not found.is_kept and sampled_too_seldom(case, comparator, found):
        return case.not_applicable("is sampled too seldom for what it guards (modes/sampling says so)")
    return _measured(comparator, case, found, f"{_move(case, comparator, found)}{_faster(found)}")


def _below(found: LevelMargin) -> str:
    assert found.bound is not None
    level, element = found.level.value, found.bound.element
    return f"its {level} level can lie {show(-found.margin_v, _V)} below what {element} works from"


def _faster(found: LevelMargin) -> str:
    """The response that would do, where one would."""
    assert found.bound is not None
    left_v = abs(found.end_v - found.bound.level_v)
    ahead = (found.end_v > found.bound.level_v) is (found.side is Side.LEAST)
    if not ahead or found.slew_v_per_s == 0.0 or left_v == 0.0:
        return ""
    return f"; or an answer within {show_down(left_v / found.slew_v_per_s, Dimension.DURATION)}"


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
        trip_margin.under_voltage_quiet_v, trip_margin.over_voltage_quiet_v, trip_margin.power_on_quiet_v,
    ),
)  # fmt: skip
def quiet_in_service(comparator: Comparator, case: Case) -> Judgement:
    """Compare the asserting level with the supply in service."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    shipped = as_shipped(case, comparator)
    found = quiet(case, shipped)
    returns = case.attempt(lambda: comes_back(case, shipped))
    furthest = found if returns is None else min(found, returns, key=lambda level: level.margin_v)
    also = "" if furthest is found else " (so that it lets go in service too)"
    return _measured(comparator, case, found, f"{_move(case, comparator, furthest)}{also}")


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
    formulas=(
        trip_margin.under_voltage_comes_back_v, trip_margin.over_voltage_comes_back_v,
        trip_margin.power_on_comes_back_v,
    ),
)  # fmt: skip
def lets_go_in_range(comparator: Comparator, case: Case) -> Judgement:
    """Compare the releasing level with the end of the range delivered."""
    if (other := _not_placed(comparator, case)) is not None:
        return other
    found = comes_back(case, as_shipped(case, comparator))
    room = None if found.is_kept else case.attempt(lambda: level_room(case, comparator))
    if room is not None and not room.apart_by_description and not (room.spread_fits and room.hysteresis_fits):
        judge = "hysteresis/fits_window" if room.spread_fits else "trip_window/spread"
        return case.not_applicable(f"no place of its levels keeps this and trip_window/guarantee ({judge} says so)")
    in_service = None if found.is_kept else case.attempt(lambda: quiet(case, as_shipped(case, comparator)))
    if in_service is not None and not in_service.is_kept:
        return case.not_applicable("it trips in service already (trip_window/nuisance says so)")
    return _measured(comparator, case, found, f"{_move(case, comparator, found)}, or less hysteresis")


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
)
def asserted_level_is_placed(comparator: Comparator, case: Case) -> Judgement:
    """Fail if what is guarded lies between the two levels, on the side of the releasing one."""
    if comparator.role not in ("under_voltage", "over_voltage"):
        return case.not_applicable("is placed by what must work once it lets go (trip_window/guarantee)")
    if protects_nothing(case, comparator):
        return _nothing_leans(comparator, case)
    wrong = _placed_by_release(case, comparator)
    if wrong is not None:
        return wrong
    over = comparator.role == "over_voltage"
    falling, rising, first = _levels_and_load(case, comparator)
    beyond = falling.least_v > first.level_v if over else rising.most_v < first.level_v
    if beyond:
        return case.not_applicable(
            f"both levels lie outside what {first.element} works with (trip_window/guarantee says so)"
        )
    return case.passes(
        f"is placed by the level that asserts, against {first.element} at {show(first.level_v, _V)}",
        at=_at(comparator, "rising" if over else "falling"),
    )


def _levels_and_load(case: Case, comparator: Comparator) -> tuple[trip_window.Window, trip_window.Window, Bound]:
    """The falling and the rising level, and the most demanding load."""
    over, shipped = comparator.role == "over_voltage", as_shipped(case, comparator)
    falling, rising, bounds = case.gather(
        lambda: falling_window(case, shipped),
        lambda: rising_window(case, shipped),
        lambda: greatest_supplies(case, comparator) if over else least_supplies(case, comparator),
    )
    return falling, rising, bounds[0]


def _placed_by_release(case: Case, comparator: Comparator) -> Judgement | None:
    """The finding, where what is guarded lies between the two levels; None where it does not."""
    if comparator.role == "power_on":
        return None
    over = comparator.role == "over_voltage"
    falling, rising, first = _levels_and_load(case, comparator)
    level_v = first.level_v
    if not (falling.least_v <= level_v < rising.least_v if over else falling.most_v < level_v <= rising.most_v):
        return None
    moved_v = case.attempt(lambda: response(case, comparator).moved_v) or 0.0
    end_v = rising.most_v + moved_v if over else falling.least_v - moved_v
    side, up_to = ("up", "up to") if over else ("down", "from")
    short_v = end_v - level_v if over else level_v - end_v
    answer = case.at_most if over else case.at_least
    return answer(
        need=level_v, have=end_v, dimension=_V,
        says=f"is placed by the level that lets go: until the answer {comparator.watches} may come {side} to",
        why=f"{first.element} works {up_to} {show(level_v, _V)}; falling {_text(falling)}, rising {_text(rising)}",
        mend=f"both levels {show_up(short_v, _V)} further {'down' if over else 'up'}",
        at=_at(comparator, "rising" if over else "falling"), path=first.path,
    )  # fmt: skip


def _text(window: trip_window.Window) -> str:
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
    if room.apart_by_description:
        return case.not_applicable(NEVER_APART)
    return case.at_most(
        need=room.room_v, have=room.spread_v, dimension=_V,
        says=f"spread of its {room.protects.level.value} level",
        why=f"{room.protects.why}; {room.returns.why}",
        mend=f"an error {show_up((room.spread_v - room.room_v) / 2, _V)} smaller either way, and room for hysteresis"
        if room.room_v > 0.0
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
