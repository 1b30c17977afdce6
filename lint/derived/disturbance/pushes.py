"""Which decision may move the level of which comparator, whatever the sizes, and where such pushes close to rings."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence

import msgspec

from tidegate.lint.derived.disturbance.who_disturbs import Disturber, disturbers
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.graph.cycles import loops
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.edge import Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by


class Push(msgspec.Struct, frozen=True):
    """One decision may move the level of a comparator."""

    by: str
    """The comparator that decides; the disturbing element itself, where no comparator drives it."""
    source: Disturber
    way: Path
    """The way from who decides to the element that disturbs."""
    doubt: tuple[str, ...] = ()
    """The facts without which it only might be this comparator that decides."""

    @property
    def victim(self) -> str:
        """Whose level it moves."""
        return self.source.victim

    @property
    def path(self) -> Path:
        """The way through the graph."""
        return (*self.way, *self.source.path[1:])


class Pushes:
    """Every push of a graph, by who makes it and by whom it moves; the order of the file does not change theirs."""

    def __init__(self, graph: Graph) -> None:
        self._out: dict[str, list[Push]] = {}
        self._onto: dict[str, list[Push]] = {}
        comparators = sorted(name for name, each in graph.elements.items() if isinstance(each, Comparator))
        drivers = _Drivers(graph)
        for victim in comparators:
            for source in disturbers(graph).of(victim):
                for by, way, doubt in drivers.of(source):
                    push = Push(by, source, way, doubt)
                    self._out.setdefault(by, []).append(push)
                    self._onto.setdefault(victim, []).append(push)
        self._rings = self._looped(comparators, doubtful=False)
        self._might = self._looped(comparators, doubtful=True)

    def out_of(self, element: str) -> Sequence[Push]:
        """The pushes that an element makes."""
        return self._out.get(element, ())

    def onto(self, comparator: str) -> Sequence[Push]:
        """The pushes that move a comparator."""
        return self._onto.get(comparator, ())

    def ring_of(self, comparator: str) -> tuple[str, ...]:
        """The comparators that push one another round, with this one; none where nothing surely comes back to it."""
        return self._rings.get(comparator, ())

    def might_ring_of(self, comparator: str) -> tuple[str, ...]:
        """The same, with all that might push for all that is said; none where nothing can come back to it."""
        return self._might.get(comparator, ())

    def _looped(self, comparators: Iterable[str], *, doubtful: bool) -> Mapping[str, tuple[str, ...]]:
        """The comparators of its ring for each that is in one."""
        heads = {
            name: [push.victim for push in self.out_of(name) if doubtful or not (push.doubt or push.source.doubt)]
            for name in comparators
        }
        return {member: tuple(sorted(ring)) for ring in loops(heads) for member in ring}

    def inside(self, members: Iterable[str]) -> Iterator[Push]:
        """The pushes among some comparators."""
        group = set(members)
        return (push for name in sorted(group) for push in self.out_of(name) if push.victim in group)


class _Drivers:
    """The comparators whose decisions an element passes on, each with the way there."""

    def __init__(self, graph: Graph) -> None:
        self._graph = graph
        self._found: dict[str, list[Path]] = {}
        self._undriven: dict[str, tuple[str, ...]] = {}

    def of(self, source: Disturber) -> Iterator[tuple[str, Path, tuple[str, ...]]]:
        """Who decides, the way to the disturbing element, and what leaves it open; the element itself where none does.

        Where it is not said what drives a stage on the way, it may be the victim, or who has something in common
        with it.
        """
        element = source.aggressor
        if element not in self._found:
            back = Reach(element, driven_by(self._graph))
            self._found[element] = sorted(self._ways(back))
            self._undriven[element] = tuple(sorted(self._unsaid(back)))
        ways, unsaid = self._found[element], self._undriven[element]
        for way in ways or [(Hop(element, ""),)]:
            yield way[0].element, way, ()
        if unsaid:
            known = {way[0].element for way in ways}
            for name in sorted({source.victim, *disturbers(self._graph).near(source.victim)} - known):
                yield name, (Hop(name, ""), Hop(element, "may drive")), unsaid

    def _ways(self, back: Reach) -> Iterator[Path]:
        for name in back:
            if isinstance(self._graph.elements[name], Comparator):
                first, *rest = reversed(back.path(name))
                yield (Hop(first.element, ""), *(Hop(hop.element, "drives") for hop in rest))

    def _unsaid(self, back: Reach) -> Iterator[str]:
        for name in back:
            each = self._graph.elements[name]
            if isinstance(each, OutputStage | Reset) and each.driven_by is None:
                yield each.fact("driven_by")


def pushes(graph: Graph) -> Pushes:
    """The pushes of a description, found when they are first asked for."""
    return graph.once(Pushes)


_last: list[tuple[Description, Pushes]] = []


def pushes_of(description: Description) -> Pushes:
    """The same, for who has no graph of it; kept for the last description asked for."""
    if not (_last and _last[0][0] is description):
        _last[:] = [(description, Pushes(build(description)))]
    return _last[0][1]
