"""Hysteresis: there is some, of the right sign, large enough for what disturbs it and no larger than its window."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance import bumps_on, seen_v
from tidegate.lint.derived.trip_levels import falling_window, hysteresis_window, rising_window
from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hysteresis, noise
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, Voltage, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: every comparator that judges a supply has some hysteresis"
_NO_HYSTERESIS: Final = "there is no hysteresis to judge (hysteresis/present says so)"


def _has_none(comparator: Comparator) -> bool:
    """Whether the description says outright that there is no hysteresis."""
    if comparator.hysteresis == "none":
        return True
    stated = comparator.hysteresis.amount if isinstance(comparator.hysteresis, Hysteresis) else None
    return stated is not None and stated.most == 0.0


def _rail(case: Case, comparator: Comparator) -> Rail:
    return case.description.rails[comparator.watches]


@dataclass(frozen=True, slots=True)
class _Disturbance:
    """What the hysteresis must cover besides noise, in V at the rail."""

    ripple_v: float
    dip_v: float
    droop_v: float
    bumps_v: float

    @property
    def total_v(self) -> float:
        return hysteresis.disturbance_v(
            ripple_v=self.ripple_v, dip_v=self.dip_v, release_droop_v=self.droop_v, neighbours_v=self.bumps_v,
            noise_v=0.0,
        )  # fmt: skip

    def text(self) -> str:
        parts = (
            (self.ripple_v, "ripple"), (self.dip_v, "dip of the ramp"), (self.droop_v, "droop at release"),
            (self.bumps_v, "neighbours"),
        )  # fmt: skip
        return " + ".join(f"{show(size, _V)} {word}" for size, word in parts if size > 0.0) or "nothing"


def _disturbance(comparator: Comparator, case: Case) -> _Disturbance:
    facts = case.of(_rail(case, comparator))
    return _Disturbance(
        *case.gather(
            lambda: facts.most("ripple.peak_to_peak"),
            lambda: _dip_in_band_v(comparator, case),
            lambda: _droop_v(comparator, case),
            lambda: _bumps_v(comparator, case),
        )
    )


def _droop_v(comparator: Comparator, case: Case) -> float:
    """Droop of the supply when reset is released: for an over-voltage detector, away from its level."""
    if comparator.role == "over_voltage":
        return 0.0
    facts = case.of(_rail(case, comparator))
    step_a, source_ohm = facts.most("load_step"), facts.most("source_impedance")
    case.settle()
    return hysteresis.release_droop_v(load_step_a=step_a, source_ohm=source_ohm)


def _bumps_v(comparator: Comparator, case: Case) -> float:
    """All neighbours at once, each with the part of its bump that the comparator can act on."""
    return sum(seen_v(case, comparator, bump) for bump in bumps_on(case, comparator))


def _dip_in_band_v(comparator: Comparator, case: Case) -> float:
    """The non-monotonic dip of the ramp, where it can fall between the levels; anywhere if it is not said where."""
    rail = _rail(case, comparator)
    facts = case.of(rail)
    depth_v = facts.most("dip.depth")
    if rail.dip is None or rail.dip.at is None or depth_v == 0.0:
        return depth_v
    down, up = case.gather(lambda: falling_window(case, comparator), lambda: rising_window(case, comparator))
    begins_v, ends_v = facts.most("dip.at"), facts.least("dip.at") - depth_v
    case.settle()
    return depth_v if ends_v <= up.most_v and begins_v >= down.least_v else 0.0


@rule(
    "hysteresis/present",
    title="every comparator has hysteresis",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The rising level lies above the falling one, so that a supply resting at the level gives one decision.",
    facts=("comparators.*.hysteresis", "or both of comparators.*.trip.rising and comparators.*.trip.falling"),
    mend="give the comparator a hysteresis that covers what disturbs it",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {uv: {hysteresis: none}}",
        holds="comparators: {uv: {hysteresis: {amount: 50 mV}}}",
    ),
)
def hysteresis_present(comparator: Comparator, case: Case) -> Judgement:
    """Pass if the greatest hysteresis is above zero."""
    if not _has_none(comparator):
        window = hysteresis_window(case, comparator)
        if window.most_v != 0.0:  # below zero it has the wrong sense, which is another rule's to say
            return case.passes(f"has hysteresis, {_window_text(window.least_v, window.most_v)}", at="hysteresis")
    needed = case.attempt(lambda: _needed_without(comparator, case))
    size = f"of at least {needed}" if needed else "that covers ripple, droop at release, neighbours and noise"
    return case.fails("has no hysteresis", mend=f"add hysteresis {size}", at="hysteresis")


def _window_text(least_v: float, most_v: float) -> str:
    return show(least_v, _V) if least_v == most_v else f"{show(least_v, _V)} to {show(most_v, _V)}"


def _needed_without(comparator: Comparator, case: Case) -> str:
    """What hysteresis a comparator without one needs: a dip counts wherever it is."""
    facts = case.of(_rail(case, comparator))
    need_v = hysteresis.disturbance_v(
        ripple_v=facts.most("ripple.peak_to_peak"), dip_v=facts.most("dip.depth"),
        release_droop_v=_droop_v(comparator, case), neighbours_v=_bumps_v(comparator, case),
        noise_v=_noise_v(case),
    )  # fmt: skip
    return show(need_v, _V)


def _noise_v(case: Case) -> float:
    """Noise at the stated coverage."""
    return case.whole.number("conditions.coverage") * case.own.most("noise.rms")


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
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    feedback = case.own.must("hysteresis.feedback")
    least_v = hysteresis_window(case, comparator).least_v
    up_v, down_v = _middle_v(comparator, "rising"), _middle_v(comparator, "falling")
    if feedback == "negative":
        return case.fails(
            "the feedback moves the level towards the supply: it oscillates at its level",
            mend="make the feedback positive: swap the two switches, or the two ends of the feedback",
            at="hysteresis.feedback",
        )
    swapped = up_v is not None and down_v is not None and up_v < down_v
    if swapped or least_v < 0.0:
        levels = f"{show(up_v or 0.0, _V)} rising, {show(down_v or 0.0, _V)} falling"
        found = levels if swapped else f"{show(-least_v, _V)} below at the worst"
        return case.fails(
            f"the rising level can lie below the falling one ({found})",
            mend="place the rising level above the falling one by the hysteresis",
            at="trip",
        )
    return case.passes("the decision moves the level away from the supply", at="hysteresis.feedback")


def _middle_v(comparator: Comparator, which: str) -> float | None:
    span: Voltage | None = getattr(comparator.trip, which) if comparator.trip is not None else None
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
        fails="comparators: {uv: {hysteresis: {amount: {min: 20 mV, max: 28 mV}}}}",
        holds="comparators: {uv: {hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}",
    ),
    formulas=(hysteresis.disturbance_v, hysteresis.release_droop_v),
)  # fmt: skip
def hysteresis_covers_disturbance(comparator: Comparator, case: Case) -> Judgement:
    """Compare the least hysteresis with the sum of disturbances."""
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    noise_v, disturbance, window = case.gather(
        lambda: _noise_v(case),
        lambda: _disturbance(comparator, case),
        lambda: hysteresis_window(case, comparator),
    )
    kept_v = window.least_v
    need_v = hysteresis.disturbance_v(
        ripple_v=disturbance.ripple_v, dip_v=disturbance.dip_v, release_droop_v=disturbance.droop_v,
        neighbours_v=disturbance.bumps_v, noise_v=noise_v,
    )  # fmt: skip
    return case.at_least(
        need=need_v,
        have=kept_v,
        dimension=_V,
        says="hysteresis",
        why=f"{disturbance.text()} + {show(noise_v, _V)} noise",
        mend=f"at least {show(need_v, _V)} of hysteresis; now {show(kept_v, _V)}",
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
        fails="comparators: {uv: {noise: {rms: 8 mV}}}",
        holds="comparators: {uv: {noise: {rms: 0.5 mV}}}",
    ),
    formulas=(noise.false_trip_distance_v, noise.zero_level_rate_hz),
)  # fmt: skip
def noise_trips_seldom(comparator: Comparator, case: Case) -> Judgement:
    """Compare what the disturbances leave of the hysteresis with the distance that noise needs."""
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    own, whole = case.own, case.whole
    sigma_v, bandwidth_hz = own.most("noise.rms"), own.most("noise.bandwidth")
    life_s, allowed = whole.most("conditions.service_life"), whole.number("conditions.false_trips")
    disturbance, window = case.gather(
        lambda: _disturbance(comparator, case), lambda: hysteresis_window(case, comparator)
    )
    left_v = window.least_v - disturbance.total_v
    need_v = noise.false_trip_distance_v(
        sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, life_s=life_s, allowed_trips=allowed
    )
    return case.at_least(
        need=need_v,
        have=left_v,
        dimension=_V,
        says="the hysteresis leaves noise a distance of",
        why=f"{show(window.least_v, _V)} less {disturbance.text()}; {show(sigma_v, _V)} r.m.s. of noise",
        mend=f"at least {show(need_v + disturbance.total_v, _V)} of hysteresis; now {show(window.least_v, _V)}",
        at="noise",
    )


@rule(
    "hysteresis/fits_window",
    title="the hysteresis fits between the levels that bound it",
    level=Level.ERROR,
    applies_to="comparators",
    proves="With the greatest hysteresis, the level at which the detector lets go is still reached in service: below "
    "the lowest supply delivered less half the ripple for a rising level, above the highest supply delivered plus "
    "half the ripple for the falling level of an over-voltage detector.",
    facts=(
        "comparators.*.trip", "comparators.*.hysteresis.amount", "rails.*.delivered", "rails.*.ripple.peak_to_peak",
    ),
    mend="less hysteresis, or a level that leaves it more room",
    sources=("levels against the range delivered (derived): F + H <= delivered least - ripple/2",),
    example=Example(
        fails="comparators: {uv: {trip: {rising: 1.732 V}, hysteresis: {amount: {min: 116 mV, max: 124 mV}}}}",
        holds="comparators: {uv: {trip: {rising: 1.662 V}, hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}",
    ),
)  # fmt: skip
def hysteresis_fits_window(comparator: Comparator, case: Case) -> Judgement:
    """Compare the greatest hysteresis with the room between the deciding level and the supply in service."""
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    facts = case.of(_rail(case, comparator))
    half_ripple_v = facts.most("ripple.peak_to_peak") / 2
    over = comparator.role == "over_voltage"
    edge_v = facts.most("delivered") if over else facts.least("delivered")
    rising, falling, window = case.gather(
        lambda: rising_window(case, comparator),
        lambda: falling_window(case, comparator),
        lambda: hysteresis_window(case, comparator),
    )
    service_v = edge_v + half_ripple_v if over else edge_v - half_ripple_v
    spare_v = falling.least_v - service_v if over else service_v - rising.most_v
    room_v = window.most_v + spare_v
    which, value_v = ("falling", falling.least_v) if over else ("rising", rising.most_v)
    return case.at_most(
        need=room_v,
        have=window.most_v,
        dimension=_V,
        says="greatest hysteresis",
        why=f"{which} level {'down' if over else 'up'} to {show(value_v, _V)}, supply in service "
        f"{'up' if over else 'down'} to {show(service_v, _V)}",
        mend=f"at most {show(max(room_v, 0.0), _V)} of hysteresis; now {show(window.most_v, _V)}",
        at="hysteresis.amount",
    )


@rule(
    "hysteresis/switches_complementary",
    title="the two switches of a switched level are never both open or both closed",
    level=Level.ERROR,
    applies_to="comparators",
    proves="A level that is switched between two taps or references is chosen by exactly two switches that the same "
    "output turns, one when it is high and one when it is low.",
    facts=("comparators.*.hysteresis.made_by", "comparators.*.hysteresis.switches"),
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
    """Pass if two switches hang on one output with opposite levels."""
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    made_by = case.own.must("hysteresis.made_by")
    if made_by not in ("switched_reference", "switched_tap"):
        return case.not_applicable(f"its hysteresis is made by {made_by}, without switches")
    assert isinstance(comparator.hysteresis, Hysteresis)
    switches = comparator.hysteresis.switches
    if not switches:
        case.own.lacks("hysteresis.switches")
    for index, switch in enumerate(switches):
        for fact in ("turned_by", "closed_when"):
            if getattr(switch, fact) is None:
                case.own.lacks(f"hysteresis.switches.{index}.{fact}")
    case.settle()
    mend = "two switches turned by one output, one closed when it is high and one when it is low"
    if len(switches) != 2:
        return case.fails(f"has {len(switches)} switches for two levels", mend=mend, at="hysteresis.switches")
    first, second = switches
    if first.turned_by != second.turned_by:
        what = f"its two switches are turned by {first.turned_by} and {second.turned_by}: both can be open, or closed"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    if first.closed_when == second.closed_when:
        what = f"both switches are closed when {first.turned_by} is {first.closed_when}"
        return case.fails(what, mend=mend, at="hysteresis.switches")
    return case.passes(f"its switches take turns with {first.turned_by}", at="hysteresis.switches")


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
    if _has_none(comparator):
        return case.not_applicable(_NO_HYSTERESIS)
    facts = case.of(_rail(case, comparator))
    delay_s = case.own.most("hysteresis.feedback_delay")
    nominal_v, rise_s = facts.most("nominal"), facts.least("rise")
    ripple_v, frequency_hz = facts.most("ripple.peak_to_peak"), facts.most("ripple.frequency")
    kept_v = hysteresis_window(case, comparator).least_v
    case.settle()
    ramp_v_per_s = ramp_slope_v_per_s(rise_v=nominal_v, rise_s=rise_s)
    ripple_v_per_s = hysteresis.steepest_ripple_v_per_s(peak_to_peak_v=ripple_v, frequency_hz=frequency_hz)
    fastest_v_per_s = max(ramp_v_per_s, ripple_v_per_s)
    travel_v = hysteresis.supply_travel_v(slope_v_per_s=fastest_v_per_s, delay_s=delay_s)
    what = "ramp" if fastest_v_per_s == ramp_v_per_s else "ripple"
    return case.at_most(
        need=kept_v,
        have=travel_v,
        dimension=_V,
        says="until the level has moved, the supply travels",
        why=f"{show(delay_s, Dimension.DURATION)} at {show(fastest_v_per_s, Dimension.SLOPE)}, the fastest {what}",
        mend=f"a feedback delay of at most {show(kept_v / fastest_v_per_s, Dimension.DURATION)}; "
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
