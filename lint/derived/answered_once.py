"""Questions that several rules ask about the same element, answered once a description."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import Any, Concatenate, ParamSpec, TypeVar

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.graph.dependency import Graph

_P = ParamSpec("_P")
_A = TypeVar("_A")


def answered_once(ask: Callable[Concatenate[Case, _P], _A]) -> Callable[Concatenate[Case, _P], _A]:
    """The same question; an answer for which nothing was missing is kept with the graph for whoever asks next.

    What a question is about (elements, ids) is told apart by identity; the answer may hang on nothing else that a case
    holds, such as its subject.  A question that lacks a fact is asked anew, so that every rule notes what it lacks.
    """

    @wraps(ask)
    def answer(case: Case, /, *about: _P.args, **more: _P.kwargs) -> _A:
        kept = case.graph.once(_answers)
        key = (ask, id(case.description), *map(id, about), *more.items())
        found = kept.get(key)
        if found is not None:
            known: _A = found[1]
            return known
        noted, case.missing = case.missing, []
        try:
            value = ask(case, *about, **more)
        except MissingFactsError:
            case.missing = noted + case.missing
            case.settle()
            raise
        except BaseException:
            case.missing = noted + case.missing
            raise
        if not case.missing:
            kept[key] = (case.description, *about), value  # what has an id in the key lives as long as the key
        case.missing = noted + case.missing
        return value

    return answer


def _answers(_graph: Graph) -> dict[tuple[Any, ...], tuple[object, Any]]:
    return {}
