"""What the input dividers of detectors take from the rails that they hang on."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.derived.supply.standing_current import Taker
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics.hold import hold_current_a


def divider_takers(case: Case, domain: Domain) -> list[Taker]:
    """What each divider that counts in a domain takes, at the greatest supply delivered and its least resistance.

    It counts in the domain of its detector; where it hangs on another rail, in each domain of that rail that is
    always on.
    Raises: MissingFactsError: where the resistances of a divider, or the supply, are not given.
    """
    takers = []
    rail = domain_rail(case, domain)
    supply_v = None
    for comparator in _counting(case, domain, rail.id):
        facts = case.of(comparator)
        ohm = facts.least("divider.top") + facts.least("divider.bottom")
        if supply_v is None:
            supply_v = case.of(rail).most("delivered")
        takers.append((comparator.id, ohm))
    case.settle()
    return [Taker(f"divider of {name}", hold_current_a(supply_v=supply_v or 0.0, hold_ohm=ohm)) for name, ohm in takers]


def _counting(case: Case, domain: Domain, rail: str) -> Iterator[Comparator]:
    for name in case.graph.tails(domain.id, EdgeKind.SUPPLIED_BY):
        element = case.graph.elements[name]
        if isinstance(element, Comparator) and element.divider is not None and element.watches == rail:
            yield element
    if domain.kind == "always_on":
        yield from case.graph.once(foreign_dividers).get(rail, ())


def foreign_dividers(graph: Graph) -> Mapping[str, tuple[Comparator, ...]]:
    """By rail, the detectors whose divider hangs on it while another rail feeds them."""
    found: dict[str, list[Comparator]] = {}
    for element in graph.elements.values():
        if not isinstance(element, Comparator) or element.divider is None or element.domain is None:
            continue
        domain = graph.elements[element.domain]
        assert isinstance(domain, Domain)
        if domain.rail is not None and domain.rail != element.watches:
            found.setdefault(element.watches, []).append(element)
    return {rail: tuple(detectors) for rail, detectors in found.items()}
