"""Cycles: strongly connected components, and the cycle of greatest mean weight."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise


def strong_components(successors: Mapping[str, Sequence[str]]) -> list[list[str]]:
    """Groups of nodes of which each can be reached from each, in reverse topological order.

    Every node of ``successors`` lands in one group; edges to other nodes are not followed.
    Method: Tarjan (1972), "Depth-first search and linear graph algorithms", SIAM J. Comput. 1(2), with its own stack
    in place of recursion; linear in nodes and edges.
    """
    number: dict[str, int] = {}
    low: dict[str, int] = {}
    open_nodes: list[str] = []
    is_open: set[str] = set()
    components: list[list[str]] = []
    for root in successors:
        if root in number:
            continue
        work = [(root, iter(successors[root]))]
        number[root] = low[root] = len(number)
        open_nodes.append(root)
        is_open.add(root)
        while work:
            node, rest = work[-1]
            child = next((child for child in rest if child in successors), None)
            if child is None:
                work.pop()
                if work:
                    above = work[-1][0]
                    low[above] = min(low[above], low[node])
                if low[node] == number[node]:
                    components.append(_closed(node, open_nodes, is_open))
            elif child not in number:
                number[child] = low[child] = len(number)
                open_nodes.append(child)
                is_open.add(child)
                work.append((child, iter(successors[child])))
            elif child in is_open:
                low[node] = min(low[node], number[child])
    return components


def _closed(root: str, open_nodes: list[str], is_open: set[str]) -> list[str]:
    component = []
    while True:
        node = open_nodes.pop()
        is_open.discard(node)
        component.append(node)
        if node == root:
            return component[::-1]


def loops(successors: Mapping[str, Sequence[str]]) -> list[list[str]]:
    """The strong components that hold a cycle: more than one node, or a node with an edge to itself."""
    return [
        component
        for component in strong_components(successors)
        if len(component) > 1 or component[0] in successors[component[0]]
    ]


@dataclass(frozen=True, slots=True)
class MeanCycle:
    """A cycle and the mean weight of its edges; the first node is not repeated at the end."""

    nodes: tuple[str, ...]
    mean: float


def greatest_mean_cycle(weights: Mapping[str, Mapping[str, float]]) -> MeanCycle | None:
    """The cycle whose edges have the greatest mean weight; None where there is no cycle.

    With the logarithms of ratios as weights, a cycle with a product of 1 or more exists exactly if the greatest mean
    is 0 or more, since a product reaches 1 exactly if the mean of its logarithms reaches 0.
    ``weights`` maps each node to its successors and the weight of each edge.
    Method: Karp (1978), "A characterization of the minimum cycle mean in a digraph", Discrete Math. 23, 309-311,
    for each strong component; nodes times edges.
    """
    best: MeanCycle | None = None
    for component in loops({node: tuple(heads) for node, heads in weights.items()}):
        inside = set(component)
        inner = {n: {h: w for h, w in weights[n].items() if h in inside} for n in component}
        found = _karp(inner)
        best = found if best is None or found.mean > best.mean else best
    return best


def _karp(weights: Mapping[str, Mapping[str, float]]) -> MeanCycle:
    nodes = list(weights)
    count = len(nodes)
    start = nodes[0]
    walks: list[dict[str, tuple[float, str]]] = [{start: (0.0, "")}]
    for _ in range(count):
        longer: dict[str, tuple[float, str]] = {}
        for tail, (weight, _) in walks[-1].items():
            for head, step in weights[tail].items():
                if head not in longer or weight + step > longer[head][0]:
                    longer[head] = (weight + step, tail)
        walks.append(longer)
    mean, end = -math.inf, start
    for node, (weight, _) in walks[count].items():
        worst = min((weight - walks[k][node][0]) / (count - k) for k in range(count) if node in walks[k])
        if worst > mean:
            mean, end = worst, node
    return _cycle_on_walk(walks, end, weights)


def _cycle_on_walk(
    walks: Sequence[Mapping[str, tuple[float, str]]], end: str, weights: Mapping[str, Mapping[str, float]]
) -> MeanCycle:
    """The best cycle on the heaviest walk of full length that ends at a node."""
    walk = [end]
    for length in range(len(walks) - 1, 0, -1):
        walk.append(walks[length][walk[-1]][1])
    walk.reverse()
    best: MeanCycle | None = None
    stack: list[str] = []
    for node in walk:
        if node in stack:
            cycle = tuple(stack[stack.index(node) :])
            ring = (*cycle, cycle[0])
            mean = sum(weights[a][b] for a, b in pairwise(ring)) / len(cycle)
            best = MeanCycle(cycle, mean) if best is None or mean > best.mean else best
            del stack[stack.index(node) :]
        stack.append(node)
    assert best is not None  # a walk of as many edges as there are nodes meets a node twice
    return best
