"""Loops of elements that lean on each other, and what starts them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.description.model.detector import Bias, Comparator, Reference, StartUp
from tidegate.lint.graph.cycles import loops
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind, Path
from tidegate.lint.graph.paths import Neighbours, adjacency, loop_through

STARTED_WITHOUT: Final = (EdgeKind.BIASED_BY, EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.LEANS_ON)
"""What a start-up circuit replaces until the loop runs; a supply or an enable it does not."""


SUBJECTS: Final = ("rails", "references", "biases", "output_stages", "loads")
"""Sections of which every loop without a detector holds an element; the first of them by id stands for the loop.

A domain leans on a rail, or on what switches it; a reset net on a stage; nothing leans on an override or on a pair.
"""


class LeaningLoop(msgspec.Struct, frozen=True):
    """Elements of which each leans on each, through no comparator."""

    members: tuple[str, ...]
    """In the order of their ids."""
    started_by: tuple[str, ...]
    """Members with a start-up circuit."""
    deadlock: Path
    """The shortest cycle found that no start-up circuit can break; empty where there is none."""
    doubtful: Path
    """The same where start-up circuits of which nothing is said are taken for absent."""
    unknown: tuple[str, ...]
    """Members of the doubtful cycle of which it is not said whether they have a start-up circuit."""


def in_a_loop(graph: Graph) -> frozenset[str]:
    """Every element that leans on itself through others."""
    return frozenset(member for loop in loops(adjacency(graph, graph.needs)) for member in loop)


def without_detectors(graph: Graph) -> Neighbours:
    """What an element leans on, other than detectors; a detector leans on nothing here."""
    return lambda element: (
        ()
        if isinstance(graph.elements[element], Comparator)
        else (step for step in graph.needs(element) if not isinstance(graph.elements[step[0]], Comparator))
    )


def leaning_loops(graph: Graph) -> Mapping[str, LeaningLoop]:
    """The loops that pass through no comparator, by each of their members.

    A cycle through a comparator is a detector that leans on its own output, whatever else starts in it.
    """
    neighbours = without_detectors(graph)
    needs = {
        element: [there for there, _, _ in neighbours(element)]
        for element, described in graph.elements.items()
        if not isinstance(described, Comparator)
    }
    found: dict[str, LeaningLoop] = {}
    for component in loops(needs):
        loop = _loop(graph, sorted(component))
        found.update(dict.fromkeys(component, loop))
    return found


def _loop(graph: Graph, members: Sequence[str]) -> LeaningLoop:
    started = [member for member in members if isinstance(_start_up(graph, member), StartUp)]
    unknown = [member for member in members if _may_start(graph, member) and _start_up(graph, member) is None]
    doubtful = _cycle(graph, members, started)
    on_it = {hop.element for hop in doubtful}
    return LeaningLoop(
        members=tuple(members),
        started_by=tuple(started),
        deadlock=_cycle(graph, members, (*started, *unknown)),
        doubtful=doubtful,
        unknown=tuple(member for member in unknown if member in on_it),
    )


def _may_start(graph: Graph, member: str) -> bool:
    return isinstance(graph.elements[member], Reference | Bias)


def _start_up(graph: Graph, member: str) -> object:
    return getattr(graph.elements[member], "start_up", None)


def _cycle(graph: Graph, members: Sequence[str], started: Iterable[str]) -> Path:
    """A cycle that is left when some members start without what they are biased by; from its subject on."""
    left = _left(graph, frozenset(members), frozenset(started))
    successors = {member: [there for there, _, _ in left(member)] for member in members}
    on_cycles = {member for loop in loops(successors) for member in loop}
    first = next((one for one in members if one in on_cycles and graph.elements[one].section in SUBJECTS), None)
    return () if first is None else loop_through(first, left) or ()


def _left(graph: Graph, members: frozenset[str], started: frozenset[str]) -> Neighbours:
    """What is left of the needs of each member; in the order of ids, so that the order of a file changes no cycle."""
    return lambda element: sorted(
        (
            step
            for step in graph.needs(element)
            if step[0] in members and not (element in started and step[2].kind in STARTED_WITHOUT)
        ),
        key=lambda step: step[:2],
    )
