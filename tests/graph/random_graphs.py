"""Small random directed graphs as plain lists of successors, and as NetworkX sees them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import networkx as nx
from hypothesis import strategies as st

Successors = Mapping[str, Sequence[str]]


@st.composite
def graphs(draw: st.DrawFn, *, most: int = 7) -> Successors:
    """A graph of up to ``most`` nodes with any edges between them, to themselves included, some of them twice."""
    nodes = [f"n{number}" for number in range(draw(st.integers(1, most)))]
    return {node: draw(st.lists(st.sampled_from(nodes), max_size=4)) for node in nodes}


def as_networkx(successors: Successors) -> Any:
    """The same graph for NetworkX."""
    graph = nx.DiGraph()
    graph.add_nodes_from(successors)
    graph.add_edges_from((tail, head) for tail, heads in successors.items() for head in heads)
    return graph


def chain(length: int) -> dict[str, list[str]]:
    """n0 -> n1 -> ... : deep enough to end any recursion."""
    return {f"n{number}": [f"n{number + 1}"] if number + 1 < length else [] for number in range(length)}
