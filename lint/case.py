"""A case: one element of one description in one reading, as a rule sees it.

A rule is a plain function of the facts of a case.  ``case.of(element)`` gives the typed facts of an element; what is
read and not known stands at the corner of the reading (``facts/reading.py``), and the engine reads again at the other
one.  What cannot stand anywhere, such as the name of an element, ends the rule, and the judgement is ``open``.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from typing import Any, Final, TypeVar, overload

from tidegate.lint.account import Sum, Term, worked_out
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.part import Part
from tidegate.lint.description.model.reset_path import Bypass, Load, Neighbour, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading, Wait
from tidegate.lint.facts.view import Asked, Facts
from tidegate.lint.facts.views.description import DescriptionFacts
from tidegate.lint.facts.views.detector import BiasFacts, ComparatorFacts, ReferenceFacts
from tidegate.lint.facts.views.reset_path import BypassFacts, LoadFacts, NeighbourFacts, OutputStageFacts, ResetFacts
from tidegate.lint.facts.views.supply import DomainFacts, RailFacts
from tidegate.lint.found import quoted
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import Path
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import Dimension

_A = TypeVar("_A")
_V = TypeVar("_V", bound=Facts[Any])

_VIEWS: Final[Mapping[type[Part], type[Facts[Any]]]] = {
    view.model: view
    for view in (
        RailFacts, DomainFacts, ReferenceFacts, BiasFacts, ComparatorFacts, OutputStageFacts, ResetFacts, LoadFacts,
        BypassFacts, NeighbourFacts,
    )
}  # fmt: skip


class Case:
    """What a rule may ask about the element it judges, and how it answers."""

    def __init__(
        self, *, subject: Element, rule: str, level: Level, description: Description, graph: Graph,
        reading: Reading | None = None,
    ) -> None:  # fmt: skip
        self.subject = subject
        self.rule = rule
        self.level = level
        self.description = description
        self.graph = graph
        self.asked = Asked(reading or Reading(), graph.elements)

    # Facts

    @property
    def reading(self) -> Reading:
        """Where what is not known stands, and what has been read."""
        return self.asked.reading

    @overload
    def of(self, element: Rail) -> RailFacts: ...
    @overload
    def of(self, element: Domain) -> DomainFacts: ...
    @overload
    def of(self, element: Reference) -> ReferenceFacts: ...
    @overload
    def of(self, element: Bias) -> BiasFacts: ...
    @overload
    def of(self, element: Comparator) -> ComparatorFacts: ...
    @overload
    def of(self, element: OutputStage) -> OutputStageFacts: ...
    @overload
    def of(self, element: Reset) -> ResetFacts: ...
    @overload
    def of(self, element: Load) -> LoadFacts: ...
    @overload
    def of(self, element: Bypass) -> BypassFacts: ...
    @overload
    def of(self, element: Neighbour) -> NeighbourFacts: ...

    def of(self, element: Element) -> Facts[Any]:
        """The facts of an element.

        Raises: TypeError: where it is none.
        """
        view = _VIEWS.get(type(element))
        if view is None:
            raise TypeError(f"no element: {quoted(str(element))}")
        return view(self.asked, element, f"{element.section}.{element.id}")

    def part(self, view: type[_V], part: Part | None, path: str) -> _V:
        """The facts of a part that is no element, such as a layer of the process."""
        return view(self.asked, part, path)

    @property
    def whole(self) -> DescriptionFacts:
        """The facts of the description itself: ``case.whole.conditions.service_life``."""
        return DescriptionFacts(self.asked, self.description, "")

    @property
    def missing(self) -> list[str]:
        """What is missing so far without which there is nothing to compute."""
        return self.asked.missing

    def settle(self) -> None:
        """End the rule here if something is missing without which there is nothing to compute.

        Raises: MissingFactsError: with all that is missing.
        """
        self.asked.settle()

    def sum(self, *terms: Term) -> Sum:
        """What signed terms add up to, with the account of it.

        Raises:
            MissingFactsError: where a term cannot be computed at all, with all that is missing.
            DomainError: where a formula refuses its numbers.
        """
        return worked_out(terms, self.asked)

    def each(self, asks: Iterable[Callable[[], _A]]) -> list[_A]:
        """What each of several questions gives; every one is asked, so that all that is missing is named at once.

        Raises:
            MissingFactsError: where one cannot be answered, with all that is missing.
            DomainError: where none lacks anything, and a formula refused its numbers.
        """
        asked, found, missing = self.asked, [], list(self.asked.missing)
        refused: DomainError | None = None
        for ask in asks:
            asked.missing = []  # what another question lacks must not cut this one short
            try:
                found.append(ask())
            except MissingFactsError as error:
                asked.missing += error.missing
            except DomainError as error:
                refused = refused or error  # what is missing elsewhere is told first
            missing += asked.missing
        asked.missing = list(dict.fromkeys(missing))
        asked.settle()
        if refused is not None:
            raise refused
        return found

    def if_known(self, ask: Callable[[], _A]) -> _A | None:
        """What a question gives where everything for it is known, else None; for what only helps a message."""
        asked = self.asked
        before, noted = asked.reading, asked.missing
        asked.reading, asked.missing = before.again(), []
        try:
            value = ask()
            return value if asked.reading.exact and not asked.missing else None
        except (MissingFactsError, DomainError):
            return None
        finally:
            asked.reading, asked.missing = before, noted

    def turned(self, ask: Callable[[], _A]) -> _A:
        """What a question gives where more of it harms that otherwise helps, and the other way round.

        Everything that is not known and read in it stands at the other corner: the least value that a level can have
        is, for what must not lie above it, at its best where it is highest.
        """
        asked = self.asked
        outer = asked.reading
        inner = Reading(
            Corner.SURE if outer.corner is Corner.BEST else Corner.BEST,
            chosen=outer.chosen, tried=outer.tried, instead=outer.instead,
        )  # fmt: skip
        asked.reading = inner
        try:
            return ask()
        finally:
            asked.reading = outer
            turned = {path: Wait(path, wait.lo, wait.hi, wait.better.other) for path, wait in inner.waits.items()}
            outer.replay(turned, inner.options)
            outer.block(inner.blocked)

    @property
    def at_best(self) -> bool:
        """Whether this reading takes what is not known for the best."""
        return self.reading.corner is Corner.BEST

    def perhaps(self, holds: bool, *, might: bool, harms: bool = True) -> bool:
        """A condition of which it is known that it holds, or only that it might; what might, does where that harms."""
        return holds or (might and self.at_best is not harms)

    # Answers: ``says`` is one sentence, ``why`` the numbers behind it, ``at`` the fact it is about

    def at_least(
        self, *, need: float | Sum, have: float | Sum, dimension: Dimension, says: str, why: str = "", mend: str = "",
        at: str = "", path: Path = (), otherwise: Kind = Kind.FAIL,
    ) -> Judgement:  # fmt: skip
        """Pass if ``have`` is at least ``need``; else fail, or what ``otherwise`` says."""
        measure = _measure(need, have, dimension, Relation.AT_LEAST)
        return self._measured(measure, (need, have), (says, why, mend, at), otherwise, path)

    def at_most(
        self, *, need: float | Sum, have: float | Sum, dimension: Dimension, says: str, why: str = "", mend: str = "",
        at: str = "", path: Path = (), otherwise: Kind = Kind.FAIL,
    ) -> Judgement:  # fmt: skip
        """Pass if ``have`` is at most ``need``; else fail, or what ``otherwise`` says."""
        measure = _measure(need, have, dimension, Relation.AT_MOST)
        return self._measured(measure, (need, have), (says, why, mend, at), otherwise, path)

    def _measured(
        self, measure: Measure, sums: tuple[float | Sum, float | Sum], texts: tuple[str, str, str, str],
        otherwise: Kind, path: Path,
    ) -> Judgement:  # fmt: skip
        need, have = (each.lines if isinstance(each, Sum) else () for each in sums)
        says, why, mend, at = texts
        return self._answer(
            Kind.PASS if measure.holds else otherwise, f"{says} {measure.text()}", measure=measure, why=why,
            mend="" if measure.holds else mend, at=at, path=path, account=(*have, *need), limits=len(need),
        )  # fmt: skip

    def passes(self, says: str, *, why: str = "", at: str = "", path: Path = ()) -> Judgement:
        """The rule holds, and there is no number to it."""
        return self._answer(Kind.PASS, says, why=why, at=at, path=path)

    def fails(self, says: str, *, mend: str, why: str = "", at: str = "", path: Path = ()) -> Judgement:
        """The rule does not hold, and there is no number to it."""
        return self._answer(Kind.FAIL, says, why=why, mend=mend, at=at, path=path)

    def asks(
        self, says: str, *, why: str, mend: str, at: str = "", path: Path = (), measure: Measure | None = None
    ) -> Judgement:
        """A person must look: ``why`` names the assumption that the numbers rest on."""
        return self._answer(Kind.REVIEW, says, why=why, mend=mend, at=at, path=path, measure=measure)

    def not_applicable(self, says: str) -> Judgement:
        """The rule has nothing to say about this element."""
        return self._answer(Kind.NOT_APPLICABLE, says)

    def open(self, missing: Iterable[str], says: str = "") -> Judgement:
        """The element cannot be judged."""
        facts = tuple(missing)
        said = says or f"cannot be judged without {', '.join(facts)}"
        return self._answer(Kind.OPEN, said, missing=facts, mend=f"give {', '.join(facts)}" if facts else "")

    def _answer(
        self, kind: Kind, says: str, *, measure: Measure | None = None, why: str = "", mend: str = "", at: str = "",
        path: Path = (), missing: tuple[str, ...] = (), account: tuple[Any, ...] = (), limits: int = 0,
    ) -> Judgement:  # fmt: skip
        if self.missing and kind is not Kind.OPEN:
            raise UnsettledError(f"answered although facts are missing: {', '.join(self.missing)}")
        subject = self.subject
        return Judgement(
            rule=self.rule, subject=subject.id, kind=kind, level=self.level, message=says, why=why, mend=mend,
            at=f"{subject.section}.{subject.id}.{at}" if at else f"{subject.section}.{subject.id}",
            measure=measure, path=path, missing=missing, account=account, limits=limits,
        )  # fmt: skip


def _measure(need: float | Sum, have: float | Sum, dimension: Dimension, relation: Relation) -> Measure:
    """What is compared; where it is not said which extremes go together, what they may be at best stands beside it."""
    needed, there = (each.value if isinstance(each, Sum) else each for each in (need, have))
    loose = sum(each.loose for each in (need, have) if isinstance(each, Sum))
    measure = Measure(needed, there, dimension, relation)
    if loose > 0.0:
        return Measure(needed, there, dimension, relation, measure.margin, measure.margin + loose)
    return measure


class UnsettledError(RuntimeError):
    """A rule answered without looking whether its facts were there: the rule's own fault."""
