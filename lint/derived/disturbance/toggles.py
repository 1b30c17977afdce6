"""How strong pushes are, which of them toggle, and the chains and rings that they make: in one reading."""

from __future__ import annotations

import math
from collections import deque
from collections.abc import Iterable, Iterator, Mapping, Sequence
from itertools import pairwise
from typing import TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import bump
from tidegate.lint.derived.disturbance.doubt import extreme, holds
from tidegate.lint.derived.disturbance.kept_distance import kept, surely_keeps_nothing
from tidegate.lint.derived.disturbance.pushes import Push, pushes
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.cycles import greatest_mean_cycle, loops
from tidegate.lint.graph.edge import Path
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.physics.domain import quotient
from tidegate.lint.quantity import Dimension

Strongest: TypeAlias = Mapping[str, Mapping[str, "Sized"]]
"""By who decides and by whom it moves: the strongest push; those that move nothing are left out."""


class Sized(msgspec.Struct, frozen=True):
    """A push with its size."""

    push: Push
    bump_v: float
    """What the victim can act on, in V at its rail."""
    kept_v: float
    """The least hysteresis of the victim, in V; 0 where there may be none."""

    @property
    def ratio(self) -> float:
        """The bump as a share of the hysteresis; what moves nothing, or a level that none can move, gives 0."""
        return quotient(self.bump_v, self.kept_v)

    @property
    def toggles(self) -> bool:
        """Whether it is larger than the hysteresis; at the hysteresis, it is not."""
        return not Measure(self.kept_v, self.bump_v, Dimension.VOLTAGE, Relation.AT_MOST).holds


def sized(case: Case, push: Push) -> Sized | None:
    """A push with its size, over all choices of missing words; None where its victim surely keeps no distance.

    Raises: DomainError: where a formula refuses its numbers.
    """
    victim = case.graph.elements[push.victim]
    assert isinstance(victim, Comparator)
    if surely_keeps_nothing(case, victim):
        return None
    if not holds(case, push.doubt):
        return Sized(push, 0.0, 0.0)
    bump_v = extreme(case, lambda: bump(case, push.source).seen_v, worst=math.inf, best=0.0)
    kept_v = extreme(case, lambda: kept(case, victim).value, worst=0.0, best=math.inf)
    return Sized(push, bump_v, kept_v)


def toggling(case: Case, each: Iterable[Push]) -> Iterator[Sized]:
    """Those of some pushes that toggle their victim."""
    for push in each:
        found = sized(case, push)
        if found is not None and found.toggles:
            yield found


def first_chain(case: Case, comparator: str) -> tuple[Sized, ...]:
    """The first chain of toggles that begins at a comparator, or at what is no comparator and toggles it.

    Nobody is toggled twice.  Empty where there is none.
    """
    found = pushes(case.graph)
    onward = list(toggling(case, (push for push in found.out_of(comparator) if push.victim != comparator)))
    if not onward:
        return ()
    outside = (push for push in found.onto(comparator) if push.by not in case.description.comparators)
    for first in toggling(case, outside):
        return _chain_on(case, first, onward[0])
    for first in onward:
        behind = (
            push for push in found.out_of(first.push.victim) if push.victim not in (comparator, first.push.victim)
        )
        for second in toggling(case, behind):
            return _chain_on(case, first, second)
    return ()


def _chain_on(case: Case, first: Sized, second: Sized) -> tuple[Sized, ...]:
    """The whole chain: after its first two pushes, at each victim the first push that toggles somebody new."""
    chain = [first, second]
    toggled = {first.push.by, first.push.victim, second.push.victim}
    while True:
        onward = (push for push in pushes(case.graph).out_of(chain[-1].push.victim) if push.victim not in toggled)
        found = next(toggling(case, onward), None)
        if found is None:
            return tuple(chain)
        chain.append(found)
        toggled.add(found.push.victim)


def strongest_ring(case: Case, members: Sequence[str]) -> tuple[Sized, ...]:
    """The way round some comparators on which they push each other most strongly; empty where nothing goes round.

    Its ratios have the greatest geometric mean; where one of them has no end, neither has that.
    """
    strongest: dict[str, dict[str, Sized]] = {name: {} for name in members}
    for push in pushes(case.graph).inside(members):
        found = sized(case, push)
        if found is None or found.ratio == 0.0:
            continue
        before = strongest[push.by].get(push.victim)
        if before is None or found.ratio > before.ratio:
            strongest[push.by][push.victim] = found
    ring = _endless_ring(strongest) or _greatest_ring(strongest)
    if not ring:
        return ()
    first = min(range(len(ring)), key=lambda place: ring[place].push.by)
    return (*ring[first:], *ring[:first])


def mean_of(ring: Sequence[Sized]) -> float:
    """The geometric mean of the ratios round a ring; 0 where nothing goes round."""
    if not ring:
        return 0.0
    return math.exp(math.fsum(math.log(each.ratio) for each in ring) / len(ring))


def _endless_ring(strongest: Strongest) -> tuple[Sized, ...]:
    """The shortest way round that holds a push of which no end is known; empty where there is none."""
    for ring in sorted(map(sorted, loops({name: list(heads) for name, heads in strongest.items()}))):
        inside = set(ring)
        for name in ring:
            for head, push in sorted(strongest[name].items()):
                if head in inside and math.isinf(push.ratio):
                    return (push, *_shortest(strongest, head, name))
    return ()


def _shortest(strongest: Strongest, start: str, goal: str) -> tuple[Sized, ...]:
    """The fewest pushes from one comparator to another that it reaches."""
    came: dict[str, tuple[Sized, ...]] = {start: ()}
    waiting = deque((start,))
    while goal not in came:
        here = waiting.popleft()
        for head, push in sorted(strongest.get(here, {}).items()):
            if head not in came:
                came[head] = (*came[here], push)
                waiting.append(head)
    return came[goal]


def _greatest_ring(strongest: Strongest) -> tuple[Sized, ...]:
    """The way round whose ratios, all of them with an end, have the greatest geometric mean; empty where none is."""
    cycle = greatest_mean_cycle(
        {tail: {head: math.log(push.ratio) for head, push in heads.items()} for tail, heads in strongest.items()}
    )
    if cycle is None:
        return ()
    return tuple(strongest[tail][head] for tail, head in pairwise((*cycle.nodes, cycle.nodes[0])))


def joined(ring: Sequence[Sized]) -> Path:
    """The way through the graph along pushes that follow one another."""
    first, *rest = (each.push.path for each in ring)
    return (*first, *(hop for path in rest for hop in path[1:]))
