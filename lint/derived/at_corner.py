"""Formulas that refuse a number which is not known, and sets of which a member cannot be worked out."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import TypeVar

from tidegate.lint.case import Case
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.physics.domain import DomainError

_A = TypeVar("_A")


def at_corner(case: Case, ask: Callable[[], float], *, sure: float, best: float) -> float:
    """What a formula gives; where it refuses a number that is not known, what it comes to at most, or at least.

    ``sure`` and ``best`` are those ends: what it gives with everything that is missing as unfavourable, and as
    favourable, as can be.
    Raises: DomainError: where it refuses numbers that are all known.
    """
    log = case.reading.listen()
    try:
        value = ask()
    except (DomainError, ArithmeticError):
        if not log:
            raise
        value = math.nan
    finally:
        case.reading.unlisten()
    if math.isnan(value) and log:
        return best if case.at_best else sure
    return value


def known_of(case: Case, asks: Iterable[Callable[[], _A]]) -> tuple[list[_A], tuple[str, ...]]:
    """The answers of those questions that can be answered, and what keeps the others from being so.

    What is missing is noted, and whoever asks must take the set for one with an unknown member.
    """
    asked, found, missing = case.asked, [], list(case.missing)
    for ask in asks:
        asked.missing = []
        try:
            found.append(ask())
        except MissingFactsError as error:
            asked.missing += error.missing
        missing += asked.missing
    asked.missing = []
    facts = tuple(dict.fromkeys(missing))
    case.reading.block(facts)
    return found, facts
