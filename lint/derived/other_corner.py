"""A question asked at one corner of what is missing, in the middle of a reading of either."""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeVar

from tidegate.lint.case import Case
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading
from tidegate.lint.physics.domain import DomainError

_A = TypeVar("_A")


def read_at(case: Case, corner: Corner, ask: Callable[[], _A]) -> _A | None:
    """What a question gives with all that is missing at a corner, and missing words as the reading chooses them.

    What it lacks is noted in the reading, so that the judgement is read at both corners.
    Returns: None where nothing is known.
    Raises: DomainError: where a formula refuses its numbers, and nothing is missing.
    """
    outer, noted = case.reading, list(case.missing)
    inner = Reading(corner, chosen=outer.chosen, tried=outer.tried, instead=outer.instead)
    missing: tuple[str, ...] = ()
    case.asked.reading = inner
    try:
        return ask()
    except MissingFactsError as error:
        missing = error.missing
    except DomainError:
        if inner.exact:
            raise
    finally:
        case.asked.reading, case.asked.missing = outer, noted
        outer.replay(inner.waits, inner.options)
        outer.replaced |= inner.replaced
        outer.block([*inner.blocked, *(fact for fact in missing if fact not in noted)])
    return None
