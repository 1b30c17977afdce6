"""How hysteresis is made: its feedback has the right sign, its switches take turns, and its level moves in time."""

from __future__ import annotations

from functools import partial
from typing import Final

import msgspec

from tidegate.lint.account import Sum, less, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.kept_distance import kept
from tidegate.lint.derived.levels.at_code import as_far_as_said
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.derived.reset_path.logic_signal import Origin, origin
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.facts.view import factors
from tidegate.lint.facts.views.supply import RailFacts
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics import hysteresis
from tidegate.lint.physics.domain import quotient
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, rule

_V: Final = Dimension.VOLTAGE
_OTHER: Final = {"high": "low", "low": "high"}
_SWITCHED: Final = ("switched_reference", "switched_tap")
_NO_FEEDBACK: Final = "it has no hysteresis, and nothing that makes one"


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
)
def hysteresis_moves_away(comparator: Comparator, case: Case) -> Judgement:
    """Pass if rising lies above falling and the feedback is positive."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_FEEDBACK)
    if case.of(comparator).hysteresis.feedback.must() == "negative":
        return case.fails(
            "the feedback moves the level towards the supply: it oscillates at its level",
            mend="make the feedback positive: swap the two switches, or the two ends of the feedback",
            at="hysteresis.feedback",
        )
    swapped = _swapped_v(comparator)
    apart = hysteresis_window(case, comparator).end("least") if swapped is None else _apart(case, comparator, *swapped)
    judged = case.at_least(
        need=0.0, have=apart, dimension=_V, says="the rising level lies above the falling one by",
        mend="place the rising level above the falling one by the hysteresis",
        at="trip" if apart.value < 0.0 else "hysteresis.feedback",
    )  # fmt: skip
    if judged.kind is Kind.PASS:
        return judged
    if swapped is None:
        says = f"the rising level can lie below the falling one ({show(-apart.value, _V)} below at the worst)"
    else:
        up, down = (show(level_v, _V) for level_v in swapped)
        says = f"the rising level lies below the falling one ({up} rising, {down} falling)"
    return msgspec.structs.replace(judged, message=says)


def _swapped_v(comparator: Comparator) -> tuple[float, float] | None:
    """The levels, rising and falling, in V, where those that are stated surely lie the wrong way round."""
    trip = as_far_as_said(comparator).trip
    up, down = (None, None) if trip is None else (trip.rising, trip.falling)
    if up is None or down is None:
        return None
    for high_v, low_v in ((up.typical, down.typical), (up.most, down.least)):
        if high_v is not None and low_v is not None and high_v < low_v:
            return high_v, low_v
    return None


def _apart(case: Case, comparator: Comparator, rising_v: float, falling_v: float) -> Sum:
    """How far two stated levels lie apart."""
    return case.sum(
        plus("rising level", partial(float, rising_v), of=comparator.fact("trip.rising")),
        less("falling level", partial(float, falling_v), of=comparator.fact("trip.falling")),
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
        return case.not_applicable(_NO_FEEDBACK)
    own = case.of(comparator).hysteresis
    made_by = own.made_by.given
    if made_by is None and not own.switches:
        own.made_by.lacking()
    if made_by is not None and made_by not in _SWITCHED:
        return case.not_applicable(_unswitched(made_by))
    if not own.switches:
        raise MissingFactsError([own.switches.path])
    found = _switches_judged(comparator, case)
    if found.kind is Kind.FAIL and (made := own.made_by.must()) not in _SWITCHED:
        return case.not_applicable(_unswitched(made))
    return found


def _unswitched(made_by: str) -> str:
    return f"its hysteresis is made by {made_by}, without switches"


def _switches_judged(comparator: Comparator, case: Case) -> Judgement:
    """Whether the switches that are described take turns.

    Raises: MissingFactsError: where it is not said what turns one.
    """
    own = case.of(comparator).hysteresis
    mend = "two switches turned by one output, one closed when it is high and one when it is low"
    if len(own.switches) != 2:
        return case.fails(f"has {len(own.switches)} switches for two levels", mend=mend, at="hysteresis.switches")
    first, second = case.each([switch.turned_by.must for switch in own.switches])
    one, other = case.each([partial(origin, case, turns) for turns in (first, second)])
    names = first if first == second else f"{first} and {second}"
    if one.element != other.element:
        _is_known(case, one)
        _is_known(case, other)
        what = f"its two switches are turned by {names}: both can be open, or closed"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    closed, also = (switch.closed_when.must() for switch in own.switches)
    if (closed == also) == (one.inverted == other.inverted):
        when = closed if one.inverted is False else _OTHER[closed]
        what = f"both switches are closed when {one.element} is {when}"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    return case.passes(f"its switches take turns with {names}", at="hysteresis.switches")


def _is_known(case: Case, found: Origin) -> None:
    """Ask what drives the stage at which a signal was followed to its end.

    Raises: MissingFactsError: where it is not said.
    """
    stage = case.graph.elements[found.element]
    if isinstance(stage, OutputStage):
        case.of(stage).driven_by.must()


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
    formulas=(hysteresis.supply_travel_v, hysteresis.steepest_ripple_v_per_s, ramp_slope_v_per_s),
    yields=("hysteresis/present", "hysteresis/sense"),
)  # fmt: skip
def feedback_comes_in_time(comparator: Comparator, case: Case) -> Judgement:
    """Compare the travel of the supply during the feedback delay with the least hysteresis."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NO_FEEDBACK)
    rail = case.of(case.description.rails[comparator.watches])
    delay = case.of(comparator).hysteresis.feedback_delay

    def travel_v() -> float:
        return hysteresis.supply_travel_v(slope_v_per_s=_fastest(rail)[0], delay_s=delay.most())

    keeps, delay_s, (fastest_v_per_s, what) = kept(case, comparator), delay.most(), _fastest(rail)
    allowed_s = quotient(keeps.value, fastest_v_per_s)
    return case.at_most(
        need=keeps, have=case.sum(plus(f"{comparator.watches} travels until then", travel_v, of=delay)), dimension=_V,
        says="until the level has moved, the supply travels",
        why=f"{show(delay_s, Dimension.DURATION)} at {show(fastest_v_per_s, Dimension.SLOPE)}, the fastest {what}",
        mend=f"a feedback delay of at most {show_down(allowed_s, Dimension.DURATION)}; "
        f"now {show(delay_s, Dimension.DURATION)}",
        at="hysteresis.feedback_delay",
    )  # fmt: skip


def _fastest(rail: RailFacts) -> tuple[float, str]:
    """The steepest slope of a supply, in V/s, and what makes it."""
    slopes = (_ramp_v_per_s(rail), "ramp"), (_ripple_v_per_s(rail), "ripple")
    return max(slopes, key=lambda slope: slope[0])


def _ramp_v_per_s(rail: RailFacts) -> float:
    """The fastest ramp up to the nominal level."""
    return ramp_slope_v_per_s(rise_v=max(0.0, rail.nominal.typical()), rise_s=rail.rise.least())


def _ripple_v_per_s(rail: RailFacts) -> float:
    """The steepest part of the ripple."""
    peak_to_peak_v, frequency_hz = factors(rail.ripple.peak_to_peak, rail.ripple.frequency)
    return hysteresis.steepest_ripple_v_per_s(peak_to_peak_v=peak_to_peak_v, frequency_hz=frequency_hz)
