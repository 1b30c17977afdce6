"""How steeply a rail falls out of service at the most: one number for every rule, and for the timelines."""

from __future__ import annotations

from collections.abc import Mapping
from math import inf

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.physics.hold_up import hold_up_time_s


class SteepestFall(msgspec.Struct, frozen=True):
    """The greatest slope of a rail on its way out of service, in V/s, and what bounds it, in words."""

    v_per_s: float
    by: str


def steepest_fall(case: Case, rail: Rail) -> SteepestFall:
    """The steepest collapse as it is stated, whatever else is said of the rail.

    Where it is not stated, a hold-up capacitance that feeds a known current makes it no steeper than I / C.
    """
    collapse_v_per_s = case.of(rail).collapse.most()
    if rail.collapse is None or rail.collapse.most is None:
        held_v_per_s = _held_up_v_per_s(case, rail)
        if held_v_per_s < collapse_v_per_s:
            return SteepestFall(held_v_per_s, "its hold-up")
    return SteepestFall(collapse_v_per_s, "its collapse")


def _held_up_v_per_s(case: Case, rail: Rail) -> float:
    """The slope at which the loads of a rail discharge what holds it up; infinite where that is not known.

    More loads may draw more: each of them must be described.
    """
    held_up_f = rail.hold_up.least if rail.hold_up is not None else None
    drawn_a = case.graph.once(_drawn_a).get(rail.id)
    if not held_up_f or not drawn_a or "loads" not in case.description.complete:
        return inf
    return 1.0 / hold_up_time_s(c_f=held_up_f, drop_v=1.0, load_a=drawn_a)


def _drawn_a(graph: Graph) -> Mapping[str, float]:
    """The greatest current that all loads of a rail draw together, of rails where each of them says it, in A."""
    drawn: dict[str, float] = {}
    unknown: set[str] = set()
    for load in graph.elements.values():
        if not isinstance(load, Load):
            continue
        most_a = load.consumes.most if load.consumes is not None else None
        for need in load.needs:
            if most_a is None:
                unknown.add(need.rail)
            else:
                drawn[need.rail] = drawn.get(need.rail, 0.0) + most_a
    return {rail: most_a for rail, most_a in drawn.items() if rail not in unknown}
