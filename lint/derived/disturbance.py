"""What moves a comparator's supply or level while it should stay still, at the rail."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Final

from tidegate.lint.case import Case, Facts
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.physics import coupling

_HALVINGS: Final = 50  # to the last digit of a float


@dataclass(frozen=True, slots=True)
class Bump:
    """A disturbance that one element leaves on the level of another, referred to the rail that the victim watches."""

    aggressor: str
    victim: str
    via: str
    """The pair of neighbours, or the shared reference, through which it comes."""
    peak_v: float
    lasts_s: Callable[[float], float]
    """How long it stays above a level, in s for a level in V at the rail."""
    path: Path
    fact: str
    """Path of the fact that its size rests on most."""


def bumps_on(case: Case, comparator: Comparator) -> list[Bump]:
    """Every bump that others leave on a comparator: described pairs, and comparators on the same reference."""
    found: list[Bump] = []
    for neighbour in case.description.neighbours.values():
        if neighbour.victim == comparator.id:
            found.append(neighbour_bump(case, neighbour, comparator, neighbour.aggressor))
        elif neighbour.mutual and neighbour.aggressor == comparator.id:
            found.append(neighbour_bump(case, neighbour, comparator, neighbour.victim))
    found.extend(kicks_on(case, comparator))
    return found


def kicks_on(case: Case, comparator: Comparator) -> Iterator[Bump]:
    """Bumps that other comparators leave on the reference that they share with this one."""
    if comparator.reference is None:
        return
    for other_id in case.graph.tails(comparator.reference, EdgeKind.TAKES_REFERENCE_FROM):
        other = case.description.comparators.get(other_id)
        if other is not None and other.id != comparator.id:
            yield kick(case, other, comparator)


def kick(case: Case, aggressor: Comparator, victim: Comparator) -> Bump:
    """The bump that one comparator's decision leaves on another's reference (or on its own)."""
    assert victim.reference is not None
    reference = case.description.references[victim.reference]
    charge_c = case.of(aggressor).most("kick")
    fact = case.of(aggressor).path("kick")
    return _on_reference(
        case, reference, victim, charge_c=charge_c, aggressor=aggressor.id, via=reference.id, fact=fact
    )


def neighbour_bump(case: Case, neighbour: Neighbour, victim: Comparator, aggressor: str) -> Bump:
    """The bump of a described pair of neighbours."""
    facts = case.of(neighbour)
    if neighbour.kind == "shared_reference":
        reference = case.of(neighbour).element("reference")
        charge_c = facts.most("charge")
        return _on_reference(
            case, reference, victim, charge_c=charge_c, aggressor=aggressor, via=neighbour.id, fact=facts.path("charge")
        )
    scale = _to_rail(case, facts, victim)
    path = (Hop(aggressor, ""), Hop(victim.id, f"couples through {neighbour.id} to"))
    if neighbour.kind == "capacitance":
        edge = {
            "step_v": facts.most("step"),
            "edge_s": facts.least("edge"),
            "r_ohm": facts.most("node.resistance"),
            "coupling_c_f": facts.most("capacitance"),
            "ground_c_f": facts.least("node.capacitance"),
        }
        case.settle()
        peak_v = coupling.bump_peak_v(**edge) / scale

        def lasts_s(level_v: float) -> float:
            return coupling.time_above_s(level_v=level_v * scale, **edge) if level_v > 0.0 else float("inf")

        return Bump(aggressor, victim.id, neighbour.id, peak_v, lasts_s, path, facts.path("capacitance"))
    step_a, impedance_ohm = facts.most("current_step"), facts.most("impedance")
    case.settle()
    peak_v = coupling.shared_impedance_bump_v(step_a=step_a, impedance_ohm=impedance_ohm) / scale
    return Bump(aggressor, victim.id, neighbour.id, peak_v, _for_good(peak_v), path, facts.path("impedance"))


def _for_good(peak_v: float) -> Callable[[float], float]:
    """A step that stays: above every level below it for ever."""
    return lambda level_v: float("inf") if peak_v > level_v else 0.0


def _to_rail(case: Case, facts: Facts, victim: Comparator) -> float:
    """Divide by this to refer a bump to the rail."""
    if facts.must("at") == "rail":
        return 1.0
    return input_share(case, victim)


def input_share(case: Case, comparator: Comparator) -> float:
    """The part of the rail that reaches the comparator's input; 1 where there is no divider."""
    if comparator.divider is None:
        return 1.0
    share = case.of(comparator).number("divider.ratio")
    case.settle()
    return share


def _on_reference(
    case: Case, reference: Reference, victim: Comparator, *, charge_c: float, aggressor: str, via: str, fact: str
) -> Bump:
    """A charge thrown onto a decoupled reference, which gives it back through its source resistance."""
    facts = case.of(reference)
    c_f, r_ohm = facts.least("decoupling"), facts.most("source_resistance")
    share = input_share(case, victim)
    case.settle()
    at_reference_v = coupling.charge_kick_v(charge_c=charge_c, c_f=c_f)
    peak_v = at_reference_v / share

    def lasts_s(level_v: float) -> float:
        if level_v >= peak_v:
            return 0.0
        if level_v <= 0.0:
            return float("inf")
        return coupling.settling_time_s(r_ohm=r_ohm, c_f=c_f, residual=level_v / peak_v)

    path = (Hop(aggressor, ""), Hop(reference.id, "kicks"), Hop(victim.id, "is the reference of"))
    return Bump(aggressor, victim.id, via, peak_v, lasts_s, path, fact)


def seen_v(case: Case, comparator: Comparator, bump: Bump) -> float:
    """The part of a bump that a comparator can act on, in V at the rail.

    Its peak where there is no filter; else the highest level above which it stays as long as the filter may need.
    """
    if comparator.filter is None:
        return bump.peak_v
    shortest_s = case.of(comparator).least("filter")
    case.settle()
    if bump.lasts_s(0.0) < shortest_s:
        return 0.0
    low_v, high_v = 0.0, bump.peak_v
    for _ in range(_HALVINGS):
        middle_v = (low_v + high_v) / 2
        if bump.lasts_s(middle_v) >= shortest_s:
            low_v = middle_v
        else:
            high_v = middle_v
    return high_v
