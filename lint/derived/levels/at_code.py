"""A detector whose levels are chosen by code, at one of its codes."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.description.model.detector import Comparator


def at_code(comparator: Comparator, code: str) -> Comparator:
    """The detector with the levels of a code."""
    return msgspec.structs.replace(comparator, trip=comparator.codes[code])


@answered_once
def as_shipped(case: Case, comparator: Comparator) -> Comparator:
    """The detector with the levels of the code it ships with, where they are chosen by code.

    Raises: MissingFactsError: where it is not said which code that is.
    """
    if not comparator.codes or comparator.trip is not None:
        return comparator
    return at_code(comparator, case.of(comparator).ships_with.must())


def as_far_as_said(comparator: Comparator) -> Comparator:
    """As ``as_shipped``; as it is described where it is not said which code that is."""
    if not comparator.codes or comparator.trip is not None or comparator.ships_with is None:
        return comparator
    return at_code(comparator, comparator.ships_with)
