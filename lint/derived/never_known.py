"""Faults that leave what hangs on them undecided or late, each told by one rule: others need not tell them again."""

from __future__ import annotations

import functools
from collections.abc import Callable
from functools import partial
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.level_margins import LevelMargin, guarantee
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES, detectors_behind_nets, guarding_nets, watching
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load, OutputStage
from tidegate.lint.graph.leaning_loops import in_a_loop, leaning_loops
from tidegate.lint.graph.paths import Reach
from tidegate.lint.judgement import Judgement, Kind

_LOOP_RULES: Final = {
    "rails": "rail", "references": "reference", "biases": "bias", "output_stages": "stage", "loads": "load",
}  # fmt: skip


def unless_told(judge: Callable[[Any, Case], Judgement]) -> Callable[[Any, Case], Judgement]:
    """A rule that does not apply where it would fail for a fault that another rule tells."""

    @functools.wraps(judge)
    def told_once(element: Any, case: Case) -> Judgement:
        found = judge(element, case)
        told = never_known(case, element.id) if found.kind is Kind.FAIL else None
        return found if told is None else case.not_applicable(told)

    return told_once


def never_known(case: Case, name: str) -> str | None:
    """What an element hangs on that waits for itself, or comes up either way, and which rule says so; else None."""
    graph = case.graph
    loops, waiting = graph.once(leaning_loops), graph.once(in_a_loop)
    for there in Reach(name, graph.needs):
        element = graph.elements[there]
        loop = loops.get(there)
        cycle = () if loop is None else loop.deadlock or loop.doubtful
        if loop is not None and cycle:
            on_it = {hop.element for hop in cycle}
            first = next(m for m in loop.members if m in on_it and graph.elements[m].section in _LOOP_RULES)
            judge = f"self_bias/{_LOOP_RULES[graph.elements[first].section]}_loop_starts"
            return f"hangs on {first}, which waits for itself ({judge} says so)"
        if loop is None and there in waiting:
            return f"hangs on {there}, which a detector's own output holds up (self_bias/no_loop says so)"
        if isinstance(element, OutputStage) and element.kind == "latch" and element.power_up == "undefined":
            return f"hangs on {there}, which comes up in either state (passive_default/latch_state says so)"
    return None


def decides_too_late(case: Case, load: Load, rail: str) -> str | None:
    """The detector that surely decides too late for a load when its rail falls, and which rule says so; else None."""
    behind = case.graph.once(detectors_behind_nets)
    heard = {detector.id for net in guarding_nets(case.graph, load) for detector in behind[net]}
    for detector in watching(case.graph, rail, ("under_voltage",)):
        found = case.attempt(partial(_guarantee, case, detector)) if detector.id in heard else None
        if found is not None and not found.is_kept:
            return f"{detector.id} decides too late by itself (trip_window/guarantee or placement_sense says so)"
    return None


def nobody_judges(case: Case, load: Load, rail: str) -> str | None:
    """Why no detector of a rail resets a load when it falls, and which rule says so; else None."""
    watched = watching(case.graph, rail, LOW_ROLES)
    if not watched:
        return f"no detector watches {rail} (coverage/under_voltage says so)"
    behind = case.graph.once(detectors_behind_nets)
    heard = {detector.id for net in guarding_nets(case.graph, load) for detector in behind[net]}
    if not any(detector.id in heard for detector in watched):
        return f"no detector of {rail} resets it (reach/every_rail says so)"
    return None


def _guarantee(case: Case, detector: Comparator) -> LevelMargin | None:
    return guarantee(case, as_shipped(case, detector))
