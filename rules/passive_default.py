"""Passive default: while nothing drives a reset net, something holds it in reset, surely and within the budget."""

from __future__ import annotations

import math
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.follows_alive import not_alive
from tidegate.lint.derived.reset_path.held_node import (
    drives_reset,
    held_node,
    larger_hold,
    reads_it,
    sure_high,
    sure_low,
)
from tidegate.lint.derived.reset_path.reset_path import arrivals, onward
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.derived.supply.rail_of import delivered_v, rail_of
from tidegate.lint.derived.supply.standing_current import circuit_takers, hold_takers, largest_first, stages_in
from tidegate.lint.description.model.reset_path import Hold, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hold, logic_levels
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_OHM: Final = Dimension.RESISTANCE
_OPPOSITE: Final = {"low": "high", "high": "low"}
_NO_RESET: Final = "no reset net lies behind it"
_TAKERS_SHOWN: Final = 4
_COMMON_PRACTICE: Final = "common practice, no source: what nothing drives is held in its safe state"
_LEVELS: Final = "JEDEC JESD8 family, input levels at a pin, as quoted by others (see the formula)"

_STRETCH: Final = """output_stages:
  stretch: {{driven_by: [gather], domain: {domain}, kind: buffer, inverting: false, hold: none, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, load: 40 fF, delay: {{min: 5 ns, max: 60 ns}}}}
  core_out: {{driven_by: [uv_core, stretch]}}
"""  # a stage between two that are held
_FIRM: Final = """output_stages: {{rst_out: {{drive: {{max: {drive}}}, load: 200 fF,
  hold: {{to: low, through: resistor, resistance: {{min: 0.4 Mohm, max: 0.5 Mohm}}, coupling: 4 fF}}}}}}
"""


def _why_no_hold(case: Case, stage: OutputStage) -> str:
    """Why there is no hold to judge."""
    if stage.hold == "none":
        return "nothing holds its output"
    asking = "held" if drives_reset(case, stage) else "chain_alive"
    return f"it is not said what holds its output (passive_default/{asking} asks for it)"


@rule(
    "passive_default/held",
    title="every stage that drives a reset net is held while it is not alive",
    level=Level.ERROR,
    applies_to="resets",
    proves="The output of each element that drives the net directly has a passive hold, so that the net has a level "
    "before its drivers work. A comparator's output has no hold: a net that a comparator drives directly is not held.",
    facts=("resets.*.driven_by", "output_stages.*.hold of each stage named there"),
    mend="hold the output of the last stage through a resistor, at the level at which the net resets",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="output_stages: {rst_out: {hold: none}}",
        holds="output_stages: {rst_out: {hold: {to: low, through: resistor}}}",
    ),
)
def reset_net_is_held(reset: Reset, case: Case) -> Judgement:
    """Pass if every driver of the net is a stage with a hold."""
    drivers = [case.graph.elements[name] for name in case.own.must("driven_by")]
    stages = [driver for driver in drivers if isinstance(driver, OutputStage)]
    bare = [driver.id for driver in drivers if not isinstance(driver, OutputStage)]
    loose = [stage.id for stage in stages if stage.hold == "none"]
    if bare or loose:
        level = f"{reset.active} " if reset.active else ""
        found, mends = [], []
        if bare:
            found.append(f"driven directly by {' and '.join(bare)}: the output of a comparator has no hold")
            mends.append(f"put a stage with an output held {level}between {' and '.join(bare)} and the net")
        if loose:
            found.append(f"nothing holds the output of {' and of '.join(loose)}, which drives it")
            mends.append(f"hold the output of {' and of '.join(loose)} {level}through a resistor")
        path = (Hop((bare or loose)[0], ""), Hop(reset.id, EdgeKind.DRIVES.forwards))
        return case.fails("; ".join(found), mend="; ".join(mends), at="driven_by", path=path)
    if not drivers:
        case.own.lacks("driven_by")
    for stage in stages:
        if stage.hold is None:
            case.of(stage).lacks("hold")
    case.settle()
    return case.passes(f"held by {' and '.join(stage.id for stage in stages)}", at="driven_by")


@rule(
    "passive_default/chain_alive",
    title="every stage after a hold is alive, or held too",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="The level of a hold comes through to each reset net: every stage on a way there is held itself, or lives, "
    "with nothing that gates it, in a domain that is always on, on the same rail or on one that is up before. Whether "
    "the last stage of all is held, passive_default/held says.",
    facts=(
        "output_stages.*.hold", "output_stages.*.domain", "output_stages.*.gated_by", "domains.*.kind",
        "domains.*.rail", "rails.*.after and rails.*.made_by, where the rails differ",
    ),
    mend="hold the output of the stage that may be dead, or move it to a domain that is up in time",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails=_STRETCH.format(domain="analog"),
        holds=_STRETCH.format(domain="aon"),
    ),
)  # fmt: skip
def stages_after_hold_are_alive(stage: OutputStage, case: Case) -> Judgement:
    """Pass if every stage between the hold and each reset net is alive or held."""
    if stage.hold == "none" or (stage.hold is None and drives_reset(case, stage)):
        return case.not_applicable(_why_no_hold(case, stage))
    behind = onward(case, stage)
    if not behind.resets:
        return case.not_applicable(_NO_RESET)
    case.own.must("hold")
    if not behind.stages:
        return case.passes("no stage comes after its hold", at="hold")
    loose = [after for after in behind.stages if not isinstance(after.hold, Hold)]
    if not loose:
        return case.passes("every stage after its hold is held too", at="hold")
    rail = rail_of(case, stage)
    dead = not_alive(case, loose, held_rail=rail)
    between = [(after, why) for after, why in dead if not drives_reset(case, after)]
    for after, _ in between:
        if after.hold is None:
            case.of(after).lacks("hold")
    case.settle()
    if between:
        after, why = between[0]
        return case.fails(
            f"{after.id} comes after its hold, is not held, and {why}",
            mend=f"hold the output of {after.id} too, or move it to a domain that is always on and up with {rail.id}",
            at="hold",
            path=behind.path(after.id),
        )
    if dead:
        return case.not_applicable(f"the output of {dead[0][0].id} is not held (passive_default/held says so)")
    return case.passes(f"alive after its hold: {', '.join(after.id for after in loose)}", at="hold")


@rule(
    "passive_default/level",
    title="a hold leaves each reset net behind it at the level at which it resets",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="On every way from the hold to a reset net, the level held, inverted as often as the stages after it "
    "invert, is the level at which that net resets.",
    facts=(
        "output_stages.*.hold.to", "output_stages.*.inverting of each stage after it (an inverter inverts, a buffer "
        "does not, where it is not said)", "resets.*.active",
    ),
    mend="hold the other level",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="output_stages: {rst_out: {hold: {to: high}}}",
        holds="output_stages: {rst_out: {hold: {to: low}}}",
    ),
)  # fmt: skip
def hold_leaves_the_active_level(stage: OutputStage, case: Case) -> Judgement:
    """Pass if the level held arrives as the active level at each reset net, on every way."""
    if not isinstance(stage.hold, Hold):
        return case.not_applicable(_why_no_hold(case, stage))
    behind = onward(case, stage)
    if not behind.resets:
        return case.not_applicable(_NO_RESET)
    active = {reset.id: reset.active for reset in behind.resets}
    for reset in behind.resets:
        if reset.active is None:
            case.of(reset).lacks("active")
    to, found = case.gather(lambda: str(case.own.must("hold.to")), lambda: arrivals(case, stage, behind))
    levels = [(arrival, _OPPOSITE[to] if arrival.inverted else to) for arrival in found]
    wrong = [(arrival, level) for arrival, level in levels if level != active[arrival.reset.id]]
    if not wrong:
        nets = dict.fromkeys(f"{arrival.reset.id} {level}" for arrival, level in levels)
        return case.passes(f"held {to}, it leaves {' and '.join(nets)}", at="hold.to", path=found[0].path)
    arrival, level = wrong[0]
    other_way = len(wrong) < len(levels)
    return case.fails(
        f"held {to}, it leaves {arrival.reset.id} {level}, which resets when {active[arrival.reset.id]}",
        mend="one inversion more, or one less, on the way shown" if other_way else f"hold its output {_OPPOSITE[to]}",
        at="hold.to",
        path=arrival.path,
    )


@rule(
    "passive_default/hold_strength",
    title="the hold keeps its level against leakage and the fastest ramp",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="What leaks onto the undriven output at the hottest corner (from the stage, and from the receivers of the "
    "reset nets it drives) through the greatest hold, and what the fastest ramp adds, leave it at a level that each "
    "stage and receiver it drives surely reads as the level held. Held low, the ramp lifts it through its coupling to "
    "the rail, with the least load on the node; held high, below the least supply delivered, it stays behind the ramp "
    "with its greatest load. The level of a standard is taken at the least supply of the receivers (a high one on "
    "another rail: at the greatest).",
    facts=(
        "output_stages.*.hold", "output_stages.*.leakage", "output_stages.*.load", "resets.*.receivers",
        "output_stages.*.threshold of each stage it drives", "rails.*.nominal", "rails.*.rise",
        "rails.*.delivered, for a high level or a standard's", "resets.*.domain, for a standard's level",
    ),
    mend="a smaller hold resistance, less leakage, or less coupling to the rail",
    sources=("Ohm's law, and a ramp through a capacitor onto a resistor (derived at the formula)", _LEVELS),
    example=Example(
        fails="resets: {por_n: {receivers: {leakage: {max: 500 nA}}}}",
        holds="resets: {por_n: {receivers: {leakage: {max: 2 nA}}}}",
    ),
    formulas=(hold.undriven_level_v, hold.largest_hold_ohm, logic_levels.input_levels_v),
)  # fmt: skip
def hold_is_strong_enough(stage: OutputStage, case: Case) -> Judgement:
    """Compare the level that leakage and the ramp leave with what is surely read as the level held."""
    if not isinstance(stage.hold, Hold):
        return case.not_applicable(_why_no_hold(case, stage))
    if not reads_it(case, stage):
        return case.not_applicable("it drives nothing")
    if case.own.must("hold.to") == "low":
        node, sure = case.gather(lambda: held_node(case, stage), lambda: sure_low(case, stage, supply="least"))
        return case.at_most(
            need=sure.level_v,
            have=node.moves_v,
            dimension=_V,
            says="not driven, it rises to",
            why=f"{node.text()}; {sure.reader} surely reads low up to {show(sure.level_v, _V)}",
            mend="" if node.moves_v <= sure.level_v else node.smaller_hold(sure.level_v),
            at="hold.resistance",
        )
    node, sure, supply_v = case.gather(
        lambda: held_node(case, stage),
        lambda: sure_high(case, stage, supply="least"),
        lambda: delivered_v(case, stage, "least"),
    )
    return case.at_least(
        need=sure.level_v,
        have=supply_v - node.moves_v,
        dimension=_V,
        says="not driven, it stays up at",
        why=f"{show(supply_v, _V)} less {node.text()}; {sure.reader} surely reads high from "
        f"{show(sure.level_v, _V)} on",
        mend="" if node.moves_v <= supply_v - sure.level_v else node.smaller_hold(supply_v - sure.level_v),
        at="hold.resistance",
    )


@rule(
    "passive_default/driver_wins",
    title="the stage wins against its own hold",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="Driven away from the level held, through its greatest drive resistance against the least hold, the output "
    "reaches a level that each stage and receiver it drives surely reads as the opposite one: against a hold to low "
    "at the least supply delivered, against a hold to high at the greatest.",
    facts=(
        "output_stages.*.hold", "output_stages.*.drive", "rails.*.delivered", "resets.*.receivers",
        "output_stages.*.threshold of each stage it drives", "resets.*.domain, for a standard's level",
    ),
    mend="a larger hold resistance, or a stronger stage",
    sources=("voltage divider (derived at the formula)", _LEVELS),
    example=Example(
        fails=_FIRM.format(drive="200 kohm"),
        holds=_FIRM.format(drive="8 kohm"),
    ),
    formulas=(hold.driven_level_v, hold.smallest_hold_for_driver_ohm, logic_levels.input_levels_v),
)  # fmt: skip
def driver_wins_against_hold(stage: OutputStage, case: Case) -> Judgement:
    """Compare the level that the stage reaches against its hold with what is surely read as the opposite level."""
    if not isinstance(stage.hold, Hold):
        return case.not_applicable(_why_no_hold(case, stage))
    if not reads_it(case, stage):
        return case.not_applicable("it drives nothing")
    drive_ohm, hold_ohm = case.own.most("drive"), case.own.least("hold.resistance")
    through = f"{show(drive_ohm, _OHM)} of drive against a hold of {show(hold_ohm, _OHM)}"
    if case.own.must("hold.to") == "low":
        supply_v, sure = case.gather(
            lambda: delivered_v(case, stage, "least"), lambda: sure_high(case, stage, supply="least")
        )
        moves_v = hold.driven_level_v(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)
        return case.at_least(
            need=sure.level_v,
            have=moves_v,
            dimension=_V,
            says="driven high, it reaches",
            why=f"{show(supply_v, _V)} through {through}; {sure.reader} surely reads high from "
            f"{show(sure.level_v, _V)} on",
            mend=larger_hold(supply_v=supply_v, needed_v=sure.level_v, drive_ohm=drive_ohm, hold_ohm=hold_ohm),
            at="hold.resistance",
        )
    supply_v, sure = case.gather(lambda: delivered_v(case, stage, "most"), lambda: sure_low(case, stage, supply="most"))
    moves_v = hold.driven_level_v(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)
    return case.at_most(
        need=sure.level_v,
        have=supply_v - moves_v,
        dimension=_V,
        says="driven low, it comes down to",
        why=f"{show(supply_v, _V)} through {through}; {sure.reader} surely reads low up to {show(sure.level_v, _V)}",
        mend=larger_hold(supply_v=supply_v, needed_v=supply_v - sure.level_v, drive_ohm=drive_ohm, hold_ohm=hold_ohm),
        at="hold.resistance",
    )


@rule(
    "passive_default/holds_within_budget",
    title="the holds fit into the current budget of their domain",
    level=Level.ERROR,
    applies_to="domains",
    proves="With every stage driven against its least hold at the greatest supply delivered, the holds, what the "
    "references, biases and comparators of the domain take at most, and what its stages are said to take or to leak "
    "(a CMOS stage at rest takes no more than it leaks, so what is not said there does not count) stay within the "
    "budget. Loads, dividers and the defaults of overrides are not counted. A domain without holds is not judged.",
    facts=(
        "domains.*.budget", "domains.*.rail", "rails.*.delivered", "output_stages.*.hold", "references.*.consumes",
        "biases.*.consumes", "comparators.*.consumes",
    ),
    mend="larger holds, or a larger budget",
    sources=("Ohm's law; currents into one domain add up",),
    example=Example(
        fails="domains: {aon: {budget: 5 uA}}",
        holds="domains: {aon: {budget: 12 uA}}",
    ),
    formulas=(hold.hold_current_a,),
)  # fmt: skip
def holds_fit_budget(domain: Domain, case: Case) -> Judgement:
    """Compare what the holds and the circuits of a domain take with its budget."""
    if all(stage.hold == "none" for stage in stages_in(case, domain)):
        return case.not_applicable("nothing in it is held")
    budget_a = case.own.most("budget")
    holds, circuits = case.gather(lambda: hold_takers(case, domain), lambda: circuit_takers(case, domain))
    takers = [*holds, *circuits]
    total_a = math.fsum(taker.current_a for taker in takers)
    return case.at_most(
        need=budget_a,
        have=total_a,
        dimension=_A,
        says="its holds and circuits take",
        why=largest_first(takers, _TAKERS_SHOWN),
        mend=f"take {show_up(total_a - budget_a, _A)} less, or a budget of at least {show_up(total_a, _A)}",
        at="budget",
    )


@rule(
    "passive_default/latch_state",
    title="a latch comes up in a defined state",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="It is said what the latch does to the reset nets behind it when its supply comes up, and it is one of two.",
    facts=("output_stages.*.kind", "output_stages.*.power_up"),
    mend="give the latch a state at power-up: set or reset it by a power-on detector, or make it lopsided",
    sources=("common practice, no source: an even latch comes up either way",),
    example=Example(
        fails="output_stages: {ov_latch: {power_up: undefined}}",
        holds="output_stages: {ov_latch: {power_up: asserts}}",
    ),
)
def latch_state_is_defined(stage: OutputStage, case: Case) -> Judgement:
    """Pass if the latch asserts, or releases, when its supply comes up."""
    if case.own.must("kind") != "latch":
        return case.not_applicable("it is no latch")
    state = case.own.must("power_up")
    if state == "undefined":
        return case.fails(
            "it comes up in either state",
            mend="let a power-on detector set or reset it, or make it lopsided",
            at="power_up",
        )
    return case.passes(f"it {state} when its supply comes up", at="power_up")


RULES: Final[tuple[Rule, ...]] = (
    reset_net_is_held,
    stages_after_hold_are_alive,
    hold_leaves_the_active_level,
    hold_is_strong_enough,
    driver_wins_against_hold,
    holds_fit_budget,
    latch_state_is_defined,
)
