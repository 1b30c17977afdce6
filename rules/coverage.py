"""Coverage: every rail is watched by what it needs, every reset guards something, and everything is used."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES, detectors_behind_nets, note_undriven, watching
from tidegate.lint.derived.reset_path.override import aimless_overrides, lifted, lifted_by_overrides, overrides_of
from tidegate.lint.derived.reset_path.used_by import NAMED_BY, is_used, unsaid_uses
from tidegate.lint.derived.supply.supply_limit import supply_limit
from tidegate.lint.description.model.reset_path import Bypass, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.dominators import on_every_way
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_DETECTORS: Final = "*"
"""Stands for all detectors of a net together; no element has this name."""


def _and(names: list[str]) -> str:
    return " and ".join(names)


@rule(
    "coverage/under_voltage",
    title="every rail that a load needs is watched for too low a supply",
    level=Level.ERROR,
    applies_to="rails",
    proves="An under-voltage or power-on detector watches the rail, or only loads need it that make rails which are "
    "watched. Whether its decision reaches the reset of each load is judged by reach/every_rail, whether its level "
    "protects the loads by trip_window/guarantee.",
    facts=("comparators.*.watches and role", "loads.*.needs"),
    mend="an under-voltage detector on the rail",
    sources=("common practice, no source: what nobody watches may fail unnoticed",),
    example=Example(
        fails="{comparators: {uv_core: null}, bypasses: {skip_core: null}, output_stages: {core_out: {driven_by: "
        "[gather]}}, neighbours: {core_return: null}}",
        holds="comparators: {uv_core: {role: under_voltage, watches: vcore}}",
    ),
)
def rail_is_watched_from_below(rail: Rail, case: Case) -> Judgement:
    """Pass if a detector that asserts at too low a supply watches the rail."""
    loads = [name for name in case.graph.tails(rail.id, EdgeKind.SUPPLIED_BY) if name in case.description.loads]
    if not loads:
        return case.not_applicable("no load needs it")
    makers = [name for name in loads if _shows_downstream(case, name)]
    found = [detector.id for detector in watching(case.graph, rail.id, LOW_ROLES)]
    if found:
        return case.passes(f"watched by {_and(found)}")
    if makers == loads:
        return case.passes(f"only {_and(loads)} needs it, and what that makes is watched")
    loads = [name for name in loads if name not in makers]
    return case.fails(
        f"no under-voltage detector watches it, and {_and(loads)} {'need' if len(loads) > 1 else 'needs'} it",
        mend=f"an under-voltage detector on {rail.id} that resets {_and(loads)}",
    )


def _shows_downstream(case: Case, load: str) -> bool:
    """Whether a load makes rails, and each of them is watched: what it lacks then shows there."""
    made = case.graph.tails(load, EdgeKind.MADE_BY)
    return bool(made) and all(watching(case.graph, rail, LOW_ROLES) for rail in made)


@rule(
    "coverage/over_voltage",
    title="a rail that can reach its damage level is watched for too high a supply",
    level=Level.WARNING,
    applies_to="rails",
    proves="An over-voltage detector watches the rail, or the rail is made on the chip from rails that are guaranteed "
    "to stay below its damage level, whatever its maker does. A maker that steps a supply up has no such limit.",
    facts=(
        "comparators.*.watches and role", "rails.*.damage", "rails.*.made_by, and rails.*.guaranteed of the rails that "
        "feed its maker",
    ),
    mend="an over-voltage detector on the rail",
    sources=("common practice, no source: what damages is reported before it does",),
    example=Example(
        fails="rails: {vcore: {damage: 1.6 V}}",
        holds="rails: {vcore: {damage: 2 V}}",
    ),
)  # fmt: skip
def rail_is_watched_from_above(rail: Rail, case: Case) -> Judgement:
    """Pass if an over-voltage detector watches the rail; else compare what can feed it with its damage level."""
    if not case.graph.tails(rail.id, EdgeKind.SUPPLIED_BY):
        return case.not_applicable("it feeds nothing")
    found = [detector.id for detector in watching(case.graph, rail.id, ("over_voltage",))]
    if found:
        return case.passes(f"watched by {_and(found)}")
    damage_v = case.own.least("damage")
    mend = f"an over-voltage detector on {rail.id}"
    if rail.made_by is None:
        case.settle()
        return case.fails(
            f"no over-voltage detector watches it, and {show(damage_v, _V)} damages",
            why="it comes from off the chip, and nothing on the chip limits it",
            mend=mend,
            at="damage",
        )
    limit = supply_limit(case, rail)
    case.settle()
    if limit is None:
        return case.fails(
            f"no over-voltage detector watches it, and {show(damage_v, _V)} damages",
            why=f"{rail.made_by} makes it from a lower supply, or from none that is described: nothing limits it",
            mend=mend,
            at="damage",
        )
    return case.at_least(
        need=limit.level_v, have=damage_v, dimension=_V, says="not watched from above; it is damaged at",
        why=f"a failing {rail.made_by} can pass on no more than {limit.rail}, which is guaranteed up to "
        f"{show(limit.level_v, _V)}",
        mend=mend, at="damage",
    )  # fmt: skip


@rule(
    "coverage/guards_something",
    title="every reset net guards something",
    level=Level.WARNING,
    applies_to="resets",
    proves="The net holds a load, a domain in which a load or a control register lives, or switches something on.",
    facts=("resets.*.guards", "the domain of each load and override, where the net guards a domain"),
    mend="name what the net guards, or take the net out",
    sources=("common practice, no source: a reset that nobody obeys protects nobody",),
    example=Example(
        fails="resets: {spare_n: {driven_by: [rst_out], active: low, guards: [], domain: aon}}",
        holds="resets: {por_n: {guards: [adc, core_regulator]}}",
    ),
)
def reset_guards_something(reset: Reset, case: Case) -> Judgement:
    """Pass if the net guards a load or a domain that is not empty, or gates something."""
    gated = [edge.tail for edge in case.graph.into(reset.id) if edge.kind.tail_leans]
    guards = case.own.must("guards")
    for name in guards:
        held = case.graph.elements[name]
        if not isinstance(held, Domain) or _holds_anything(case.graph, held):
            return case.passes(f"guards {_and(list(guards))}", at="guards")
    if gated:
        return case.passes(f"switches {_and(gated)} on", at="guards")
    if guards:
        for load in case.description.loads.values():
            if load.domain is None:
                case.of(load).lacks("domain")
        for bypass in case.description.bypasses.values():
            if bypass.domain is None:
                case.of(bypass).lacks("domain")
        case.settle()
    return case.fails(
        f"guards {_and(list(guards))}, in which no load lives" if guards else "guards nothing",
        mend="name what it holds in reset, or take the net out",
        at="guards",
    )


def _holds_anything(graph: Graph, domain: Domain) -> bool:
    inside = (graph.elements[name] for name in graph.tails(domain.id, EdgeKind.SUPPLIED_BY))
    return any(isinstance(one, Load | Bypass) for one in inside)


@rule(
    "coverage/single_point",
    title="an override reaches past every single point that a reset net hangs on",
    level=Level.WARNING,
    applies_to="resets",
    proves="Each stage that stands on every way from the detectors to the net, other than the one that drives it, can "
    "be passed by an override on itself or behind it: if that stage is stuck, the chip can still be brought up. The "
    "stage that drives the net is where such an override acts. Whether every detector has an override is judged by "
    "bypass/present.",
    facts=("resets.*.driven_by", "output_stages.*.driven_by", "bypasses.*.overrides and forces"),
    mend="move the override to the single point, or behind it",
    sources=("dominators of a flow graph: what stands on every way (Cooper, Harvey and Kennedy 2001)",),
    example=Example(
        fails="bypasses: {skip_resets: {overrides: por}, skip_uv: {overrides: uv, forces: released}, "
        "skip_ov: {overrides: ov, forces: released}}",
        holds="bypasses: {skip_resets: {overrides: gather}}",
    ),
)
def single_points_can_be_passed(reset: Reset, case: Case) -> Judgement:
    """Find the last stage on every way to the net that no override lifts the net past."""
    graph = case.graph
    reach = Reach(reset.id, driven_by(graph))
    note_undriven(case, reset.id)
    case.settle()
    detectors = graph.once(detectors_behind_nets)[reset.id]
    if not detectors:
        return case.not_applicable("no detector reaches it")
    backwards = {name: [driver for driver, _, _ in driven_by(graph)(name)] for name in reach}
    for detector in detectors:
        backwards[detector.id] = [_DETECTORS]
    points = [
        name for name in on_every_way(backwards, reset.id, _DETECTORS) if isinstance(graph.elements[name], OutputStage)
    ]
    last = set(graph.tails(reset.id, EdgeKind.DRIVES))
    inner = [name for name in points if name not in last]
    if not inner:
        return case.passes("no stage but the one that drives it stands on every way to it")
    for bypass in graph.once(aimless_overrides):
        case.of(bypass).lacks("overrides")
    case.settle()
    if reset.id not in graph.once(lifted_by_overrides):
        return case.not_applicable("a detector of it has no override (bypass/present says so)")
    for name in inner:
        onward = Reach(name, drives(graph))
        here = [there for there in onward if any(one.forces == "released" for one in overrides_of(graph, there))]
        if reset.id not in lifted(graph, here, unsaid_agree=False):
            return case.fails(
                f"{name} stands on every way to it, and no override acts on {name} or behind it",
                why="the overrides act before it: if it is stuck, none of them lifts the net",
                mend=f"an override that forces released, on {name} or behind it",
                path=onward.path(reset.id),
            )
    return case.passes(f"an override reaches past {_and(inner)}")


_SINGULAR: Final = {
    "rails": "rail", "domains": "domain", "references": "reference", "biases": "bias", "comparators": "detector",
    "output_stages": "stage",
}  # fmt: skip
_UNUSED: Final = {
    "rails": "rails: {vspare: {nominal: 1.8 V}}",
    "domains": "domains: {spare: {rail: avdd, kind: always_on}}",
    "references": "references: {spare: {kind: external}}",
    "biases": "biases: {spare: {kind: external}}",
    "comparators": "comparators: {spare: {role: under_voltage, watches: avdd, domain: aon}}",
    "output_stages": "output_stages: {spare: {driven_by: [uv], domain: aon, kind: buffer, hold: none}}",
}
_USED: Final = {
    "rails": "domains: {aon: {rail: avdd}}",
    "domains": "comparators: {uv: {domain: aon}}",
    "references": "comparators: {uv: {reference: ref_fast}}",
    "biases": "comparators: {uv: {bias: bias_start}}",
    "comparators": "output_stages: {uv_out: {driven_by: [uv]}}",
    "output_stages": "output_stages: {gather: {driven_by: [por_out, uv_out, ov_latch]}}",
}


def _used_rule(section: str) -> Rule:
    word = _SINGULAR[section]
    return rule(
        f"coverage/{word}_used",
        title=f"no {word} is there for nobody",
        level=Level.NOTE,
        applies_to=section,
        proves=f"Somebody is supplied, biased, driven or enabled by the {word}, compares with it, or leans on it. To "
        "be overridden or disturbed is no use; to be watched is, for a rail.",
        facts=(f"every fact by which another element names a {word}",),
        mend="connect it, or take it out of the description",
        sources=("common practice, no source: what nobody uses is a slip of the pen, or a part that was forgotten",),
        example=Example(fails=_UNUSED[section], holds=_USED[section]),
    )(_judge_use)


def _judge_use(element: Element, case: Case) -> Judgement:
    """Pass if somebody uses the element."""
    if is_used(case.graph, element):
        return case.passes("is used")
    if element.section in ("comparators", "output_stages") and not case.description.resets:
        return case.not_applicable("no reset net is described that it could drive")
    own = element.fact("")
    case.missing += [path for path in case.graph.once(unsaid_uses)[element.section] if not path.startswith(own)]
    case.settle()
    return case.fails("nobody uses it", mend="connect it, or take it out of the description")


RULES: Final[tuple[Rule, ...]] = (
    rail_is_watched_from_below,
    rail_is_watched_from_above,
    reset_guards_something,
    single_points_can_be_passed,
    *(_used_rule(section) for section in NAMED_BY),
)
