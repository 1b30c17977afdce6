"""Accepted findings: which judgements a waiver covers, and whether each waiver is still right."""

from __future__ import annotations

import datetime
import math
from collections import Counter
from collections.abc import Callable, Container, Iterable, Sequence
from contextlib import suppress
from typing import Any, Final, NoReturn

import msgspec

from tidegate.lint.description.model.description import Waiver
from tidegate.lint.description.place import Place
from tidegate.lint.judgement import Judgement, Kind, Level, difference, signed
from tidegate.lint.quantity import Dimension, QuantityError, parse
from tidegate.lint.rule import Example, Rule


class PlacedWaiver(msgspec.Struct, frozen=True):
    """A waiver, its path in its file, and where it stands."""

    waiver: Waiver
    path: str
    place: Place


class Surroundings(msgspec.Struct, frozen=True, kw_only=True):
    """What a waiver is held against."""

    today: datetime.date
    rules: Container[str]
    elements: Container[str]
    subsystem: str | None = None
    left_out: Container[str] = ()
    """Rules that the settings leave out."""


def _never_called(_element: Any, _case: Any) -> NoReturn:
    raise AssertionError("waivers are judged by the engine, all at once")


STILL_RIGHT: Final = Rule(
    id="waiver/still_right",
    title="every waiver covers a finding that is there, at no worse a margin, and in date",
    level=Level.WARNING,
    applies_to=("waivers",),
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
    judgements: Sequence[Judgement], waivers: Sequence[PlacedWaiver], around: Surroundings, level: Level
) -> tuple[list[Judgement], list[Judgement]]:
    """The judgements, with the covered findings marked as accepted; and one judgement on each waiver."""
    by_subject = {(judgement.rule, judgement.subject): index for index, judgement in enumerate(judgements)}
    marked = list(judgements)
    on_waivers: list[Judgement] = []
    met: Counter[str] = Counter()
    for placed in waivers:
        waiver = placed.waiver
        index = by_subject.get((waiver.rule, waiver.element))
        problem = _problem(waiver, None if index is None else marked[index], around)
        if problem is None and index is not None:
            marked[index] = msgspec.structs.replace(judgements[index], waiver=_said(waiver))
        name = f"{waiver.rule} on {waiver.element}"
        met[name] += 1
        subject = name if met[name] == 1 else f"{name} ({met[name]})"
        on_waivers.append(_on_waiver(placed, subject, problem, level, left_out=waiver.rule in around.left_out))
    return marked, on_waivers


class _Problem(msgspec.Struct, frozen=True):
    says: str
    mend: str


def _problem(waiver: Waiver, judgement: Judgement | None, around: Surroundings) -> _Problem | None:
    """Why a waiver does not hold; None where it does, or where its rule is not asked."""
    if waiver.rule not in around.rules:
        return _Problem(f"no rule is called {waiver.rule}", "remove the waiver, or correct the rule")
    if waiver.subsystem not in (None, around.subsystem):
        what = f"meant for the subsystem {waiver.subsystem}; this is {around.subsystem or 'one without a name'}"
        return _Problem(what, "remove the waiver, or correct the subsystem")
    if waiver.element not in around.elements:
        return _Problem(f"no element is called {waiver.element}", "remove the waiver, or correct the element")
    if waiver.rule in around.left_out:
        return None
    last_day = None
    with suppress(ValueError):
        last_day = datetime.date.fromisoformat(waiver.until)
    if last_day is None:
        return _Problem(f"{waiver.until} is no day of the calendar", "write year-month-day")
    if judgement is None or judgement.kind not in (Kind.FAIL, Kind.REVIEW):
        kind = "does not judge it" if judgement is None else f"says {judgement.kind.value}"
        return _Problem(f"nothing is left to waive: {waiver.rule} {kind} on {waiver.element}", "remove the waiver")
    if around.today > last_day:
        what = f"the waiver of {waiver.rule} on {waiver.element} ended on {waiver.until}"
        return _Problem(what, "mend the finding, or agree on it again")
    if judgement.waiver:
        what = f"nothing is left to waive: another waiver covers {waiver.rule} on {waiver.element} already"
        return _Problem(what, "keep one of them")
    return _margin_problem(waiver, judgement)


def _margin_problem(waiver: Waiver, judgement: Judgement) -> _Problem | None:
    if waiver.margin is None:
        return None
    if judgement.measure is None:
        what = f"agreed at a margin of {waiver.margin}, but {waiver.rule} has no number on {waiver.element} any more"
        return _Problem(what, "mend the finding, or agree on it again as it is now")
    dimension = difference(judgement.measure.dimension)
    agreed = margin_of(waiver.margin, dimension)
    if agreed is None:
        what = f"its margin {waiver.margin} is no {dimension.value.replace('_', ' ')}"
        return _Problem(what, f"write the margin that was agreed, such as {judgement.measure.margin_text()}")
    measure = judgement.measure
    sure, then = signed(measure.sure_margin, measure.dimension), signed(agreed, measure.dimension)
    if measure.sure_margin >= agreed or sure == then:  # a margin is agreed as the report shows it, rounded
        return None
    if measure.margin < agreed and measure.margin_text() != then:
        now = measure.margin_words(judgement.kind)
        what = f"the margin of {waiver.rule} on {waiver.element} is {now}, worse than the {then} agreed"
        return _Problem(what, "mend the finding, or agree on it again at this margin")
    what = f"the margin of {waiver.rule} on {waiver.element} can be worse than the {then} agreed"
    facts = f"give {', '.join(judgement.missing)}, or " if judgement.missing else ""
    return _Problem(what, f"{facts}agree on it again without a margin")


def margin_of(text: str, dimension: Dimension) -> float | None:
    """A margin as a waiver states it, sign included; None where it is no quantity of this dimension."""
    size = text.removeprefix("-" if text.startswith("-") else "+")
    try:
        value = float(size) if dimension is Dimension.COUNT else parse(size, dimension)
    except (QuantityError, ValueError):
        return None
    if not 0.0 <= value < math.inf:  # a second sign, or no number
        return None
    return -value if text.startswith("-") else value


def _on_waiver(
    placed: PlacedWaiver, subject: str, problem: _Problem | None, level: Level, *, left_out: bool
) -> Judgement:
    waiver = placed.waiver
    said, kind = f"covers {waiver.rule} on {waiver.element}", Kind.PASS
    if problem is not None:
        said, kind = problem.says, Kind.FAIL
    elif left_out:
        said, kind = f"the settings leave {waiver.rule} out", Kind.NOT_APPLICABLE
    return Judgement(
        rule=STILL_RIGHT.id, subject=subject, kind=kind, level=level, message=said,
        mend="" if problem is None else problem.mend, at=placed.path, place=placed.place,
    )  # fmt: skip


def _said(waiver: Waiver) -> str:
    return f"{waiver.why} (agreed by {waiver.agreed_by}, until {waiver.until})"


def placed_waivers(
    waivers: Iterable[Waiver], path: Callable[[int], str], place: Callable[[int], Place]
) -> list[PlacedWaiver]:
    """Waivers with the paths and places that a list gives them."""
    return [PlacedWaiver(waiver, path(index), place(index)) for index, waiver in enumerate(waivers)]
