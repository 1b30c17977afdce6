"""Geometry of an account: each term a step from the sum before it, both results as lines, the margin between them."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import Final

import msgspec

from tidegate.lint.account import Line
from tidegate.lint.judgement import Judgement, Measure, Relation, difference
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.accounts import Side, line_text, sides, sign, source
from tidegate.lint.reports.drawing.scale import Linear, round_values, shortened
from tidegate.lint.reports.words import margin_words

WIDTH: Final = 760.0
_LEFT: Final = 250.0
_RIGHT: Final = 640.0
_ROW: Final = 32.0
_TOP: Final = 8.0
_AXIS: Final = 26.0
_EDGE: Final = 0.08
_FROM_ZERO: Final = 0.35
"""The scale begins at 0 where the least sum is less than this share of the greatest."""
_THIN: Final = 2.0
_MOST_TICKS: Final = 5


class Bar(msgspec.Struct, frozen=True):
    """A stretch of a row."""

    x: float
    width: float


class Row(msgspec.Struct, frozen=True):
    """A term, or the result of a side."""

    kind: str
    """first, more, less or result."""
    y: float
    name: str
    shown: str
    of: str
    of_shown: str
    size: str
    bar: Bar | None
    unknown: Bar | None
    """Where a term that is not known to its end may lead."""


class Tick(msgspec.Struct, frozen=True):
    """A marked value of the axis."""

    x: float
    label: str


class WaterfallDrawing(msgspec.Struct, frozen=True):
    """All that is drawn of one account."""

    height: float
    bottom: float
    left: float
    right: float
    rows: tuple[Row, ...]
    ticks: tuple[Tick, ...]
    have: float | None
    """Where the line of what there is stands."""
    need: float | None
    gap: tuple[float, float] | None
    lost: bool
    margin: str
    says: str


def draw_waterfall(judgement: Judgement) -> WaterfallDrawing | None:
    """The picture of an account; None where a judgement has none."""
    measure = judgement.measure
    if measure is None or not judgement.account:
        return None
    parts = sides(judgement)
    scale = _scale(parts)
    if scale is None:
        return None
    rows: list[Row] = []
    for side in parts:
        rows += _rows(side, measure, scale, first=len(rows))
    bottom = _TOP + _ROW * (len(rows) + 1)
    have, need = (scale.at(value) if math.isfinite(value) else None for value in (measure.have, measure.need))
    return WaterfallDrawing(
        height=bottom + _AXIS, bottom=bottom, left=_LEFT, right=_RIGHT, rows=tuple(rows),
        ticks=tuple(_ticks(scale, measure.dimension)), have=have, need=need,
        gap=None if have is None or need is None else (need, have), lost=measure.margin < 0.0,
        margin=margin_words(judgement),
        says=f"Account of {judgement.rule} of {judgement.subject}: {measure.text()}, margin {margin_words(judgement)}",
    )  # fmt: skip


def _sums(side: Side) -> list[float]:
    """The sum after each term, as far as the terms have an end; the result alone where there are none."""
    found, total = [], 0.0
    for line in side.lines:
        total += line.value if math.isfinite(line.value) else 0.0
        found.append(total)
    return found or ([side.value] if math.isfinite(side.value) else [])


def _scale(parts: Sequence[Side]) -> Linear | None:
    values = [value for side in parts for value in _sums(side)]
    values += [side.value for side in parts if math.isfinite(side.value)]
    if not values:
        return None
    low, high = min(values), max(values)
    if 0.0 < low < _FROM_ZERO * high:
        low = 0.0
    room = _EDGE * (high - low or abs(high) or 1.0)
    return Linear(low if low == 0.0 else low - room, high + room, _LEFT, _RIGHT)


def _rows(side: Side, measure: Measure, scale: Linear, *, first: int) -> Iterator[Row]:
    harm = 1.0 if (side.name == "need") == (measure.relation is Relation.AT_LEAST) else -1.0
    base = min(max(0.0, scale.low), scale.high)
    before = base
    for number, (line, after) in enumerate(zip(side.lines, _sums(side), strict=False)):
        kind = "first" if number == 0 else "less" if sign(line) == "-" else "more"
        bar = _bar(scale, before, after) if math.isfinite(line.value) else None
        name = line.name if number == 0 and line.value >= 0.0 else f"{sign(line)} {line.name}"
        yield Row(
            kind, _TOP + _ROW * (first + number), name, shortened(name, width=_LEFT - 14.0, size=13.0), source(line),
            shortened(source(line), width=_LEFT - 14.0, size=11.0), line_text(line, measure.dimension), bar,
            _unknown(scale, line, after, harm),
        )  # fmt: skip
        before = after
    number = first + len(side.lines)
    bar = _bar(scale, base, side.value) if math.isfinite(side.value) else None
    yield Row("result", _TOP + _ROW * number, side.word, side.word, "", "", side.text, bar, None)


def _bar(scale: Linear, start: float, end: float) -> Bar:
    x1, x2 = sorted((scale.at(start), scale.at(end)))
    if x2 - x1 < _THIN:
        x1, x2 = (x1 + x2 - _THIN) / 2, (x1 + x2 + _THIN) / 2
    return Bar(round(x1, 2), round(x2 - x1, 2))


def _unknown(scale: Linear, line: Line, after: float, harm: float) -> Bar | None:
    """The stretch from where a term leads as it is told, to where it may lead at its least favourable."""
    if not line.waits:
        return None
    end = scale.high if harm > 0.0 else scale.low
    if line.sure is not None and math.isfinite(line.sure) and math.isfinite(line.value):
        end = after + line.sure - line.value
    return _bar(scale, after, end)


def _ticks(scale: Linear, dimension: Dimension) -> Iterator[Tick]:
    for value in round_values(low=scale.low, high=scale.high, most=_MOST_TICKS):
        yield Tick(scale.at(value), show(value, difference(dimension)))
