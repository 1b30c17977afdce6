"""A case: one element of one description, as a rule sees it.

The rule gathers its facts through the case, which notes every fact that is missing; ``settle`` ends the rule if there
is one, and the judgement is then ``open`` and names them all.  A fact that is not given can so never pass a rule.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from functools import lru_cache
from typing import Any, Final, TypeVar, overload

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.part import Part
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import Path
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import Dimension, Span

_NAN: Final = float("nan")
_A = TypeVar("_A")
_B = TypeVar("_B")
_C = TypeVar("_C")
_D = TypeVar("_D")


class MissingFactsError(Exception):
    """Facts are missing: the judgement is open."""

    def __init__(self, missing: Iterable[str]) -> None:
        self.missing = tuple(dict.fromkeys(missing))
        super().__init__(", ".join(self.missing))


@lru_cache(maxsize=4096)
def _steps(fact: str) -> list[str]:
    """The names on the way to a fact."""
    return fact.split(".")


class Facts:
    """The facts of one part of the description; what is missing is noted with its path."""

    __slots__ = ("_case", "_part", "_prefix")

    def __init__(self, part: Part, prefix: str, case: Case) -> None:
        self._part = part
        self._prefix = prefix
        self._case = case

    def path(self, fact: str) -> str:
        """The path of a fact in the description."""
        return f"{self._prefix}.{fact}" if self._prefix else fact

    def least(self, fact: str) -> float:
        """The least value of a quantity; not a number, and noted, where it is not given."""
        return self._value(fact, "least", "min")

    def most(self, fact: str) -> float:
        """The greatest value of a quantity; not a number, and noted, where it is not given."""
        return self._value(fact, "most", "max")

    def middle(self, fact: str) -> float:
        """The typical value of a quantity, or the middle of its ends; not a number, and noted, where not given."""
        return self._value(fact, "middle", "typ")

    def number(self, fact: str) -> float:
        """A plain number; not a number, and noted, where it is not given."""
        value = self._walk(fact)
        if value is None:
            return self.lacks(fact)
        return float(value)

    def must(self, fact: str) -> Any:
        """A word, a flag, a name or a part that the rule cannot go on without.

        Raises: MissingFactsError: where it is not given; with it, what was missing before.
        """
        value = self._walk(fact)
        if value is None:
            self.lacks(fact)
            self._case.settle()
        return value

    def element(self, fact: str) -> Any:
        """The element that a fact names.

        Raises: MissingFactsError: where it is not given.
        """
        return self._case.graph.elements[self.must(fact)]

    def lacks(self, fact: str) -> float:
        """Note that a fact is missing; returns not a number."""
        self._case.missing.append(self.path(fact))
        return _NAN

    def _value(self, fact: str, side: str, word: str) -> float:
        span = self._walk(fact)
        if span is None:
            return self.lacks(fact)
        assert isinstance(span, Span), f"{self.path(fact)} is no quantity"
        value: float | None = getattr(span, side)
        return self.lacks(f"{fact}.{word}") if value is None else value

    def _walk(self, fact: str) -> Any:
        value: Any = self._part
        for step in _steps(fact):
            if isinstance(value, dict):
                value = value.get(step)
            elif isinstance(value, tuple):
                value = value[int(step)]
            else:
                value = getattr(value, "is_" if step == "is" else step)
            if value is None:
                return None
        return value


class Case:
    """What a rule may ask about the element it judges, and how it answers."""

    def __init__(self, *, subject: Element, rule: str, level: Level, description: Description, graph: Graph) -> None:
        self.subject = subject
        self.rule = rule
        self.level = level
        self.description = description
        self.graph = graph
        self.missing: list[str] = []

    # Facts

    @property
    def own(self) -> Facts:
        """The facts of the element that is judged."""
        return self.of(self.subject)

    def of(self, element: Element) -> Facts:
        """The facts of any element."""
        return Facts(element, f"{element.section}.{element.id}", self)

    def part(self, part: Part, path: str) -> Facts:
        """The facts of a part that is no element, such as a layer of the process."""
        return Facts(part, path, self)

    @property
    def whole(self) -> Facts:
        """The facts of the description itself: ``conditions.service_life``, ``process.plain_edge``."""
        return Facts(self.description, "", self)

    def settle(self) -> None:
        """End the rule here if a fact is missing.

        Raises: MissingFactsError: with all that is missing.
        """
        if self.missing:
            raise MissingFactsError(self.missing)

    @overload
    def gather(self, a: Callable[[], _A], b: Callable[[], _B], /) -> tuple[_A, _B]: ...
    @overload
    def gather(self, a: Callable[[], _A], b: Callable[[], _B], c: Callable[[], _C], /) -> tuple[_A, _B, _C]: ...
    @overload
    def gather(
        self, a: Callable[[], _A], b: Callable[[], _B], c: Callable[[], _C], d: Callable[[], _D], /
    ) -> tuple[_A, _B, _C, _D]: ...

    def gather(self, *asks: Callable[[], Any]) -> tuple[Any, ...]:
        """What each function returns; every one is asked, so that all that is missing is named at once.

        Raises: MissingFactsError: where a fact is missing, with all that is.
        """
        return tuple(self.gather_all(asks))

    def gather_all(self, asks: Iterable[Callable[[], _A]]) -> list[_A]:
        """``gather``, for any number of questions of one sort.

        Raises:
            MissingFactsError: where a fact is missing, with all that is.
            DomainError: where none is, and a formula refused its numbers.
        """
        noted, found, refused = self.missing, [], []
        for ask in asks:
            self.missing = []  # what another question lacks must not cut this one short
            try:
                found.append(ask())
            except MissingFactsError:
                pass  # noted
            except DomainError as error:
                refused.append(error)  # what is missing elsewhere is told first
            noted += self.missing
        self.missing = noted
        self.settle()
        if refused:
            raise refused[0]
        return found

    def lacking(self, ask: Callable[[], object]) -> tuple[str, ...]:
        """The facts that a function lacks; they are not held against the element that is judged."""
        noted, self.missing = self.missing, []
        try:
            ask()
        except MissingFactsError:
            pass  # noted
        finally:
            lacking, self.missing = tuple(dict.fromkeys(self.missing)), noted
        return lacking

    def attempt(self, ask: Callable[[], _A]) -> _A | None:
        """What a function returns, or None where a fact it needs is missing; for what only helps a message."""
        noted, self.missing = self.missing, []
        try:
            value = ask()
            return None if self.missing else value
        except MissingFactsError:
            return None
        finally:
            self.missing = noted

    # Answers: ``says`` is one sentence, ``why`` the numbers behind it, ``at`` the fact it is about

    def at_least(
        self, *, need: float, have: float, dimension: Dimension, says: str, why: str = "", mend: str = "",
        at: str = "", path: Path = (), otherwise: Kind = Kind.FAIL,
    ) -> Judgement:  # fmt: skip
        """Pass if ``have`` is at least ``need``; else fail, or what ``otherwise`` says."""
        measure = Measure(need, have, dimension, Relation.AT_LEAST)
        return self._measured(measure, says, otherwise, why=why, mend=mend, at=at, path=path)

    def at_most(
        self, *, need: float, have: float, dimension: Dimension, says: str, why: str = "", mend: str = "",
        at: str = "", path: Path = (), otherwise: Kind = Kind.FAIL,
    ) -> Judgement:  # fmt: skip
        """Pass if ``have`` is at most ``need``; else fail, or what ``otherwise`` says."""
        measure = Measure(need, have, dimension, Relation.AT_MOST)
        return self._measured(measure, says, otherwise, why=why, mend=mend, at=at, path=path)

    def _measured(
        self, measure: Measure, says: str, otherwise: Kind, *, why: str, mend: str, at: str, path: Path
    ) -> Judgement:
        kind = Kind.PASS if measure.holds else otherwise
        said = f"{says} {measure.text()}"
        return self._answer(kind, said, measure=measure, why=why, mend="" if measure.holds else mend, at=at, path=path)

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
        path: Path = (), missing: tuple[str, ...] = (),
    ) -> Judgement:  # fmt: skip
        if self.missing and kind is not Kind.OPEN:
            raise UnsettledError(f"answered although facts are missing: {', '.join(self.missing)}")
        subject = self.subject
        return Judgement(
            rule=self.rule, subject=subject.id, kind=kind, level=self.level, message=says, why=why, mend=mend,
            at=f"{subject.section}.{subject.id}.{at}" if at else f"{subject.section}.{subject.id}",
            measure=measure, path=path, missing=missing,
        )  # fmt: skip


class UnsettledError(RuntimeError):
    """A rule answered without looking whether its facts were there: the rule's own fault."""
