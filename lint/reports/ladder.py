"""The ladder of a rail: its levels to scale, highest first, in characters that every terminal has."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import Unknown, ask
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.quantity import Dimension, Voltage, show
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


class _TripLevel(msgspec.Struct, frozen=True):
    """A trip level: its name, the role of its detector with rising or falling, and where it lies."""

    name: str
    role: str
    window: Window


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
        yield plain(f"{ladder.rail}: no ladder, {missing or 'too few levels'}")
        return
    labels = _even(_shortened(rung.name) for rung in ladder.rungs)
    ranges = _even(_range(rung.window) for rung in ladder.rungs)
    slacks = [_slack(rung) for rung in ladder.rungs]
    columns = width - len(labels[0]) - len(ranges[0]) - max(map(len, slacks)) - 8  # two before, two between each
    if columns < _LEAST_BAR:
        yield plain(f"{ladder.rail}, no room to draw it to scale")
        for cells in zip(labels, ranges, slacks, strict=True):
            yield from _listed(*cells, width=width)
    else:
        yield from _drawn(ladder, labels, ranges, slacks, columns=columns)
    if missing:
        yield plain(f"  not drawn, {missing}")


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
    yield plain(f"  {label}  {shown}".rstrip())
    yield plain(f"    {slack}")


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
            window = _window(description, graph, detector, find)
            if isinstance(window, Unknown):
                missing += window.missing or (f"{detector.id} {which} ({window.problem})",)
            else:
                levels.append(_TripLevel(f"{detector.id} {which}", f"{detector.role} {which}", window))
    ranges = {
        name: _given(rail, fact, span, missing)
        for name, fact, span in (
            ("damage", "damage", rail.damage), ("sign-off", "guaranteed", rail.guaranteed),
            ("service", "delivered", rail.delivered),
        )
    }  # fmt: skip
    rungs = [Rung(name, window) for name, window in ranges.items() if window is not None]
    rungs = [_damage(rung, levels, ranges) if rung.name == "damage" else rung for rung in rungs]
    rungs += [Rung(level.name, level.window, *_clear_of(level, levels, ranges)) for level in levels]
    rungs.sort(key=lambda rung: -(rung.window.least_v + rung.window.most_v))
    return Ladder(rail.id, tuple(rungs), tuple(dict.fromkeys(missing)))


def _window(
    description: Description, graph: Graph, detector: Comparator, find: Callable[[Case, Comparator], Window]
) -> Window | Unknown:
    return ask(description, graph, detector, lambda case: find(case, as_shipped(case, detector)))


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


def _range(window: Window) -> str:
    least, most = (show(end_v, _V) for end_v in (window.least_v, window.most_v))
    if least == most:
        return least
    number, _, unit = least.partition(" ")
    return f"{number} to {most}" if most.endswith(f" {unit}") else f"{least} to {most}"


def _slack(rung: Rung) -> str:
    if rung.slack_v is None:
        return ""
    return f"{'-' if rung.slack_v < 0.0 else '+'}{show(abs(rung.slack_v), _V, digits=3)} to {_shortened(rung.slack_to)}"
