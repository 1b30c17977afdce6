"""The facts of one element at one corner: quantities between two ends, and what is missing of them."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from math import inf, isnan
from typing import Final, TypeVar

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import TripLevel
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import MOST_CHOICES, Better, Corner, MissingFactsError, Reading
from tidegate.lint.facts.view import Number
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.parts import NOT_NAMED, Bounds, Lacks

_A = TypeVar("_A")

_ANYWHERE: Final = {Corner.SURE: Bounds(-inf, inf), Corner.BEST: Bounds(inf, -inf)}


class Ends:
    """The facts of one element; notes what is missing and which end of a quantity it would have been."""

    def __init__(self, element: Element, description: Description, graph: Graph, corner: Corner) -> None:
        self.element = element
        self.description = description
        self.graph = graph
        self.corner = corner
        self.lacks = Lacks()
        self.case = self._case(Reading(corner))

    def _case(self, reading: Reading) -> Case:
        return Case(
            subject=self.element, rule="", level=Level.NOTE, description=self.description, graph=self.graph,
            reading=reading,
        )  # fmt: skip

    @property
    def best(self) -> bool:
        """Whether what is not known is taken for the best."""
        return self.corner is Corner.BEST

    def without(self, *facts: str) -> None:
        """Note names or words of the element that are missing."""
        self.lacks.whole += [path for fact in facts if (path := self.element.fact(fact)) not in self.lacks.whole]

    def named(self, name: str | None, fact: str) -> str:
        """The name of an element; where it is not given, that of none."""
        if name is None:
            self.without(fact)
            return NOT_NAMED
        return name

    def rail_of(self, domain: str | None) -> str:
        """The rail of a domain; noted where it is not given."""
        found = self.description.domains.get(domain or "")
        if found is None or found.rail is None:
            if found is not None:
                self.lacks.whole.append(found.fact("rail"))
            return NOT_NAMED
        return found.rail

    def bounds(self, fact: Number) -> Bounds:
        """A quantity between two ends that may be anywhere inside."""
        most, without_most = self.read(lambda: fact.most(Better.LESS))
        least, without_least = self.read(lambda: fact.least(Better.MORE))
        self.lacks.most += without_most
        self.lacks.least += without_least
        return Bounds(least, most)

    def level(self, fact: Number) -> Bounds:
        """A supply level, which is no less than 0 V."""
        least_v, most_v = self.bounds(fact)
        return Bounds(max(least_v, 0.0), max(most_v, 0.0))

    def range_within(self, fact: Number) -> tuple[Bounds, Bounds]:
        """A range in which something works, as it surely is and as it may be."""
        fewer, lacks = self.read(lambda: Bounds(fact.least(Better.LESS), fact.most(Better.MORE)))
        wider, _ = self.read(lambda: Bounds(fact.least(Better.MORE), fact.most(Better.LESS)))
        self.lacks.most += lacks
        return fewer, wider

    def read(self, ask: Callable[[], _A]) -> tuple[_A, tuple[str, ...]]:
        """What facts give, and what is missing for it to be exactly known."""
        reading = self.case.reading
        log = reading.listen()
        try:
            return ask(), tuple(dict.fromkeys(log))
        finally:
            reading.unlisten()

    def window(self, ask: Callable[[Case, Comparator], TripLevel], comparator: Comparator) -> Bounds:
        """A trip level at the code the part ships with, whatever the words that are missing for it may be."""
        found: list[Bounds] = []
        waiting: list[dict[str, object]] = [{}]
        while waiting:
            if len(found) >= MOST_CHOICES:
                return _ANYWHERE[self.corner]
            chosen = waiting.pop()
            reading = Reading(self.corner, chosen=chosen)
            found.append(self._window(ask, comparator, reading))
            for path, words in reading.options.items():
                if path not in chosen:
                    waiting += [{**chosen, path: word} for word in words[1:]]
                    chosen = {**chosen, path: words[0]}
        outer, inner = (max, min) if self.best else (min, max)
        return Bounds(outer(each.least for each in found), inner(each.most for each in found))

    def _window(self, ask: Callable[[Case, Comparator], TripLevel], comparator: Comparator, reading: Reading) -> Bounds:
        """A trip level with some words chosen; an end that cannot be computed is not known."""
        case = self._case(reading)
        try:
            level = ask(case, comparator)
            least, most = level.end("least"), level.end("most")
        except MissingFactsError as error:
            self._note((*error.missing, *reading.lacking))
            return _ANYWHERE[self.corner]
        except DomainError:
            if reading.exact:
                raise
            self._note(reading.lacking)
            return _ANYWHERE[self.corner]
        self._note(reading.lacking)
        # Where it is not said which extremes go together, an end may lie further in than it is taken to.
        self._note(self._fact(level, side) for end, side in ((least, "min"), (most, "max")) if end.loose > 0.0)
        least_v, most_v = (least.value, most.value)
        if self.best:
            least_v, most_v = least_v + least.loose, most_v - most.loose
        anywhere = _ANYWHERE[self.corner]
        return Bounds(anywhere.least if isnan(least_v) else least_v, anywhere.most if isnan(most_v) else most_v)

    def _fact(self, level: TripLevel, side: str) -> str:
        """Where one end of a level would be stated."""
        detector = self.description.comparators[self.element.id]
        at = "trip" if detector.trip is not None or not detector.codes else f"codes.{detector.ships_with}"
        return self.element.fact(f"{at}.{level.which}.{side}")

    def _note(self, paths: Iterable[str]) -> None:
        self.lacks.whole += [path for path in dict.fromkeys(paths) if path not in self.lacks.whole]


def names(*groups: str | Iterable[str] | None) -> tuple[str, ...]:
    """Names as they are given, one or many; what is not given, or said to be none, is left out."""
    found: list[str] = []
    for group in groups:
        if isinstance(group, str):
            found += [group] if group != "none" else []
        else:
            found.extend(group or ())
    return tuple(found)
