"""Hysteresis: there is some, of the right sign, large enough for what disturbs it and no larger than its window."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final

import msgspec

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import BUMP_FORMULAS
from tidegate.lint.derived.disturbance.hysteresis_need import need_at_coverage, need_over_life
from tidegate.lint.derived.disturbance.term_text import terms_text
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.level_room import level_room
from tidegate.lint.derived.levels.placed_roles import NOT_PLACED, PLACED_ROLES
from tidegate.lint.derived.levels.requirements import protects_nothing
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import coupling, hysteresis, lasting_bump, noise, trip_window
from tidegate.lint.quantity import Dimension, Voltage, show
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.rules.hysteresis_made import feedback_comes_in_time, hysteresis_moves_away, switches_are_complementary

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: every comparator that judges a supply has some hysteresis"
_NONE_OR_WRONG: Final = ("hysteresis/present", "hysteresis/sense")


def _loads_of(comparator: Any, description: Description) -> Iterator[str]:
    """The loads that need the rail of a detector."""
    for load in description.loads.values():
        if any(need.rail == comparator.watches for need in load.needs):
            yield load.id


@rule(
    "hysteresis/present",
    title="every comparator has hysteresis",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The two levels differ, so that a supply resting at the level gives one decision: an amount is stated that "
    "is not nothing, or levels that are not one. In which sense, and whether by enough, other rules of the family "
    "judge.",
    facts=("comparators.*.hysteresis", "or both levels of comparators.*.trip (or codes and ships_with)"),
    mend="give the comparator a hysteresis that covers what disturbs it",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {uv: {hysteresis: none}}",
        holds="comparators: {uv: {hysteresis: {amount: 50 mV}}}",
    ),
    formulas=(
        noise.false_trip_distance_v, hysteresis.release_droop_v, coupling.bump_peak_v, coupling.charge_kick_v,
        lasting_bump.lasting_bump_v, lasting_bump.decayed_kick_v,
    ),
)  # fmt: skip
def hysteresis_present(comparator: Comparator, case: Case) -> Judgement:
    """Pass if there is some; its sign and its size are for other rules to judge."""
    if not has_no_hysteresis(comparator):
        return case.passes(f"has hysteresis, {_size_text(comparator, case)}", at="hysteresis")
    needed_v = case.if_known(lambda: _needed_v(comparator, case))
    covers = "that covers ripple, droop at release, neighbours and noise"
    size = covers if needed_v is None else f"of at least {show_up(needed_v, _V)}"
    return case.fails("has no hysteresis", mend=f"add hysteresis {size}", at="hysteresis")


def _needed_v(comparator: Comparator, case: Case) -> float:
    """What a hysteresis that is yet to be made must be, in V; a dip counts wherever it is: there are no levels yet."""
    over_life = case.if_known(lambda: need_over_life(case, comparator, placed=False).value)
    return max(need_at_coverage(case, comparator, placed=False).value, over_life or 0.0)


def _size_text(comparator: Comparator, case: Case) -> str:
    """How large it is, as far as it is said.

    Raises: MissingFactsError: where it is not said that there is any.
    """
    said = comparator.hysteresis
    amount = said.amount if isinstance(said, Hysteresis) else None
    if amount is not None:
        if not any((amount.least, amount.typical, amount.most)):
            raise MissingFactsError([case.of(comparator).hysteresis.amount.path + ".max"])
        return _span_text(amount)
    trip = as_shipped(case, comparator).trip
    up, down = (None, None) if trip is None else (trip.rising, trip.falling)
    if up is None or down is None or not _differ(up, down):
        raise MissingFactsError([case.of(comparator).hysteresis.amount.path])
    window = hysteresis_window(case, comparator)
    ends_v = case.if_known(lambda: (window.least_v, window.most_v))
    if ends_v is not None:
        return _span_text(Voltage(ends_v[0], None, ends_v[1]))
    if up.typical is not None and down.typical is not None:
        return f"typically {show(abs(up.typical - down.typical), _V)}"
    return "of a size that is not said"


def _differ(up: Voltage, down: Voltage) -> bool:
    """Whether two levels are said to differ; equal ranges do not say that they are one."""
    ends = ((up.least, down.least), (up.typical, down.typical), (up.most, down.most))
    return any(None not in pair and pair[0] != pair[1] for pair in ends)


def _span_text(span: Voltage) -> str:
    """A span in words; what is said at one end says nothing of the other."""
    least, typical, most = (None if end is None else show(end, _V) for end in (span.least, span.typical, span.most))
    if least is not None and most is not None:
        return least if least == most else f"{least} to {most}"
    ends = ((typical, "typically"), (least, "at least"), (most, "at most"))
    return ", ".join(f"{words} {end}" for end, words in ends if end is not None)


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
    formulas=(*LEVEL_FORMULAS, hysteresis.release_droop_v, *BUMP_FORMULAS),
    yields=_NONE_OR_WRONG,
)  # fmt: skip
def hysteresis_covers_disturbance(comparator: Comparator, case: Case) -> Judgement:
    """Compare the least hysteresis with the sum of disturbances."""
    return _held_against(comparator, case, need_at_coverage(case, comparator), at="hysteresis.amount")


def _held_against(comparator: Comparator, case: Case, need: Sum, *, at: str) -> Judgement:
    """Compare the least hysteresis with what it must be."""
    least = hysteresis_window(case, comparator).end("least")
    known = not any(line.waits for line in (*need.lines, *least.lines))
    more = "" if known else ", and more by what is not known yet"
    return case.at_least(
        need=need, have=least, dimension=_V, says="hysteresis", why=terms_text(case, need.lines) or "nothing",
        mend=f"at least {show_up(need.value, _V)} of hysteresis; now {show(least.value, _V)}{more}", at=at,
    )  # fmt: skip


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
    formulas=(*LEVEL_FORMULAS, noise.false_trip_distance_v, hysteresis.release_droop_v, *BUMP_FORMULAS),
    yields=(*_NONE_OR_WRONG, "hysteresis/covers_disturbance"),
)  # fmt: skip
def noise_trips_seldom(comparator: Comparator, case: Case) -> Judgement:
    """Compare the least hysteresis with the disturbances and the distance that noise needs."""
    return _held_against(comparator, case, need_over_life(case, comparator), at="noise")


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
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
    yields=("trip_window/spread", Yield("description/loads", _loads_of)),
)
def hysteresis_fits_window(comparator: Comparator, case: Case) -> Judgement:
    """Compare the greatest hysteresis with what the spread leaves of the room."""
    if comparator.role not in PLACED_ROLES:
        return case.not_applicable(NOT_PLACED)
    room = None if protects_nothing(case, comparator) else level_room(case, comparator)
    if room is None:
        return case.not_applicable("nothing that it guards sets it a limit (trip_window/release judges its levels)")
    left, apart = room.left, room.hysteresis
    if apart.value < 0.0:  # levels that cross take no room for hysteresis
        apart = msgspec.structs.replace(apart, value=0.0, lines=())
    now = f"now {show(apart.value, _V)}"
    judged = case.at_most(
        need=left, have=apart, dimension=_V, says="greatest hysteresis",
        why=f"room of {show(room.room.value, _V)}, of which the {room.protects.which} level takes "
        f"{show(room.spread.value, _V)}: {room.protects.why}; {room.returns.why}",
        mend=f"at most {show_down(left.value, _V)} of hysteresis; {now}"
        if left.value > 0.0
        else "a smaller error, or more room: as it is, there is none for hysteresis",
        at="hysteresis.amount",
    )  # fmt: skip
    if left.value >= 0.0:
        return judged
    return msgspec.structs.replace(
        judged, message=f"greatest hysteresis {show(apart.value, _V)}, and no room is left for any"
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
