"""Hysteresis: there is some, of the right sign, large enough for what disturbs it and no larger than its window."""

from __future__ import annotations

import math
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.hysteresis_need import disturbance, noise_v
from tidegate.lint.derived.levels.at_code import as_far_as_said
from tidegate.lint.derived.levels.level_room import NEVER_APART, level_room
from tidegate.lint.derived.levels.placement_facts import NOT_PLACED, PLACED_ROLES
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window, typical_hysteresis_v
from tidegate.lint.derived.reset_path.logic_signal import origin
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator, Hysteresis, Switch
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import hysteresis, noise
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, Voltage, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: every comparator that judges a supply has some hysteresis"
_OTHER: Final = {"high": "low", "low": "high"}
_PLACE_APART: Final = "place the rising level above the falling one by the hysteresis"
_NO_HYSTERESIS: Final = "there is no hysteresis to judge (hysteresis/present says so)"
_WRONG_SENSE: Final = "its rising level can lie below its falling one (hysteresis/sense says so)"


def _rail(case: Case, comparator: Comparator) -> Rail:
    return case.description.rails[comparator.watches]


@rule(
    "hysteresis/present",
    title="every comparator has hysteresis",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The two levels differ, typically at least, so that a supply resting at the level gives one decision. In "
    "which sense, and whether by enough, other rules of the family judge.",
    facts=("comparators.*.hysteresis", "or both levels of comparators.*.trip (or codes and ships_with)"),
    mend="give the comparator a hysteresis that covers what disturbs it",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {uv: {hysteresis: none}}",
        holds="comparators: {uv: {hysteresis: {amount: 50 mV}}}",
    ),
)
def hysteresis_present(comparator: Comparator, case: Case) -> Judgement:
    """Pass if there is some; its sign and its size are for other rules to judge."""
    if not has_no_hysteresis(comparator):
        window = case.attempt(lambda: hysteresis_window(case, comparator))
        size_v = typical_hysteresis_v(comparator)
        if window is None and size_v is not None:
            return case.passes(f"has hysteresis, about {show(abs(size_v), _V)}", at="hysteresis")
        window = hysteresis_window(case, comparator)
        return case.passes(f"has hysteresis, {_window_text(window.least_v, window.most_v)}", at="hysteresis")
    needed_v = case.attempt(
        lambda: disturbance(case, comparator, dip_anywhere=True).with_noise_v(noise_v(case, comparator))
    )
    covers = "that covers ripple, droop at release, neighbours and noise"
    size = covers if needed_v is None else f"of at least {show_up(needed_v, _V)}"
    return case.fails("has no hysteresis", mend=f"add hysteresis {size}", at="hysteresis")


def _window_text(least_v: float, most_v: float) -> str:
    return show(least_v, _V) if least_v == most_v else f"{show(least_v, _V)} to {show(most_v, _V)}"


@rule(
    "hysteresis/sense",
    title="the decision moves the level away from the supply",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The feedback is positive: after a decision the supply must come back by the hysteresis to undo it. With "
    "the opposite sense the comparator oscillates at its level.",
    facts=("comparators.*.trip.rising", "comparators.*.trip.falling", "comparators.*.hysteresis.feedback"),
    mend="swap the two switches, or the two ends of the feedback",
    sources=("Texas Instruments SBOA313, comparator with hysteresis: the levels move apart with positive feedback",),
    example=Example(
        fails="comparators: {uv: {hysteresis: {feedback: negative}}}",
        holds="comparators: {uv: {hysteresis: {feedback: positive}}}",
    ),
    formulas=(hysteresis.positive_feedback_levels_v,),
)
def hysteresis_moves_away(comparator: Comparator, case: Case) -> Judgement:
    """Pass if rising lies above falling and the feedback is positive."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    if isinstance(comparator.hysteresis, Hysteresis) and comparator.hysteresis.feedback == "negative":
        return case.fails(
            "the feedback moves the level towards the supply: it oscillates at its level",
            mend="make the feedback positive: swap the two switches, or the two ends of the feedback",
            at="hysteresis.feedback",
        )
    up_v, down_v = _middle_v(comparator, "rising"), _middle_v(comparator, "falling")
    if up_v is not None and down_v is not None and up_v < down_v:
        return case.fails(
            f"the rising level lies below the falling one ({show(up_v, _V)} rising, {show(down_v, _V)} falling)",
            mend=_PLACE_APART,
            at="trip",
        )
    _, window = case.gather(lambda: case.own.must("hysteresis.feedback"), lambda: hysteresis_window(case, comparator))
    if window.least_v < 0.0:
        return case.fails(
            f"the rising level can lie below the falling one ({show(-window.least_v, _V)} below at the worst)",
            mend=_PLACE_APART,
            at="trip",
        )
    return case.passes("the decision moves the level away from the supply", at="hysteresis.feedback")


def _middle_v(comparator: Comparator, which: str) -> float | None:
    trip = as_far_as_said(comparator).trip
    span: Voltage | None = getattr(trip, which) if trip is not None else None
    return None if span is None else span.middle


@rule(
    "hysteresis/covers_disturbance",
    title="the hysteresis covers what disturbs the supply and the level",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Ripple, the dip of a non-monotonic ramp (where it can fall between the levels), the droop of the supply "
    "when reset is released, bumps from neighbours and noise at the stated coverage add up to less than the least "
    "hysteresis, so that one crossing gives one decision. Where the comparator has a filter, a bump counts with the "
    "level it stays above for as long as the filter may need to see it. The droop at release does not count for an "
    "over-voltage detector, whose level it moves away from.",
    facts=(
        "comparators.*.hysteresis.amount, or both trip levels", "rails.*.ripple.peak_to_peak", "rails.*.dip.depth",
        "rails.*.load_step", "rails.*.source_impedance", "comparators.*.noise.rms", "conditions.coverage",
        "the facts of each pair of neighbours, and comparators.*.kick of those on the same reference",
    ),
    mend="more hysteresis, or less of what it must cover",
    sources=(
        "sum of what moves the supply or the level while it should rest (derived)",
        "JCGM 100:2008, 6.2.1: a coverage factor times a standard deviation",
    ),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.651 V}, hysteresis: {amount: {min: 20 mV, max: 28 mV}}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V}, hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}",
    ),
    formulas=(hysteresis.disturbance_v, hysteresis.release_droop_v),
)  # fmt: skip
def hysteresis_covers_disturbance(comparator: Comparator, case: Case) -> Judgement:
    """Compare the least hysteresis with the sum of disturbances."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    random_v, disturbed, window = case.gather(
        lambda: noise_v(case, comparator),
        lambda: disturbance(case, comparator),
        lambda: hysteresis_window(case, comparator),
    )
    if window.least_v < 0.0:
        return case.not_applicable(_WRONG_SENSE)
    need_v = disturbed.with_noise_v(random_v)
    return case.at_least(
        need=need_v,
        have=window.least_v,
        dimension=_V,
        says="hysteresis",
        why=f"{disturbed.text()} + {show(random_v, _V)} noise",
        mend=f"at least {show_up(need_v, _V)} of hysteresis; now {show(window.least_v, _V)}",
        at="hysteresis.amount",
    )


@rule(
    "hysteresis/false_trips",
    title="noise trips the detector less often than accepted",
    level=Level.ERROR,
    applies_to="comparators",
    proves="What ripple, dip, droop and neighbours leave of the least hysteresis is so many standard deviations of "
    "noise that no more than the accepted number of false trips is to be expected over the service life, with the "
    "supply resting at the level all that time.",
    facts=(
        "comparators.*.noise.rms", "comparators.*.noise.bandwidth", "conditions.service_life",
        "conditions.false_trips", "and the facts of hysteresis/covers_disturbance",
    ),
    mend="more hysteresis, less noise, or a filter that limits its bandwidth",
    sources=("S. O. Rice, Mathematical Analysis of Random Noise, Bell System Technical Journal 23 and 24 (1944-45)",),
    example=Example(
        fails="comparators: {uv: {noise: {rms: 2.5 mV}}}",
        holds="comparators: {uv: {noise: {rms: 0.5 mV}}}",
    ),
    formulas=(noise.false_trip_distance_v, noise.zero_level_rate_hz),
)  # fmt: skip
def noise_trips_seldom(comparator: Comparator, case: Case) -> Judgement:
    """Compare what the disturbances leave of the hysteresis with the distance that noise needs."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    own, whole = case.own, case.whole
    sigma_v, bandwidth_hz = own.most("noise.rms"), own.most("noise.bandwidth")
    life_s, allowed = whole.most("conditions.service_life"), whole.number("conditions.false_trips")
    disturbed, window = case.gather(lambda: disturbance(case, comparator), lambda: hysteresis_window(case, comparator))
    if window.least_v < 0.0:
        return case.not_applicable(_WRONG_SENSE)
    random_v = case.attempt(lambda: noise_v(case, comparator))
    if random_v is not None and not _covers(window.least_v, disturbed.with_noise_v(random_v)):
        return case.not_applicable("the hysteresis does not cover what disturbs it (hysteresis/covers_disturbance)")
    need_v = noise.false_trip_distance_v(
        sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, life_s=life_s, allowed_trips=allowed
    )
    return case.at_least(
        need=need_v,
        have=window.least_v - disturbed.total_v,
        dimension=_V,
        says="the hysteresis leaves noise a distance of",
        why=f"{show(window.least_v, _V)} less {disturbed.text()}; {show(sigma_v, _V)} r.m.s. of noise",
        mend=f"at least {show_up(need_v + disturbed.total_v, _V)} of hysteresis; now {show(window.least_v, _V)}",
        at="noise",
    )


def _covers(have_v: float, need_v: float) -> bool:
    return Measure(need_v, have_v, _V, Relation.AT_LEAST).holds


@rule(
    "hysteresis/fits_window",
    title="the hysteresis fits into the room that the rail leaves it",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The greatest hysteresis is at most what the error of the level that protects leaves of the room between "
    "the limit of trip_window/guarantee and that of trip_window/release; with more, no place of the levels keeps both. "
    "Where the end of the level that lets go is stated as a bound, the hysteresis takes no more than up to there. "
    "Where nothing is guarded on the rail there is no such room, and trip_window/release alone judges the levels.",
    facts=(
        "the facts of trip_window/guarantee and of trip_window/release",
        "comparators.*.hysteresis.amount, or both trip levels",
    ),
    mend="less hysteresis, a smaller error, or what leaves it more room",
    sources=("the two inequalities added (derived): F_hi - F_lo + H <= the room between their limits",),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.734 V}, hysteresis: {amount: {min: 98 mV, max: 116 mV}}}}",
        holds="comparators: {uv: {trip: {rising: 1.677 V}, hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}",
    ),
)
def hysteresis_fits_window(comparator: Comparator, case: Case) -> Judgement:
    """Compare the greatest hysteresis with what the spread leaves of the room."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    if comparator.role not in PLACED_ROLES:
        return case.not_applicable(NOT_PLACED)
    room = level_room(case, comparator)
    if room is None:
        return case.not_applicable("nothing that it guards sets it a limit (trip_window/release judges its levels)")
    if room.apart_by_description:
        return case.not_applicable(NEVER_APART)
    if not room.spread_fits:
        return case.not_applicable("its error alone takes more room than there is (trip_window/spread says so)")
    if room.hysteresis_v < 0.0:
        return case.not_applicable(_WRONG_SENSE)
    return case.at_most(
        need=room.left_v,
        have=room.hysteresis_v,
        dimension=_V,
        says="greatest hysteresis",
        why=f"room of {show(room.room_v, _V)}, of which the {room.protects.level.value} level takes "
        f"{show(room.spread_v, _V)}: {room.protects.why}; {room.returns.why}",
        mend=f"at most {show_down(room.left_v, _V)} of hysteresis; now {show(room.hysteresis_v, _V)}",
        at="hysteresis.amount",
    )


@rule(
    "hysteresis/switches_complementary",
    title="the two switches of a switched level are never both open or both closed",
    level=Level.ERROR,
    applies_to="comparators",
    proves="A level that is switched between two taps or references is chosen by exactly two switches that the same "
    "output turns, as it is or inverted by stages, one when it is high and one when it is low.",
    facts=(
        "comparators.*.hysteresis.made_by",
        "comparators.*.hysteresis.switches",
        "output_stages.*.kind and inverting of stages between output and switch",
    ),
    mend="turn both switches from the same output, one when it is high and one when it is low",
    sources=("common practice, no source: a level with no switch closed floats, one with both closed shorts two taps",),
    example=Example(
        fails="comparators: {uv: {hysteresis: {switches: "
        "[{turned_by: uv, closed_when: high}, {turned_by: uv, closed_when: high}]}}}",
        holds="comparators: {uv: {hysteresis: {switches: "
        "[{turned_by: uv, closed_when: high}, {turned_by: uv, closed_when: low}]}}}",
    ),
)
def switches_are_complementary(comparator: Comparator, case: Case) -> Judgement:
    """Pass if two switches hang on one output, as it is or inverted, and only one of them is closed at a time."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    made_by = case.own.must("hysteresis.made_by")
    if made_by not in ("switched_reference", "switched_tap"):
        return case.not_applicable(f"its hysteresis is made by {made_by}, without switches")
    assert isinstance(comparator.hysteresis, Hysteresis)
    switches = comparator.hysteresis.switches
    _note_missing(case, switches)
    mend = "two switches turned by one output, one closed when it is high and one when it is low"
    if len(switches) != 2:
        return case.fails(f"has {len(switches)} switches for two levels", mend=mend, at="hysteresis.switches")
    first, second = switches
    one, other = case.gather(lambda: origin(case, str(first.turned_by)), lambda: origin(case, str(second.turned_by)))
    names = str(first.turned_by) if first.turned_by == second.turned_by else f"{first.turned_by} and {second.turned_by}"
    if one.element != other.element:
        what = f"its two switches are turned by {names}: both can be open, or closed"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    alike = (first.closed_when == second.closed_when) == (one.inverted == other.inverted)
    if alike:
        when = first.closed_when if one.inverted is False else _OTHER[str(first.closed_when)]
        what = f"both switches are closed when {one.element} is {when}"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    return case.passes(f"its switches take turns with {names}", at="hysteresis.switches")


def _note_missing(case: Case, switches: tuple[Switch, ...]) -> None:
    if not switches:
        case.own.lacks("hysteresis.switches")
    for index, switch in enumerate(switches):
        for fact in ("turned_by", "closed_when"):
            if getattr(switch, fact) is None:
                case.own.lacks(f"hysteresis.switches.{index}.{fact}")
    case.settle()


@rule(
    "hysteresis/feedback_in_time",
    title="the level has moved before the supply can come back",
    level=Level.WARNING,
    applies_to="comparators",
    proves="While the level has not moved yet, the supply (on its fastest ramp, or on the steepest part of its ripple) "
    "travels less than the least hysteresis; else it can cross the old level again before the new one is there.",
    facts=(
        "comparators.*.hysteresis.feedback_delay", "rails.*.rise", "rails.*.nominal", "rails.*.ripple",
        "comparators.*.hysteresis.amount",
    ),
    mend="a faster feedback, or a slower supply",
    sources=("distance is slope times time (derived)",),
    example=Example(
        fails="comparators: {uv: {hysteresis: {feedback_delay: 5 us}}}",
        holds="comparators: {uv: {hysteresis: {feedback_delay: 0.1 us}}}",
    ),
    formulas=(hysteresis.supply_travel_v, hysteresis.steepest_ripple_v_per_s),
)  # fmt: skip
def feedback_comes_in_time(comparator: Comparator, case: Case) -> Judgement:
    """Compare the travel of the supply during the feedback delay with the least hysteresis."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    facts = case.of(_rail(case, comparator))
    delay_s = case.own.most("hysteresis.feedback_delay")
    nominal_v, rise_s = facts.middle("nominal"), facts.least("rise")
    ripple_v = facts.most("ripple.peak_to_peak")
    frequency_hz = None if ripple_v == 0.0 else facts.most("ripple.frequency")
    kept_v = hysteresis_window(case, comparator).least_v
    case.settle()
    if kept_v < 0.0:
        return case.not_applicable(_WRONG_SENSE)
    ramp_v_per_s = ramp_slope_v_per_s(rise_v=nominal_v, rise_s=rise_s)
    ripple_v_per_s = (
        0.0
        if frequency_hz is None
        else hysteresis.steepest_ripple_v_per_s(peak_to_peak_v=ripple_v, frequency_hz=frequency_hz)
    )
    fastest_v_per_s = max(ramp_v_per_s, ripple_v_per_s)
    travel_v = hysteresis.supply_travel_v(slope_v_per_s=fastest_v_per_s, delay_s=delay_s)
    what = "ramp" if fastest_v_per_s == ramp_v_per_s else "ripple"
    allowed_s = kept_v / fastest_v_per_s if fastest_v_per_s > 0.0 else math.inf
    return case.at_most(
        need=kept_v,
        have=travel_v,
        dimension=_V,
        says="until the level has moved, the supply travels",
        why=f"{show(delay_s, Dimension.DURATION)} at {show(fastest_v_per_s, Dimension.SLOPE)}, the fastest {what}",
        mend=f"a feedback delay of at most {show_down(allowed_s, Dimension.DURATION)}; "
        f"now {show(delay_s, Dimension.DURATION)}",
        at="hysteresis.feedback_delay",
    )


RULES: Final[tuple[Rule, ...]] = (
    hysteresis_present,
    hysteresis_moves_away,
    hysteresis_covers_disturbance,
    noise_trips_seldom,
    hysteresis_fits_window,
    switches_are_complementary,
    feedback_comes_in_time,
)
