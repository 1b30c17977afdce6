"""Reach: each load is reset by what judges its rails, sharply, in step with its clock, by safely joined sources."""

from __future__ import annotations

from collections.abc import Iterable
from functools import partial
from typing import Any, Final

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.guarding_nets import (
    LOW_ROLES,
    detectors_behind_nets,
    guard_gaps,
    guarding_nets,
    watching,
)
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.derived.unsaid import missing, not_whole
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load, OutputStage, Reset
from tidegate.lint.facts.view import factors
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.graph.paths import Reach, driven_by
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import rc_edge
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_T: Final = Dimension.DURATION
_NO_NET: Final = "no reset net guards it"
_AGREE: Final = (
    "common practice, no source: one of two that must agree may fail to assert, and the reset is lost with it"
)


def _and(names: Iterable[str]) -> str:
    return " and ".join(names)


@rule(
    "reach/has_reset",
    title="every load is held in reset by some net",
    level=Level.ERROR,
    applies_to="loads",
    proves="A reset net guards the load, or the domain it lives in. A load that makes a rail may run without one. It "
    "fails only where reset nets are said to be complete.",
    facts=("resets.*.guards", "loads.*.domain, where a net guards a domain", "rails.*.made_by", "complete"),
    mend="let a reset net guard it",
    sources=("common practice, no source: what must not run outside its range is reset there",),
    example=Example(
        fails="resets: {core_rst_n: {guards: [adc]}}",
        holds="resets: {core_rst_n: {guards: [core, adc]}}",
    ),
)
def load_has_a_reset(load: Load, case: Case) -> Judgement:
    """Pass if a net guards it."""
    nets = guarding_nets(case.graph, load)
    if nets:
        return case.passes(f"guarded by {_and(nets)}")
    makes = case.graph.tails(load.id, EdgeKind.MADE_BY)
    if makes:
        return case.not_applicable(f"it makes {_and(makes)}, and may run without a reset")
    if gaps := guard_gaps(case, load):
        missing(gaps)
    if others := not_whole(case, "resets"):
        return case.open(others, "no net that is described guards it")
    return case.fails("no reset net guards it", mend=f"let a reset net guard {load.id}, or its domain")


@rule(
    "reach/every_rail",
    title="each load is reset by detectors that judge every rail it needs",
    level=Level.ERROR,
    applies_to="loads",
    proves="For every rail that the load needs and that an under-voltage or power-on detector watches, the decision of "
    "such a detector reaches a net that guards the load. A rail that no such detector watches is the matter of "
    "coverage/under_voltage, a load that no net guards that of reach/has_reset.",
    facts=("loads.*.needs", "resets.*.guards and driven_by", "output_stages.*.driven_by", "comparators.*.watches"),
    mend="lead the decision of the detector to a net that guards the load",
    sources=("common practice, no source: a reset that does not judge a rail does not protect against it",),
    example=Example(
        fails="resets: {por_n: {guards: [adc, core_regulator, core_logic]}, core_rst_n: {guards: [adc]}}",
        holds="resets: {core_rst_n: {guards: [core_logic, adc]}}",
    ),
)
def every_rail_is_judged(load: Load, case: Case) -> Judgement:
    """Pass if a detector of each rail resets the load."""
    nets, gaps = guarding_nets(case.graph, load), guard_gaps(case, load)
    if not nets and not gaps:
        return case.not_applicable(_NO_NET)
    if not load.needs:
        case.of(load).lacks("needs")
        case.settle()
    behind = case.graph.once(detectors_behind_nets)
    judged = {one.watches for net in nets for one in behind[net] if one.role in LOW_ROLES}
    watched = {need.rail: watching(case.graph, need.rail, LOW_ROLES) for need in load.needs}
    lost = [rail for rail, detectors in watched.items() if detectors and rail not in judged]
    if not lost:
        found = [rail for rail in watched if rail in judged]
        return (
            case.passes(f"reset for {_and(found)}") if found else case.not_applicable(f"nobody watches {_and(watched)}")
        )
    if lacking := (*gaps, *(fact for net in nets for fact in gaps_behind(case, net))):
        missing(lacking)
    rail = lost[0]
    detectors = [one.id for one in watched[rail]]
    return case.fails(
        f"it needs {rail}, and no detector of {rail} resets it",
        why=f"{_and(detectors)} {'watch' if len(detectors) > 1 else 'watches'} {rail}, and "
        f"{'do' if len(detectors) > 1 else 'does'} not reach {_and(nets)}",
        mend=f"lead the decision of {' or '.join(detectors)} to {' or '.join(nets)}",
        at="needs",
        path=(Hop(load.id, ""), Hop(rail, EdgeKind.SUPPLIED_BY.forwards)),
    )


@rule(
    "reach/edge",
    title="a reset net is driven sharply enough for its receivers",
    level=Level.WARNING,
    applies_to="resets",
    proves="The time in which each stage that drives the net takes it from a tenth to nine tenths of its way, with its "
    "greatest drive resistance and all the capacitance of the net (receivers included), is no longer than the slowest "
    "edge that a plain input may see. The number of receivers counts through that capacitance alone.",
    facts=("resets.*.driven_by", "output_stages.*.drive", "output_stages.*.load", "process.plain_edge"),
    mend="a stronger stage, a tree of stages, or receivers with hysteresis",
    sources=("solution of dV/dt = (Vf - V)/(R C) (derived)",),
    example=Example(
        fails="output_stages: {rst_out: {load: 8 pF}}",
        holds="output_stages: {rst_out: {load: 5 pF}}",
    ),
    formulas=(rc_edge.rc_edge_s,),
)
def net_is_driven_sharply(reset: Reset, case: Case) -> Judgement:
    """Compare the slowest edge of the net with the slowest that plain inputs may see."""
    drivers = case.of(reset).driven_by.must()
    stages = [case.description.output_stages[name] for name in drivers if name in case.description.output_stages]
    if not stages:
        return case.not_applicable("no stage drives it")
    edges = [(_edge(case, stage), stage) for stage in stages]
    edge, stage = max(edges, key=lambda found: found[0].value)
    plain = case.whole.process.plain_edge
    count = reset.receivers.count if reset.receivers is not None else None
    among = f", {count} receivers among it" if count is not None else ""
    return case.at_most(
        need=case.sum(plus("slowest edge of plain inputs", plain.least, of=plain)), have=edge, dimension=_T,
        says=f"{stage.id} moves it within", why=f"{_driven(case, stage)}{among}",
        mend=case.if_known(lambda: _sharper(case, stage)) or "a stronger stage, or less load", at="driven_by",
        path=(Hop(stage.id, ""), Hop(reset.id, EdgeKind.DRIVES.forwards)),
    )  # fmt: skip


def _driven(case: Case, stage: OutputStage) -> str:
    """What drives what, as far as it is known."""
    own = case.of(stage)
    drive = case.if_known(lambda: show(own.drive.most(), Dimension.RESISTANCE)) or "what is not given"
    load = case.if_known(lambda: show(own.load.most(), Dimension.CAPACITANCE)) or "what is not given"
    return f"{drive} of drive on {load}"


def _sharper(case: Case, stage: OutputStage) -> str:
    """The drive, or the load, with which the edge would be no longer than asked for; empty where there is none."""
    tau_s = case.whole.process.plain_edge.least() / rc_edge.TEN_TO_NINETY
    drive_ohm, load_f = case.of(stage).drive.most(), case.of(stage).load.most()
    if not (drive_ohm > 0.0 and load_f > 0.0):
        return ""
    drive, load = show_down(tau_s / load_f, Dimension.RESISTANCE), show_down(tau_s / drive_ohm, Dimension.CAPACITANCE)
    return f"a drive of {drive} or less, or a load of {load} or less"


def _edge(case: Case, stage: OutputStage) -> Sum:
    """The slowest edge that a stage makes, from a tenth to nine tenths."""
    return case.sum(plus(f"edge of {stage.id}", partial(_edge_s, case, stage), of=case.of(stage).drive))


def _edge_s(case: Case, stage: OutputStage) -> float:
    drive_ohm, load_f = factors(case.of(stage).drive, case.of(stage).load)
    return rc_edge.rc_edge_s(r_ohm=drive_ohm, c_f=load_f)


@rule(
    "reach/synchronised",
    title="a load with a clock is released in step with it",
    level=Level.WARNING,
    applies_to="loads",
    proves="The author says that the load has no clock, or that its reset is released in step with its clock: else its "
    "parts may see the release in different periods.",
    facts=("loads.*.clocked", "loads.*.synchronised"),
    mend="a synchroniser for the release, at the load or on the way to it",
    sources=("common practice, no source: assert at once, release in step with the clock",),
    example=Example(
        fails="loads: {core_logic: {synchronised: false}}",
        holds="loads: {core_logic: {synchronised: true}}",
    ),
)
def release_is_synchronised(load: Load, case: Case) -> Judgement:
    """Pass if the release of a clocked load is in step with its clock."""
    gaps = guard_gaps(case, load)
    if not guarding_nets(case.graph, load):
        return case.not_applicable(_NO_NET) if not gaps else missing(gaps)
    if not case.of(load).clocked.must():
        return case.not_applicable("it has no clock")
    if case.of(load).synchronised.must():
        return case.passes("released in step with its clock", at="synchronised")
    return case.fails(
        "it has a clock, and its reset is released at any time",
        mend="release its reset in step with its clock: assert at once, release through a synchroniser",
        at="synchronised",
    )


def _redundant_rule(section: str, word: str, example: Example) -> Rule:
    return rule(
        f"reach/{word}_combined_safely",
        title=f"several sources of a {word.replace('_', ' ')} are combined so that each can assert alone",
        level=Level.ERROR,
        applies_to=section,
        proves="Several drivers are combined so that any of them asserts. That all must agree is safe only where it is "
        "said to be meant against false resets, and where every driver carries a detector of the same role on the same "
        "rail: else a supply that only one of them judges resets nothing.",
        facts=(f"{section}.*.driven_by", f"{section}.*.combine", f"{section}.*.combined_against"),
        mend="combine: any_asserts",
        sources=(_AGREE,),
        example=example,
    )(_judge_combination)


def _judge_combination(joint: Any, case: Case) -> Judgement:
    """Pass if any driver asserts, or if like detectors must agree for a reason that is said."""
    drivers, gaps = case.of(joint).driven_by.must(), gaps_behind(case, joint.id)
    if len(drivers) < 2:
        return case.not_applicable("it has one driver")
    if case.of(joint).combine.must() == "any_asserts":
        return case.passes("any of its drivers asserts", at="combine")
    judged = {name: _judges(case, name) for name in drivers}
    kinds = dict.fromkeys(kind for found in judged.values() for kind in found)
    unlike = next((kind for kind in kinds if any(kind not in found for found in judged.values())), None)
    if unlike is not None and not gaps:
        role, rail = unlike
        silent = next(name for name, found in judged.items() if unlike not in found)
        return case.fails(
            f"{_and(drivers)} must all agree, and {silent} does not judge {rail} for {role.replace('_', ' ')}",
            why=f"what judges {rail} cannot assert it alone",
            mend="combine: any_asserts",
            at="combine",
            path=(Hop(silent, ""), Hop(joint.id, EdgeKind.DRIVES.forwards)),
        )
    if case.of(joint).combined_against.must() == "missed_reset":
        return case.fails(
            f"{_and(drivers)} must all agree: one that fails to assert keeps the others from it",
            why="it is meant against a missed reset, which it makes more likely",
            mend="combine: any_asserts, which is the safe way against a missed reset",
            at="combine",
        )
    if gaps:
        missing(gaps)
    return case.passes("like detectors must agree, against false resets", at="combined_against")


def _judges(case: Case, driver: str) -> frozenset[tuple[str, str]]:
    """Role and rail of every detector whose decision a driver carries."""
    found = (case.graph.elements[name] for name in Reach(driver, driven_by(case.graph)))
    return frozenset((one.role, one.watches) for one in found if isinstance(one, Comparator))


RULES: Final[tuple[Rule, ...]] = (
    load_has_a_reset,
    every_rail_is_judged,
    net_is_driven_sharply,
    release_is_synchronised,
    _redundant_rule(
        "output_stages",
        "stage",
        Example(
            fails="output_stages: {gather: {combine: all_agree}}",
            holds="output_stages: {gather: {combine: any_asserts}}",
        ),
    ),
    _redundant_rule(
        "resets",
        "reset_net",
        Example(
            fails="resets: {por_n: {driven_by: [rst_out, gather], combine: all_agree, combined_against: missed_reset}}",
            holds="resets: {por_n: {driven_by: [rst_out, gather], combine: any_asserts}}",
        ),
    ),
)
