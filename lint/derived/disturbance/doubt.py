"""What only might be so: a condition that hangs on a name or a word that is not given holds where that harms."""

from __future__ import annotations

from collections.abc import Callable, Iterable

from tidegate.lint.case import Case
from tidegate.lint.facts.reading import MOST_CHOICES, MissingFactsError, Reading, other_choices


def holds(case: Case, doubt: Iterable[str]) -> bool:
    """Whether something is so of which some facts, named by their paths, leave it open; surely, where none does."""
    facts = tuple(doubt)
    if not facts:
        return True
    case.reading.block(facts)
    return case.perhaps(False, might=True)


def can_be(case: Case, ask: Callable[[], bool]) -> bool:
    """Whether a condition holds; where it cannot be told for want of a name, it does where that harms."""
    noted, case.asked.missing = case.missing, []
    try:
        answer = ask()
        case.settle()
        return answer
    except MissingFactsError as error:
        return holds(case, error.missing)
    finally:
        case.asked.missing = noted


def extreme(case: Case, ask: Callable[[], float], *, worst: float, best: float) -> float:
    """The worst of what a question gives over all choices of the words that are missing, at the best corner the best.

    ``worst`` and ``best`` are what it may give at all: one of them where it cannot be answered.  So a choice that
    matters for one of many numbers does not multiply with those of the others.

    Raises: DomainError: where a formula refuses its numbers.
    """
    pick = max if (worst > best) != case.at_best else min
    outer, noted = case.reading, case.missing
    waiting: list[dict[str, object]] = [dict(outer.chosen)]
    found: list[float] = []
    try:
        while waiting:
            if len(found) == MOST_CHOICES:
                found.append(best if case.at_best else worst)
                break
            chosen = waiting.pop()
            case.asked.reading = inner = Reading(outer.corner, chosen=chosen, tried=outer.tried, instead=outer.instead)
            case.asked.missing = []
            try:
                value = ask()
                case.settle()
                found.append(value)
            except MissingFactsError as error:
                inner.block(error.missing)
                found.append(best if case.at_best else worst)
            finally:
                outer.replay(inner.waits, {})
                outer.block((*inner.blocked, *(path for path in inner.options if path not in chosen)))
            waiting += [then for _, then in other_choices(inner, chosen)]
    finally:
        case.asked.reading, case.asked.missing = outer, noted
    return pick(found)
