"""Passive default: while nothing drives a reset net, something holds it in reset, surely and within the budget."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from functools import partial
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path import held_node
from tidegate.lint.derived.reset_path.dead_output import dead_output, says_dead_output
from tidegate.lint.derived.reset_path.follows_alive import why_not_alive
from tidegate.lint.derived.reset_path.held_node import drives_reset, reads_it
from tidegate.lint.derived.reset_path.path_gaps import gaps_onward
from tidegate.lint.derived.reset_path.reset_path import arrivals, onward
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.standing_current import circuit_draws, drawn, hold_draws, largest_first
from tidegate.lint.derived.unsaid import found_out, missing
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Hold, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.facts.reading import Better
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hold, ramp
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_OPPOSITE: Final[Mapping[held_node.Level, held_node.Level]] = {"low": "high", "high": "low"}
_NO_RESET: Final = "no reset net lies behind it"
_NOTHING: Final = "it drives nothing"
_TAKERS_SHOWN: Final = 4
_COMMON_PRACTICE: Final = "common practice, no source: what nothing drives is held in its safe state"
_LEVELS: Final = "JEDEC JESD8 family, input levels at a pin, as quoted by others (see the formula)"

_STRETCH: Final = """output_stages:
  stretch: {{driven_by: [gather], domain: {domain}, kind: buffer, inverting: false, hold: none, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, load: 40 fF, delay: {{min: 5 ns, max: 60 ns}},
    consumes: 5 nA}}
  core_out: {{driven_by: [uv_core, stretch]}}
"""  # a stage between two that are held
_FIRM: Final = """output_stages: {{rst_out: {{drive: {{max: {drive}}}, load: 200 fF,
  hold: {{to: low, through: resistor, resistance: {{min: 0.4 Mohm, max: 0.5 Mohm}}, coupling: 4 fF}}}}}}
"""


def _unheld(stage: OutputStage, case: Case, gaps: tuple[str, ...], *, leads: bool, nowhere: str) -> Judgement | None:
    """Why there is no hold to judge; None where there is one.

    Raises: MissingFactsError: where it is not said what holds the stage, or whether it leads anywhere.
    """
    if stage.hold == "none":
        return case.not_applicable("nothing holds its output")
    if not leads and not gaps:
        return case.not_applicable(nowhere)
    if not leads:
        missing(gaps)
    case.of(stage).hold.must()
    return None


@rule(
    "passive_default/held",
    title="every driver of a reset net leaves it at a level while it is not alive",
    level=Level.ERROR,
    applies_to="resets",
    proves="The net has a level before its drivers work: the output of each stage that drives it directly has a "
    "passive hold, and a detector that drives it directly is said to assert it while it cannot decide, by itself or by "
    "what holds its output. One that is said to let the net go meanwhile counts where another driver keeps it in "
    "reset, unless all must agree. How a detector is drawn says nothing of it.",
    facts=(
        "resets.*.driven_by", "output_stages.*.hold of each stage named there",
        "comparators.*.undecided of each detector named there",
    ),
    mend="hold the output of the last stage through a resistor, at the level at which the net resets",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="output_stages: {rst_out: {hold: none}}",
        holds="output_stages: {rst_out: {hold: {to: low, through: resistor}}}",
    ),
)  # fmt: skip
def reset_net_is_held(reset: Reset, case: Case) -> Judgement:
    """Pass if every driver of the net leaves it at a level, and one of them in reset."""
    drivers: dict[str, Any] = {name: case.graph.elements[name] for name in case.of(reset).driven_by.must()}
    outputs = {name: dead_output(driver) for name, driver in drivers.items()}
    loose = [name for name, output in outputs.items() if output == "loose"]
    if loose:
        return _loose_drivers(reset, case, [drivers[name] for name in loose])
    if unknown := [name for name, output in outputs.items() if output is None]:
        missing(tuple(says_dead_output(drivers[name]) for name in unknown))
    kept = [name for name, output in outputs.items() if output == "kept"]
    let_go = [name for name, output in outputs.items() if output == "let go"]
    if let_go and (not kept or case.of(reset).combine.must() == "all_agree"):
        agree = "all must agree" if kept else "nothing else keeps it in reset"
        return case.fails(
            f"{_and(let_go)} {'let' if len(let_go) > 1 else 'lets'} it go while unable to decide, and {agree}",
            mend=f"let {_and(let_go)} assert until able to decide, or any of the drivers keep the net in reset",
            at="driven_by", path=(Hop(let_go[0], ""), Hop(reset.id, EdgeKind.DRIVES.forwards)),
        )  # fmt: skip
    return case.passes(f"held by {_and(kept)}", at="driven_by")


def _loose_drivers(reset: Reset, case: Case, loose: Sequence[OutputStage | Comparator]) -> Judgement:
    """Say what leaves a net at no level."""
    stages = [driver.id for driver in loose if isinstance(driver, OutputStage)]
    bare = [driver.id for driver in loose if isinstance(driver, Comparator)]
    level = f"{reset.active} " if reset.active else ""
    found, mends = [], []
    if bare:
        found.append(f"driven directly by {_and(bare)}, whose output is not defined while it cannot decide")
        mends.append(f"put a stage with an output held {level}between {_and(bare)} and the net")
    if stages:
        found.append(f"nothing holds the output of {' and of '.join(stages)}, which drives it")
        mends.append(f"hold the output of {' and of '.join(stages)} {level}through a resistor")
    path = (Hop((bare or stages)[0], ""), Hop(reset.id, EdgeKind.DRIVES.forwards))
    return case.fails("; ".join(found), mend="; ".join(mends), at="driven_by", path=path)


def _and(names: Iterable[str]) -> str:
    return " and ".join(dict.fromkeys(names))


@rule(
    "passive_default/chain_alive",
    title="every stage after a hold is alive, or held too",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="The level of a hold comes through to the last stage of each reset net behind it: every stage on a way "
    "there is held itself, or lives, with nothing that gates it, in a domain that is always on, on the same rail or on "
    "one that is up before. The stages that drive a net are judged by passive_default/held.",
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
    """Pass if every stage between the hold and the last stage of each reset net is alive or held."""
    behind, gaps = onward(case, stage), gaps_onward(case, stage.id)
    if (other := _unheld(stage, case, gaps, leads=bool(behind.resets), nowhere=_NO_RESET)) is not None:
        return other
    loose = [one for one in behind.stages if not isinstance(one.hold, Hold) and not drives_reset(case, one)]
    lacking = list(gaps)
    for after in loose:
        why, lacks = found_out(case, partial(why_not_alive, case, after, held=stage))
        if why and after.hold == "none":
            return case.fails(
                f"{after.id} comes after its hold, is not held, and {why}",
                mend=f"hold the output of {after.id} too, or move it to a domain that is always on and up with "
                f"{rail_of(case, stage).id}", at="hold", path=behind.path(after.id),
            )  # fmt: skip
        lacking += [*lacks, after.fact("hold")] if why else lacks
    if lacking:
        missing(tuple(lacking))
    if loose:
        return case.passes(f"alive after its hold: {', '.join(after.id for after in loose)}", at="hold")
    if all(isinstance(after.hold, Hold) for after in behind.stages):
        held = "every stage after its hold is held too" if behind.stages else "no stage comes after its hold"
        return case.passes(held, at="hold")
    return case.passes("no stage that is not held stands between its hold and the last one", at="hold")


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
    behind, gaps = onward(case, stage), gaps_onward(case, stage.id)
    if (other := _unheld(stage, case, gaps, leads=bool(behind.resets), nowhere=_NO_RESET)) is not None:
        return other
    to, found = case.of(stage).hold.to.must(), arrivals(case, stage, behind)
    levels = [(arrival, _OPPOSITE[to] if arrival.inverted else to) for arrival in found]
    wrong = [(arrival, level) for arrival, level in levels if level != case.of(arrival.reset).active.must()]
    if wrong:
        arrival, level = wrong[0]
        other_way = len(wrong) < len(levels)
        return case.fails(
            f"held {to}, it leaves {arrival.reset.id} {level}, which resets when {_OPPOSITE[level]}",
            mend="one inversion more, or one less, on the way shown" if other_way
            else f"hold its output {_OPPOSITE[to]}",
            at="hold.to", path=arrival.path,
        )  # fmt: skip
    if gaps:
        missing(gaps)
    nets = _and(f"{arrival.reset.id} {level}" for arrival, level in levels)
    return case.passes(f"held {to}, it leaves {nets}", at="hold.to", path=found[0].path)


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
    formulas=(hold.leakage_level_v, hold.ramp_level_v, hold.largest_hold_ohm, ramp.ramp_slope_v_per_s),
)  # fmt: skip
def hold_is_strong_enough(stage: OutputStage, case: Case) -> Judgement:
    """Compare the level that leakage and the ramp leave with what is surely read as the level held."""
    gaps = gaps_onward(case, stage.id)
    if (other := _unheld(stage, case, gaps, leads=bool(reads_it(case, stage)), nowhere=_NOTHING)) is not None:
        return other
    to = case.of(stage).hold.to.must()
    moved = held_node.moves(case, stage, to)
    need = held_node.surely_read(case, stage, to, "least", gaps)
    reads = held_node.sure_level(case, stage, to, "least").text(to)
    moves = held_node.moves_text(case, stage, to, moved)
    if to == "low":
        return case.at_most(
            need=need, have=moved, dimension=_V, says="not driven, it rises to", why=f"{moves}; {reads}",
            mend=held_node.stronger_hold(case, stage, to, need.value), at="hold.resistance",
        )  # fmt: skip
    supply = held_node.supply_kept(case, stage)
    return case.at_least(
        need=need, have=supply.less(moved), dimension=_V, says="not driven, it stays up at",
        why=f"{show(supply.value, _V)} less {moves}; {reads}",
        mend=held_node.stronger_hold(case, stage, to, supply.value - need.value), at="hold.resistance",
    )  # fmt: skip


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
    formulas=(hold.driven_level_v, hold.level_left_v, hold.smallest_hold_for_driver_ohm),
)  # fmt: skip
def driver_wins_against_hold(stage: OutputStage, case: Case) -> Judgement:
    """Compare the level that the stage reaches against its hold with what is surely read as the opposite level."""
    gaps = gaps_onward(case, stage.id)
    if (other := _unheld(stage, case, gaps, leads=bool(reads_it(case, stage)), nowhere=_NOTHING)) is not None:
        return other
    to = case.of(stage).hold.to.must()
    away = _OPPOSITE[to]
    supply: held_node.End = "least" if to == "low" else "most"
    have = held_node.driven_v(case, stage, to)
    need = held_node.surely_read(case, stage, away, supply, gaps)
    answer = case.at_least if to == "low" else case.at_most
    return answer(
        need=need, have=have, dimension=_V,
        says="driven high, it reaches" if to == "low" else "driven low, it comes down to",
        why=f"{held_node.drive_text(case, stage, to)}; {held_node.sure_level(case, stage, away, supply).text(away)}",
        mend=held_node.larger_hold(case, stage, to, need.value), at="hold.resistance",
    )  # fmt: skip


@rule(
    "passive_default/holds_within_budget",
    title="the holds fit into the current budget of their domain",
    level=Level.ERROR,
    applies_to="domains",
    proves="With every stage driven against its least hold at the greatest supply delivered, the holds and what the "
    "references, biases, comparators and stages of the domain take at most stay within the budget. What does not say "
    "where it lives may live there. Loads, dividers and the defaults of overrides are not counted. A domain in which "
    "nothing is held is not judged.",
    facts=(
        "domains.*.budget", "domains.*.rail", "rails.*.delivered", "output_stages.*.hold", "output_stages.*.consumes",
        "references.*.consumes", "biases.*.consumes", "comparators.*.consumes", "the domain of each of them",
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
    holds = list(hold_draws(case, domain))
    if not holds:
        return case.not_applicable("nothing in it is held")
    taken, budget_a = drawn(case, [*holds, *circuit_draws(case, domain)]), case.of(domain).budget.most(Better.MORE)
    return case.at_most(
        need=budget_a, have=taken, dimension=_A, says="its holds and circuits take",
        why=largest_first(taken, _TAKERS_SHOWN),
        mend=f"take {show_up(taken.value - budget_a, _A)} less, or a budget of at least {show_up(taken.value, _A)}",
        at="budget",
    )  # fmt: skip


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
    if case.of(stage).kind.must() != "latch":
        return case.not_applicable("it is no latch")
    state = case.of(stage).power_up.must()
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
