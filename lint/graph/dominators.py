"""Dominators: what stands on every way."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence


def immediate_dominators(successors: Mapping[str, Sequence[str]], root: str) -> dict[str, str]:
    """Of every node that the root reaches, the last other node on every way from the root to it.

    The root itself is left out.
    Method: Cooper, Harvey and Kennedy (2001), "A simple, fast dominance algorithm", Rice University TR-06-33870.
    """
    order = _postorder(successors, root)
    rank = {node: index for index, node in enumerate(order)}
    predecessors: dict[str, list[str]] = {node: [] for node in order}
    for node in order:
        for head in successors.get(node, ()):
            predecessors[head].append(node)
    above: dict[str, str] = {root: root}
    changed = True
    while changed:
        changed = False
        for node in reversed(order[:-1]):
            found = ""
            for before in predecessors[node]:
                if before in above:
                    found = before if not found else _meet(before, found, above, rank)
            if above.get(node) != found:
                above[node] = found
                changed = True
    del above[root]
    return above


def _meet(first: str, second: str, above: Mapping[str, str], rank: Mapping[str, int]) -> str:
    """The nearest node that dominates both."""
    while first != second:
        while rank[first] < rank[second]:
            first = above[first]
        while rank[second] < rank[first]:
            second = above[second]
    return first


def _postorder(successors: Mapping[str, Sequence[str]], root: str) -> list[str]:
    order: list[str] = []
    seen = {root}
    work = [(root, iter(successors.get(root, ())))]
    while work:
        node, rest = work[-1]
        child = next((child for child in rest if child not in seen), None)
        if child is None:
            order.append(node)
            work.pop()
        else:
            seen.add(child)
            work.append((child, iter(successors.get(child, ()))))
    return order


def on_every_way(successors: Mapping[str, Sequence[str]], root: str, goal: str) -> tuple[str, ...]:
    """What stands on every way from the root to a goal, both ends left out, from the root on; () if not reached."""
    return on_every_way_to_each(successors, root, (goal,))[0]


def on_every_way_to_each(
    successors: Mapping[str, Sequence[str]], root: str, goals: Iterable[str]
) -> list[tuple[str, ...]]:
    """The same for several goals."""
    above = immediate_dominators(successors, root)
    return [_chain(above, root, goal) for goal in goals]


def _chain(above: Mapping[str, str], root: str, goal: str) -> tuple[str, ...]:
    chain: list[str] = []
    here = above.get(goal, root)
    while here != root:
        chain.append(here)
        here = above[here]
    return tuple(reversed(chain))
