"""What must work once a power-on detector lets go, and the supply that each of it needs."""

from __future__ import annotations

import math
from collections.abc import Iterator

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.guarded_loads import Bound, guarded_loads, least_supplies
from tidegate.lint.derived.reset_path.guarding_nets import watching
from tidegate.lint.derived.reset_path.path_gaps import unsaid_ways
from tidegate.lint.derived.supply.lowest_supply import lowest_supply
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.leaning_gaps import source_gaps
from tidegate.lint.graph.paths import Reach, driven_by, drives


@answered_once
def follower_supplies(case: Case, power_on: Comparator) -> list[Bound]:
    """The least working supplies that a power-on detector must not let go below, the most demanding first.

    Those of the detectors that judge the same reset nets after it, of their references and bias, as far as the same
    rail feeds them; and those of guarded loads for which no under-voltage detector of that rail stands.  What may be
    among them, for all that is said, is so where that harms.
    """
    alone = _alone(case, power_on)
    loads = least_supplies(case, power_on) if alone else []
    found = [*_taking_over(case, power_on), *(bound for bound in loads if bound.element in alone)]
    return sorted(found, key=lambda bound: -bound.level_v)


def _alone(case: Case, power_on: Comparator) -> frozenset[str]:
    """The guarded loads that need the rail and that no under-voltage detector of it resets, nor might at the best."""
    graph, rail = case.graph, power_on.watches
    others = watching(graph, rail, ("under_voltage",))
    watched = {load.id for other in others for load, _ in guarded_loads(graph, other.id)}
    needing = (
        load.id
        for load, _ in guarded_loads(graph, power_on.id)
        if any(need.rail == rail for need in load.needs)
    )  # fmt: skip
    alone = frozenset(load for load in needing if load not in watched)
    doubts = [fact for other in others for fact in unsaid_ways(case, Reach(other.id, drives(graph)))] if alone else []
    if doubts:
        case.reading.block(dict.fromkeys(doubts))
    return frozenset() if doubts and case.at_best else alone


def _taking_over(case: Case, power_on: Comparator) -> Iterator[Bound]:
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
                    yield _works_from(case, element, path)
            unsaid = tuple(detector.fact(fact) for fact in source_gaps(detector))
            if unsaid:
                case.reading.block(unsaid)
                if not case.at_best:
                    yield Bound(math.inf, detector.id, unsaid[0], reach.path(name), unsaid)


def _works_from(case: Case, element: Comparator | Reference | Bias, path: Path) -> Bound:
    works_from = case.of(element).works_from
    log = case.reading.listen()
    try:
        level_v = works_from.most() if isinstance(element, Comparator) else lowest_supply(case, element).level_v
    finally:
        case.reading.unlisten()
    return Bound(level_v, element.id, works_from.path, path, tuple(log))


def _with_sources(case: Case, detector: Comparator, path: Path) -> Iterator[tuple[Comparator | Reference | Bias, Path]]:
    yield detector, path
    for edge in case.graph.out(detector.id):
        if edge.kind in (EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.BIASED_BY):
            source = case.graph.elements[edge.head]
            if isinstance(source, Reference | Bias) and source.kind != "external":
                yield source, (*path, Hop(source.id, edge.kind.forwards))


def _fed_by(case: Case, element: Comparator | Reference | Bias, rail: str) -> bool:
    """Whether a rail feeds an element; where it may, for all that is said, it does so at the worst."""
    domain = case.description.domains.get(element.domain or "")
    if domain is not None and domain.rail is not None:
        return domain.rail == rail
    case.reading.block((element.fact("domain") if domain is None else domain.fact("rail"),))
    return not case.at_best
