"""``tidegate trace``: what an element leans on, what leans on it, and what stands on every way to a reset net."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Iterable, Iterator, Sequence
from difflib import get_close_matches

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import load
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.graph.bounded import bounded_graph
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.dominators import on_every_way
from tidegate.lint.graph.edge import Edge, EdgeKind
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.reports.order import NOUNS
from tidegate.lint.reports.timeline import arrival_text
from tidegate.lint.timing.timeline import Timeline, timelines

_MOST_LINES = 400
_RAMPS = ("fastest ramp", "slowest ramp")
_TEXT = 38  # columns of the tree, and of each time beside it
_TIME = 19


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("file", metavar="FILE", help="description (YAML or JSON)")
    parser.add_argument("element", metavar="ELEMENT", help="id of the element")


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print what the element leans on and what leans on it, each once, nearest first."""
    try:
        loaded = load(options.file)
        graph = bounded_graph(loaded)
    except DescriptionError as error:
        streams.tell(error.faults)
        return Exit.UNUSABLE
    if options.element not in graph.elements:
        near = get_close_matches(options.element, graph.elements, 1)
        hint = f"did you mean {near[0]}?" if near else f"known: {', '.join(list(graph.elements)[:12])}"
        streams.say(f"{options.file}: no element is called {options.element!r}; {hint}")
        return Exit.UNUSABLE
    streams.out.write("\n".join(_lines(loaded.description, graph, options.element)) + "\n")
    return Exit.KEPT


class _Arrivals:
    """When an element is up, or lets go, on the fastest and on the slowest ramp; in columns of their own."""

    def __init__(self, description: Description, graph: Graph) -> None:
        self._lines = timelines(description, graph)
        named = {line.scenario.name: line for line in self._lines.starts}
        self._ramps = [(name, named[name]) for name in _RAMPS if name in named]

    def beside(self, text: str, element: str) -> str:
        """A line of the report, with the times of its element."""
        times = [self._time(line, element) for _, line in self._ramps]
        return _row(text, times) if any(times) else text

    def head(self, text: str) -> str:
        """A heading, with those of the times."""
        return _row(text, [name for name, _ in self._ramps])

    def _time(self, line: Timeline, element: str) -> str:
        state = line.states.get(element)
        return "" if state is None else arrival_text(self._lines, element, state)


def _row(text: str, times: Sequence[str]) -> str:
    return f"{text:{_TEXT}}" + "".join(f"  {time:{_TIME}}" for time in times).rstrip()


def _lines(description: Description, graph: Graph, element: str) -> Iterator[str]:
    arrivals = _Arrivals(description, graph)
    yield arrivals.head("")
    yield arrivals.beside(f"{element}, {NOUNS[graph.elements[element].section]}", element)
    yield ""
    yield "leans on"
    yield from _tree(element, graph.needs, arrivals)
    yield ""
    yield "leant on by"
    yield from _tree(element, graph.needed_by, arrivals)
    others = [edge for edge in (*graph.out(element), *graph.into(element)) if _neither(edge)]
    if others:
        yield ""
        yield "beside that"
        for edge in others:
            yield f"  {edge.tail} {edge.kind.forwards} {edge.head}"
    ways = list(_single_points(graph, element))
    if ways:
        yield ""
        yield "on every way to a reset net"
        yield from ways


def _neither(edge: Edge) -> bool:
    return not edge.kind.tail_leans and not edge.kind.head_leans


def _tree(
    start: str, neighbours: Callable[[str], Iterable[tuple[str, str, Edge]]], arrivals: _Arrivals
) -> Iterator[str]:
    """An indented tree; an element that was shown before is named again and not followed again."""
    seen = {start}
    stack = [(there, words, 1) for there, words, _ in reversed(list(neighbours(start)))]
    if not stack:
        yield "  nothing"
    lines = 0
    while stack:
        here, words, depth = stack.pop()
        lines += 1
        if lines > _MOST_LINES:
            yield f"  ... and more; only the first {_MOST_LINES} are shown"
            return
        again = here in seen
        text = "  " * depth + f"{words} {here}"
        yield f"{text} (see above)" if again else arrivals.beside(text, here)
        if not again:
            seen.add(here)
            stack += [(there, by, depth + 1) for there, by, _ in reversed(list(neighbours(here)))]


def _single_points(graph: Graph, element: str) -> Iterator[str]:
    """Of a reset net, what stands on the way of every detector; of what drives one, what stands on its every way."""
    if graph.elements[element].section == "resets":
        reach = Reach(element, driven_by(graph))
        detectors = [node for node in reach if graph.elements[node].section == "comparators"]
        inside = {node: graph.tails(node, EdgeKind.DRIVES) for node in reach}
        ways = [on_every_way(inside, element, detector) for detector in detectors]
        shared = [node for node in ways[0] if all(node in way for way in ways)] if ways else []
        yield f"  of {len(detectors)} detectors: {', '.join(shared) or 'nothing but the net itself'}"
        return
    reach = Reach(element, drives(graph))
    inside = {node: graph.heads(node, EdgeKind.DRIVES) for node in reach}
    for node in reach:
        if graph.elements[node].section == "resets":
            between = on_every_way(inside, element, node)
            yield f"  {node}: {', '.join(between) or 'nothing but the net itself'}"
