"""Self-bias: a detector decides at its own trip level, and what it leans on does not hang on the detector itself."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.lowest_decision import lowest_decision
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.edge import Edge, EdgeKind, Hop, Path
from tidegate.lint.graph.leaning_gaps import before_gaps, leaning_gaps
from tidegate.lint.graph.leaning_loops import in_a_loop
from tidegate.lint.graph.paths import Neighbours, Reach, drives, loop_through, step_onto
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.rules import self_bias_in_time, self_bias_start

_V: Final = Dimension.VOLTAGE


@rule(
    "self_bias/works_at_own_trip",
    title="a comparator decides correctly at its own trip level",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The lowest supply at which the comparator decides correctly lies no higher than its lowest falling level, "
    "where it lives on the rail that it watches; else no higher than the lowest level delivered on the rail it lives "
    "on. Both are taken over all corners: a comparator that works at its level only typically does not pass.",
    facts=(
        "comparators.*.works_from", "comparators.*.trip", "comparators.*.domain", "domains.*.rail",
        "rails.*.delivered of the rail it lives on, where that is not the one it watches",
    ),
    mend="a comparator that works from a lower supply, or a higher trip level",
    sources=("a decision counts only where the comparator works (derived)",),
    example=Example(
        fails="comparators: {por: {works_from: {max: 1.25 V}}}",
        holds="comparators: {por: {works_from: {max: 1.1 V}}}",
    ),
    formulas=LEVEL_FORMULAS,
)  # fmt: skip
def comparator_works_at_own_trip(comparator: Comparator, case: Case) -> Judgement:
    """Compare the comparator's lowest supply with the lowest supply at which it must decide."""
    works_v = case.of(comparator).works_from.most()
    least = lowest_decision(case, comparator, rail_of(case, comparator))
    lower = f"a comparator that works from {show_down(least.level_v, _V)} or less; now {show(works_v, _V)}"
    higher = f"; or a lowest falling level of {show_up(works_v, _V)} or more" if least.is_trip_level else ""
    return case.at_most(
        need=least.level,
        have=works_v,
        dimension=_V,
        says="decides correctly from",
        why=least.why,
        mend=lower + higher,
        at="works_from",
    )


@rule(
    "self_bias/no_loop",
    title="no detector leans on what it gates itself",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Nothing that the detector leans on, directly or through others (supply, bias, reference, enable, the maker "
    "of a rail and what that maker waits for), waits for the detector's own output. Watching a rail is no leaning on "
    "it.",
    facts=(
        "every fact that says what the detector leans on: domain, bias, reference, gated_by, leans_on, rails.*.made_by",
        "and what it gates: driven_by of stages and reset nets, resets.*.guards",
    ),
    mend="let what the detector leans on come up without the detector's output",
    sources=("a closed way in the graph of who leans on whom has no first step (derived)",),
    example=Example(
        fails="references: {ref_fast: {gated_by: uv_out}}",
        holds="references: {ref_main: {gated_by: uv_out}}",
    ),
)
def nothing_hangs_on_own_output(comparator: Comparator, case: Case) -> Judgement:
    """Pass if no way leads from the detector, over what it leans on, back to it."""
    graph = case.graph
    path = loop_through(comparator.id, graph.needs) if comparator.id in graph.once(in_a_loop) else None
    if path is None:
        _note_gaps(case, comparator)
        case.settle()
        return case.passes("nothing it leans on waits for its own output")
    waiting, (gate, words) = step_onto(path, Reach(comparator.id, drives(graph)))
    itself = waiting == comparator.id
    one = waiting if gate == comparator.id else gate
    return case.fails(
        f"its own output comes back to it: {'it is' if itself else f'{waiting} is'} {words} {gate}",
        why=f"{one} waits for {comparator.id}, and {comparator.id} waits for {one}" if one != comparator.id else "",
        mend=f"let {'it' if itself else waiting} come up without {gate}"
        + ("" if itself else f", or let {comparator.id} lean on something else"),
        path=path,
    )


def _note_gaps(case: Case, comparator: Comparator) -> None:
    """Note the missing facts that could hide a loop: on what it leans on, and on what it drives."""
    graph = case.graph
    if comparator.id in graph.once(before_gaps):
        for name in Reach(comparator.id, graph.needs):
            for fact in leaning_gaps(graph.elements[name]):
                case.of(graph.elements[name]).lacks(fact)
    for name in Reach(comparator.id, drives(graph)):
        driven = graph.elements[name]
        if isinstance(driven, Reset) and driven.guards is None:
            case.of(driven).lacks("guards")


class _Other(msgspec.Struct, frozen=True):
    """Something besides a supply that a detector's chain waits for."""

    says: str
    mend: str
    path: Path
    gate: str | None
    """What it waits for, where that is an element of the description."""


def _others(graph: Graph, chain: Reach, detector: str) -> Iterator[_Other]:
    for name in chain:
        who = "it" if name == detector else name
        element = graph.elements[name]
        if isinstance(element, Bias | Reference) and element.kind == "external":
            yield _Other(
                f"{name} comes from off the chip", f"a source on the chip in place of {name}", chain.path(name), None
            )
        if isinstance(element, Domain) and element.kind == "switched" and element.switched_by is None:
            yield _Other(
                f"{name} is switched", f"a domain that is always on, in place of {name}", chain.path(name), None
            )
        if isinstance(element, Rail):
            continue
        for there, words, edge in graph.needs(name):
            if not _in_chain(graph, edge):
                path = (*chain.path(name), Hop(there, words))
                verb = words if edge.kind is EdgeKind.LEANS_ON else f"is {words}"
                yield _Other(f"{who} {verb} {there}", f"let {who} come up without {there}", path, there)


def _chain(graph: Graph) -> Neighbours:
    """From a detector along its supplies and sources; what feeds a rail is the rail's own matter."""
    return lambda element: (
        ()
        if isinstance(graph.elements[element], Rail)
        else (step for step in graph.needs(element) if _in_chain(graph, step[2]))
    )


def _in_chain(graph: Graph, edge: Edge) -> bool:
    """Whether an edge leads on to a supply or a source, and no enable lies between."""
    return edge.kind is not EdgeKind.GATED_BY and isinstance(
        graph.elements[edge.head], Rail | Domain | Reference | Bias
    )


def _hangs_on(graph: Graph, other: _Other, comparator: Comparator) -> bool:
    """Whether what the chain waits for waits for the detector itself."""
    if other.gate is None or comparator.id not in graph.once(in_a_loop):
        return False
    return comparator.id in Reach(other.gate, graph.needs)


def _where_it_waits_for_itself_alone(comparator: Comparator, description: Description) -> tuple[str, ...]:
    """The detector, where all that its chain waits for besides supplies hangs on its own output."""
    graph = build(description)
    others = _others(graph, Reach(comparator.id, _chain(graph)), comparator.id)
    return (comparator.id,) if all(_hangs_on(graph, other, comparator) for other in others) else ()


@rule(
    "self_bias/leans_on_nobody",
    title="a power-on detector leans on nothing but its supply",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The power-on detector, and every bias and reference in its chain, is awake whenever its supply is: none "
    "comes from off the chip, is enabled by another element, lives in a switched domain or waits for a load, a stage "
    "or another detector.",
    facts=(
        "comparators.*.domain", "comparators.*.bias", "comparators.*.reference or comparators.*.crossover",
        "biases.*.kind", "the domain of each source in the chain, and domains.*.kind",
    ),
    mend="a bias of its own, from the supply that it watches",
    sources=("common practice, no source: the first circuit to wake has nobody to wake it",),
    example=Example(
        fails="comparators: {por: {gated_by: uv}}",
        holds="comparators: {por: {bias: bias_start}}",
    ),
    yields=(Yield("self_bias/no_loop", _where_it_waits_for_itself_alone),),
)  # fmt: skip
def power_on_leans_on_nobody(comparator: Comparator, case: Case) -> Judgement:
    """Pass if its chain ends in sources that are awake whenever a supply is."""
    if comparator.role != "power_on":
        return case.not_applicable("it is no power-on detector")
    chain = Reach(comparator.id, _chain(case.graph))
    others = list(_others(case.graph, chain, comparator.id))
    foreign = [other for other in others if not _hangs_on(case.graph, other, comparator)]
    if others:
        first, *more = foreign or others
        also = "; ".join(other.says for other in more)
        return case.fails(
            f"leans on another than its supply: {first.says}",
            why=f"also {also}" if also else "",
            mend=first.mend,
            path=first.path,
        )
    for name in chain:
        element = case.graph.elements[name]
        for fact in leaning_gaps(element):
            case.of(element).lacks(fact)
        if isinstance(element, Reference) and element.kind is None:  # it may come from off the chip
            case.of(element).lacks("kind")
    case.settle()
    rails = [name for name in chain if isinstance(case.graph.elements[name], Rail)]
    return case.passes(f"leans on nothing but {' and '.join(rails)}")


RULES: Final[tuple[Rule, ...]] = (
    comparator_works_at_own_trip,
    *self_bias_in_time.RULES,
    nothing_hangs_on_own_output,
    power_on_leans_on_nobody,
    *self_bias_start.RULES,
)
