"""Passive default: while nothing drives a reset net, something holds it in reset, surely and within the budget."""

from __future__ import annotations

from collections.abc import Sequence
from contextlib import suppress
from typing import Final

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.follows_alive import why_not_alive
from tidegate.lint.derived.held_node import SureLevel, held_node, reads_it, sure_high, sure_low
from tidegate.lint.derived.rail_of import domain_rail, rail_of
from tidegate.lint.derived.reset_path import arrivals, onward
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.standing_current import circuit_takers, hold_takers, largest_first, stages_in
from tidegate.lint.description.model.reset_path import Hold, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hold, logic_levels
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_OHM: Final = Dimension.RESISTANCE
_OPPOSITE: Final = {"low": "high", "high": "low"}
_TAKERS_SHOWN: Final = 4
_COMMON_PRACTICE: Final = "common practice, no source: what nothing drives is held in its safe state"
_LEVELS: Final = "JEDEC JESD8 family, input levels at a pin, as quoted by others (see the formula)"


def _why_no_hold(stage: OutputStage) -> str:
    """Why there is no hold to judge; empty where there is one."""
    if isinstance(stage.hold, Hold):
        return ""
    if stage.hold == "none":
        return "nothing holds its output"
    return "it is not said what holds its output (passive_default/held and passive_default/chain_alive ask for it)"


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
    through = f"{reset.active}, through a resistor" if reset.active else "through a resistor"
    if bare or loose:
        path = (Hop((bare or loose)[0], ""), Hop(reset.id, EdgeKind.DRIVES.forwards))
    if bare:
        return case.fails(
            f"driven directly by {' and '.join(bare)}: the output of a comparator has no hold",
            mend=f"put a stage between {' and '.join(bare)} and the net, and hold its output {through}",
            at="driven_by",
            path=path,
        )
    if loose:
        return case.fails(
            f"nothing holds the output of {' and of '.join(loose)}, which drives it",
            mend=f"hold the output of {' and of '.join(loose)} {through}",
            at="driven_by",
            path=path,
        )
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
    "with nothing that gates it, in a domain that is always on, on the same rail or on one that is up before.",
    facts=(
        "output_stages.*.hold", "output_stages.*.domain", "output_stages.*.gated_by", "domains.*.kind",
        "domains.*.rail", "rails.*.after and rails.*.made_by, where the rails differ",
    ),
    mend="hold the output of the stage that may be dead, or move it to a domain that is up in time",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="output_stages: {rst_out: {hold: none, domain: analog}}",
        holds="output_stages: {rst_out: {hold: {to: low, through: resistor}, domain: analog}}",
    ),
)  # fmt: skip
def stages_after_hold_are_alive(stage: OutputStage, case: Case) -> Judgement:
    """Pass if every stage between the hold and each reset net is alive or held."""
    behind = onward(case, stage)
    last = any(isinstance(reader, Reset) for reader in reads_it(case, stage))
    if stage.hold is None and behind.resets and not last:
        case.own.must("hold")
    if not isinstance(stage.hold, Hold):
        return case.not_applicable(_why_no_hold(stage))
    if not behind.resets:
        return case.not_applicable("no reset net lies behind it")
    loose = [after for after in behind.stages if not isinstance(after.hold, Hold)]
    if not behind.stages:
        return case.passes("no stage comes after its hold", at="hold")
    if not loose:
        return case.passes("every stage after its hold is held too", at="hold")
    rail = rail_of(case, stage)
    dead = _dead(case, loose, rail)
    if not dead:
        return case.passes(f"alive after its hold: {', '.join(after.id for after in loose)}", at="hold")
    after, reason = dead[0]
    return case.fails(
        f"{after.id} comes after its hold, is not held, and {reason}",
        mend=f"hold the output of {after.id} too, or let it live in a domain that is always on and up with {rail.id}",
        at="hold",
        path=behind.path(after.id),
    )


def _dead(case: Case, loose: Sequence[OutputStage], rail: Rail) -> list[tuple[OutputStage, str]]:
    """The stages without a hold that may be dead while the hold before them is needed, and why."""
    found = []
    for after in loose:
        with suppress(MissingFactsError):  # noted: settle speaks of it below
            reason = why_not_alive(case, after, held_rail=rail)
            if reason and after.hold is None:
                case.of(after).lacks("hold")
            found.append((after, reason))
    case.settle()
    return [(after, reason) for after, reason in found if reason]


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
        return case.not_applicable(_why_no_hold(stage))
    behind = onward(case, stage)
    if not behind.resets:
        return case.not_applicable("no reset net lies behind it")
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
    "reset nets it drives), through the greatest hold, and what the fastest ramp couples onto it, with all else on the "
    "node at its least, leave it at a level that each stage and receiver behind it surely reads as the level held. A "
    "low level counts from ground; a high one from the least supply delivered. A standard's level is taken at the "
    "least supply of its receivers (for a high level on another rail: at the greatest).",
    facts=(
        "output_stages.*.hold", "output_stages.*.leakage", "output_stages.*.load", "resets.*.receivers",
        "output_stages.*.threshold of each stage it drives", "rails.*.nominal", "rails.*.rise",
        "rails.*.delivered, for a high level and for a standard's level", "resets.*.domain, for a standard's level",
    ),
    mend="a smaller hold resistance, less leakage, or less coupling to the rail",
    sources=("Ohm's law and a ramp through a capacitor into a resistor (derived at the formula)", _LEVELS),
    example=Example(
        fails="output_stages: {rst_out: {leakage: {max: 500 nA}}}",
        holds="output_stages: {rst_out: {leakage: {max: 20 nA}}}",
    ),
    formulas=(hold.undriven_level_v, hold.largest_hold_ohm, logic_levels.input_levels_v),
)  # fmt: skip
def hold_is_strong_enough(stage: OutputStage, case: Case) -> Judgement:
    """Compare the level that leakage and the ramp leave with what is surely read as the level held."""
    if not isinstance(stage.hold, Hold):
        return case.not_applicable(_why_no_hold(stage))
    if not reads_it(case, stage):
        return case.not_applicable("it drives nothing")
    to, node, (supply_v, sure) = case.gather(
        lambda: str(case.own.must("hold.to")),
        lambda: held_node(case, stage),
        lambda: _undriven_limit(case, stage, stage.hold),
    )
    room_v = sure.level_v if to == "low" else supply_v - sure.level_v
    parts = [f"{show(node.leakage_a, _A)} of leakage through {show(node.hold_ohm, _OHM)}: {show(node.leaks_to_v, _V)}"]
    if node.coupling_c_f:
        slope = show(node.slope_v_per_s, Dimension.SLOPE)
        parts.append(f"{show(node.coupling_c_f, Dimension.CAPACITANCE)} to a ramp of {slope}: {show(node.ramps_to_v, _V)}")
    return case.passes("")
