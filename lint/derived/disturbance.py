"""What neighbours do to a comparator's supply or level while it should stay still, at the rail."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import partial
from math import inf

from tidegate.lint.case import Case, Facts
from tidegate.lint.derived.input_share import input_share
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.physics import coupling
from tidegate.lint.physics.lasting_bump import decayed_kick_v, lasting_bump_v


@dataclass(frozen=True, slots=True)
class Bump:
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


@dataclass(frozen=True, slots=True)
class Disturber:
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
    others = (
        case.description.comparators[other]
        for other in case.graph.tails(reference, EdgeKind.TAKES_REFERENCE_FROM)
        if other in case.description.comparators and other != comparator.id and other not in described
    )
    return [
        Disturber(other.id, _kick_path(other.id, reference, comparator), partial(kick, case, other, comparator))
        for other in others
    ]


def bumps_on(case: Case, comparator: Comparator) -> list[Bump]:
    """Every bump that others leave on a comparator.

    Raises: MissingFactsError: where a fact of any of them is missing, with all that is.
    """
    return case.gather_all((disturber.bump for disturber in disturbers(case, comparator)))


def kick(case: Case, aggressor: Comparator, victim: Comparator) -> Bump:
    """The bump that one comparator's decision leaves on another's reference (or on its own)."""
    assert victim.reference is not None
    reference = case.description.references[victim.reference]
    charge_c, fact = case.of(aggressor).most("kick"), case.of(aggressor).path("kick")
    return _on_reference(
        case, reference, victim, charge_c=charge_c, aggressor=aggressor.id, via=reference.id, fact=fact
    )


def pair_bump(case: Case, pair: Neighbour, victim: Comparator, aggressor: str) -> Bump:
    """The bump of a described pair of neighbours."""
    facts = case.of(pair)
    if pair.kind == "shared_reference":
        charge_c, reference = case.gather(lambda: facts.most("charge"), lambda: facts.element("reference"))
        return _on_reference(
            case, reference, victim, charge_c=charge_c, aggressor=aggressor, via=pair.id, fact=facts.path("charge")
        )
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
        return _kick_path(aggressor, pair.reference, victim)
    return Hop(aggressor, ""), Hop(victim.id, f"couples through {pair.id} to")


def _kick_path(aggressor: str, reference: str, victim: Comparator) -> Path:
    return Hop(aggressor, ""), Hop(reference, "kicks"), Hop(victim.id, "is the reference of")


def _pairs(case: Case, comparator: Comparator) -> Iterator[tuple[Neighbour, str]]:
    """The described pairs in which a comparator is disturbed, each with what disturbs it there."""
    for edge in case.graph.into(comparator.id):
        if edge.kind is EdgeKind.COUPLES_TO:
            _, pair, _ = edge.fact.split(".")
            yield case.description.neighbours[pair], edge.tail


@dataclass(frozen=True, slots=True)
class CoupledEdge:
    """The worst edge of a neighbour, and the node that it couples into."""

    step_v: float
    least_edge_s: float
    most_edge_s: float
    """Infinite where it is not said how slow the edge can be."""
    r_ohm: float
    coupling_c_f: float
    least_c_f: float
    most_c_f: float
    """Infinite where it is not said how much capacitance the node can have."""

    @property
    def peak_v(self) -> float:
        """Its peak at the node, V."""
        return coupling.bump_peak_v(
            step_v=self.step_v, edge_s=self.least_edge_s, r_ohm=self.r_ohm, coupling_c_f=self.coupling_c_f,
            ground_c_f=self.least_c_f,
        )  # fmt: skip

    def lasting_v(self, lasts_s: float) -> float:
        """What no edge of this neighbour holds the node above for a time, V at the node: the least of three bounds."""
        held_v = lasting_bump_v(
            lasts_s=lasts_s, step_v=self.step_v, r_ohm=self.r_ohm, coupling_c_f=self.coupling_c_f,
            ground_c_f=self.least_c_f,
        )  # fmt: skip
        bound_v = min(self.peak_v, held_v)
        least_c_f = self.coupling_c_f + self.least_c_f
        if self.most_edge_s >= lasts_s or least_c_f == 0.0:
            return bound_v
        after_edge_v = decayed_kick_v(
            lasts_s=lasts_s - self.most_edge_s, charge_c=self.step_v * self.coupling_c_f, r_ohm=self.r_ohm,
            least_c_f=least_c_f, most_c_f=self.coupling_c_f + self.most_c_f,
        )  # fmt: skip
        return min(bound_v, after_edge_v)


def coupled_edge(case: Case, pair: Neighbour) -> CoupledEdge:
    """The edge and the node of a pair that couples through a capacitance."""
    facts = case.of(pair)
    node_c = pair.node.capacitance if pair.node is not None else None
    slowest_s = pair.edge.most if pair.edge is not None else None
    edge = CoupledEdge(
        step_v=facts.most("step"),
        least_edge_s=facts.least("edge"),
        most_edge_s=inf if slowest_s is None else slowest_s,
        r_ohm=facts.most("node.resistance"),
        coupling_c_f=facts.most("capacitance"),
        least_c_f=facts.least("node.capacitance"),
        most_c_f=inf if node_c is None or node_c.most is None else node_c.most,
    )
    case.settle()
    return edge


def rail_share(case: Case, facts: Facts, victim: Comparator) -> float:
    """The part of a change at the rail that shows where a pair of neighbours meets its victim."""
    return 1.0 if facts.must("at") == "rail" else input_share(case, victim)


def _on_reference(
    case: Case, reference: Reference, victim: Comparator, *, charge_c: float, aggressor: str, via: str, fact: str
) -> Bump:
    """A charge thrown onto a decoupled reference, which gives it back through its source resistance."""
    facts = case.of(reference)
    needs_decay = victim.filter is not None  # without a filter, the peak is all there is to see
    c_f, r_ohm, share = case.gather(
        lambda: facts.least("decoupling"),
        lambda: facts.most("source_resistance") if needs_decay else inf,
        lambda: input_share(case, victim),
    )
    peak_v = coupling.charge_kick_v(charge_c=charge_c, c_f=c_f) / share
    greatest_f = reference.decoupling.most if reference.decoupling is not None else None

    def lasting_v(lasts_s: float) -> float:
        if lasts_s == 0.0:
            return peak_v
        most_c_f = inf if greatest_f is None else greatest_f
        return decayed_kick_v(lasts_s=lasts_s, charge_c=charge_c, r_ohm=r_ohm, least_c_f=c_f, most_c_f=most_c_f) / share

    path = _kick_path(aggressor, reference.id, victim)
    return Bump(aggressor, victim.id, via, peak_v, lasting_v, path, fact)


def seen_v(case: Case, comparator: Comparator, bump: Bump) -> float:
    """The part of a bump that a comparator can act on, in V at the rail.

    Its peak where there is no filter; else the highest level above which it can stay as long as the filter may need.
    """
    return bump.lasting_v(ignored_s(case, comparator))


def ignored_s(case: Case, comparator: Comparator) -> float:
    """For how long a crossing may last and is surely not seen, in s: what the filter keeps off; 0 without one."""
    if comparator.filter is None:
        return 0.0
    shortest_s = case.of(comparator).least("filter")
    case.settle()
    return shortest_s
