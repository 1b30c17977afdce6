"""Accepted findings: which judgements a waiver covers."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Sequence
from contextlib import suppress

import msgspec

from tidegate.lint.description.model.description import Waiver
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.quantity import Dimension, QuantityError, parse


def waived(judgements: Iterable[Judgement], waivers: Sequence[Waiver], *, today: datetime.date) -> list[Judgement]:
    """The judgements, with the covered findings marked as accepted."""
    by_subject = {(waiver.rule, waiver.element): waiver for waiver in waivers}
    marked: list[Judgement] = []
    for judgement in judgements:
        waiver = by_subject.get((judgement.rule, judgement.subject))
        if waiver is not None and _covers(waiver, judgement, today):
            marked.append(msgspec.structs.replace(judgement, waiver=_said(waiver)))
        else:
            marked.append(judgement)
    return marked


def _covers(waiver: Waiver, judgement: Judgement, today: datetime.date) -> bool:
    """A waiver covers a finding of its rule and element until its last day, at its margin or a better one."""
    if judgement.kind not in (Kind.FAIL, Kind.REVIEW):
        return False
    last_day = None
    with suppress(ValueError):
        last_day = datetime.date.fromisoformat(waiver.until)
    if last_day is None or today > last_day:
        return False
    if waiver.margin is None or judgement.measure is None:
        return True
    agreed = margin_of(waiver.margin, judgement.measure.dimension)
    return agreed is not None and judgement.measure.margin >= agreed - 1e-9 * abs(agreed)


def margin_of(text: str, dimension: Dimension) -> float | None:
    """A margin as a waiver states it, sign included; None where it is no quantity of this dimension."""
    size = text.lstrip("+-")
    try:
        value = float(size) if dimension is Dimension.COUNT else parse(size, dimension)
    except (QuantityError, ValueError):
        return None
    return -value if text.startswith("-") else value


def _said(waiver: Waiver) -> str:
    return f"{waiver.why} (agreed by {waiver.agreed_by}, until {waiver.until})"
