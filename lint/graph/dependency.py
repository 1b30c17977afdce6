"""The dependency graph of a description: one node an element, typed edges, built once."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from typing import Any, Final, TypeAlias, TypeVar

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Bypass, Load, Neighbour, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.description.names import NAMED_SECTIONS
from tidegate.lint.graph.edge import Edge, EdgeKind

Element: TypeAlias = Rail | Domain | Reference | Bias | Comparator | OutputStage | Reset | Load | Bypass | Neighbour

SECTIONS: Final = NAMED_SECTIONS
"""Sections whose entries are nodes, in the order in which the supply meets them."""

_NONE: Final[tuple[Edge, ...]] = ()
_A = TypeVar("_A")


class Graph:
    """Elements by id, and their edges both ways. Nothing changes them once the graph is built."""

    def __init__(self, elements: Mapping[str, Element], edges: Iterable[Edge]) -> None:
        self.elements = elements
        self._worked_out: dict[Callable[[Graph], Any], Any] = {}
        self._out: dict[str, list[Edge]] = {}
        self._into: dict[str, list[Edge]] = {}
        self._led: dict[str, list[Edge]] = {}  # edges to an element by which it leans on where they come from
        for edge in edges:
            self._out.setdefault(edge.tail, []).append(edge)
            self._into.setdefault(edge.head, []).append(edge)
            if edge.kind.head_leans:
                self._led.setdefault(edge.head, []).append(edge)

    def out(self, element: str) -> Iterable[Edge]:
        """Edges that come from an element."""
        return self._out.get(element, _NONE)

    def into(self, element: str) -> Iterable[Edge]:
        """Edges that go to an element."""
        return self._into.get(element, _NONE)

    def edges(self) -> Iterator[Edge]:
        """Every edge."""
        for edges in self._out.values():
            yield from edges

    def heads(self, element: str, kind: EdgeKind) -> list[str]:
        """Ids that an element has this kind of edge to."""
        return [edge.head for edge in self.out(element) if edge.kind is kind]

    def tails(self, element: str, kind: EdgeKind) -> list[str]:
        """Ids that have this kind of edge to an element."""
        return [edge.tail for edge in self.into(element) if edge.kind is kind]

    def needs(self, element: str) -> Iterator[tuple[str, str, Edge]]:
        """What an element leans on directly: id, the words that lead there, the edge.

        A reset net that guards a domain holds the loads and the control registers in it; the domain stays supplied,
        and what has no reset of its own, such as a detector, does not wait for the net.
        """
        for edge in self.out(element):
            if edge.kind.tail_leans:
                yield edge.head, edge.kind.forwards, edge
        for edge in self._led.get(element, _NONE):
            if not self._is_guarded_domain(edge):
                yield edge.tail, edge.kind.backwards, edge
        if _has_reset(self.elements[element]):
            for domain in self.heads(element, EdgeKind.SUPPLIED_BY):
                for edge in self._led.get(domain, _NONE):
                    if edge.kind is EdgeKind.GUARDS:
                        yield edge.tail, edge.kind.backwards, edge

    def needed_by(self, element: str) -> Iterator[tuple[str, str, Edge]]:
        """What leans on an element directly: id, the words that lead there, the edge; ``needs`` the other way round."""
        for edge in self.into(element):
            if edge.kind.tail_leans:
                yield edge.tail, edge.kind.backwards, edge
        for edge in self.out(element):
            if self._is_guarded_domain(edge):
                for held in self.tails(edge.head, EdgeKind.SUPPLIED_BY):
                    if _has_reset(self.elements[held]):
                        yield held, edge.kind.forwards, edge
            elif edge.kind.head_leans:
                yield edge.head, edge.kind.forwards, edge

    def once(self, ask: Callable[[Graph], _A]) -> _A:
        """What a function finds out about the whole graph, worked out when it is first asked."""
        if ask not in self._worked_out:
            self._worked_out[ask] = ask(self)
        answer: _A = self._worked_out[ask]
        return answer

    def _is_guarded_domain(self, edge: Edge) -> bool:
        return edge.kind is EdgeKind.GUARDS and isinstance(self.elements[edge.head], Domain)


def _has_reset(element: Element) -> bool:
    """Whether an element in a guarded domain is held in reset with it."""
    return isinstance(element, Load) or (isinstance(element, Bypass) and element.controlled_by == "register")


def build(description: Description) -> Graph:
    """The graph of a description whose names are known to be sound."""
    elements: dict[str, Element] = {}
    for section in SECTIONS:
        elements.update(getattr(description, section))
    return Graph(elements, _edges(description))


def _edges(description: Description) -> Iterator[Edge]:
    for rail in description.rails.values():
        yield from _one(rail, "made_by", rail.made_by, EdgeKind.MADE_BY)
        yield from _one(rail, "after", rail.after, EdgeKind.COMES_AFTER)
    for domain in description.domains.values():
        yield from _one(domain, "rail", domain.rail, EdgeKind.SUPPLIED_BY)
        yield from _one(domain, "switched_by", domain.switched_by, EdgeKind.GATED_BY)
    for reference in description.references.values():
        yield from _common(reference)
        yield from _one(reference, "bias", reference.bias, EdgeKind.BIASED_BY)
        yield from _many(reference, "leans_on", reference.leans_on, EdgeKind.LEANS_ON)
    for bias in description.biases.values():
        yield from _common(bias)
        yield from _one(bias, "source", bias.source, EdgeKind.BIASED_BY)
        yield from _many(bias, "leans_on", bias.leans_on, EdgeKind.LEANS_ON)
    for comparator in description.comparators.values():
        yield from _comparator(comparator)
    yield from _reset_path(description)


def _comparator(comparator: Comparator) -> Iterator[Edge]:
    yield from _common(comparator)
    yield from _one(comparator, "watches", comparator.watches, EdgeKind.WATCHES)
    yield from _one(comparator, "bias", comparator.bias, EdgeKind.BIASED_BY)
    yield from _one(comparator, "reference", comparator.reference, EdgeKind.TAKES_REFERENCE_FROM)
    yield from _one(comparator, "armed_by", comparator.armed_by, EdgeKind.GATED_BY)


def _reset_path(description: Description) -> Iterator[Edge]:
    for stage in description.output_stages.values():
        yield from _common(stage)
        yield from _drivers(stage, stage.driven_by)
    for reset in description.resets.values():
        yield from _drivers(reset, reset.driven_by)
        yield from _many(reset, "guards", reset.guards, EdgeKind.GUARDS)
    for load in description.loads.values():
        yield from _common(load)
        yield from _many(load, "references", load.references, EdgeKind.TAKES_REFERENCE_FROM)
        yield from _many(load, "leans_on", load.leans_on, EdgeKind.LEANS_ON)
        for index, need in enumerate(load.needs):
            yield Edge(load.id, EdgeKind.SUPPLIED_BY, need.rail, load.fact(f"needs.{index}.rail"))
    for bypass in description.bypasses.values():
        yield from _one(bypass, "overrides", bypass.overrides, EdgeKind.OVERRIDES)
        yield from _one(bypass, "domain", bypass.domain, EdgeKind.SUPPLIED_BY)
        yield from _one(bypass, "reset_by", bypass.reset_by, EdgeKind.CLEARED_BY)
        yield from _many(bypass, "leans_on", bypass.leans_on, EdgeKind.LEANS_ON)
    for neighbour in description.neighbours.values():
        yield Edge(neighbour.aggressor, EdgeKind.COUPLES_TO, neighbour.victim, neighbour.fact("victim"))
        if neighbour.mutual:
            yield Edge(neighbour.victim, EdgeKind.COUPLES_TO, neighbour.aggressor, neighbour.fact("mutual"))


def _common(element: Reference | Bias | Comparator | OutputStage | Load) -> Iterator[Edge]:
    yield from _one(element, "domain", element.domain, EdgeKind.SUPPLIED_BY)
    yield from _one(element, "gated_by", element.gated_by, EdgeKind.GATED_BY)


def _one(element: Element, field: str, head: str | None, kind: EdgeKind) -> Iterator[Edge]:
    if head not in (None, "none"):  # none: said to lean on nothing there
        assert head is not None
        yield Edge(element.id, kind, head, element.fact(field))


def _many(element: Element, field: str, heads: Iterable[str] | None, kind: EdgeKind) -> Iterator[Edge]:
    for head in heads or ():
        yield Edge(element.id, kind, head, element.fact(field))


def _drivers(element: OutputStage | Reset, drivers: Iterable[str] | None) -> Iterator[Edge]:
    for driver in drivers or ():
        yield Edge(driver, EdgeKind.DRIVES, element.id, element.fact("driven_by"))
