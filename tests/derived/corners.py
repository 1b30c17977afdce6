"""What is known of a derived number: its value at the sure and at the best corner, and what it waits for."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

from tests.rules.sound import case_of
from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading


class Known(NamedTuple):
    """An interval, and the facts that would narrow it; not a number where nothing can be computed."""

    sure: float
    best: float
    waits: tuple[str, ...]


def known(patch: str, of: str, ask: Callable[[Case, Comparator], float]) -> Known:
    """A derived number of a comparator of the sound example with a patch laid over it; words at their first choice."""
    values: list[float] = []
    waits: dict[str, None] = {}
    for corner in (Corner.SURE, Corner.BEST):
        case = case_of(patch, of)
        case.asked.reading = Reading(corner)
        assert isinstance(case.subject, Comparator)
        try:
            values.append(ask(case, case.subject))
        except MissingFactsError as error:
            values.append(float("nan"))
            waits.update(dict.fromkeys(error.missing))
        waits.update(dict.fromkeys(case.reading.lacking))
    return Known(values[0], values[1], tuple(waits))
