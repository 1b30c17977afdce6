"""The node that a neighbour disturbs: how far an edge or a charge moves it, and for how long."""

from __future__ import annotations

from math import inf

import msgspec

from tidegate.lint.case import Case, Facts
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.physics import coupling
from tidegate.lint.physics.lasting_bump import decayed_kick_v, lasting_bump_v


class CoupledEdge(msgspec.Struct, frozen=True):
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


class ReferenceNode(msgspec.Struct, frozen=True):
    """A decoupled reference, which gives a charge thrown onto it back through its source resistance."""

    least_c_f: float
    most_c_f: float
    """Infinite where it is not said how much decoupling it can have."""
    r_ohm: float
    """Infinite where it does not matter."""
    share: float
    """The part of a change at the victim's rail that equals a change of the reference."""

    def lasting_v(self, charge_c: float, lasts_s: float) -> float:
        """What a charge can still move the victim's level by after a time, V at its rail."""
        if lasts_s == 0.0:
            return coupling.charge_kick_v(charge_c=charge_c, c_f=self.least_c_f) / self.share
        return (
            decayed_kick_v(
                lasts_s=lasts_s, charge_c=charge_c, r_ohm=self.r_ohm, least_c_f=self.least_c_f, most_c_f=self.most_c_f
            )
            / self.share
        )


def reference_node(case: Case, reference: Reference, victim: Comparator) -> ReferenceNode:
    """A reference as one of the comparators on it feels it move."""
    facts = case.of(reference)
    decays = victim.filter is not None  # without a filter, the peak is all there is to see
    c_f, r_ohm, share = case.gather(
        lambda: facts.least("decoupling"),
        lambda: facts.most("source_resistance") if decays else inf,
        lambda: input_share(case, victim),
    )
    most_f = reference.decoupling.most if reference.decoupling is not None else None
    return ReferenceNode(least_c_f=c_f, most_c_f=inf if most_f is None else most_f, r_ohm=r_ohm, share=share)
