"""Coverage: every rail is watched by what it needs, every reset guards something, and everything is used."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES, detectors_behind_nets, watching
from tidegate.lint.derived.reset_path.override import aimless_overrides, lifted, overrides_of, unsaid_combinations
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind
from tidegate.lint.derived.reset_path.used_by import NAMED_BY, is_used, unsaid_uses
from tidegate.lint.derived.supply.supply_limit import supply_limit, unsaid_makers
from tidegate.lint.derived.unsaid import missing, not_whole, unless_unsaid, unsaid
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.reset_path import Bypass, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.facts.reading import Better
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.dominators import on_every_way
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.rules.told_elsewhere import graph_of

_V: Final = Dimension.VOLTAGE
_DETECTORS: Final = "*"
"""Stands for all detectors of a net together; no element has this name."""


def _and(names: Iterable[str]) -> str:
    return " and ".join(names)


@rule(
    "coverage/under_voltage",
    title="every rail that a load needs is watched for too low a supply",
    level=Level.ERROR,
    applies_to="rails",
    proves="An under-voltage or power-on detector watches the rail, or only loads need it that make rails which are "
    "watched. Whether its decision reaches the reset of each load is judged by reach/every_rail, whether its level "
    "protects the loads by trip_window/guarantee. It fails only where detectors are said to be complete.",
    facts=("comparators.*.watches and role", "loads.*.needs", "rails.*.made_by", "complete"),
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
    found = [detector.id for detector in watching(case.graph, rail.id, LOW_ROLES)]
    loads = [name for name in case.graph.tails(rail.id, EdgeKind.SUPPLIED_BY) if name in case.description.loads]
    gaps = _unsaid_needs(case)
    if not loads and gaps:
        missing(gaps)
    if not loads:
        return case.not_applicable("no load needs it")
    if found:
        return case.passes(f"watched by {_and(found)}")
    alone = [name for name in loads if not _shows_downstream(case, name)]
    if not alone and gaps:
        missing(gaps)
    if not alone:
        return case.passes(f"only {_and(loads)} needs it, and what that makes is watched")
    need = f"{_and(alone)} {'need' if len(alone) > 1 else 'needs'} it"
    if others := not_whole(case, "comparators"):
        return case.open(others, f"no under-voltage detector is described that watches it, and {need}")
    mend = f"an under-voltage detector on {rail.id} that resets {_and(alone)}"
    return case.fails(f"no under-voltage detector watches it, and {need}", mend=mend)


def _unsaid_needs(case: Case) -> tuple[str, ...]:
    """What might say that more loads need a rail than are described to."""
    silent = (load.fact("needs") for load in case.description.loads.values() if not load.needs)
    return (*unsaid(case, "loads"), *silent)


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
    "to stay below its damage level, whatever its maker does. A maker that steps a supply up has no such limit. It "
    "fails only where detectors are said to be complete, and for a rail from off the chip only where rails are.",
    facts=(
        "comparators.*.watches and role", "rails.*.damage", "rails.*.made_by, and rails.*.guaranteed of the rails that "
        "feed its maker", "complete",
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
        gaps = (*_unsaid_needs(case), *_unsaid_feeds(case))
        return missing(gaps) if gaps else case.not_applicable("it feeds nothing")
    found = [detector.id for detector in watching(case.graph, rail.id, ("over_voltage",))]
    if found:
        return case.passes(f"watched by {_and(found)}")
    facts = case.of(rail)
    if facts.damage.given is None:
        facts.damage.lacking()
    others = (*not_whole(case, "comparators"), *(() if rail.made_by else unsaid_makers(case)))
    return unless_unsaid(case, others, _unwatched(rail, case), "no over-voltage detector is described that watches it")


def _unsaid_feeds(case: Case) -> tuple[str, ...]:
    """What might say that a rail feeds more domains than are described to hang on it."""
    silent = (domain.fact("rail") for domain in case.description.domains.values() if domain.rail is None)
    return (*unsaid(case, "domains"), *silent)


def _unwatched(rail: Rail, case: Case) -> Judgement:
    """Compare the damage level of a rail that nobody watches from above with what can come onto it."""
    damage_v = case.of(rail).damage.least(Better.MORE)
    level = case.if_known(lambda: show(case.of(rail).damage.least(), _V)) or "what is not given"
    mend = f"an over-voltage detector on {rail.id}"
    says = f"no over-voltage detector watches it, and {level} damages"
    if rail.made_by is None:
        return case.fails(
            says, why="it comes from off the chip, and nothing on the chip limits it", mend=mend, at="damage"
        )
    limit = supply_limit(case, rail)
    if limit is None:
        why = f"{rail.made_by} makes it from a lower supply, or from none that is described: nothing limits it"
        return case.fails(says, why=why, mend=mend, at="damage")
    passed = case.if_known(lambda: _passed_on(rail, case)) or "what feeds it"
    return case.at_least(
        need=limit.level_v, have=damage_v, dimension=_V, says="not watched from above; it is damaged at",
        why=f"a failing {rail.made_by} can pass on no more than {passed}", mend=mend, at="damage",
    )  # fmt: skip


def _passed_on(rail: Rail, case: Case) -> str:
    """The rail that limits another one, and up to which level."""
    limit = supply_limit(case, rail)
    return "" if limit is None else f"{limit.rail}, which is guaranteed up to {show(limit.level_v, _V)}"


@rule(
    "coverage/guards_something",
    title="every reset net guards something",
    level=Level.WARNING,
    applies_to="resets",
    proves="The net holds a load, a domain in which a load or a control register lives, or switches something on.",
    facts=("resets.*.guards", "the domain of each load and override, where the net guards a domain", "complete"),
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
    guards = case.of(reset).guards.must()
    for name in guards:
        held = case.graph.elements[name]
        if not isinstance(held, Domain) or _holds_anything(case.graph, held):
            return case.passes(f"guards {_and(guards)}", at="guards")
    if gated:
        return case.passes(f"switches {_and(gated)} on", at="guards")
    empty = f"guards {_and(guards)}, in which no load lives"
    if guards and (gaps := _homeless(case)):
        missing(gaps)
    if guards and (others := not_whole(case, "loads")):
        return case.open(others, f"{empty} that is described")
    return case.fails(
        empty if guards else "guards nothing", mend="name what it holds in reset, or take the net out", at="guards"
    )


def _homeless(case: Case) -> tuple[str, ...]:
    """What might say that a domain holds more than is described to live there."""
    loads = (load.fact("domain") for load in case.description.loads.values() if load.domain is None)
    return (*loads, *(one.fact("domain") for one in case.description.bypasses.values() if one.domain is None))


def _holds_anything(graph: Graph, domain: Domain) -> bool:
    inside = (graph.elements[name] for name in graph.tails(domain.id, EdgeKind.SUPPLIED_BY))
    return any(isinstance(one, Load | Bypass) for one in inside)


def _detectors_of(reset: Any, description: Description) -> Iterator[str]:
    """The detectors whose decision reaches a net."""
    return (one.id for one in graph_of(description).once(detectors_behind_nets)[reset.id])


@rule(
    "coverage/single_point",
    title="an override reaches past every single point that a reset net hangs on",
    level=Level.WARNING,
    applies_to="resets",
    proves="Each stage that stands on every way from the detectors to the net, other than the one that drives it, can "
    "be passed by an override on itself or behind it: if that stage is stuck, the chip can still be brought up. The "
    "stage that drives the net is where such an override acts. It fails only where overrides are said to be complete.",
    facts=(
        "resets.*.driven_by",
        "output_stages.*.driven_by",
        "bypasses.*.overrides and forces",
        "complete",
        "resets.*.combine and output_stages.*.combine of what has several drivers",
    ),
    mend="move the override to the single point, or behind it",
    sources=("dominators of a flow graph: what stands on every way (Cooper, Harvey and Kennedy 2001)",),
    example=Example(
        fails="bypasses: {skip_resets: {overrides: por}, skip_uv: {overrides: uv, forces: released}, "
        "skip_ov: {overrides: ov, forces: released}}",
        holds="bypasses: {skip_resets: {overrides: gather}}",
    ),
    yields=(Yield("bypass/present", _detectors_of),),
)
def single_points_can_be_passed(reset: Reset, case: Case) -> Judgement:
    """Find the last stage on every way to the net that no override lifts the net past."""
    graph = case.graph
    reach = Reach(reset.id, driven_by(graph))
    if gaps := gaps_behind(case, reset.id):
        missing(gaps)
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
    stuck = [name for name in inner if reset.id not in _lifted_past(case, name, surely=True)]
    if not stuck:
        return case.passes(f"an override reaches past {_and(inner)}")
    lost = [name for name in stuck if reset.id not in _lifted_past(case, name, surely=False)]
    aimless = tuple(bypass.fact("overrides") for bypass in graph.once(aimless_overrides))
    if aimless or not lost:
        missing((*aimless, *(fact for name in stuck for fact in _unsaid_past(case, name))))
    name, onward = lost[0], Reach(lost[0], drives(graph))
    if others := not_whole(case, "bypasses"):
        return case.open(others, f"{name} stands on every way to it, and no override is described on it or behind it")
    return case.fails(
        f"{name} stands on every way to it, and no override acts on {name} or behind it",
        why="the overrides act before it: if it is stuck, none of them lifts the net",
        mend=f"an override that forces released, on {name} or behind it",
        path=onward.path(reset.id),
    )


def _lifted_past(case: Case, name: str, *, surely: bool) -> frozenset[str]:
    """What overrides on a stage or behind it keep from asserting: surely, or with all that is not said at its best."""
    forces = ("released",) if surely else ("released", None)
    onward = Reach(name, drives(case.graph))
    here = [there for there in onward if any(one.forces in forces for one in overrides_of(case.graph, there))]
    return lifted(case.graph, here, unsaid_agree=not surely)


def _unsaid_past(case: Case, name: str) -> Iterator[str]:
    """The missing facts with which an override might be seen to reach past a stage."""
    onward = Reach(name, drives(case.graph))
    for there in onward:
        yield from (one.fact("forces") for one in overrides_of(case.graph, there) if one.forces is None)
    yield from (one.fact("combine") for one in unsaid_combinations(case.graph, onward))


@rule(
    "coverage/used",
    title="nothing is there for nobody",
    level=Level.NOTE,
    applies_to=tuple(NAMED_BY),
    proves="Somebody is supplied, biased, driven or enabled by the element, compares with it, or leans on it. To be "
    "overridden or disturbed is no use; to be watched is, for a rail. It fails only where the sections that may use it "
    "are said to be complete.",
    facts=("every fact by which another element names a rail, domain, reference, bias, detector or stage", "complete"),
    mend="connect it, or take it out of the description",
    sources=("common practice, no source: what nobody uses is a slip of the pen, or a part that was forgotten",),
    example=Example(
        fails="references: {spare: {kind: external}}",
        holds="comparators: {uv: {reference: ref_fast}}",
    ),
)
def element_is_used(element: Element, case: Case) -> Judgement:
    """Pass if somebody uses the element."""
    if is_used(case.graph, element):
        return case.passes("is used")
    if element.section in ("comparators", "output_stages") and not case.description.resets:
        if others := not_whole(case, "resets"):
            missing(others)
        return case.not_applicable("there is no reset net that it could drive")
    own = element.fact("")
    if lacking := tuple(fact for fact in case.graph.once(unsaid_uses)[element.section] if not fact.startswith(own)):
        missing(lacking)
    if others := tuple(fact for section in NAMED_BY[element.section] for fact in not_whole(case, section)):
        return case.open(others, "nobody that is described uses it")
    return case.fails("nobody uses it", mend="connect it, or take it out of the description")


RULES: Final[tuple[Rule, ...]] = (
    rail_is_watched_from_below,
    rail_is_watched_from_above,
    reset_guards_something,
    single_points_can_be_passed,
    element_is_used,
)
