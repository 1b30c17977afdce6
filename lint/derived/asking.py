"""Asking a description for derived numbers outside of a rule: an answer, or what keeps it from being given."""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeVar

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.description import Description
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError

_A = TypeVar("_A")


class Unknown(msgspec.Struct, frozen=True):
    """Why there is no answer: facts that are missing, or a sentence."""

    missing: tuple[str, ...]
    problem: str

    def text(self) -> str:
        """The reason in one sentence."""
        return f"not given: {', '.join(self.missing)}" if self.missing else self.problem


class NoAnswerError(Exception):
    """There is nothing to answer; the message says why."""


def ask(description: Description, graph: Graph, element: Element, question: Callable[[Case], _A]) -> _A | Unknown:
    """What a question about an element is answered with, or why it cannot be."""
    case = Case(subject=element, rule="", level=Level.NOTE, description=description, graph=graph)
    try:
        answer = question(case)
    except MissingFactsError as error:
        return Unknown(error.missing, "")
    except DomainError as error:
        if waiting := (*case.missing, *case.reading.lacking):  # what is not known may be what the formula refused
            return Unknown(tuple(dict.fromkeys(waiting)), "")
        return Unknown((), f"the numbers given lie outside the range of the formula: {error}")
    except NoAnswerError as error:
        return Unknown((), str(error))
    waiting = (*case.missing, *case.reading.lacking)
    return Unknown(tuple(dict.fromkeys(waiting)), "") if waiting else answer
