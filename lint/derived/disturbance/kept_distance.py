"""The distance that the level of a comparator keeps from its own decision: its least hysteresis."""

from __future__ import annotations

import msgspec

from tidegate.lint.account import Line, Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading
from tidegate.lint.physics.domain import DomainError


def kept(case: Case, comparator: Comparator) -> Sum:
    """The least hysteresis, in V at the rail; none where the levels can cross.

    Raises: MissingFactsError: where it is not said at which code the levels are, and they make it.
    """
    least = hysteresis_window(case, comparator).end("least")
    if least.value >= 0.0:
        return least
    waits = tuple(dict.fromkeys(fact for line in least.lines for fact in line.waits))
    line = Line("least hysteresis, the levels can cross", 0.0, f"comparators.{comparator.id}.trip", waits)
    return msgspec.structs.replace(least, value=0.0, lines=(line,))


@answered_once
def surely_keeps_nothing(case: Case, comparator: Comparator) -> bool:
    """Whether there is surely no distance: no hysteresis, or levels that can cross, whatever is not known of them.

    The rules of hysteresis judge that; what such a level does to others is no finding of its own.
    """
    if has_no_hysteresis(comparator):
        return True
    outer, noted = case.reading, case.missing
    case.asked.reading, case.asked.missing = Reading(Corner.BEST, chosen=outer.chosen, instead=outer.instead), []
    try:
        return hysteresis_window(case, comparator).end("least").value < 0.0
    except (MissingFactsError, DomainError):
        return False
    finally:
        case.asked.reading, case.asked.missing = outer, noted
