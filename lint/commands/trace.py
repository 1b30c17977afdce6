"""``tidegate trace``: what an element leans on, what leans on it, and what stands on every way to a reset net."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Iterable, Iterator
from difflib import get_close_matches

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.dominators import on_every_way
from tidegate.lint.graph.edge import Edge, EdgeKind
from tidegate.lint.graph.paths import Reach, drives
from tidegate.lint.reports.order import NOUNS

_MOST_LINES = 400


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("file", metavar="FILE", help="description (YAML or JSON)")
    parser.add_argument("element", metavar="ELEMENT", help="id of the element")


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print what the element leans on and what leans on it, each once, nearest first."""
    try:
        loaded = load(options.file)
    except DescriptionError as error:
        from tidegate.lint.reports.terminal import show_faults

        show_faults(streams.console(error=True), error.faults)
        return Exit.UNUSABLE
    graph = build(loaded.description)
    if options.element not in graph.elements:
        near = get_close_matches(options.element, graph.elements, 1)
        hint = f"did you mean {near[0]}?" if near else f"it describes {', '.join(list(graph.elements)[:12])}"
        streams.err.write(f"{options.file}: no element is called {options.element!r}; {hint}\n")
        return Exit.UNUSABLE
    streams.out.write("\n".join(_lines(graph, options.element)) + "\n")
    return Exit.KEPT


def _lines(graph: Graph, element: str) -> Iterator[str]:
    yield f"{element}, {NOUNS[graph.elements[element].section]}"
    yield ""
    yield "leans on"
    yield from _tree(element, graph.needs)
    yield ""
    yield "leant on by"
    yield from _tree(element, graph.needed_by)
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


def _tree(start: str, neighbours: Callable[[str], Iterable[tuple[str, str, Edge]]]) -> Iterator[str]:
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
        yield "  " * depth + f"{words} {here}" + (" (see above)" if again else "")
        if not again:
            seen.add(here)
            stack += [(there, by, depth + 1) for there, by, _ in reversed(list(neighbours(here)))]


def _single_points(graph: Graph, element: str) -> Iterator[str]:
    """For each reset net that the element drives: what stands on every way there."""
    reach = Reach(element, drives(graph))
    if element not in reach:
        return
    inside = {node: graph.heads(node, EdgeKind.DRIVES) for node in reach}
    for node in reach:
        if graph.elements[node].section == "resets" and node != element:
            between = on_every_way(inside, element, node)
            yield f"  {node}: {', '.join(between) if between else 'nothing but the net itself'}"
