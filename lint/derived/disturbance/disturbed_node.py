"""The node that a neighbour disturbs: how far an edge or a charge moves it, and for how long."""

from __future__ import annotations

from math import inf, isinf

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.facts.views.reset_path import NeighbourFacts
from tidegate.lint.physics import coupling
from tidegate.lint.physics.domain import product, quotient
from tidegate.lint.physics.lasting_bump import decayed_kick_v, lasting_bump_v


class CoupledEdge(msgspec.Struct, frozen=True):
    """The worst edge of a neighbour, and the node that it couples into."""

    step_v: float
    least_edge_s: float
    most_edge_s: float
    """Infinite where it does not matter how slow the edge can be."""
    r_ohm: float
    coupling_c_f: float
    least_c_f: float
    most_c_f: float
    """Infinite where it does not matter how much capacitance the node can have."""

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
        if self.most_edge_s >= lasts_s or isinf(self.coupling_c_f):
            return bound_v
        after_edge_v = decayed_kick_v(
            lasts_s=lasts_s - self.most_edge_s, charge_c=product(self.step_v, self.coupling_c_f), r_ohm=self.r_ohm,
            least_c_f=self.coupling_c_f + self.least_c_f, most_c_f=self.coupling_c_f + self.most_c_f,
        )  # fmt: skip
        return min(bound_v, after_edge_v)


def coupled_edge(case: Case, pair: Neighbour, lasts_s: float) -> CoupledEdge:
    """The edge and the node of a pair that couples through a capacitance, for whoever sees what lasts for a time."""
    facts = case.of(pair)
    least_c_f = facts.node.capacitance.least()
    waits = lasts_s > 0.0  # else the peak is all there is to see
    return CoupledEdge(
        step_v=facts.step.most(),
        least_edge_s=facts.edge.least(),
        most_edge_s=facts.edge.most() if waits else inf,
        r_ohm=facts.node.resistance.most(),
        coupling_c_f=facts.capacitance.most(),
        least_c_f=least_c_f,
        most_c_f=max(least_c_f, facts.node.capacitance.most()) if waits else inf,
    )


def rail_share(case: Case, facts: NeighbourFacts, victim: Comparator) -> float:
    """The part of a change at the rail that shows where a pair of neighbours meets its victim."""
    return 1.0 if facts.at.must() == "rail" else input_share(case, victim)


def kick_v(case: Case, reference: Reference, *, charge_c: float, lasts_s: float) -> float:
    """What a charge thrown onto a reference can still move it by after a time, in V at the reference.

    It gives the charge back through its source resistance.
    """
    facts = case.of(reference)
    least_c_f = facts.decoupling.least()
    if lasts_s == 0.0:
        return coupling.charge_kick_v(charge_c=charge_c, c_f=least_c_f)
    return decayed_kick_v(
        lasts_s=lasts_s, charge_c=charge_c, r_ohm=facts.source_resistance.most(), least_c_f=least_c_f,
        most_c_f=max(least_c_f, facts.decoupling.most()),
    )  # fmt: skip


def at_rail_v(at_node_v: float, share: float) -> float:
    """A disturbance of a node, in V at the rail of which the node sees a share."""
    return quotient(at_node_v, share)
