"""Facts without which it is not known what an element leans on."""

from __future__ import annotations

from collections.abc import Iterator

from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Bypass, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.dependency import Element, Graph


def leaning_gaps(element: Element) -> Iterator[str]:
    """The missing facts of one element that would say what it leans on.

    What an author leaves out where there is none, such as a gate, is not among them.
    """
    yield from source_gaps(element)
    yield from _supply_gaps(element)
    if isinstance(element, OutputStage | Reset) and element.driven_by is None:
        yield "driven_by"
    if isinstance(element, Bypass) and element.controlled_by == "register" and element.reset_by is None:
        yield "reset_by"


def source_gaps(element: Element) -> Iterator[str]:
    """The missing facts of one element that would say which bias and reference it leans on."""
    if isinstance(element, Comparator):
        if element.bias is None:
            yield "bias"
        if element.reference is None and element.crossover is None:
            yield "reference"
    elif isinstance(element, Bias):
        if element.kind is None:
            yield "kind"
        elif element.kind == "from_reference" and element.source is None:
            yield "source"
    elif isinstance(element, Reference) and element.bias is None and element.leans_on is None:
        if element.kind in ("divider", "external") or element.self_biased:
            return
        yield "self_biased" if element.self_biased is None else "bias"


def _supply_gaps(element: Element) -> Iterator[str]:
    if isinstance(element, Domain):
        if element.rail is None:
            yield "rail"
        if element.kind is None:
            yield "kind"
        elif element.kind == "switched" and element.switched_by is None:
            yield "switched_by"
    elif isinstance(element, Comparator | OutputStage | Load | Bypass):
        if element.domain is None:
            yield "domain"
    elif isinstance(element, Reference | Bias) and element.kind != "external" and element.domain is None:
        yield "domain"


def before_gaps(graph: Graph) -> frozenset[str]:
    """The elements of which it is not fully known what they lean on, directly or through others."""
    return _before(graph, frozenset())


def before_loop_gaps(graph: Graph) -> frozenset[str]:
    """As ``before_gaps``, without ways through detectors."""
    return _before(graph, frozenset(name for name, one in graph.elements.items() if isinstance(one, Comparator)))


def _before(graph: Graph, removed: frozenset[str]) -> frozenset[str]:
    waiting = [name for name, element in graph.elements.items() if name not in removed and any(leaning_gaps(element))]
    found = set(waiting)
    while waiting:
        for there, _, _ in graph.needed_by(waiting.pop()):
            if there not in found and there not in removed:
                found.add(there)
                waiting.append(there)
    return frozenset(found)
