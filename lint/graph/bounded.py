"""The graph of a description, unless its ways are longer than the rules can follow in sensible time."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from tidegate.lint.description.load import Loaded
from tidegate.lint.description.place import DescriptionError, Fault
from tidegate.lint.graph.cycles import strong_components
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.paths import adjacency
from tidegate.lint.limits import MOST_IN_A_ROW, MOST_WATCHING


def bounded_graph(loaded: Loaded) -> Graph:
    """The graph of a description.

    Raises: DescriptionError: where more elements stand in a row, or watch one rail, than the limits allow.
    """
    graph = build(loaded.description)
    faults = [*_crowds(loaded), *_rows(loaded, graph)]
    if faults:
        raise DescriptionError(faults)
    return graph


def _crowds(loaded: Loaded) -> Iterator[Fault]:
    """Rails that too many detectors watch: every one of them is held against every other."""
    comparators = loaded.description.comparators
    if len(comparators) <= MOST_WATCHING:
        return
    for rail, number in Counter(comparator.watches for comparator in comparators.values()).items():
        if number > MOST_WATCHING:
            problem = f"more than {MOST_WATCHING} detectors watch it (found {number})"
            advice = "describe the codes of one detector as codes, or split the description"
            yield Fault(loaded.sources.place(("rails", rail), key=True), f"rails.{rail}", problem, advice)


def _rows(loaded: Loaded, graph: Graph) -> Iterator[Fault]:
    """The first element found that stands at the end of too long a row, or in too large a ring."""
    if len(graph.elements) <= MOST_IN_A_ROW:
        return
    needs = adjacency(graph, graph.needs)
    length: dict[str, int] = {}
    for ring in strong_components(needs):  # what is leant on comes first
        behind = max((length.get(there, 0) for member in ring for there in needs[member]), default=0)
        length.update(dict.fromkeys(ring, behind + len(ring)))
        if behind + len(ring) > MOST_IN_A_ROW:
            way = "lean on each other in a ring" if len(ring) > MOST_IN_A_ROW else "stand in a row behind it"
            problem = f"more than {MOST_IN_A_ROW} elements {way}"
            section, name = graph.elements[ring[0]].section, ring[0]
            place = loaded.sources.place((section, name), key=True)
            yield Fault(place, f"{section}.{name}", problem, "describe elements that decide nothing as one")
            return
