"""The bias and the references that a detector leans on, directly or through others."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Edge, EdgeKind
from tidegate.lint.graph.leaning_gaps import source_gaps
from tidegate.lint.graph.paths import Neighbours, Reach

_SOURCE_EDGES: Final = (EdgeKind.BIASED_BY, EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.LEANS_ON)


def reach_of_sources(case: Case, comparator: Comparator) -> Reach:
    """What a detector is biased by, compares with and leans on, nearest first; what is not said is noted as missing."""
    reach = Reach(comparator.id, _towards_sources(case.graph))
    for name in reach:
        element = case.graph.elements[name]
        for fact in source_gaps(element):
            case.of(element).lacks(fact)
    return reach


def sources_in(case: Case, reach: Reach) -> list[Bias | Reference]:
    """The biases and references among what was reached."""
    found = (case.graph.elements[name] for name in reach)
    return [element for element in found if isinstance(element, Bias | Reference)]


def _towards_sources(graph: Graph) -> Neighbours:
    def steps(element: str) -> Iterator[tuple[str, str, Edge]]:
        return (step for step in graph.needs(element) if step[2].kind in _SOURCE_EDGES)

    return steps
