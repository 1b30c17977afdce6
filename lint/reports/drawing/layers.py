"""Layers of a graph: who needs whom from top to bottom, in few crossings.

Layers by longest paths over edges that do not close a cycle, orders within layers by barycentre sweeps, positions by
least squares with least distances.
Method: Sugiyama, Tagawa and Toda (1981), "Methods for visual understanding of hierarchical system structures", IEEE
Transactions on Systems, Man, and Cybernetics 11(2), 109-125; positions by isotonic regression (pool adjacent
violators), Ayer et al. (1955), Annals of Mathematical Statistics 26(4), 641-647.
"""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections.abc import Callable, Hashable, Iterable, Mapping, Sequence
from typing import Final, TypeVar

_SWEEPS: Final = 12
Node = TypeVar("Node", bound=Hashable)
Orders = list[list[Node]]


def layer_of_each(
    nodes: Sequence[str], needs: Mapping[str, Sequence[str]], lane: Mapping[str, int], *, most: int
) -> dict[str, int]:
    """The layer of each node: below all it needs (a need that closes a cycle left out), at most so many in a lane."""
    found: dict[str, int] = {}
    taken: dict[tuple[int, int], int] = {}
    for node in _needs_first(nodes, needs):
        layer = max((found[other] + 1 for other in needs.get(node, ()) if other in found and other != node), default=0)
        while taken.get((lane[node], layer), 0) >= most:
            layer += 1
        taken[lane[node], layer] = taken.get((lane[node], layer), 0) + 1
        found[node] = layer
    return found


def _needs_first(nodes: Sequence[str], needs: Mapping[str, Sequence[str]]) -> list[str]:
    """Every node after what it needs, as far as that can be."""
    done: dict[str, None] = {}
    open_: set[str] = set()
    for start in nodes:
        stack = [(start, iter(needs.get(start, ())))] if start not in done else []
        open_.update(node for node, _ in stack)
        while stack:
            node, rest = stack[-1]
            deeper = next((other for other in rest if other not in done and other not in open_), None)
            if deeper is None:
                stack.pop()
                open_.discard(node)
                done[node] = None
            else:
                open_.add(deeper)
                stack.append((deeper, iter(needs.get(deeper, ()))))
    return list(done)


def crossings(orders: Orders[Node], links: Sequence[tuple[Node, Node]]) -> int:
    """How many pairs of links between neighbouring layers cross."""
    place = {node: (number, at) for number, layer in enumerate(orders) for at, node in enumerate(layer)}
    between: dict[int, list[tuple[int, int]]] = {}
    for upper, lower in links:
        between.setdefault(place[upper][0], []).append((place[upper][1], place[lower][1]))
    count = 0
    for pairs in between.values():
        seen: list[int] = []
        last, waiting = -1, list[int]()
        for upper_at, lower_at in sorted(pairs):
            if upper_at != last:
                for value in waiting:
                    seen.insert(bisect_left(seen, value), value)
                last, waiting = upper_at, []
            count += len(seen) - bisect_right(seen, lower_at)
            waiting.append(lower_at)
    return count


def ordered(orders: Orders[Node], links: Sequence[tuple[Node, Node]], lane: Callable[[Node], int]) -> Orders[Node]:
    """The layers, each ordered by lane and within it so that few links between neighbouring layers cross."""
    above: dict[Node, list[Node]] = {}
    below: dict[Node, list[Node]] = {}
    for upper, lower in links:
        above.setdefault(lower, []).append(upper)
        below.setdefault(upper, []).append(lower)
    current = [sorted(layer, key=lane) for layer in orders]
    best, least = [list(layer) for layer in current], crossings(current, links)
    for sweep in range(_SWEEPS):
        downwards = sweep % 2 == 0
        numbers = range(1, len(current)) if downwards else range(len(current) - 2, -1, -1)
        for number in numbers:
            fixed = current[number - 1 if downwards else number + 1]
            current[number] = _by_barycentre(current[number], fixed, above if downwards else below, lane)
        count = crossings(current, links)
        if count < least:
            best, least = [list(layer) for layer in current], count
    return best


def _by_barycentre(
    layer: Sequence[Node], fixed: Sequence[Node], neighbours: Mapping[Node, Sequence[Node]], lane: Callable[[Node], int]
) -> list[Node]:
    place = {node: number / max(len(fixed), 1) for number, node in enumerate(fixed)}

    def key(numbered: tuple[int, Node]) -> tuple[int, float, int]:
        at, node = numbered
        found = [place[other] for other in neighbours.get(node, ()) if other in place]
        return lane(node), sum(found) / len(found) if found else at / max(len(layer), 1), at

    return [node for _, node in sorted(enumerate(layer), key=key)]


def spread(wanted: Sequence[float], distances: Sequence[float], *, low: float, high: float) -> list[float]:
    """Places in order, as near to the wanted ones as their least distances allow, in the sense of least squares.

    ``distances`` has one entry for each pair of neighbours.  All lie between ``low`` and ``high`` where they fit.
    """
    offsets = [0.0]
    for distance in distances:
        offsets.append(offsets[-1] + distance)
    blocks: list[tuple[float, int]] = []
    for place, offset in zip(wanted, offsets, strict=True):
        mean, size = place - offset, 1
        while blocks and blocks[-1][0] > mean:
            other, count = blocks.pop()
            mean, size = (mean * size + other * count) / (size + count), size + count
        blocks.append((mean, size))
    flat = [mean for mean, size in blocks for _ in range(size)]
    room = max(high - offsets[-1], low) if wanted else low
    return [min(max(mean, low), room) + offset for mean, offset in zip(flat, offsets, strict=True)]


def neighbours_of(links: Iterable[tuple[Node, Node]]) -> dict[Node, list[Node]]:
    """Of each node, what it is linked with, above and below."""
    found: dict[Node, list[Node]] = {}
    for upper, lower in links:
        found.setdefault(upper, []).append(lower)
        found.setdefault(lower, []).append(upper)
    return found
