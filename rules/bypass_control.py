"""Bypass: the control of an override does not hang on what it overrides, and is up when it is needed."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.guarding_nets import nets_without_guards
from tidegate.lint.derived.reset_path.override import behind, detectors_in
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind, gaps_onward
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.derived.supply.rail_sequence import leaning_of_rails, order_text, way_to_earlier
from tidegate.lint.derived.unsaid import missing
from tidegate.lint.description.model.reset_path import Bypass, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.leaning_gaps import before_gaps, leaning_gaps
from tidegate.lint.graph.paths import Reach, drives, step_onto
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.rule import Example, Rule, rule

_COMMON_PRACTICE: Final = "common practice, no source: a way around a fault does not pass through the fault"
_TEST_PORT: Final = (
    "IEEE Std 1149.1, test access port: a system reset does not initialise its controller (value from memory)"
)


@rule(
    "bypass/independent",
    title="an override does not lean on what it overrides",
    level=Level.ERROR,
    applies_to="bypasses",
    proves="Nothing that the override leans on (its domain and what feeds or switches it, the net that clears it, what "
    "else it needs) waits for the element that it takes out, or for anything behind that element. A control register "
    "in a domain that a reset net guards is cleared by that net; a pin and a fuse are not, but need the domain's "
    "supply; whether a test port is, a person must say.",
    facts=(
        "bypasses.*.overrides", "bypasses.*.controlled_by", "bypasses.*.domain", "bypasses.*.reset_by of a register",
        "bypasses.*.leans_on", "and what its domain hangs on: domains.*.kind, switched_by, rails.*.made_by, "
        "resets.*.guards",
    ),
    mend="a control that lives and keeps its state while what it overrides holds reset",
    sources=(_COMMON_PRACTICE, _TEST_PORT),
    example=Example(
        fails="bypasses: {skip_core: {controlled_by: register, reset_by: core_rst_n}}",
        holds="bypasses: {skip_core: {controlled_by: register, reset_by: por_n}}",
    ),
)  # fmt: skip
def override_is_independent(bypass: Bypass, case: Case) -> Judgement:
    """Pass if the overridden element is not among what the override leans on."""
    graph, element = case.graph, bypass.overrides
    reach = Reach(bypass.id, graph.needs)
    if element is not None and element in reach:
        return _leans_on_overridden(case, element, reach.path(element))
    guard = next(_domain_guards(case, bypass), None)
    if lacking := [*_unsaid_leaning(case, bypass, reach), *_unsaid_guards(case, bypass, guard)]:
        missing(tuple(lacking))
    if guard is not None and bypass.controlled_by == "test_port":
        return case.asks(
            f"rests on the test port not being cleared with {bypass.domain}",
            why=f"{bypass.domain} is guarded by {guard[2].element}, which {element} drives",
            mend=f"a domain of its own for the test port, if {guard[2].element} does not clear it",
            at="domain",
            path=(*guard, Hop(bypass.id, EdgeKind.OVERRIDES.backwards)),
        )
    return case.passes(f"leans on nothing that waits for {element}")


def _unsaid_leaning(case: Case, bypass: Bypass, reach: Reach) -> Iterator[str]:
    """The missing facts that would say what the override takes out, and what it leans on."""
    if bypass.overrides is None:
        yield bypass.fact("overrides")
    if bypass.id in case.graph.once(before_gaps):
        for name in reach:
            described = case.graph.elements[name]
            yield from (described.fact(fact) for fact in leaning_gaps(described))


def _unsaid_guards(case: Case, bypass: Bypass, guard: Path | None) -> Iterator[str]:
    """The missing facts with which a net that waits for what is overridden might hold what the override leans on."""
    graph, element = case.graph, bypass.overrides
    if guard is not None and bypass.controlled_by is None:
        yield bypass.fact("controlled_by")
    if element is None:
        return
    for net in graph.once(nets_without_guards):
        if element in Reach(net.id, graph.needs):
            yield net.fact("guards")
    yield from gaps_onward(case, element)


def _domain_guards(case: Case, bypass: Bypass) -> Iterator[Path]:
    """For each reset net that guards the control's domain: the way from the override to all that the net waits for."""
    for net in case.graph.tails(bypass.domain or "", EdgeKind.GUARDS):
        reach = Reach(net, case.graph.needs)
        if bypass.overrides is not None and bypass.overrides in reach:
            first = (Hop(bypass.id, ""), Hop(bypass.domain or "", "supplied by"), Hop(net, "guarded by"))
            yield (*first, *reach.path(bypass.overrides)[1:])


def _leans_on_overridden(case: Case, element: str, path: Path) -> Judgement:
    """Say where the way from the override enters what the overridden element drives."""
    waiting, (gate, words) = step_onto(path, Reach(element, drives(case.graph)))
    itself = waiting == case.subject.id
    verb = words if words == EdgeKind.LEANS_ON.forwards else f"is {words}"
    onward = f", which {element} drives" if gate != element else ""
    mend = f"let {'it' if itself else waiting} do without {gate}"
    if words == EdgeKind.CLEARED_BY.forwards:
        mend = f"clear it by a reset that {element} does not drive"
    return case.fails(
        f"leans on what it overrides: {'it' if itself else waiting} {verb} {gate}{onward}",
        why=f"while {element} holds reset, the override that should lift it cannot be set",
        mend=mend,
        path=(*path, Hop(case.subject.id, EdgeKind.OVERRIDES.backwards)),
    )


@rule(
    "bypass/control_up",
    title="the control of an override is up when it is needed",
    level=Level.ERROR,
    applies_to="bypasses",
    proves="The control lives in a domain that is always on, on the rail that the overridden detector watches or on "
    "one that is surely up before that. A rail whose maker is held in reset, or that comes up later, leaves the "
    "override dead when it is needed. For a stage or a net, every detector behind it counts.",
    facts=(
        "bypasses.*.overrides", "bypasses.*.domain", "domains.*.kind", "domains.*.rail",
        "output_stages.*.driven_by and resets.*.driven_by back to the detectors", "rails.*.after, rails.*.made_by",
    ),
    mend="a control in an always-on domain of the watched rail",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="bypasses: {skip_core: {domain: analog}}",
        holds="bypasses: {skip_core: {domain: core}}",
    ),
    yields=("bypass/independent",),
)  # fmt: skip
def control_is_up(bypass: Bypass, case: Case) -> Judgement:
    """Compare the rail of the control with the rail of each detector that the override takes out."""
    graph, domain = case.graph, _home(bypass, case)
    own = (Hop(bypass.id, ""), Hop(domain.id, EdgeKind.SUPPLIED_BY.forwards))
    if case.of(domain).kind.must() == "switched":
        switch = domain.switched_by
        return case.fails(
            f"its control lives in {domain.id}, which is switched{f' by {switch}' if switch else ''}",
            mend="move the control to a domain that is always on",
            at="domain",
            path=(*own, Hop(switch, EdgeKind.GATED_BY.forwards)) if switch else own,
        )
    element, rail = case.each((case.of(bypass).overrides.must, partial(domain_rail, case, domain)))
    assert isinstance(element, str) and isinstance(rail, Rail)
    watched = dict.fromkeys(detector.watches for detector in detectors_in(graph, behind(graph, element)))
    others = [case.description.rails[name] for name in watched if name != rail.id]
    feed = (*own, Hop(rail.id, EdgeKind.SUPPLIED_BY.forwards))
    late = [other for other in others if not way_to_earlier(case, later=other, earlier=rail)]
    dead = _dead(case, rail, late, feed)
    if dead is not None:
        return dead
    if gaps := gaps_behind(case, element):
        missing(gaps)
    if not watched:
        return case.not_applicable(f"no detector's decision passes through {element}")
    if late:
        first = _earliest(case, late).id
        return case.asks(
            f"rests on {rail.id} being up before {first}",
            why=f"its control lives on {rail.id}, and nothing says that {first} comes up after it",
            mend=f"give rails.{first}.after and its delay if it does; else move the control to {first}",
            at="domain",
            path=feed,
        )
    orders = (order_text(case, later=other, way=way_to_earlier(case, later=other, earlier=rail)) for other in others)
    return case.passes(f"its control is up with {rail.id}", why="; ".join(orders), at="domain")


def _home(bypass: Bypass, case: Case) -> Domain:
    """The domain that the control lives in.

    Raises: MissingFactsError: where it is not given, with what is taken out where that is not given either.
    """
    if bypass.domain is None and bypass.overrides is None:
        case.of(bypass).lacks("overrides")
    domain = case.of(bypass).domain.element()
    assert isinstance(domain, Domain)
    return domain


def _earliest(case: Case, rails: Sequence[Rail]) -> Rail:
    """The rail that all the others come up after; the first one where none is known to be."""
    for rail in rails:
        if all(way_to_earlier(case, later=other, earlier=rail) for other in rails if other is not rail):
            return rail
    return rails[0]


def _dead(case: Case, rail: Rail, others: Sequence[Rail], feed: Path) -> Judgement | None:
    """Whether the control's rail waits for a reset net, or comes up after one of the rails watched."""
    if not others:
        return None
    needs = case.graph.once(leaning_of_rails)[rail.id]
    mend = f"move the control to {_earliest(case, others).id}, or to a rail that is up before it"
    held_by = next((name for name in needs if isinstance(case.graph.elements[name], Reset)), None)
    if held_by is not None:
        return case.fails(
            f"its control lives on {rail.id}, which waits for {held_by}",
            why=f"the override is dead until {held_by} is released",
            mend=mend,
            at="domain",
            path=(*feed, *needs.path(held_by)[1:]),
        )
    for other in others:
        way = way_to_earlier(case, later=rail, earlier=other)
        if way:
            return case.fails(
                f"its control lives on {rail.id}, which comes up after {other.id}",
                why=order_text(case, later=rail, way=way),
                mend=mend,
                at="domain",
                path=(*feed, *way[1:]),
            )
    return None


RULES: Final[tuple[Rule, ...]] = (override_is_independent, control_is_up)
