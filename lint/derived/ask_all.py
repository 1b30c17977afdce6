"""Asking for several facts of one sort, so that all that is missing is named at once."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from contextlib import suppress
from typing import TypeVar

from tidegate.lint.case import Case, MissingFactsError

_T = TypeVar("_T")


def ask_all(case: Case, asks: Iterable[Callable[[], _T]]) -> list[_T]:
    """What each function returns; every one is asked.

    Raises: MissingFactsError: where a fact of any of them is missing, with all that is.
    """
    found = []
    for ask in asks:
        with suppress(MissingFactsError):  # noted: settle speaks of it below
            found.append(ask())
    case.settle()
    return found
