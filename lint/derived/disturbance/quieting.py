"""What would keep a neighbour's bump as small as it must be, and what that costs; for where all of it is known."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import ignored_s
from tidegate.lint.derived.disturbance.disturbed_node import coupled_edge, rail_share
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.physics import coupling
from tidegate.lint.physics.lasting_bump import decoupling_for_lasting_bump_f
from tidegate.lint.quantity import Dimension, show

_SETTLED: Final = 0.01
"""Share of a step that is left when a node counts as settled."""

Kept = tuple[Comparator, float]
"""A victim, and the distance that its level keeps, in V at its rail; above 0."""


def quieter_pair(case: Case, pair: Neighbour, victims: Sequence[Kept]) -> str:
    """What would make a described pair quiet enough for each of its victims."""
    facts = case.of(pair)
    if pair.kind == "shared_reference":
        return quieter_reference(case, facts.reference.element(), facts.charge.most(), victims)
    if pair.kind == "capacitance":
        return _quieter_node(case, pair, victims)
    allowed_v = min(kept_v * rail_share(case, facts, victim) for victim, kept_v in victims)
    step_a, impedance_ohm = facts.current_step.most(), facts.impedance.most()
    ohm, amperes = Dimension.RESISTANCE, Dimension.CURRENT
    return (
        f"an impedance of at most {show_down(allowed_v / step_a, ohm)} (now {show(impedance_ohm, ohm)}), or a step of "
        f"at most {show_down(allowed_v / impedance_ohm, amperes)} (now {show(step_a, amperes)})"
    )


def quieter_reference(case: Case, reference: Reference, charge_c: float, victims: Iterable[Kept]) -> str:
    """The decoupling on which a charge makes no more than each victim's level keeps."""
    allowed_v = min(kept_v * input_share(case, victim) for victim, kept_v in victims)
    facts = case.of(reference)
    needed_f = coupling.decoupling_for_charge_f(charge_c=charge_c, allowed_v=allowed_v)
    now_f = facts.decoupling.least()
    r_ohm = case.if_known(facts.source_resistance.most)
    cost = "" if not r_ohm else f", which then settles {_settles(r_ohm, needed_f)}"
    return (
        f"at least {show_up(needed_f, Dimension.CAPACITANCE)} on {reference.id} "
        f"(now {show(now_f, Dimension.CAPACITANCE)}){cost}"
    )


def _quieter_node(case: Case, pair: Neighbour, victims: Sequence[Kept]) -> str:
    """The capacitance of the node in which no edge leaves more than each victim's level keeps."""
    edge = coupled_edge(case, pair, 0.0)
    node = {"step_v": edge.step_v, "r_ohm": edge.r_ohm, "coupling_c_f": edge.coupling_c_f}
    needed_f = 0.0
    for victim, kept_v in victims:
        allowed_v = kept_v * rail_share(case, case.of(pair), victim)
        lasts_s = ignored_s(case, victim)
        peak_f = coupling.decoupling_for_bump_f(allowed_v=allowed_v, edge_s=edge.least_edge_s, **node)
        lasting_f = decoupling_for_lasting_bump_f(allowed_v=allowed_v, lasts_s=lasts_s, **node)
        needed_f = max(needed_f, min(peak_f, lasting_f))  # a bump that is low enough, or one that does not last
    return (
        f"at least {show_up(needed_f, Dimension.CAPACITANCE)} from the disturbed node to quiet nets "
        f"(now {show(edge.least_c_f, Dimension.CAPACITANCE)}), which then settles "
        f"{_settles(edge.r_ohm, needed_f + edge.coupling_c_f)}"
    )


def _settles(r_ohm: float, c_f: float) -> str:
    settled_s = coupling.settling_time_s(r_ohm=r_ohm, c_f=c_f, residual=_SETTLED)
    return f"to 1 % in {show_up(settled_s, Dimension.DURATION)}"
