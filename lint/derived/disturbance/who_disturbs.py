"""Who may disturb whose level, whatever the sizes: described pairs of neighbours, and comparators on one reference."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Hop, Path

_SHARED: Final = ("domain", "reference")
"""What makes two comparators neighbours where both are in it, or take it."""


class Disturber(msgspec.Struct, frozen=True):
    """An element that can disturb the level of a comparator, and how; its bump is yet to be worked out."""

    aggressor: str
    victim: str
    pair: Neighbour | None = None
    """The described pair of neighbours; None where it kicks the reference that both take."""
    reference: str | None = None
    """The reference that it kicks; None where it is another kind of pair, or not said which."""
    doubt: tuple[str, ...] = ()
    """The facts without which it only might disturb it."""

    @property
    def via(self) -> str:
        """Through what: the pair, or the reference."""
        return self.pair.id if self.pair is not None else self.reference or "a shared reference"

    @property
    def name(self) -> str:
        """As it is told in an account."""
        return f"{self.aggressor} through {self.via}"

    @property
    def path(self) -> Path:
        """The way on which it does."""
        if self.reference is not None:
            return Hop(self.aggressor, ""), Hop(self.reference, "kicks"), Hop(self.victim, "is the reference of")
        return Hop(self.aggressor, ""), Hop(self.victim, f"couples through {self.via} to")


def takes_no_reference(comparator: Comparator) -> bool:
    """Whether the level surely comes from no reference: it is said, or a crossover makes it."""
    return comparator.reference == "none" or (comparator.reference is None and comparator.crossover is not None)


class Disturbers:
    """All disturbers of every comparator of a graph; in an order that the order of the file does not change."""

    def __init__(self, graph: Graph) -> None:
        self._comparators = {
            name: each for name, each in sorted(graph.elements.items()) if isinstance(each, Comparator)
        }
        self._groups = _grouped(self._comparators)
        self._circuits = _circuits(graph, self._comparators)
        self._unsaid = [name for name, each in self._comparators.items() if _says_no_reference(each)]
        pairs = [each for _, each in sorted(graph.elements.items()) if isinstance(each, Neighbour)]
        found: dict[str, list[Disturber]] = {name: [] for name in self._comparators}
        for pair in pairs:
            for disturber in self._of_pair(pair):
                found[disturber.victim].append(disturber)
        self._found: Mapping[str, Sequence[Disturber]] = {
            name: (*described, *self._sharers(self._comparators[name], described)) for name, described in found.items()
        }

    def of(self, comparator: str) -> Sequence[Disturber]:
        """Those of a comparator: described pairs, and comparators on the same reference."""
        return self._found[comparator]

    def sharers(self, comparator: str) -> Sequence[Disturber]:
        """The other comparators that kick the reference of a comparator.

        A described pair that shares the reference says more about the same charge, and stands in its place.
        """
        return [each for each in self._found[comparator] if each.pair is None]

    def near(self, comparator: str) -> Iterator[str]:
        """The other comparators of the same circuit; one that hangs together with nothing of it shares nothing."""
        return (other for other in self._circuits[comparator] if other != comparator)

    def may_have_more(self, comparator: str) -> bool:
        """Whether there may be neighbours that are not described: it shares, or may share, a reference or a domain."""
        one = self._comparators[comparator]
        if any(len(self._groups.get((field, getattr(one, field)), ())) > 1 for field in _SHARED):
            return True
        return any(_could_share(one, self._comparators[other]) for other in self.near(comparator))

    def _of_pair(self, pair: Neighbour) -> Iterator[Disturber]:
        """Both ways, unless it is said to act one way."""
        reference = pair.reference if pair.kind == "shared_reference" else None
        ways: list[tuple[str, str, tuple[str, ...]]] = [(pair.aggressor, pair.victim, ())]
        if pair.mutual is not False:
            ways.append((pair.victim, pair.aggressor, () if pair.mutual else (pair.fact("mutual"),)))
        for aggressor, victim, doubt in ways:
            if victim in self._comparators:
                yield Disturber(aggressor, victim, pair, reference, doubt)

    def _sharers(self, victim: Comparator, described: Sequence[Disturber]) -> Iterator[Disturber]:
        if takes_no_reference(victim):
            return
        said = [each for each in described if each.pair is not None and each.pair.kind == "shared_reference"]
        for name in sorted(self._might_share(victim) - {victim.id}):
            other = self._comparators[name]
            doubts = [each.fact("reference") for each in (victim, other) if each.reference is None]
            if takes_no_reference(other) or (not doubts and other.reference != victim.reference):
                continue
            in_place = [each for each in said if each.aggressor == name and each.reference in (None, victim.reference)]
            if any(not each.doubt and each.reference == victim.reference is not None for each in in_place):
                continue
            doubts += [fact for each in in_place for fact in _in_doubt(each)]
            yield Disturber(name, victim.id, None, victim.reference or other.reference, tuple(dict.fromkeys(doubts)))

    def _might_share(self, victim: Comparator) -> set[str]:
        """The comparators that might take the reference of a comparator."""
        if victim.reference is None:
            return set(self.near(victim.id))
        unsaid = (name for name in self._unsaid if self._circuits[name] is self._circuits[victim.id])
        return {*self._groups[("reference", victim.reference)], *unsaid}


def _in_doubt(described: Disturber) -> Iterator[str]:
    """What leaves open whether a described pair tells of the same charge."""
    yield from described.doubt
    if described.reference is None and described.pair is not None:
        yield described.pair.fact("reference")


def _could_share(one: Comparator, other: Comparator) -> bool:
    """Whether two comparators may share a reference or a domain, for all that is not said of them."""
    if one.domain is None or other.domain is None:
        return True
    pair = (one, other)
    return any(map(_says_no_reference, pair)) and not any(map(takes_no_reference, pair))


def _says_no_reference(comparator: Comparator) -> bool:
    """Whether it is not said from which reference a level comes, nor that it comes from none."""
    return comparator.reference is None and not takes_no_reference(comparator)


def _circuits(graph: Graph, comparators: Iterable[str]) -> dict[str, list[str]]:
    """The comparators of its circuit for each of them: elements that no edge joins share nothing."""
    found: dict[str, list[str]] = {}
    seen: set[str] = set()
    for name in comparators:
        if name in seen:
            continue
        waiting, inside = [name], {name}
        while waiting:
            here = waiting.pop()
            ends = (*(edge.head for edge in graph.out(here)), *(edge.tail for edge in graph.into(here)))
            fresh = {end for end in ends if end not in inside}
            inside |= fresh
            waiting += fresh
        seen |= inside
        circuit = sorted(inside & set(comparators))
        found.update(dict.fromkeys(circuit, circuit))
    return found


def _grouped(comparators: Mapping[str, Comparator]) -> dict[tuple[str, str], list[str]]:
    """The comparators by what they may share."""
    groups: dict[tuple[str, str], list[str]] = {}
    for name, comparator in comparators.items():
        for field in _SHARED:
            shared = getattr(comparator, field)
            if shared is not None and shared != "none":
                groups.setdefault((field, shared), []).append(name)
    return groups


def disturbers(graph: Graph) -> Disturbers:
    """The disturbers of a description, found when they are first asked for."""
    return graph.once(Disturbers)
