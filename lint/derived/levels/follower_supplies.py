"""What must work once a power-on detector lets go, and the supply that each of it needs."""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.guarded_loads import Bound, guarded_loads, least_supplies
from tidegate.lint.derived.reset_path.guarding_nets import watching
from tidegate.lint.derived.supply.lowest_supply import lowest_supply
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by, drives


@answered_once
def follower_supplies(case: Case, power_on: Comparator) -> list[Bound]:
    """The least working supplies that a power-on detector must not let go below, the most demanding first.

    Those of the detectors that judge the same reset nets after it, of their references and bias, as far as the same
    rail feeds them; and those of guarded loads for which no under-voltage detector of that rail stands.
    Raises: MissingFactsError: where one of them does not say from which supply on it works.
    """
    watched = {
        load for other in watching(case.graph, power_on.watches, ("under_voltage",)) for load in _loads(case, other)
    }
    alone = [load for load in _loads(case, power_on) if load not in watched]
    asks = [partial(_works_from, case, element, path) for element, path in _takes_over(case, power_on)]
    sources, loads = case.gather(lambda: case.gather_all(asks), lambda: least_supplies(case, power_on) if alone else [])
    found = [*sources, *(bound for bound in loads if bound.element in alone)]
    return sorted(found, key=lambda bound: -bound.level_v)


def _works_from(case: Case, element: Comparator | Reference | Bias, path: Path) -> Bound:
    facts = case.of(element)
    if isinstance(element, Comparator):
        level_v = facts.most("works_from")
        case.settle()
    else:
        level_v = lowest_supply(case, element).level_v
    return Bound(level_v, element.id, facts.path("works_from"), path)


def _loads(case: Case, detector: Comparator) -> list[str]:
    return [load.id for load, _ in guarded_loads(case.graph, detector.id)]


def _takes_over(case: Case, power_on: Comparator) -> Iterator[tuple[Comparator | Reference | Bias, Path]]:
    """The detectors of the same reset nets that the rail feeds, with what they lean on directly; each once."""
    graph, seen = case.graph, {power_on.id}
    for net in Reach(power_on.id, drives(graph)):
        if graph.elements[net].section != "resets":
            continue
        reach = Reach(net, driven_by(graph))
        for name in reach:
            detector = graph.elements[name]
            if not isinstance(detector, Comparator) or detector.role == "power_on":
                continue
            for element, path in _with_sources(case, detector, reach.path(name)):
                if element.id not in seen and _fed_by(case, element, power_on.watches):
                    seen.add(element.id)
                    yield element, path


def _with_sources(case: Case, detector: Comparator, path: Path) -> Iterator[tuple[Comparator | Reference | Bias, Path]]:
    yield detector, path
    for edge in case.graph.out(detector.id):
        if edge.kind in (EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.BIASED_BY):
            source = case.graph.elements[edge.head]
            if isinstance(source, Reference | Bias):
                yield source, (*path, Hop(source.id, edge.kind.forwards))


def _fed_by(case: Case, element: Comparator | Reference | Bias, rail: str) -> bool:
    if element.domain is None:
        case.of(element).lacks("domain")
        return False
    return case.description.domains[element.domain].rail == rail
