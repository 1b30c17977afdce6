"""Ways through a graph, against NetworkX and brute force."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

import networkx as nx
from hypothesis import given, settings

from tests.graph.random_graphs import Successors, as_networkx, chain, graphs
from tidegate.lint.graph.edge import Edge, EdgeKind, Hop, path_text
from tidegate.lint.graph.paths import Neighbours, Reach, cut, loop_through, step_onto

DEEP = 20_000


def along(successors: Successors) -> Neighbours:
    """The graph as ways are walked in it; each edge has words of its own."""

    def steps(element: str) -> Iterator[tuple[str, str, Edge]]:
        for head in successors.get(element, ()):
            yield head, f"{element}>{head}", Edge(element, EdgeKind.DRIVES, head, "")

    return steps


def holds_together(path: tuple[Hop, ...], successors: Successors) -> bool:
    """Whether every step of a path is an edge, and says so."""
    return path[0].by == "" and all(
        there.element in successors[here.element] and there.by == f"{here.element}>{there.element}"
        for here, there in pairwise(path)
    )


@given(graphs())
@settings(max_examples=80, deadline=None)
def test_reach_is_that_of_networkx(successors: Successors) -> None:
    lengths = nx.single_source_shortest_path_length(as_networkx(successors), "n0")
    reach = Reach("n0", along(successors))
    assert set(reach) == set(lengths)
    assert [lengths[node] for node in reach] == sorted(lengths.values())  # nearest first
    for node in successors:
        assert (node in reach) == (node in lengths)
        if node in reach:
            path = reach.path(node)
            assert path[0].element == "n0"
            assert path[-1].element == node
            assert len(path) - 1 == lengths[node]
            assert holds_together(path, successors)


@given(graphs())
@settings(max_examples=80, deadline=None)
def test_loop_through_is_the_shortest_cycle_of_networkx(successors: Successors) -> None:
    cycles = [cycle for cycle in nx.simple_cycles(as_networkx(successors)) if "n0" in cycle]
    path = loop_through("n0", along(successors))
    if not cycles:
        assert path is None
        return
    assert path is not None
    assert path[0].element == path[-1].element == "n0"
    assert len(path) - 1 == min(map(len, cycles))
    assert holds_together(path, successors)


@given(graphs())
@settings(max_examples=60, deadline=None)
def test_cut_takes_out_one_node(successors: Successors) -> None:
    for removed in list(successors)[1:]:
        less = as_networkx(successors)
        less.remove_node(removed)
        assert set(Reach("n0", cut(along(successors), removed))) == {"n0", *nx.descendants(less, "n0")}


def test_what_is_cut_leads_nowhere() -> None:
    assert set(Reach("n0", cut(along({"n0": ["n1"], "n1": []}), "n0"))) == {"n0"}


def test_deep_chain_and_deep_ring() -> None:
    successors = chain(DEEP)
    last = f"n{DEEP - 1}"
    reach = Reach("n0", along(successors))
    assert len(reach.path(last)) == DEEP
    assert loop_through("n0", along(successors)) is None
    successors[last] = ["n0"]
    ring = loop_through("n0", along(successors))
    assert ring is not None
    assert len(ring) == DEEP + 1


def test_the_step_onto_a_reach_is_the_first_one() -> None:
    way = along({"a": ["b"], "b": ["c"], "c": ["d"], "d": []})
    path = Reach("a", way).path("d")
    assert step_onto(path, Reach("c", way)) == ("b", Hop("c", "b>c"))


def test_path_reads_as_a_sentence() -> None:
    path = (Hop("uv", ""), Hop("uv_out", "drives"), Hop("por_n", "drives"))
    assert path_text(path) == "uv drives uv_out drives por_n"
