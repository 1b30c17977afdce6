"""Sums of signed, named terms: what a requirement compares, and the account that a reader checks by hand.

    case.sum(
        plus("least supply delivered", rail.delivered.least, of=rail.delivered),
        less("half the ripple", lambda: rail.ripple.peak_to_peak.most() / 2, of=rail.ripple.peak_to_peak),
    )

Each term is a plain function of facts.  What it reads and does not know stands beside it, so that a term that is not
known is told as such and does not hide the others.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import Any, Final, TypeAlias

import msgspec

from tidegate.lint.facts.reading import Corner, MissingFactsError
from tidegate.lint.facts.view import Asked, Entries, Fact, Facts
from tidegate.lint.physics.domain import DomainError

Source: TypeAlias = "Fact | Facts[Any] | Entries[Any] | str"
"""Where a term comes from: a fact, a part of the description, or words."""


class Term(msgspec.Struct, frozen=True):
    """A part of a sum before it is worked out."""

    name: str
    sign: float
    value: Callable[[], float]
    of: Source
    floor: float | None
    """Of a term that can only harm what is judged: what it is at least (before its sign) where it cannot be computed.

    None where nothing can be said then.
    """


def plus(name: str, value: Callable[[], float], *, of: Source = "", floor: float | None = None) -> Term:
    """A term that adds."""
    return Term(name, 1.0, value, of, floor)


def less(name: str, value: Callable[[], float], *, of: Source = "", floor: float | None = None) -> Term:
    """A term that takes away."""
    return Term(name, -1.0, value, of, floor)


class Line(msgspec.Struct, frozen=True):
    """A line of an account: the term with its sign, its value, and what it waits for."""

    name: str
    value: float
    """With its sign, in the kept unit of what is compared, at the corner that is told."""
    of: str = ""
    """The fact it comes from, as a path, or words."""
    waits: tuple[str, ...] = ()
    """The facts without which it is not exactly known."""
    sure: float | None = None
    """Its value with all that is missing as unfavourable as it may be; None where it is exactly known."""
    best: float | None = None
    """The same as favourable as it may be."""

    def taken(self) -> Line:
        """The same line with the other sign."""
        return msgspec.structs.replace(self, value=-self.value)


_ENDS: Final = {"least": "least", "most": "greatest", "greatest": "greatest"}
_MOVES: Final = {"falls": "fall", "rises": "rise"}
_DUST: Final = 1e-12
"""What is left of terms that cancel, as a share of the greatest of them: rounding, and not a size."""


def term_name(name: str) -> str:
    """A term as a sentence names it: ``hysteresis, most`` is the greatest hysteresis."""
    what, _, end = name.rpartition(", ")
    if what and end in _ENDS:
        return f"{_ENDS[end]} {what}"
    words = name.split(" ", 2)
    if len(words) == 3 and words[1] in _MOVES:
        return f"{_MOVES[words[1]]} of {words[0]} {words[2]}"
    return name


def _total(value: float, lines: Iterable[Line]) -> float:
    """What lines add up to; what rounding leaves of lines that cancel is nothing."""
    sizes = (abs(line.value) for line in lines if math.isfinite(line.value))
    return 0.0 if abs(value) <= _DUST * max(sizes, default=0.0) else value


class Sum(msgspec.Struct, frozen=True):
    """What the terms add up to, and the lines of the account."""

    value: float
    lines: tuple[Line, ...]
    loose: float = 0.0
    """By how much more it may help than it counts, where it is not said which extremes go together.

    Worst case is judged, extreme with extreme; it is not known that they meet.
    """

    def plus(self, other: Sum) -> Sum:
        """Two sums as one."""
        lines = (*self.lines, *other.lines)
        return Sum(_total(self.value + other.value, lines), lines, self.loose + other.loose)

    def less(self, other: Sum) -> Sum:
        """A sum with another one taken off."""
        lines = (*self.lines, *(line.taken() for line in other.lines))
        return Sum(_total(self.value - other.value, lines), lines, self.loose + other.loose)


def worked_out(terms: Iterable[Term], asked: Asked) -> Sum:
    """Work out each term; one that lacks something does not keep the others from being read.

    Raises:
        MissingFactsError: where a term cannot be computed and no floor is known for it, with all that is missing.
        DomainError: where a formula refuses its numbers, and nothing is missing.
    """
    lines: list[Line] = []
    missing: list[str] = []
    refused: DomainError | None = None
    for term in terms:
        log = asked.reading.listen()
        noted, asked.missing = asked.missing, []
        value = math.nan
        lacking: tuple[str, ...] = ()
        try:
            value = term.value()
            asked.settle()
        except MissingFactsError as error:
            lacking, value = error.missing, math.nan
        except DomainError as error:
            if not log:
                refused = refused or error
        finally:
            asked.reading.unlisten()
            asked.missing = noted
        if math.isnan(value) and (lacking or log):
            value = _bound(term, asked)
            if math.isnan(value):
                missing += lacking or log
            else:
                asked.reading.block(lacking)
        lines.append(Line(term.name, term.sign * value, _path(term.of), tuple(dict.fromkeys((*log, *lacking)))))
    if missing:
        raise MissingFactsError([*asked.missing, *missing])
    if refused is not None:
        raise refused
    value = math.fsum(line.value for line in lines) if _finite(lines) else _endless(lines)
    return Sum(_total(value, lines), tuple(lines))


def _bound(term: Term, asked: Asked) -> float:
    """What a term that cannot be computed is, at the corner of the reading; not a number where nothing is known."""
    if term.floor is None:
        return math.nan
    return math.inf if asked.reading.corner is Corner.SURE else term.floor


def _finite(lines: Iterable[Line]) -> bool:
    return all(math.isfinite(line.value) for line in lines)


def _endless(lines: Iterable[Line]) -> float:
    """A sum with a term without end: that end, or not a number where two pull both ways."""
    ends = {line.value for line in lines if math.isinf(line.value)}
    return ends.pop() if len(ends) == 1 else math.nan


def _path(of: Source) -> str:
    return of if isinstance(of, str) else of.path
