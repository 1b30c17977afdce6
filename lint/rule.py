"""A rule: a function that judges one element, beside the metadata that explain it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any, TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.description import Description
from tidegate.lint.judgement import Judgement, Level

Judge: TypeAlias = "Callable[[Any, Case], Judgement]"


class PackError(Exception):
    """A pack of rules cannot be used; the message names the pack and everything that is wrong with it."""


class Yield(msgspec.Struct, frozen=True):
    """A rule whose failure says the same: a failure of this rule is then told under it, with its number.

    Nothing yields to what is open, waived or left out.
    """

    to: str
    """The id of that rule."""
    on: Callable[[Any, Description], Iterable[str]] | None = None
    """The elements on which it may have failed, from the element that is judged; None for that element itself."""


class Example(msgspec.Struct, frozen=True):
    """Two fragments of a description: with the first the rule fails, with the second it holds.

    A fragment is laid over the sound example that comes with the tool; a test does so for every rule.
    """

    fails: str
    holds: str


class Rule(msgspec.Struct, frozen=True, kw_only=True):
    """What is judged, how, on which facts, and from which sources.

    ``judge`` is called once for every element of the sections ``applies_to``, so that no element can be forgotten.
    """

    id: str
    title: str
    level: Level
    applies_to: tuple[str, ...]
    proves: str
    facts: tuple[str, ...]
    mend: str
    sources: tuple[str, ...]
    example: Example
    judge: Judge
    formulas: tuple[Callable[..., object], ...] = ()
    yields: tuple[Yield, ...] = ()

    @property
    def judges(self) -> str:
        """The sections that it judges, in words."""
        return ", ".join(section.replace("_", " ") for section in self.applies_to)

    @property
    def family(self) -> str:
        """The first word of the id."""
        return self.id.partition("/")[0]


def rule(
    id: str,  # the trade's word, and the word of every report
    *,
    title: str,
    level: Level,
    applies_to: str | Iterable[str],
    proves: str,
    facts: Iterable[str],
    mend: str,
    sources: Iterable[str],
    example: Example,
    formulas: Iterable[Callable[..., object]] = (),
    yields: Iterable[Yield | str] = (),
) -> Callable[[Judge], Rule]:
    """Make a rule of the function below: its metadata in the order in which a reader asks.

    Raises: TypeError: where a text stands for a tuple of texts.
    """
    for field, given in (("facts", facts), ("sources", sources)):
        if isinstance(given, str):
            raise TypeError(f"the {field} of {id} are a tuple of texts, such as ({given!r},)")

    def make(judge: Judge) -> Rule:
        sections = (applies_to,) if isinstance(applies_to, str) else tuple(applies_to)
        above = tuple(Yield(each) if isinstance(each, str) else each for each in yields)
        return Rule(
            id=id, title=title, level=level, applies_to=sections, proves=proves, facts=tuple(facts), mend=mend,
            sources=tuple(sources), example=example, judge=judge, formulas=tuple(formulas), yields=above,
        )  # fmt: skip

    return make
