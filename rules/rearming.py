"""Re-arming: what has reset the chip once is ready to do so again, after any dip and after any time off."""

from __future__ import annotations

from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.guarded_loads import least_supplies
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES
from tidegate.lint.derived.reset_path.shortest_assertion import shortest_assertion
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Discharge, OutputStage
from tidegate.lint.graph.paths import Reach, driven_by
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

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
    if case.own.must("output") == "level":
        return case.passes("a level, held for every supply on its side of the threshold", at="output")
    length = case.attempt(lambda: case.own.least("pulse"))
    pulse = "a pulse" if length is None else f"a pulse of {show(length, _T)} or more"
    if comparator.role not in LOW_ROLES:
        return case.asks(
            f"reports by {pulse}",
            why="the pulse ends whether the rail is back in its range or not",
            mend=_LEVEL,
            at="output",
        )
    rearms_v = case.own.least("rearms_below")
    (bounds,) = case.gather_all([partial(least_supplies, case, comparator)])
    power_on = comparator.role == "power_on"
    if bounds:
        need = bounds[0]
        measure = Measure(need.level_v, rearms_v, _V, Relation.AT_LEAST)
        if not measure.holds:
            return case.at_least(
                need=need.level_v, have=rearms_v, dimension=_V,
                says=f"resets by {pulse}, and again only after {comparator.watches} has been below",
                why=f"{need.element} works from {show(need.level_v, _V)}: a dip that ends between "
                f"{show(rearms_v, _V)} and that resets nothing",
                mend=f"{_LEVEL}; or one that re-arms below {show_up(need.level_v, _V)} at its lowest",
                at="output", path=need.path,
            )  # fmt: skip
    if power_on:
        return case.fails(
            f"resets by {pulse}, which ends however low {comparator.watches} still is",
            why=f"it re-arms below {show(rearms_v, _V)}",
            mend=_LEVEL,
            at="output",
        )
    return case.asks(
        f"resets by {pulse}, which ends however low {comparator.watches} still is",
        why=f"rests on {comparator.watches} coming back within the pulse; it re-arms below {show(rearms_v, _V)}",
        mend=_LEVEL,
        at="output",
    )


@rule(
    "rearming/residual",
    title="what is left on a rail when it comes up again lies below the level of re-arming",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The greatest level that may be left on the watched rail is no higher than the lowest level below which the "
    "detector is ready to work again. A power-on detector, and one whose output is a pulse, must say that level.",
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
    if comparator.rearms_below is None and comparator.role != "power_on" and comparator.output != "pulse":
        return case.not_applicable("states no level of re-arming, and is not what starts the chip")
    rail = case.description.rails[comparator.watches]
    rearms_v, residual_v = case.own.least("rearms_below"), case.of(rail).most("residual")
    case.settle()
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
)  # fmt: skip
def release_delay_begins_anew(stage: OutputStage, case: Case) -> Judgement:
    """Compare the time of discharge with the shortest time off and the shortest assertion."""
    if stage.release_delay is None:
        return case.not_applicable("it has no release delay")
    if case.own.must("discharge") == "none":
        delay = case.attempt(lambda: case.own.most("release_delay"))
        length = "" if delay is None else f" of up to {show(delay, _T)}"
        return case.fails(
            f"nothing sets its release delay{length} back: the next one may be over at once",
            mend="a transistor across the capacitor that the assertion turns on",
            at="discharge",
        )
    assert isinstance(stage.discharge, Discharge)
    within_s = case.own.most("discharge.within")
    found = (case.graph.elements[name] for name in Reach(stage.id, driven_by(case.graph)))
    detectors = [one for one in found if isinstance(one, Comparator) and one.role in LOW_ROLES]
    if not detectors:
        case.settle()
        return case.not_applicable("no under-voltage or power-on detector stands behind it")
    limits: list[tuple[float, str]] = []
    for name in dict.fromkeys(one.watches for one in detectors):
        off_s = case.of(case.description.rails[name]).least("off_time")
        limits.append((off_s, f"{name} stays off for {show(off_s, _T)} or more"))
    for shortest in case.gather_all(partial(shortest_assertion, case, one) for one in detectors):
        if shortest is not None:
            limits.append(
                (
                    shortest.time_s,
                    f"a dip that takes {shortest.load} out of its range makes {shortest.detector} assert for "
                    f"{show(shortest.time_s, _T)} or more",
                )
            )
    need_s, why = min(limits)
    return case.at_most(
        need=need_s, have=within_s, dimension=_T, says="its release delay is set back within", why=why,
        mend=f"a discharge within {show_down(need_s, _T)}", at="discharge.within",
    )  # fmt: skip


RULES: Final[tuple[Rule, ...]] = (reset_is_a_level, residual_lies_below_rearming, release_delay_begins_anew)
