"""Chains of toggles: one comparator's decision toggles a second one, which toggles a third."""

from __future__ import annotations

from collections.abc import Iterator

from tidegate.lint.derived.disturbance.coupling_map import CouplingMap, Push
from tidegate.lint.graph.edge import Path


def two_pushes(pushes: CouplingMap, comparator: str, outside: frozenset[str]) -> Iterator[tuple[Push, Push]]:
    """The first two pushes of every chain that begins at a comparator, or at what disturbs it from outside.

    Only pushes that toggle or might; nobody is toggled twice.
    """
    onward = [push for push in pushes.out_of(comparator) if push.may_toggle and push.victim != comparator]
    for first in pushes.onto(comparator):
        if first.by in outside and first.may_toggle:
            yield from ((first, second) for second in onward)
    for first in onward:
        for second in pushes.out_of(first.victim):
            if second.may_toggle and second.victim not in (comparator, first.victim):
                yield first, second


def chain_on(pushes: CouplingMap, first: Push, second: Push) -> tuple[Push, ...]:
    """The whole chain: after its first two pushes, at each victim the first push that toggles somebody new."""
    chain = [first, second]
    toggled = {first.by, first.victim, second.victim}
    while True:
        nexts = (push for push in pushes.out_of(chain[-1].victim) if push.toggles and push.victim not in toggled)
        found = next(nexts, None)
        if found is None:
            return tuple(chain)
        chain.append(found)
        toggled.add(found.victim)


def comes_round(pushes: CouplingMap, comparator: str) -> bool:
    """Whether toggles that begin at a comparator come back to it."""
    toggled: set[str] = set()
    waiting = [comparator]
    while waiting:
        for push in pushes.out_of(waiting.pop()):
            if push.toggles and push.victim not in toggled:
                toggled.add(push.victim)
                waiting.append(push.victim)
    return comparator in toggled


def joined(pushes: tuple[Push, ...]) -> Path:
    """The way through the graph along pushes that follow one another."""
    first, *rest = pushes
    return (*first.path, *(hop for push in rest for hop in push.path[1:]))
