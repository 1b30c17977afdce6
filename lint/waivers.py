"""Accepted findings: which judgements a waiver covers, and whether each waiver is still right."""

from __future__ import annotations

import datetime
from collections.abc import Callable, Container, Iterable, Sequence
from contextlib import suppress
from dataclasses import dataclass
from typing import Any, Final, NoReturn

import msgspec

from tidegate.lint.description.model.description import Waiver
from tidegate.lint.description.place import Place
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.quantity import Dimension, QuantityError, parse, show
from tidegate.lint.rule import Example, Rule


@dataclass(frozen=True, slots=True)
class PlacedWaiver:
    """A waiver, what it is called in reports, and where it stands."""

    waiver: Waiver
    name: str
    place: Place


def _never_called(_element: Any, _case: Any) -> NoReturn:
    raise AssertionError("waivers are judged by the engine, all at once")


STILL_RIGHT: Final = Rule(
    id="waiver/still_right",
    title="every waiver covers a finding that is there, at no worse a margin, and in date",
    level=Level.WARNING,
    applies_to="waivers",
    proves="A waiver accepts one finding until a day, at the margin that was agreed. It is reported when the day has "
    "passed, when the margin got worse, when its rule or element is gone, and when there is nothing left to accept.",
    facts=("waivers[*]",),
    mend="agree on it again with today's margin and a new date, or remove it",
    sources=("common practice, no source: a deviation is agreed for a time, and for what was seen when it was agreed",),
    example=Example(
        fails='waivers: [{rule: bypass/readable, element: skip_core, why: "?", agreed_by: board, until: "2031-12-31"}]',
        holds="waivers: []",
    ),
    judge=_never_called,
)
"""The rule that judges the waivers themselves."""


def apply_waivers(
    judgements: Sequence[Judgement], waivers: Sequence[PlacedWaiver], *, today: datetime.date, rules: Container[str],
    elements: Container[str], level: Level,
) -> list[Judgement]:  # fmt: skip
    """The judgements, with the covered findings marked as accepted, and one judgement on each waiver."""
    by_subject = {(judgement.rule, judgement.subject): index for index, judgement in enumerate(judgements)}
    marked = list(judgements)
    on_waivers: list[Judgement] = []
    for placed in waivers:
        waiver = placed.waiver
        index = by_subject.get((waiver.rule, waiver.element))
        judgement = None if index is None else judgements[index]
        problem = _problem(waiver, judgement, today, rules, elements)
        if problem is None and index is not None:
            marked[index] = msgspec.structs.replace(judgements[index], waiver=_said(waiver))
        on_waivers.append(_on_waiver(placed, problem, level))
    return [*marked, *on_waivers]


@dataclass(frozen=True, slots=True)
class _Problem:
    says: str
    mend: str
    fact: str


def _problem(
    waiver: Waiver, judgement: Judgement | None, today: datetime.date, rules: Container[str], elements: Container[str]
) -> _Problem | None:
    """Why a waiver does not hold; None where it does."""
    if waiver.rule not in rules:
        return _Problem(f"no rule is called {waiver.rule}", "remove the waiver, or correct the rule", "rule")
    if waiver.element not in elements:
        return _Problem(
            f"no element is called {waiver.element}", "remove the waiver, or correct the element", "element"
        )
    last_day = None
    with suppress(ValueError):
        last_day = datetime.date.fromisoformat(waiver.until)
    if last_day is None:
        return _Problem(f"{waiver.until} is no day of the calendar", "write year-month-day", "until")
    if judgement is None or judgement.kind not in (Kind.FAIL, Kind.REVIEW):
        kind = "does not judge it" if judgement is None else f"says {judgement.kind.value}"
        what = f"nothing is left to waive: {waiver.rule} {kind} on {waiver.element}"
        return _Problem(what, "remove the waiver", "rule")
    if today > last_day:
        what = f"the waiver of {waiver.rule} on {waiver.element} ended on {waiver.until}"
        return _Problem(what, "mend the finding, or agree on it again", "until")
    return _margin_problem(waiver, judgement)


def _margin_problem(waiver: Waiver, judgement: Judgement) -> _Problem | None:
    if waiver.margin is None or judgement.measure is None:
        return None
    dimension = judgement.measure.dimension
    agreed = margin_of(waiver.margin, dimension)
    if agreed is None:
        what = f"its margin {waiver.margin} is no {dimension.value.replace('_', ' ')}"
        return _Problem(what, f"write the margin that was agreed, such as {judgement.measure.margin_text()}", "margin")
    now, then = judgement.measure.margin_text(), _signed(agreed, dimension)
    if judgement.measure.margin < agreed and now != then:  # a margin is agreed as the report shows it, rounded
        what = f"the margin of {waiver.rule} on {waiver.element} is {now}, worse than the {then} agreed"
        return _Problem(what, "mend the finding, or agree on it again at this margin", "margin")
    return None


def _signed(value: float, dimension: Dimension) -> str:
    return f"{'-' if value < 0 else '+'}{show(abs(value), dimension)}"


def margin_of(text: str, dimension: Dimension) -> float | None:
    """A margin as a waiver states it, sign included; None where it is no quantity of this dimension."""
    size = text.lstrip("+-")
    try:
        value = float(size) if dimension is Dimension.COUNT else parse(size, dimension)
    except (QuantityError, ValueError):
        return None
    return -value if text.startswith("-") else value


def _on_waiver(placed: PlacedWaiver, problem: _Problem | None, level: Level) -> Judgement:
    return Judgement(
        rule=STILL_RIGHT.id,
        subject=placed.name,
        kind=Kind.PASS if problem is None else Kind.FAIL,
        level=level,
        message=f"covers {placed.waiver.rule} on {placed.waiver.element}" if problem is None else problem.says,
        mend="" if problem is None else problem.mend,
        at=placed.name,
        place=placed.place,
    )


def _said(waiver: Waiver) -> str:
    return f"{waiver.why} (agreed by {waiver.agreed_by}, until {waiver.until})"


def placed_waivers(
    waivers: Iterable[Waiver], name: Callable[[int], str], place: Callable[[int], Place]
) -> list[PlacedWaiver]:
    """Waivers with the names and places that a list gives them."""
    return [PlacedWaiver(waiver, name(index), place(index)) for index, waiver in enumerate(waivers)]
