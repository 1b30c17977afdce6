"""A rule: a function that judges one element, beside the metadata that explain it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any, TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.judgement import Judgement, Level

Judge: TypeAlias = "Callable[[Any, Case], Judgement]"


class PackError(Exception):
    """A pack of rules cannot be used; the message names the pack and everything that is wrong with it."""


class Example(msgspec.Struct, frozen=True):
    """Two fragments of a description: with the first the rule fails, with the second it holds.

    A fragment is laid over the sound example that comes with the tool; a test does so for every rule.
    """

    fails: str
    holds: str


class Rule(msgspec.Struct, frozen=True, kw_only=True):
    """What is judged, how, on which facts, and from which sources.

    ``judge`` is called once for every element of the section ``applies_to``, so that no element can be forgotten.
    """

    id: str
    title: str
    level: Level
    applies_to: str
    proves: str
    facts: tuple[str, ...]
    mend: str
    sources: tuple[str, ...]
    example: Example
    judge: Judge
    formulas: tuple[Callable[..., object], ...] = ()

    @property
    def family(self) -> str:
        """The first word of the id."""
        return self.id.partition("/")[0]


def rule(
    id: str,  # the trade's word, and the word of every report
    *,
    title: str,
    level: Level,
    applies_to: str,
    proves: str,
    facts: Iterable[str],
    mend: str,
    sources: Iterable[str],
    example: Example,
    formulas: Iterable[Callable[..., object]] = (),
) -> Callable[[Judge], Rule]:
    """Make a rule of the function below: its metadata in the order in which a reader asks.

    Raises: TypeError: where a text stands for a tuple of texts.
    """
    for field, given in (("facts", facts), ("sources", sources)):
        if isinstance(given, str):
            raise TypeError(f"the {field} of {id} are a tuple of texts, such as ({given!r},)")

    def make(judge: Judge) -> Rule:
        return Rule(
            id=id, title=title, level=level, applies_to=applies_to, proves=proves, facts=tuple(facts), mend=mend,
            sources=tuple(sources), example=example, judge=judge, formulas=tuple(formulas),
        )  # fmt: skip

    return make
