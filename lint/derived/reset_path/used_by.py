"""Whether anybody uses an element, and the missing facts that might name it as used."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Final

from tidegate.lint.description.model.description import CompleteSection
from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.description.model.reset_path import Load, Reset
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.leaning_gaps import leaning_gaps

_NO_USE: Final = (EdgeKind.OVERRIDES, EdgeKind.COUPLES_TO, EdgeKind.COMES_AFTER)
"""What somebody has to do with an element without needing it."""

_FORWARDS: Final = (EdgeKind.DRIVES, EdgeKind.GUARDS)

NAMED_BY: Final[Mapping[str, tuple[CompleteSection, ...]]] = {
    "rails": ("domains", "comparators", "loads"),
    "domains": ("references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses"),
    "references": ("references", "biases", "comparators", "loads"),
    "biases": ("references", "biases", "comparators"),
    "comparators": ("output_stages", "resets"),
    "output_stages": ("output_stages", "resets"),
}
"""Of each section, those whose elements name its elements as used."""

_FACTS: Final[Mapping[str, frozenset[str]]] = {
    "rails": frozenset({"rail", "needs"}),
    "domains": frozenset({"domain"}),
    "references": frozenset({"reference", "source"}),
    "biases": frozenset({"bias", "source"}),
    "comparators": frozenset({"driven_by", "switched_by"}),
    "output_stages": frozenset({"driven_by", "switched_by"}),
}
"""Of each section, the facts by which others name its elements as used."""


def is_used(graph: Graph, element: Element) -> bool:
    """Whether somebody is supplied, biased, driven, gated or made by an element, compares with it or leans on it."""
    name = element.id
    if any(edge.kind not in (*_NO_USE, *_FORWARDS) for edge in graph.into(name) if edge.tail != name):
        return True
    return any(edge.kind in _FORWARDS for edge in graph.out(name)) or name in graph.once(used_besides)


def used_besides(graph: Graph) -> frozenset[str]:
    """What is used without an edge: what turns a switch of another's levels, and domains in which receivers live."""
    found: set[str] = set()
    for element in graph.elements.values():
        if isinstance(element, Comparator) and isinstance(element.hysteresis, Hysteresis):
            found.update(
                each.turned_by for each in element.hysteresis.switches if each.turned_by not in (None, element.id)
            )
        elif isinstance(element, Reset) and element.domain is not None:
            found.add(element.domain)
    return frozenset(found)


def unsaid_uses(graph: Graph) -> Mapping[str, tuple[str, ...]]:
    """Of each section, the missing facts that might name one of its elements as used, as paths."""
    found: dict[str, list[str]] = {section: [] for section in NAMED_BY}
    for element in graph.elements.values():
        for fact in dict.fromkeys(_gaps(element)):
            for section, facts in _FACTS.items():
                if _LATER.get((element.section, fact), fact) in facts:
                    found[section].append(element.fact(fact))
    return {section: tuple(paths) for section, paths in found.items()}


_LATER: Final[Mapping[tuple[str, str], str]] = {("domains", "kind"): "switched_by", ("biases", "kind"): "source"}
"""Facts that decide whether another one is asked for, which may name an element."""


def _gaps(element: Element) -> Iterator[str]:
    """The missing facts of one element that might name another one as used."""
    yield from leaning_gaps(element)
    if isinstance(element, Reset) and element.domain is None:
        yield "domain"
    elif isinstance(element, Load) and not element.needs:
        yield "needs"
