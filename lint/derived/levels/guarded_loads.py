"""The loads that a detector keeps in reset, and the supply at which each of them still works."""

from __future__ import annotations

from collections.abc import Iterator

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.paths import Reach, drives


class Bound(msgspec.Struct, frozen=True):
    """A supply level that an element sets, in V, with the fact that says so and the way to the element."""

    level_v: float
    element: str
    fact: str
    path: Path
    waits: tuple[str, ...] = ()
    """The facts without which the level is not exactly known."""


def guarded_loads(graph: Graph, detector: str) -> tuple[tuple[Load, Path], ...]:
    """Every load that a reset net of a detector guards, by itself or with its domain, and the way to it."""
    kept = graph.once(_kept)
    if detector not in kept:
        kept[detector] = tuple(_guarded(graph, detector))
    return kept[detector]


def _kept(_graph: Graph) -> dict[str, tuple[tuple[Load, Path], ...]]:
    return {}


def _guarded(graph: Graph, detector: str) -> Iterator[tuple[Load, Path]]:
    reach = Reach(detector, drives(graph))
    seen: set[str] = set()
    for net in reach:
        for guarded in graph.heads(net, EdgeKind.GUARDS):
            domain = isinstance(graph.elements[guarded], Domain)
            for name in graph.tails(guarded, EdgeKind.SUPPLIED_BY) if domain else [guarded]:
                load = graph.elements[name]
                if isinstance(load, Load) and name not in seen:
                    seen.add(name)
                    yield load, (*reach.path(net), Hop(name, EdgeKind.GUARDS.forwards))


@answered_once
def least_supplies(case: Case, comparator: Comparator) -> list[Bound]:
    """The least supply of each guarded load that needs the rail a detector watches, the most demanding load first.

    Raises: MissingFactsError: where one of them does not say from which supply on it works.
    """
    return sorted(_supplies(case, comparator, least=True), key=lambda bound: -bound.level_v)


@answered_once
def greatest_supplies(case: Case, comparator: Comparator) -> list[Bound]:
    """The greatest supply of each guarded load that needs the rail a detector watches, the most demanding load first.

    Raises: MissingFactsError: where one of them does not say up to which supply it works.
    """
    return sorted(_supplies(case, comparator, least=False), key=lambda bound: bound.level_v)


def _supplies(case: Case, comparator: Comparator, *, least: bool) -> list[Bound]:
    found = []
    for load, path in guarded_loads(case.graph, comparator.id):
        facts = case.of(load)
        for index, need in enumerate(load.needs):
            if need.rail == comparator.watches:
                works = facts.needs[index].works
                log = case.reading.listen()
                level_v = works.least() if least else works.most()
                case.reading.unlisten()
                found.append(Bound(level_v, load.id, works.path, path, tuple(log)))
    case.settle()
    return found
