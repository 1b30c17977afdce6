"""Ways through the graph: what can be reached, and by which shortest path."""

from __future__ import annotations

from collections import deque
from collections.abc import Callable, Iterable, Iterator, Mapping

from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Edge, EdgeKind, Hop, Path

Neighbours = Callable[[str], Iterable[tuple[str, str, Edge]]]
"""Of an element: the ids next to it, the words that lead there, and the edge."""


def driven_by(graph: Graph) -> Neighbours:
    """Against the flow: from an element to what drives it."""
    return lambda element: (
        (edge.tail, edge.kind.backwards, edge) for edge in graph.into(element) if edge.kind is EdgeKind.DRIVES
    )


def drives(graph: Graph) -> Neighbours:
    """With the flow: from an element to what it drives."""
    return lambda element: (
        (edge.head, edge.kind.forwards, edge) for edge in graph.out(element) if edge.kind is EdgeKind.DRIVES
    )


class Reach:
    """What can be reached from a start, nearest first, with the shortest path to each."""

    def __init__(self, start: str, neighbours: Neighbours) -> None:
        self.start = start
        self._came: dict[str, tuple[str, str]] = {start: ("", "")}
        waiting = deque((start,))
        while waiting:
            here = waiting.popleft()
            for there, words, _ in neighbours(here):
                if there not in self._came:
                    self._came[there] = (here, words)
                    waiting.append(there)

    def __contains__(self, element: str) -> bool:
        return element in self._came

    def __iter__(self) -> Iterator[str]:
        """What was reached, the start first."""
        return iter(self._came)

    def path(self, goal: str) -> Path:
        """The shortest path from the start to a goal that was reached."""
        hops: list[Hop] = []
        here = goal
        while here:
            before, words = self._came[here]
            hops.append(Hop(here, words))
            here = before
        return tuple(reversed(hops))


def loop_through(start: str, neighbours: Neighbours) -> Path | None:
    """The shortest closed way from an element back to itself; None where there is none."""
    reach = Reach(start, neighbours)
    for here in reach:  # nearest first, so that the first way back is the shortest
        for there, words, _ in neighbours(here):
            if there == start:
                return (*reach.path(here), Hop(start, words))
    return None


def step_onto(path: Path, goals: Reach) -> tuple[str, Hop]:
    """The first step of a path onto an element of some reach, in which it ends: the element before it, and the step."""
    number = next(number for number in range(1, len(path)) if path[number].element in goals)
    return path[number - 1].element, path[number]


def cut(neighbours: Neighbours, removed: str) -> Neighbours:
    """The same graph without one element."""
    return lambda element: () if element == removed else [step for step in neighbours(element) if step[0] != removed]


def adjacency(graph: Graph, neighbours: Neighbours) -> Mapping[str, list[str]]:
    """The graph as plain lists of ids, for the algorithms that need no words."""
    return {element: [there for there, _, _ in neighbours(element)] for element in graph.elements}
