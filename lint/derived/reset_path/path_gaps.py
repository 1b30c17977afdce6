"""What is not said of the ways from detectors to loads: with it, a way may exist that the graph does not have."""

from __future__ import annotations

from collections.abc import Iterable

from tidegate.lint.case import Case
from tidegate.lint.derived.unsaid import unsaid
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.paths import Reach, driven_by


def undriven_elements(graph: Graph) -> tuple[OutputStage | Reset, ...]:
    """The stages and nets of which it is not said what drives them."""
    found = (one for one in graph.elements.values() if isinstance(one, OutputStage | Reset))
    return tuple(one for one in found if one.driven_by is None)


def undriven(graph: Graph) -> tuple[str, ...]:
    """The facts of stages and nets of which it is not said what drives them, as paths."""
    return tuple(one.fact("driven_by") for one in graph.once(undriven_elements))


def unsaid_ways(case: Case, reached: Iterable[str]) -> tuple[str, ...]:
    """What might let a detector guard more than it is described to: its nets that do not say what they guard, too."""
    nets = (case.description.resets.get(name) for name in reached)
    guards = tuple(net.fact("guards") for net in nets if net is not None and net.guards is None)
    return (*case.graph.once(undriven), *guards, *unsaid(case, "resets"))


def gaps_onward(case: Case, element: str) -> tuple[str, ...]:
    """What might let an element drive more stages and nets than it is described to.

    What drives it is not taken to be driven by it as well.
    """
    loose = case.graph.once(undriven_elements)
    before = Reach(element, driven_by(case.graph)) if loose else ()
    return (*(one.fact("driven_by") for one in loose if one.id not in before), *unsaid(case, "resets"))


def gaps_behind(case: Case, element: str) -> tuple[str, ...]:
    """What might let more detectors and stages drive an element than are described to."""
    loose = case.graph.once(undriven_elements)
    behind = Reach(element, driven_by(case.graph)) if loose else ()
    return tuple(one.fact("driven_by") for one in loose if one.id in behind)
