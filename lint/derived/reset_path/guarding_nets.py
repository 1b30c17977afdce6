"""The reset nets that guard a load, and the detectors that each of them hears."""

from __future__ import annotations

from collections.abc import Mapping

from tidegate.lint.case import Case
from tidegate.lint.derived.unsaid import unsaid
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load, Reset
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.paths import Reach, driven_by

LOW_ROLES = ("power_on", "under_voltage")
"""Roles of the detectors that assert while a supply is too low."""


def guarding_nets(graph: Graph, load: Load) -> list[str]:
    """The reset nets that guard a load, by itself or with the domain it lives in."""
    nets = graph.tails(load.id, EdgeKind.GUARDS)
    if load.domain is not None:
        nets += graph.tails(load.domain, EdgeKind.GUARDS)
    return list(dict.fromkeys(nets))


def detectors_behind_nets(graph: Graph) -> Mapping[str, tuple[Comparator, ...]]:
    """Of each reset net, the detectors whose decision reaches it, nearest first."""
    found = {}
    for name, element in graph.elements.items():
        if isinstance(element, Reset):
            behind = (graph.elements[there] for there in Reach(name, driven_by(graph)))
            found[name] = tuple(one for one in behind if isinstance(one, Comparator))
    return found


def nets_of_detectors(graph: Graph) -> Mapping[str, tuple[str, ...]]:
    """Of each detector that reaches a reset net, the nets that it reaches."""
    found: dict[str, list[str]] = {}
    for net, detectors in graph.once(detectors_behind_nets).items():
        for detector in detectors:
            found.setdefault(detector.id, []).append(net)
    return {detector: tuple(nets) for detector, nets in found.items()}


def watching(graph: Graph, rail: str, roles: tuple[str, ...]) -> list[Comparator]:
    """The detectors of some roles that watch a rail."""
    found = (graph.elements[name] for name in graph.tails(rail, EdgeKind.WATCHES))
    return [one for one in found if isinstance(one, Comparator) and one.role in roles]


def guard_gaps(case: Case, load: Load) -> tuple[str, ...]:
    """What might let more reset nets guard a load than are described to."""
    nets = guarding_nets(case.graph, load)
    silent = (net.fact("guards") for net in case.graph.once(nets_without_guards) if net.id not in nets)
    domain = (load.fact("domain"),) if load.domain is None and case.graph.once(_guards_a_domain) else ()
    return (*unsaid(case, "resets"), *silent, *domain)


def _guards_a_domain(graph: Graph) -> bool:
    return any(
        edge.kind is EdgeKind.GUARDS and graph.elements[edge.head].section == "domains" for edge in graph.edges()
    )


def nets_without_guards(graph: Graph) -> tuple[Reset, ...]:
    """The reset nets of which it is not said what they guard."""
    return tuple(one for one in graph.elements.values() if isinstance(one, Reset) and one.guards is None)
