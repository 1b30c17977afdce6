"""What overrides take out of the ways to the reset nets, and what they leave."""

from __future__ import annotations

from collections.abc import Iterable

from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Bypass, OutputStage, Reset
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.paths import Reach, driven_by, drives


def overrides_of(graph: Graph, element: str) -> list[Bypass]:
    """The overrides that take an element out."""
    found = (graph.elements[name] for name in graph.tails(element, EdgeKind.OVERRIDES))
    return [override for override in found if isinstance(override, Bypass)]


def resets_in(graph: Graph, reach: Reach) -> list[str]:
    """The reset nets among what was reached."""
    return [name for name in reach if isinstance(graph.elements[name], Reset)]


def detectors_in(graph: Graph, reach: Reach) -> list[Comparator]:
    """The detectors among what was reached."""
    found = (graph.elements[name] for name in reach)
    return [element for element in found if isinstance(element, Comparator)]


def behind(graph: Graph, element: str) -> Reach:
    """An element and everything whose decision passes through it."""
    return Reach(element, driven_by(graph))


def lifted(graph: Graph, overridden: Iterable[str], *, unsaid_agree: bool) -> frozenset[str]:
    """What can no longer assert when some elements are forced released.

    A stage or net whose drivers must all agree is lifted with any one of them, another one with the last of them.
    ``unsaid_agree`` takes those of which it is not said how they combine for the former, else for the latter.
    """
    found = set(overridden)
    waiting = list(found)
    still: dict[str, int] = {}
    while waiting:
        for name in graph.heads(waiting.pop(), EdgeKind.DRIVES):
            if name in found:
                continue
            if name not in still:
                still[name] = len(graph.tails(name, EdgeKind.DRIVES))
            still[name] -= 1
            if still[name] == 0 or _all_must_agree(graph, name, unsaid_agree=unsaid_agree):
                found.add(name)
                waiting.append(name)
    return frozenset(found)


def _all_must_agree(graph: Graph, name: str, *, unsaid_agree: bool) -> bool:
    element = graph.elements[name]
    combine = element.combine if isinstance(element, OutputStage | Reset) else None
    return combine == "all_agree" or (combine is None and unsaid_agree)


def lifted_by_overrides(graph: Graph) -> frozenset[str]:
    """What the overrides of a description can keep from asserting, as far as it is said."""
    return lifted(graph, _overridden(graph, ("released",)), unsaid_agree=False)


def perhaps_lifted_by_overrides(graph: Graph) -> frozenset[str]:
    """The same where everything that is not said about overrides and combinations is taken for the best."""
    return lifted(graph, _overridden(graph, ("released", None)), unsaid_agree=True)


def _overridden(graph: Graph, forces: tuple[str | None, ...]) -> list[str]:
    overrides = (element for element in graph.elements.values() if isinstance(element, Bypass))
    return [each.overrides for each in overrides if each.overrides is not None and each.forces in forces]


def aimless_overrides(graph: Graph) -> tuple[Bypass, ...]:
    """The overrides of which it is not said what they take out, and which may lift a reset."""
    overrides = (each for each in graph.elements.values() if isinstance(each, Bypass) and each.overrides is None)
    return tuple(each for each in overrides if each.forces != "asserted")


def ways_left(graph: Graph, detector: str, out: frozenset[str]) -> Reach:
    """What a detector still drives past what is lifted; only itself where it is lifted itself."""
    onward = drives(graph)
    return Reach(detector, lambda name: () if name in out else (step for step in onward(name) if step[0] not in out))


def unsaid_combinations(graph: Graph, reach: Reach) -> list[OutputStage | Reset]:
    """The stages and nets on some ways of which it is not said how their several drivers combine."""
    found = (graph.elements[name] for name in reach)
    return [
        element
        for element in found
        if isinstance(element, OutputStage | Reset)
        and element.combine is None
        and len(graph.tails(element.id, EdgeKind.DRIVES)) > 1
    ]
