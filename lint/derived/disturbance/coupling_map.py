"""Which comparator moves the level of which, how far, and where such pushes close to a ring."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from itertools import pairwise
from typing import Generic, TypeVar

import msgspec

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.disturbance.disturbance import disturbers, ignored_s
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.cycles import greatest_mean_cycle, loops
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import Dimension

_A = TypeVar("_A")


class Push(msgspec.Struct, frozen=True):
    """One decision moves the level of a comparator."""

    by: str
    """The comparator that decides; the disturbing element itself, where no comparator drives it."""
    victim: str
    bump_v: float
    """What the victim can act on, in V at its rail; not a number where it is not known."""
    kept_v: float
    """The least hysteresis of the victim, V; above 0, or not a number where it is not known."""
    missing: tuple[str, ...]
    """The facts without which it is not known."""
    refused: str
    """What a formula refused, where one did."""
    path: Path

    @property
    def known(self) -> bool:
        """Whether its size is known."""
        return not (self.missing or self.refused)

    @property
    def ratio(self) -> float:
        """The bump as a share of the hysteresis."""
        return self.bump_v / self.kept_v

    @property
    def toggles(self) -> bool:
        """Whether it surely is larger than the hysteresis; at the hysteresis, it is not."""
        return self.known and not Measure(self.kept_v, self.bump_v, Dimension.VOLTAGE, Relation.AT_MOST).holds

    @property
    def may_toggle(self) -> bool:
        """Whether it toggles its victim, or might, for all that is known."""
        return self.toggles or not self.known


class Ring(msgspec.Struct, frozen=True):
    """Comparators that push each other round, and the way round on which they do it most strongly."""

    members: tuple[str, ...]
    """In the order of the description."""
    pushes: tuple[Push, ...]
    """The strongest way round; empty where no way round is known."""
    unknown: tuple[Push, ...]
    """Pushes between the members whose size is not known."""

    @property
    def product(self) -> float:
        """The ratios round the ring, multiplied."""
        return math.prod(push.ratio for push in self.pushes)


class CouplingMap:
    """Every push of a description that is not surely nothing, by who makes it and by whom it moves."""

    def __init__(self, case: Case) -> None:
        self._out: dict[str, list[Push]] = {}
        self._onto: dict[str, list[Push]] = {}
        drivers = _Drivers(case.graph)
        for comparator in case.description.comparators.values():
            for push in _pushes_onto(case, comparator, drivers):
                if push.bump_v == 0.0 and push.known:
                    continue
                self._out.setdefault(push.by, []).append(push)
                self._onto.setdefault(push.victim, []).append(push)
        self._rings = _rings(self._out, case.description.comparators)

    def out_of(self, element: str) -> Sequence[Push]:
        """The pushes that an element makes."""
        return self._out.get(element, ())

    def onto(self, comparator: str) -> Sequence[Push]:
        """The pushes that move a comparator."""
        return self._onto.get(comparator, ())

    def ring_of(self, comparator: str) -> Ring | None:
        """The ring that a comparator is in."""
        return self._rings.get(comparator)


def coupling_map(case: Case) -> CouplingMap:
    """The pushes of the whole description, worked out when they are first asked for."""
    return case.graph.once(_Kept).get(case)


class _Kept:
    """The map of the one description that a graph is of."""

    def __init__(self, _: Graph) -> None:
        self._map: CouplingMap | None = None

    def get(self, case: Case) -> CouplingMap:
        if self._map is None:
            self._map = CouplingMap(case)
        return self._map


class _Drivers:
    """The comparators whose decisions an element passes on, each with the way there."""

    def __init__(self, graph: Graph) -> None:
        self._graph = graph
        self._found: dict[str, list[Path]] = {}

    def ways_to(self, element: str) -> Sequence[Path]:
        """Ways from each comparator that drives an element; the element alone where none does."""
        if element not in self._found:
            self._found[element] = list(self._ways(element)) or [(Hop(element, ""),)]
        return self._found[element]

    def _ways(self, element: str) -> Iterator[Path]:
        back = Reach(element, driven_by(self._graph))
        for name in back:
            if isinstance(self._graph.elements[name], Comparator):
                first, *rest = reversed(back.path(name))
                yield (Hop(first.element, ""), *(Hop(hop.element, "drives") for hop in rest))


class _Answer(msgspec.Struct, Generic[_A], frozen=True):
    """What a question about facts gave, or what it lacked."""

    value: _A | None
    missing: tuple[str, ...]
    refused: str


def _asked(case: Case, ask: Callable[[], _A]) -> _Answer[_A]:
    """The answer to a question; what is missing is told in it, and not held against the element that is judged."""
    noted, case.missing = case.missing, []
    value, refused = None, ""
    try:
        value = ask()
    except MissingFactsError:
        pass  # noted in the case
    except DomainError as error:
        refused = str(error)
    missing, case.missing = tuple(dict.fromkeys(case.missing)), noted
    return _Answer(None if missing or refused else value, missing, refused)


def _pushes_onto(case: Case, victim: Comparator, drivers: _Drivers) -> Iterator[Push]:
    """The pushes on a comparator; none where it keeps no distance, which the hysteresis rules judge."""
    if has_no_hysteresis(victim):
        return
    kept = _asked(case, lambda: hysteresis_window(case, victim).least_v)
    if kept.value is not None and kept.value <= 0.0:
        return
    ignored = _asked(case, lambda: ignored_s(case, victim))
    for disturber in disturbers(case, victim):
        bump = _asked(case, disturber.bump)
        seen_v = math.nan
        if bump.value is not None and ignored.value is not None:
            seen_v = bump.value.lasting_v(ignored.value)
        for way in drivers.ways_to(disturber.aggressor):
            yield Push(
                by=way[0].element, victim=victim.id, bump_v=seen_v,
                kept_v=math.nan if kept.value is None else kept.value,
                missing=(*bump.missing, *ignored.missing, *kept.missing),
                refused=bump.refused or ignored.refused or kept.refused, path=(*way, *disturber.path[1:]),
            )  # fmt: skip


def _rings(out: Mapping[str, Sequence[Push]], comparators: Iterable[str]) -> dict[str, Ring]:
    """The ring of every comparator that is in one."""
    order = {name: place for place, name in enumerate(comparators)}
    strongest: dict[str, dict[str, Push]] = {name: {} for name in order}
    unknown: dict[str, list[Push]] = {name: [] for name in order}
    for name in order:
        for push in out.get(name, ()):
            if not push.known:
                unknown[name].append(push)
            elif push.ratio > _ratio(strongest[name].get(push.victim)):
                strongest[name][push.victim] = push
    heads = {name: [*strongest[name], *(push.victim for push in unknown[name])] for name in order}
    rings: dict[str, Ring] = {}
    for component in loops(heads):
        members = tuple(sorted(component, key=order.__getitem__))
        inside = {tail: {head: push for head, push in strongest[tail].items() if head in members} for tail in members}
        doubtful = tuple(push for tail in members for push in unknown[tail] if push.victim in members)
        ring = Ring(members, _strongest_way_round(inside, order), doubtful)
        rings.update(dict.fromkeys(members, ring))
    return rings


def _ratio(push: Push | None) -> float:
    return 0.0 if push is None else push.ratio


def _strongest_way_round(inside: Mapping[str, Mapping[str, Push]], order: Mapping[str, int]) -> tuple[Push, ...]:
    """The way round whose ratios have the greatest geometric mean; its product reaches 1 if that of any way does."""
    cycle = greatest_mean_cycle(
        {tail: {head: math.log(push.ratio) for head, push in heads.items()} for tail, heads in inside.items()}
    )
    if cycle is None:
        return ()
    first = min(range(len(cycle.nodes)), key=lambda place: order[cycle.nodes[place]])
    nodes = (*cycle.nodes[first:], *cycle.nodes[: first + 1])
    return tuple(inside[tail][head] for tail, head in pairwise(nodes))
