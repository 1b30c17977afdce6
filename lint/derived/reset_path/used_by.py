"""Whether anybody uses an element, and the missing facts that might name it as used."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.description.model.reset_path import Reset
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.leaning_gaps import leaning_gaps

_NO_USE: Final = (EdgeKind.OVERRIDES, EdgeKind.COUPLES_TO, EdgeKind.COMES_AFTER)
"""What somebody has to do with an element without needing it."""

_FORWARDS: Final = (EdgeKind.DRIVES, EdgeKind.GUARDS)

NAMED_BY: Final[Mapping[str, frozenset[str]]] = {
    "rails": frozenset({"rail"}),
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
        gaps = set(leaning_gaps(element))
        if gaps:
            for section, facts in NAMED_BY.items():
                found[section] += [element.fact(fact) for fact in sorted(gaps & facts)]
    return {section: tuple(paths) for section, paths in found.items()}
