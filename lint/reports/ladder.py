"""The ladder of a rail: its levels to scale, highest first, in characters that every terminal has."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import TripLevel, falling_window, rising_window
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.quantity import Dimension, Voltage, show
from tidegate.lint.reports.columns import wrapped
from tidegate.lint.reports.plain_text import plain

_V: Final = Dimension.VOLTAGE
_MOST_LABEL: Final = 18
_LEAST_BAR: Final = 12
_MARKS: Final = {"damage": "|", "service": "=", "sign-off": "-"}
_TRIP_MARK: Final = "#"


class Rung(msgspec.Struct, frozen=True):
    """One level with its spread, in V, and the slack to what it must keep clear of, where both are known."""

    name: str
    window: Window
    slack_v: float | None = None
    slack_to: str = ""
    open: bool = False
    """Whether the level lies at least so far apart as the window says, and perhaps further: errors are missing."""


class _TripLevel(msgspec.Struct, frozen=True):
    """A trip level: its name, the role of its detector with rising or falling, and where it lies."""

    name: str
    role: str
    window: Window
    open: bool


class Ladder(msgspec.Struct, frozen=True):
    """The levels of one rail, highest first, and the facts that keep others from being drawn."""

    rail: str
    rungs: tuple[Rung, ...]
    missing: tuple[str, ...]


def ladders(description: Description, graph: Graph) -> Iterator[Ladder]:
    """The ladder of each rail that a detector watches."""
    watching: dict[str, list[Comparator]] = {}
    for comparator in description.comparators.values():
        watching.setdefault(comparator.watches, []).append(comparator)
    for rail in description.rails.values():
        if rail.id in watching:
            yield _ladder(description, graph, rail, watching[rail.id])


def ladder_lines(ladder: Ladder, *, width: int) -> Iterator[str]:
    """The ladder as text, at most ``width`` columns wide."""
    missing = f"not given: {_first(ladder.missing)}" if ladder.missing else ""
    if len(ladder.rungs) < 2:
        yield from wrapped(plain(f"{ladder.rail}: no ladder, {missing or 'too few levels'}"), max(width, _LEAST_BAR))
        return
    labels = _even(_shortened(rung.name) for rung in ladder.rungs)
    ranges = _even(range_text(rung) for rung in ladder.rungs)
    slacks = [_slack(rung) for rung in ladder.rungs]
    columns = width - len(labels[0]) - len(ranges[0]) - max(map(len, slacks)) - 8  # two before, two between each
    if columns < _LEAST_BAR:
        yield plain(f"{ladder.rail}, no room to draw it to scale")
        for cells in zip(labels, ranges, slacks, strict=True):
            yield from _listed(*cells, width=width)
    else:
        yield from _drawn(ladder, labels, ranges, slacks, columns=columns)
    if missing:
        yield from (f"  {line}" for line in wrapped(plain(missing), max(width - 2, _LEAST_BAR)))


def _even(texts: Iterable[str]) -> list[str]:
    """The texts, all as long as the longest."""
    found = list(texts)
    longest = max(map(len, found))
    return [text.ljust(longest) for text in found]


def _listed(label: str, shown: str, slack: str, *, width: int) -> Iterator[str]:
    line = f"  {label}  {shown}  {slack}".rstrip()
    if len(line) <= width:
        yield plain(line)
        return
    indent = min(len(label) + 4, max(width - _LEAST_BAR, 4))
    for number, part in enumerate(wrapped(plain(shown.rstrip()), max(width - indent, _LEAST_BAR))):
        yield f"{plain(f'  {label}').ljust(indent) if number == 0 else ' ' * indent}{part}".rstrip()
    yield from (f"    {part}" for part in wrapped(plain(slack), max(width - 4, _LEAST_BAR)))


def _drawn(
    ladder: Ladder, labels: Sequence[str], ranges: Sequence[str], slacks: Sequence[str], *, columns: int
) -> Iterator[str]:
    low_v = min(rung.window.least_v for rung in ladder.rungs)
    high_v = max(rung.window.most_v for rung in ladder.rungs)
    step_v = (high_v - low_v) / (columns - 1)
    yield plain(f"{ladder.rail}, to scale, {show(step_v, _V, digits=2)} a column")
    for rung, label, shown, slack in zip(ladder.rungs, labels, ranges, slacks, strict=True):
        bar = _bar(rung, low_v=low_v, step_v=step_v).ljust(columns)
        yield plain(f"  {label}  {bar}  {shown}  {slack}".rstrip())


def _first(facts: tuple[str, ...]) -> str:
    """The first of the facts, and how many more there are: the report names them all elsewhere."""
    return facts[0] if len(facts) == 1 else f"{facts[0]} and {len(facts) - 1} more"


def _ladder(description: Description, graph: Graph, rail: Rail, detectors: Iterable[Comparator]) -> Ladder:
    missing: list[str] = []
    levels: list[_TripLevel] = []
    for detector in detectors:
        for which, find in (("rising", rising_window), ("falling", falling_window)):
            found = _known_part(description, graph, detector, find)
            missing += found.missing
            if found.window is not None:
                level = f"{detector.id} {which}", f"{detector.role} {which}"
                levels.append(_TripLevel(*level, found.window, bool(found.missing)))
    ranges = {
        name: _given(rail, fact, span, missing)
        for name, fact, span in (
            ("damage", "damage", rail.damage), ("sign-off", "guaranteed", rail.guaranteed),
            ("service", "delivered", rail.delivered),
        )
    }  # fmt: skip
    rungs = [Rung(name, window) for name, window in ranges.items() if window is not None]
    rungs = [_damage(rung, levels, ranges) if rung.name == "damage" else rung for rung in rungs]
    rungs += [Rung(one.name, one.window, *_clear_of(one, levels, ranges), one.open) for one in levels]
    rungs.sort(key=lambda rung: -(rung.window.least_v + rung.window.most_v))
    return Ladder(rail.id, tuple(rungs), tuple(dict.fromkeys(missing)))


class _Known(msgspec.Struct, frozen=True):
    """Where a level lies as far as it is told, and what is missing for the rest."""

    window: Window | None
    missing: tuple[str, ...]


def _known_part(
    description: Description, graph: Graph, detector: Comparator, find: Callable[[Case, Comparator], TripLevel]
) -> _Known:
    """A level at the best corner: it reaches at least from one end to the other; None where nothing is told of it."""
    case = Case(
        subject=detector, rule="", level=Level.NOTE, description=description, graph=graph, reading=Reading(Corner.BEST)
    )
    try:
        level = find(case, detector)
        ends_v = level.most_v, level.least_v  # at the best corner the least end is the greatest that it may be
    except (MissingFactsError, DomainError) as error:
        lacks = error.missing if isinstance(error, MissingFactsError) else case.reading.lacking
        return _Known(None, lacks or (f"{detector.id} ({error})",))
    low_v, high_v = min(ends_v), max(ends_v)
    told = math.isfinite(low_v) and math.isfinite(high_v)
    return _Known(Window(low_v, high_v) if told else None, case.reading.lacking)


def _given(rail: Rail, fact: str, span: Voltage | None, missing: list[str]) -> Window | None:
    """A range of the rail; damage begins at the least level that is given."""
    least_v = None if span is None else span.least
    most_v = least_v if fact == "damage" else None if span is None else span.most
    if least_v is None or most_v is None:
        missing.append(rail.fact(fact))
        return None
    return Window(least_v, most_v)


def _damage(rung: Rung, levels: Sequence[_TripLevel], ranges: Mapping[str, Window | None]) -> Rung:
    over = [level for level in levels if level.role == "over_voltage rising"]
    if over:
        nearest = max(over, key=lambda level: level.window.most_v)
        return Rung(rung.name, rung.window, rung.window.least_v - nearest.window.most_v, nearest.name)
    signed_off = ranges["sign-off"]
    if signed_off is None:
        return rung
    return Rung(rung.name, rung.window, rung.window.least_v - signed_off.most_v, "sign-off")


def _clear_of(
    level: _TripLevel, levels: Sequence[_TripLevel], ranges: Mapping[str, Window | None]
) -> tuple[float | None, str]:
    """The slack of a trip level to its neighbour in the order, and that neighbour."""
    service, signed_off, window = ranges["service"], ranges["sign-off"], level.window
    under = [other for other in levels if other.role == "under_voltage rising"]
    if level.role == "power_on rising" and under:
        nearest = min(under, key=lambda other: other.window.least_v)
        return nearest.window.least_v - window.most_v, nearest.name
    if level.role in ("under_voltage rising", "power_on rising") and service is not None:
        return service.least_v - window.most_v, "service"
    if level.role == "over_voltage falling" and service is not None:
        return window.least_v - service.most_v, "service"
    if level.role == "under_voltage falling" and signed_off is not None:
        return window.least_v - signed_off.least_v, "sign-off"
    if level.role == "over_voltage rising" and signed_off is not None:
        return signed_off.most_v - window.most_v, "sign-off"
    return None, ""


def _bar(rung: Rung, *, low_v: float, step_v: float) -> str:
    """The rung at its place; what is narrower than a column has one."""
    start = round((rung.window.least_v - low_v) / step_v) if step_v else 0
    end = round((rung.window.most_v - low_v) / step_v) if step_v else 0
    mark = _MARKS.get(rung.name, _TRIP_MARK)
    if mark in "-=" and end > start:
        return f"{' ' * start}[{mark * (end - start - 1)}]"
    return " " * start + mark * (end - start + 1)


def _shortened(name: str) -> str:
    if len(name) <= _MOST_LABEL:
        return name
    word, _, which = name.rpartition(" ")
    return f"{word[: _MOST_LABEL - len(which) - 3]}.. {which}"


def range_text(rung: Rung) -> str:
    """The window of a rung; of one that is open, with a mark."""
    text = _window_text(rung.window)
    return f"{text} or beyond" if rung.open else text


def _window_text(window: Window) -> str:
    least, most = (show(end_v, _V) for end_v in (window.least_v, window.most_v))
    if least == most:
        return least
    number, _, unit = least.partition(" ")
    return f"{number} to {most}" if most.endswith(f" {unit}") else f"{least} to {most}"


def _slack(rung: Rung) -> str:
    if rung.slack_v is None:
        return ""
    size = f"{'-' if rung.slack_v < 0.0 else '+'}{show(abs(rung.slack_v), _V, digits=3)}"
    return f"{size}{' at most' if rung.open else ''} to {_shortened(rung.slack_to)}"
