"""What is not said of whole sections, one question each however many elements wait for it; and asking step by step."""

from __future__ import annotations

from collections.abc import Callable
from typing import NoReturn, TypeVar

from tidegate.lint.case import Case
from tidegate.lint.description.model.description import CompleteSection
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.judgement import Judgement, Kind

_A = TypeVar("_A")


def not_whole(case: Case, section: CompleteSection) -> tuple[str, ...]:
    """The section, unless it is said to hold all that there is: what it does not hold may exist all the same."""
    return () if section in case.description.complete else (section,)


def unsaid(case: Case, section: CompleteSection) -> tuple[str, ...]:
    """The section, where it holds nothing and is not said to be empty."""
    return () if getattr(case.description, section) else not_whole(case, section)


def found_out(case: Case, ask: Callable[[], _A]) -> tuple[_A | None, tuple[str, ...]]:
    """What a question gives, or None and what is missing for it: for a rule that goes on, and may know enough."""
    noted, case.asked.missing = case.asked.missing, []
    try:
        return ask(), ()
    except MissingFactsError as error:
        return None, error.missing
    finally:
        case.asked.missing = noted


def missing(facts: tuple[str, ...]) -> NoReturn:
    """End a question for which facts are missing.

    Raises: MissingFactsError: always.
    """
    raise MissingFactsError(facts)


def unless_unsaid(case: Case, others: tuple[str, ...], found: Judgement, says: str) -> Judgement:
    """A judgement, or the question of sections of which more may exist, where it fails for want of an element.

    Raises: MissingFactsError: where that is the question, and other facts are missing as well.
    """
    if found.kind is not Kind.FAIL or not others:
        return found
    return case.open(others, says) if case.reading.exact else missing(others)
