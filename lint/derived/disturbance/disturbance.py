"""What neighbours do to a comparator's supply or level while it should stay still, at the rail."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import partial

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbed_node import ReferenceNode, coupled_edge, rail_share, reference_node
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.physics import coupling


class Bump(msgspec.Struct, frozen=True):
    """A disturbance that one element leaves on the level of another, referred to the rail that the victim watches."""

    aggressor: str
    victim: str
    via: str
    """The pair of neighbours, or the shared reference, through which it comes."""
    peak_v: float
    lasting_v: Callable[[float], float]
    """The highest level, in V at the rail, above which it can stay for a time in s; its peak, for no time."""
    path: Path
    fact: str
    """Path of the fact that its size rests on most."""


class Disturber(msgspec.Struct, frozen=True):
    """What can disturb a comparator, and the way on which it does; its bump is yet to be worked out."""

    aggressor: str
    path: Path
    bump: Callable[[], Bump]


def disturbers(case: Case, comparator: Comparator) -> list[Disturber]:
    """All others that disturb a comparator: described pairs, and comparators on the same reference."""
    pairs = (
        Disturber(
            aggressor, pair_path(pair, comparator, aggressor), partial(pair_bump, case, pair, comparator, aggressor)
        )
        for pair, aggressor in _pairs(case, comparator)
    )
    return [*pairs, *sharers(case, comparator)]


def sharers(case: Case, comparator: Comparator) -> list[Disturber]:
    """The other comparators that kick the reference of a comparator.

    A described pair that shares the reference says more about the same charge, and stands in its place.
    """
    reference = comparator.reference
    if reference is None:
        return []
    described = {
        aggressor
        for pair, aggressor in _pairs(case, comparator)
        if pair.kind == "shared_reference" and pair.reference == reference
    }
    node = _OnceNode(case, case.description.references[reference], comparator)
    others = (
        case.description.comparators[other]
        for other in case.graph.tails(reference, EdgeKind.TAKES_REFERENCE_FROM)
        if other in case.description.comparators and other != comparator.id and other not in described
    )
    return [Disturber(other.id, node.path_from(other.id), partial(_kick, case, other, node)) for other in others]


def bumps_on(case: Case, comparator: Comparator) -> list[Bump]:
    """Every bump that others leave on a comparator.

    Raises: MissingFactsError: where a fact of any of them is missing, with all that is.
    """
    return case.gather_all(disturber.bump for disturber in disturbers(case, comparator))


def own_kick(case: Case, comparator: Comparator) -> Bump:
    """The bump that a comparator's decision leaves on the reference that its own level is taken from."""
    assert comparator.reference is not None
    return _kick(case, comparator, _OnceNode(case, case.description.references[comparator.reference], comparator))


def _kick(case: Case, aggressor: Comparator, node: _OnceNode) -> Bump:
    facts = case.of(aggressor)
    charge_c = facts.most("kick")
    return node.bump(charge_c, aggressor=aggressor.id, via=node.reference.id, fact=facts.path("kick"))


def pair_bump(case: Case, pair: Neighbour, victim: Comparator, aggressor: str) -> Bump:
    """The bump of a described pair of neighbours."""
    facts = case.of(pair)
    if pair.kind == "shared_reference":
        charge_c, reference = case.gather(lambda: facts.most("charge"), lambda: facts.element("reference"))
        node = _OnceNode(case, reference, victim)
        return node.bump(charge_c, aggressor=aggressor, via=pair.id, fact=facts.path("charge"))
    path = pair_path(pair, victim, aggressor)
    if pair.kind == "capacitance":
        scale, edge = case.gather(lambda: rail_share(case, facts, victim), lambda: coupled_edge(case, pair))
        peak_v, lasting_v = edge.peak_v / scale, lambda lasts_s: edge.lasting_v(lasts_s) / scale
        return Bump(aggressor, victim.id, pair.id, peak_v, lasting_v, path, facts.path("capacitance"))
    scale, step_a, impedance_ohm = case.gather(
        lambda: rail_share(case, facts, victim), lambda: facts.most("current_step"), lambda: facts.most("impedance")
    )
    step_v = coupling.shared_impedance_bump_v(step_a=step_a, impedance_ohm=impedance_ohm) / scale
    # A step of current that stays: no filter waits it out.
    return Bump(aggressor, victim.id, pair.id, step_v, lambda _: step_v, path, facts.path("impedance"))


def pair_path(pair: Neighbour, victim: Comparator, aggressor: str) -> Path:
    """The way on which one of a described pair disturbs the other."""
    if pair.kind == "shared_reference" and pair.reference is not None:
        return Hop(aggressor, ""), Hop(pair.reference, "kicks"), Hop(victim.id, "is the reference of")
    return Hop(aggressor, ""), Hop(victim.id, f"couples through {pair.id} to")


def _pairs(case: Case, comparator: Comparator) -> Iterator[tuple[Neighbour, str]]:
    """The described pairs in which a comparator is disturbed, each with what disturbs it there."""
    for edge in case.graph.into(comparator.id):
        if edge.kind is EdgeKind.COUPLES_TO:
            _, pair, _ = edge.fact.split(".")
            yield case.description.neighbours[pair], edge.tail


class _OnceNode:
    """The reference of a victim, worked out once for all that kick it."""

    def __init__(self, case: Case, reference: Reference, victim: Comparator) -> None:
        self.reference = reference
        self._case = case
        self._victim = victim
        self._node: ReferenceNode | None = None
        self._onward = Hop(reference.id, "kicks"), Hop(victim.id, "is the reference of")

    def path_from(self, aggressor: str) -> Path:
        return Hop(aggressor, ""), *self._onward

    def bump(self, charge_c: float, *, aggressor: str, via: str, fact: str) -> Bump:
        """The bump of a charge; what is missing is noted anew each time, for whoever asks."""
        if self._node is None:
            self._node = reference_node(self._case, self.reference, self._victim)
        self._case.settle()
        lasting_v = partial(self._node.lasting_v, charge_c)
        return Bump(aggressor, self._victim.id, via, lasting_v(0.0), lasting_v, self.path_from(aggressor), fact)


def ignored_s(case: Case, comparator: Comparator) -> float:
    """For how long a crossing may last and is surely not seen, in s: what the filter keeps off; 0 without one."""
    if comparator.filter is None:
        return 0.0
    shortest_s = case.of(comparator).least("filter")
    case.settle()
    return shortest_s
