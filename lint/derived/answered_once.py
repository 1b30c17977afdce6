"""Questions that several rules ask about the same element, answered once a description."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import wraps
from typing import Any, Concatenate, NamedTuple, ParamSpec, TypeVar

from tidegate.lint.case import Case
from tidegate.lint.facts.reading import Wait
from tidegate.lint.graph.dependency import Graph

_P = ParamSpec("_P")
_A = TypeVar("_A")


def answered_once(ask: Callable[Concatenate[Case, _P], _A]) -> Callable[Concatenate[Case, _P], _A]:
    """The same question; its answer is kept with the graph for whoever asks next.

    What a question is about (elements, ids) is told apart by identity; the answer may hang on nothing else that a case
    holds, such as its subject, but on the reading where something that is not known was read.  A question that cannot
    be answered is asked anew, so that every rule notes what it lacks; so is one that reads a fact which the reading
    takes for something else, while others are kept for every reading that takes the same facts for something else.
    """

    @wraps(ask)
    def answer(case: Case, /, *about: _P.args, **more: _P.kwargs) -> _A:
        kept = case.graph.once(_answers)
        outer = case.asked.reading
        key = (ask, id(case.description), outer.others, *map(id, about), *more.items())
        found = kept.get(key) or kept.get((*key, outer.key))
        if found is not None:
            if found.waits or found.options:
                outer.replay(found.waits, found.options)
            known: _A = found.value
            return known
        noted = case.missing
        case.asked.reading, case.asked.missing = outer.again(), []
        case.reading.replaced = set()
        try:
            value = ask(case, *about, **more)
            inner, lacks = case.reading, case.missing
        finally:
            inner = case.reading
            case.asked.reading, case.asked.missing = outer, noted + case.missing
            outer.replay(inner.waits, inner.options)
            outer.block(inner.blocked)
            outer.replaced |= inner.replaced
        if not (lacks or inner.blocked or inner.replaced or (inner.tried and inner.waits)):
            # what has an id in the key lives as long as the key
            where = key if inner.exact else (*key, outer.key)
            kept[where] = _Kept((case.description, *about), value, inner.waits, inner.options)
        return value

    return answer


class _Kept(NamedTuple):
    """An answer, what it was about, and what it read that is not known."""

    about: tuple[object, ...]
    value: Any
    waits: Mapping[str, Wait]
    options: Mapping[str, tuple[object, ...]]


def _answers(_graph: Graph) -> dict[tuple[Any, ...], _Kept]:
    return {}
