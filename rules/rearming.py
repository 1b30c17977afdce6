"""Re-arming: what has reset the chip once is ready to do so again, after any dip and after any time off."""

from __future__ import annotations

from functools import partial
from typing import Final

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.guarded_loads import Bound, least_supplies
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind, unsaid_ways
from tidegate.lint.derived.reset_path.shortest_assertion import shortest_assertion
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_INFINITE: Final = float("inf")
_V: Final = Dimension.VOLTAGE
_T: Final = Dimension.DURATION
_DERIVED: Final = "a dip that ends above the level of re-arming brings no new reset (derived)"
_LEVEL: Final = "an output that is a level held for every supply below the threshold"


@rule(
    "rearming/level_held",
    title="a reset is a level held for every supply below the threshold, and no pulse",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The output is a level. A pulse comes again only once the supply has fallen below the level of re-arming: "
    "the lowest such level (rearms_below, least) must not lie below the least supply of the most demanding load that "
    "needs the rail, or a dip between the two goes without a reset. Where it does not, a pulse is for a person to look "
    "at: it ends while the supply may still be too low; of a power-on detector, it fails.",
    facts=("comparators.*.output", "comparators.*.rearms_below", "loads.*.needs.*.works", "comparators.*.pulse"),
    mend=_LEVEL,
    sources=(_DERIVED,),
    example=Example(
        fails="comparators: {por: {output: pulse, pulse: {min: 1 ms, max: 3 ms}}}",
        holds="comparators: {por: {output: level}}",
    ),
)
def reset_is_a_level(comparator: Comparator, case: Case) -> Judgement:
    """Pass for a level; for a pulse compare the level of re-arming with what the loads need."""
    if case.of(comparator).output.must() == "level":
        return case.passes("a level, held for every supply on its side of the threshold", at="output")
    length = case.if_known(case.of(comparator).pulse.least)
    pulse = "a pulse" if length is None else f"a pulse of {show(length, _T)} or more"
    if comparator.role not in LOW_ROLES:
        return case.asks(
            f"reports by {pulse}",
            why="the pulse ends whether the rail is back in its range or not",
            mend=_LEVEL,
            at="output",
        )
    rearms = case.of(comparator).rearms_below
    bounds = least_supplies(case, comparator)
    gaps = unsaid_ways(case, Reach(comparator.id, drives(case.graph))) if comparator.role != "power_on" else ()
    case.reading.block(gaps)
    if gaps and not case.at_best:
        return case.fails(f"resets by {pulse}, and may guard what needs more than brings it back", mend=_LEVEL)
    if bounds and rearms.least() < bounds[0].level_v:
        return _rearms_too_low(case, comparator, f"resets by {pulse}", bounds[0])
    rearms_v = case.if_known(rearms.least)
    again = f"it re-arms below {'a level that is not given' if rearms_v is None else show(rearms_v, _V)}"
    ends = f"resets by {pulse}, which ends however low {comparator.watches} still is"
    if comparator.role == "power_on":
        return case.fails(ends, why=again, mend=_LEVEL, at="output")
    return case.asks(
        ends, why=f"rests on {comparator.watches} coming back within the pulse; {again}", mend=_LEVEL, at="output"
    )


def _rearms_too_low(case: Case, comparator: Comparator, resets: str, need: Bound) -> Judgement:
    rearms_v = case.of(comparator).rearms_below.least()
    return case.at_least(
        need=need.level_v, have=rearms_v, dimension=_V,
        says=f"{resets}, and again only after {comparator.watches} has been below",
        why=f"{need.element} works from {show(need.level_v, _V)}: a dip that ends between {show(rearms_v, _V)} and "
        "that resets nothing",
        mend=f"{_LEVEL}; or one that re-arms below {show_up(need.level_v, _V)} at its lowest",
        at="output", path=need.path,
    )  # fmt: skip


@rule(
    "rearming/residual",
    title="what is left on a rail when it comes up again lies below the level of re-arming",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The greatest level that may be left on the watched rail is no higher than the lowest level below which the "
    "detector, which asserts while the rail is too low, is ready to work again.",
    facts=("comparators.*.rearms_below", "rails.*.residual"),
    mend="a detector that re-arms below a higher level, or a rail that is discharged when it is off",
    sources=("a start from a residual level is no start from nothing (derived)",),
    example=Example(
        fails="rails: {avdd: {residual: 0.45 V}}",
        holds="rails: {avdd: {residual: 0.35 V}}",
    ),
)
def residual_lies_below_rearming(comparator: Comparator, case: Case) -> Judgement:
    """Compare the residual level of the rail with the level of re-arming."""
    if comparator.role not in LOW_ROLES:
        return case.not_applicable("a rail that starts from below is nothing to it")
    rail = case.description.rails[comparator.watches]
    rearms_v, residual_v = case.of(comparator).rearms_below.least(), case.of(rail).residual.most()
    return case.at_most(
        need=rearms_v, have=residual_v, dimension=_V, says=f"{rail.id} may come up again from",
        why=f"ready to work again below {show(rearms_v, _V)}",
        mend=f"a detector that re-arms below {show_up(residual_v, _V)} at its lowest, or a residual level of "
        f"{show_down(rearms_v, _V)} or less", at="rearms_below",
    )  # fmt: skip


@rule(
    "rearming/discharge",
    title="a release delay begins anew after every dip and every time off",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="Something discharges the capacitor of the release delay (or clears its counter), within a time no longer "
    "than the least time the rails behind it stay off, and no longer than any dip asserts that takes a load out of its "
    "range: (F - L)/s_down + (R - L)/s_up with the lowest levels, the least supply of the load and the steepest slopes "
    "of the rail.",
    facts=(
        "output_stages.*.release_delay", "output_stages.*.discharge", "rails.*.off_time", "rails.*.nominal, rise, fall "
        "and collapse", "comparators.*.trip", "loads.*.needs.*.works",
    ),
    mend="a transistor across the capacitor that the assertion turns on",
    sources=("a capacitor that is not emptied starts the next delay part of the way up (derived)",),
    example=Example(
        fails="output_stages: {rst_out: {discharge: none}}",
        holds="output_stages: {rst_out: {discharge: {within: 2 us}}}",
    ),
    formulas=(*LEVEL_FORMULAS,),
)  # fmt: skip
def release_delay_begins_anew(stage: OutputStage, case: Case) -> Judgement:
    """Compare the time of discharge with the shortest time off and the shortest assertion."""
    if stage.release_delay is None:
        return case.not_applicable("it has no release delay")
    if case.of(stage).discharge.must() == "none":
        delay = case.if_known(case.of(stage).release_delay.most)
        length = "" if delay is None else f" of up to {show(delay, _T)}"
        return case.fails(
            f"nothing sets its release delay{length} back: the next one may be over at once",
            mend="a transistor across the capacitor that the assertion turns on",
            at="discharge",
        )
    found = (case.graph.elements[name] for name in Reach(stage.id, driven_by(case.graph)))
    detectors = [one for one in found if isinstance(one, Comparator) and one.role in LOW_ROLES]
    gaps = gaps_behind(case, stage.id)
    if not detectors:
        case.missing.extend(gaps)
        case.settle()
        return case.not_applicable("no under-voltage or power-on detector stands behind it")
    case.reading.block(gaps)
    limits = [(0.0, "more may stand behind it", 0.0)] if gaps and not case.at_best else []
    limits += [_time_off(case, name) for name in dict.fromkeys(one.watches for one in detectors)]
    for shortest in case.each(partial(shortest_assertion, case, one) for one in detectors):
        if shortest is not None:
            why = f"a dip that takes {shortest.load} out of its range makes {shortest.detector} assert for "
            limits.append((shortest.time_s, f"{why}{show(shortest.time_s, _T)} or more", shortest.loose_s))
    need_s, why, _ = min(limits)
    loose_s = min(time_s + more_s for time_s, _, more_s in limits) - need_s
    return case.at_most(
        need=Sum(need_s, (), loose_s if loose_s < _INFINITE else 0.0), have=case.of(stage).discharge.within.most(),
        dimension=_T,
        says="its release delay is set back within", why=why, mend=f"a discharge within {show_down(need_s, _T)}",
        at="discharge.within",
    )  # fmt: skip


def _time_off(case: Case, rail: str) -> tuple[float, str, float]:
    """How long a rail stays off at the least, in s, in words, and by how much longer it may."""
    off_s = case.of(case.description.rails[rail]).off_time.least()
    return off_s, f"{rail} stays off for {show(off_s, _T)} or more", 0.0


RULES: Final[tuple[Rule, ...]] = (reset_is_a_level, residual_lies_below_rearming, release_delay_begins_anew)
