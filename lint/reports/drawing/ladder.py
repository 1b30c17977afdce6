"""Geometry of a rail's ladder: the whole rail as a staff, and a close-up of where its levels crowd."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final

import msgspec

from tidegate.lint.physics.trip_window import Window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.drawing.scale import Linear, round_values, shortened, text_width
from tidegate.lint.reports.ladder import Ladder, Rung, range_text

WIDTH: Final = 960.0
_LEFT: Final = 172.0
_RIGHT: Final = 742.0
_ROW: Final = 34.0
_STAFF_ROW: Final = 7.0
_STAFF_TOP: Final = 22.0
_FAN: Final = 40.0
_AXIS: Final = 26.0
_SMALL: Final = 12.0
_V: Final = Dimension.VOLTAGE
_RANGES: Final = {"damage": "damage", "sign-off": "signoff", "service": "service"}
_CLOSE_UP_BELOW: Final = 0.7
"""A close-up is drawn where the crowded part is less than this share of the whole."""
_THIN: Final = 3.0


class Tick(msgspec.Struct, frozen=True):
    """A marked value of the axis."""

    x: float
    label: str


class Bar(msgspec.Struct, frozen=True):
    """A level with its spread; ``off`` tells on which side of the picture it lies, where it lies on none of it."""

    x: float
    width: float
    off: str = ""


class Gap(msgspec.Struct, frozen=True):
    """The slack of a level, drawn between the two edges it is measured between."""

    x1: float
    x2: float
    label: str
    lost: bool


class Row(msgspec.Struct, frozen=True):
    """One rung."""

    name: str
    shown: str
    element: str
    kind: str
    y: float
    bar: Bar
    staff: Bar
    staff_y: float
    values: str
    gap: Gap | None


class Band(msgspec.Struct, frozen=True):
    """A range of the rail that lies behind all rows."""

    kind: str
    x: float
    width: float


class LadderDrawing(msgspec.Struct, frozen=True):
    """All that is drawn of one rail."""

    rail: str
    height: float
    rows: tuple[Row, ...]
    bands: tuple[Band, ...]
    ticks: tuple[Tick, ...]
    staff_ticks: tuple[Tick, ...]
    fan: tuple[float, float] | None
    """Ends of the close-up on the staff; None where the whole rail is drawn at once."""
    top: float
    bottom: float
    left: float
    right: float
    staff_bottom: float
    missing: tuple[str, ...]
    says: str


def draw_ladder(ladder: Ladder) -> LadderDrawing | None:
    """The picture of a ladder; None where there are too few levels to draw any."""
    if len(ladder.rungs) < 2:
        return None
    whole = Linear(0.0, 1.06 * max(rung.window.most_v for rung in ladder.rungs), _LEFT, _RIGHT)
    close = _crowded(ladder.rungs, whole)
    main = close or whole
    staff_bottom = _STAFF_TOP + _STAFF_ROW * len(ladder.rungs) if close else 0.0
    top = staff_bottom + _AXIS + _FAN if close else 24.0
    rows = tuple(_rows(ladder.rungs, whole, main, top))
    bottom = top + _ROW * len(rows)
    return LadderDrawing(
        rail=ladder.rail,
        height=bottom + _AXIS + 6.0,
        rows=rows,
        bands=tuple(_bands(ladder.rungs, main)),
        ticks=_ticks(main, 8),
        staff_ticks=_ticks(whole, 8) if close else (),
        fan=(whole.at(close.low), whole.at(close.high)) if close else None,
        top=top,
        bottom=bottom,
        left=_LEFT,
        right=_RIGHT,
        staff_bottom=staff_bottom,
        missing=ladder.missing,
        says=says(ladder),
    )


def says(ladder: Ladder) -> str:
    """The ladder in words, for who cannot see it."""
    parts = []
    for rung in ladder.rungs:
        slack = f", slack {_slack_text(rung)}" if rung.slack_v is not None else ""
        parts.append(f"{rung.name} {range_text(rung)}{slack}")
    return f"Levels of {ladder.rail}, highest first: {'; '.join(parts)}."


def _crowded(rungs: Sequence[Rung], whole: Linear) -> Linear | None:
    """The scale of the close-up: sign-off and service, and the trip levels that lie near them."""
    ranges = [rung.window for rung in rungs if rung.name in ("sign-off", "service")]
    if not ranges:
        return None
    low_v = min(window.least_v for window in ranges)
    high_v = max(window.most_v for window in ranges)
    near_v = 0.35 * (high_v - low_v)
    for rung in rungs:
        window = rung.window
        if rung.name != "damage" and window.least_v >= low_v - near_v and window.most_v <= high_v + near_v:
            low_v, high_v = min(low_v, window.least_v), max(high_v, window.most_v)
    room_v = 0.06 * (high_v - low_v)
    low_v, high_v = max(low_v - room_v, whole.low), min(high_v + room_v, whole.high)
    if high_v - low_v > _CLOSE_UP_BELOW * (whole.high - whole.low) or high_v <= low_v:
        return None
    return Linear(low_v, high_v, _LEFT, _RIGHT)


def _rows(rungs: Sequence[Rung], whole: Linear, main: Linear, top: float) -> Iterator[Row]:
    by_name = {rung.name: rung.window for rung in rungs}
    for number, rung in enumerate(rungs):
        kind = _RANGES.get(rung.name, "trip")
        yield Row(
            name=rung.name,
            shown=shortened(rung.name, width=_LEFT - 24.0, size=13.0),
            element=rung.name.rpartition(" ")[0] if kind == "trip" else "",
            kind=kind,
            y=top + _ROW * number,
            bar=_bar(rung, main),
            staff=_bar(rung, whole),
            staff_y=_STAFF_TOP + _STAFF_ROW * number,
            values=range_text(rung),
            gap=_gap(rung, by_name, main),
        )


def _bar(rung: Rung, scale: Linear) -> Bar:
    window = rung.window
    most_v = scale.high if rung.name == "damage" else window.most_v
    if window.least_v > scale.high:
        return Bar(scale.end, 0.0, "right")
    if most_v < scale.low:
        return Bar(scale.start, 0.0, "left")
    x, end = scale.at(window.least_v), scale.at(most_v)
    if end - x < _THIN:
        x, end = (x + end - _THIN) / 2, (x + end + _THIN) / 2
    return Bar(round(x, 2), round(end - x, 2))


def _gap(rung: Rung, by_name: dict[str, Window], scale: Linear) -> Gap | None:
    """Between which two edges the slack lies: those that are as far apart as it is."""
    if rung.slack_v is None:
        return None
    own = (rung.window.least_v, rung.window.most_v)
    other = by_name[rung.slack_to]
    edges = [(mine, theirs) for mine in own for theirs in (other.least_v, other.most_v)]
    mine, theirs = min(edges, key=lambda pair: abs(abs(pair[0] - pair[1]) - abs(rung.slack_v or 0.0)))
    return Gap(scale.at(mine), scale.at(theirs), _slack_text(rung), rung.slack_v < 0.0)


def _slack_text(rung: Rung) -> str:
    assert rung.slack_v is not None
    sign = "-" if rung.slack_v < 0.0 else "+"
    return f"{sign}{show(abs(rung.slack_v), _V, digits=3)}{' at most' if rung.open else ''} to {rung.slack_to}"


def _bands(rungs: Sequence[Rung], scale: Linear) -> Iterator[Band]:
    for rung in sorted(rungs, key=lambda rung: rung.name != "sign-off"):
        if rung.name in ("sign-off", "service"):
            x, end = scale.at(rung.window.least_v), scale.at(rung.window.most_v)
            yield Band(_RANGES[rung.name], x, round(end - x, 2))


def _ticks(scale: Linear, most: int) -> tuple[Tick, ...]:
    ticks = [Tick(scale.at(v), show(v, _V)) for v in round_values(low=scale.low, high=scale.high, most=most)]
    widest = max((text_width(tick.label, _SMALL) for tick in ticks), default=0.0)
    if len(ticks) > 1 and ticks[1].x - ticks[0].x < widest + 6.0:
        return tuple(ticks[::2])
    return tuple(ticks)
