"""Cycles: strongly connected components, and the cycle of greatest mean weight."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Final

import msgspec

_TIE: Final = 1e-12
"""Share of what the ways are worth below which two count as equally good; a float keeps about 1e-16."""


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


class MeanCycle(msgspec.Struct, frozen=True):
    """A cycle and the mean weight of its edges; the first node is not repeated at the end."""

    nodes: tuple[str, ...]
    mean: float


def greatest_mean_cycle(weights: Mapping[str, Mapping[str, float]]) -> MeanCycle | None:
    """The cycle whose edges have the greatest mean weight; None where there is no cycle.

    With the logarithms of ratios as weights, a cycle with a product of 1 or more exists exactly if the greatest mean
    is 0 or more, since a product reaches 1 exactly if the mean of its logarithms reaches 0.
    ``weights`` maps each node to its successors and the (finite) weight of each edge.
    Method: Howard's policy iteration for each strong component, as in Dasdan (2004), "Experimental analysis of the
    fastest optimum cycle ratio and mean algorithms", ACM Trans. Des. Autom. Electron. Syst. 9(4), 385-418; after
    Cochet-Terrasson and others (1998), "Numerical computation of spectral elements in max-plus algebra". Each round
    is linear in the edges, and few rounds are needed.
    """
    best: MeanCycle | None = None
    for component in loops({node: tuple(heads) for node, heads in weights.items()}):
        inside = set(component)
        inner = {n: {h: w for h, w in weights[n].items() if h in inside} for n in component}
        found = _improved_to_the_end(inner)
        best = found if best is None or found.mean > best.mean else best
    return best


def _improved_to_the_end(weights: Mapping[str, Mapping[str, float]]) -> MeanCycle:
    """The greatest mean cycle of one strong component.

    Every node follows one edge (its policy). The best cycle among those edges gives a mean, and every node a value:
    what it gains over that mean on its way to the cycle. While some edge gains more than its node's value, the node
    takes that edge. A mean that as many rounds as there are nodes did not raise is the greatest: what still seems to
    gain then is rounding.
    """
    policy = {node: max(heads, key=heads.__getitem__) for node, heads in weights.items()}
    into: dict[str, list[str]] = {node: [] for node in weights}
    for node, heads in weights.items():
        for head in heads:
            into[head].append(node)
    best = _best_policy_cycle(policy, weights)
    left = len(weights)
    while left and _take_better_edges(policy, weights, _values(policy, into, weights, best), best.mean):
        left -= 1
        found = _best_policy_cycle(policy, weights)
        if found.mean > best.mean:
            best, left = found, len(weights)
    return best


def _take_better_edges(
    policy: dict[str, str], weights: Mapping[str, Mapping[str, float]], value: dict[str, float], mean: float
) -> bool:
    """Let each node take the edge that gains most over a mean; whether one of them changed."""
    heaviest = max(abs(weight) for heads in weights.values() for weight in heads.values())
    tie = _TIE * max(heaviest, *map(abs, value.values()))
    changed = False
    for node, heads in weights.items():
        for head, weight in heads.items():
            gained = value[head] + weight - mean
            if gained > value[node] + tie and head != policy[node]:
                value[node], policy[node], changed = gained, head, True
    return changed


def _best_policy_cycle(policy: Mapping[str, str], weights: Mapping[str, Mapping[str, float]]) -> MeanCycle:
    """The cycle of greatest mean among the edges that the nodes follow."""
    best: MeanCycle | None = None
    seen: dict[str, int] = {}
    for number, start in enumerate(policy):
        node = start
        while node not in seen:
            seen[node] = number
            node = policy[node]
        if seen[node] != number:
            continue  # runs into a way walked before
        cycle = [node]
        while policy[cycle[-1]] != node:
            cycle.append(policy[cycle[-1]])
        mean = math.fsum(weights[tail][policy[tail]] for tail in cycle) / len(cycle)
        if best is None or mean > best.mean:
            best = MeanCycle(tuple(cycle), mean)
    assert best is not None  # whoever follows one edge from every node comes round at last
    return best


def _values(
    policy: dict[str, str], into: Mapping[str, Sequence[str]], weights: Mapping[str, Mapping[str, float]],
    best: MeanCycle,
) -> dict[str, float]:  # fmt: skip
    """What every node gains over the mean of the best cycle on its way there.

    A node whose policy leads to another cycle is turned towards the best one.
    """
    value = {best.nodes[0]: 0.0}
    reached = [best.nodes[0]]
    for turning in (False, True):
        for head in reached:  # grows while it is walked
            for node in into[head]:
                if node not in value and (turning or policy[node] == head):
                    policy[node] = head
                    value[node] = value[head] + weights[node][head] - best.mean
                    reached.append(node)
    return value
