"""Geometry of a scenario: a row for each element, what it may be at each time, earliest and latest."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from itertools import chain, pairwise
from typing import Final

import msgspec

from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.drawing.scale import Stretched, kept_apart, shortened, stretched, text_width
from tidegate.lint.reports.order import NOUNS
from tidegate.lint.timing.evaluate import LoadState, State
from tidegate.lint.timing.interval import FOREVER_S, Times, is_in, outside
from tidegate.lint.timing.slack import release_slack
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import GivenSupply, MadeSupply, Supply
from tidegate.lint.timing.timeline import Timeline, Timelines

WIDTH: Final = 960.0
MOST_ROWS: Final = 48
"""Most elements that one scenario shows; of more, detectors and what they lean on are left out first."""
_LEFT: Final = 172.0
_RIGHT: Final = 790.0
_TOP: Final = 30.0
_ROW: Final = 18.0
_RAIL_ROW: Final = 32.0
_GROUP: Final = 16.0
_POWER: Final = 0.4
_SMALL: Final = 12.0
_T: Final = Dimension.DURATION

_GROUPS: Final = (
    ("rails", "rails"), ("references", "references"), ("biases", "bias"), ("comparators", "detectors"),
    ("output_stages", "output stages"), ("resets", "reset nets"), ("loads", "loads"),
)  # fmt: skip
_FIRST_SHOWN: Final = ("rails", "resets", "loads", "comparators", "references", "output_stages", "biases")


class Piece(msgspec.Struct, frozen=True):
    """A stretch of time in which an element may be the same things."""

    kind: str
    """asserted, held, released, either, unclear, unknown (a reset net alone); or on, off, maybe."""
    x: float
    width: float


class Lane(msgspec.Struct, frozen=True):
    """A line of pieces in a row; a load has one for being ready and one for running."""

    name: str
    y: float
    height: float
    pieces: tuple[Piece, ...]


class Wave(msgspec.Struct, frozen=True):
    """A rail's course, as the points of a line; the late one where it differs from the early one."""

    points: str
    late: bool


class Row(msgspec.Struct, frozen=True):
    """One element."""

    element: str
    shown: str
    y: float
    height: float
    lanes: tuple[Lane, ...]
    waves: tuple[Wave, ...]
    note: str
    lost: bool
    says: str


class Group(msgspec.Struct, frozen=True):
    """A heading between rows."""

    name: str
    y: float


class Tick(msgspec.Struct, frozen=True):
    """A time on the axis; the label is empty where it has no room."""

    x: float
    label: str


class TimelineDrawing(msgspec.Struct, frozen=True):
    """All that is drawn of one scenario."""

    name: str
    about: str
    scene: str
    height: float
    left: float
    right: float
    top: float
    bottom: float
    rows: tuple[Row, ...]
    groups: tuple[Group, ...]
    ticks: tuple[Tick, ...]
    left_out: int


def draw_timeline(line: Timeline, lines: Timelines) -> TimelineDrawing | None:
    """The picture of a scenario; None where nothing in it happens at any time."""
    chosen, left_out = _chosen(line, lines)
    scale = _scale(line, chosen)
    if scale is None:
        return None
    rows: list[Row] = []
    groups: list[Group] = []
    y = _TOP
    for section, heading in _GROUPS:
        names = [name for name in chosen if lines.graph.elements[name].section == section]
        if names:
            groups.append(Group(heading, y + 12.0))
            y += _GROUP
        for name in names:
            height = _RAIL_ROW if section == "rails" else _ROW
            rows.append(_row(name, NOUNS[section], line, scale, y=y, height=height))
            y += height
    return TimelineDrawing(
        name=line.scenario.name, about=line.scenario.about, scene=line.scenario.scene.value, height=y + 26.0,
        left=_LEFT, right=_RIGHT, top=_TOP, bottom=y + 4.0, rows=tuple(rows), groups=tuple(groups),
        ticks=_ticks(line, chosen, scale), left_out=left_out,
    )  # fmt: skip


def _chosen(line: Timeline, lines: Timelines) -> tuple[list[str], int]:
    by_section: dict[str, list[str]] = {}
    for name, element in lines.graph.elements.items():
        if name in line.states and element.section in _FIRST_SHOWN:
            by_section.setdefault(element.section, []).append(name)
    found = list(chain.from_iterable(by_section.get(section, ()) for section in _FIRST_SHOWN))
    return found[:MOST_ROWS], max(len(found) - MOST_ROWS, 0)


def _scale(line: Timeline, chosen: Iterable[str]) -> Stretched | None:
    times = {at_s for name in chosen for at_s in _event_times(line.states[name]) if abs(at_s) < FOREVER_S}
    if not times:
        return None
    first_s, last_s = min(0.0, *times), max(times)
    room_s = 0.06 * ((last_s - first_s) or 1.0)
    return stretched([first_s - room_s / 8, *times, last_s + room_s], start=_LEFT, end=_RIGHT, power=_POWER)


def _event_times(state: State) -> Iterator[float]:
    if isinstance(state, Supply):
        for wave in _waves_of(state):
            yield from (at_s for at_s, _ in wave)
        return
    sets: Sequence[Times] = _times_of(state)
    for times in sets:
        for start_s, end_s in times:
            yield start_s
            yield end_s


def _times_of(state: State) -> Sequence[Times]:
    if isinstance(state, Decision):
        return (state.may_assert, state.may_release, state.may_be_unknown, state.may_be_held)
    if isinstance(state, On):
        return (state.may_be_on, state.may_be_off)
    if isinstance(state, LoadState):
        return (*state.ready, *state.running)
    return ()


def _waves_of(supply: Supply) -> list[list[tuple[float, float]]]:
    """The early course of a rail, and the late one where it is another."""
    if isinstance(supply, GivenSupply):
        early = [(at_s + supply.least_s, level_v) for at_s, level_v in supply.waveform.points]
        late = [(at_s + supply.most_s, level_v) for at_s, level_v in supply.waveform.points]
        return [early] if early == late else [early, late]
    assert isinstance(supply, MadeSupply)
    ramp, maker = supply.ramp, supply.maker
    return [
        _made(maker.may_be_on, ramp.nominal_v, (ramp.delay.least, ramp.rise.least, ramp.fall.least)),
        _made(outside(maker.may_be_off), ramp.nominal_v, (ramp.delay.most, ramp.rise.most, ramp.fall.most)),
    ]


def _made(on: Times, nominal_v: float, takes_s: tuple[float, float, float]) -> list[tuple[float, float]]:
    """The course of a rail that is made while something is on: it begins after a time, rises in one, falls in one."""
    delay_s, rise_s, fall_s = takes_s
    points: list[tuple[float, float]] = []
    for start_s, end_s in on:
        if start_s == -FOREVER_S:
            points.append((-FOREVER_S, nominal_v))
        else:
            points += [(start_s + delay_s, 0.0), (start_s + delay_s + rise_s, nominal_v)]
        if end_s < FOREVER_S:
            points += [(end_s, nominal_v), (end_s + fall_s, 0.0)]
    return sorted(points, key=lambda point: point[0])


def _row(name: str, noun: str, line: Timeline, scale: Stretched, *, y: float, height: float) -> Row:
    state = line.states[name]
    lanes: tuple[Lane, ...] = ()
    waves: tuple[Wave, ...] = ()
    note, lost = "", False
    if isinstance(state, Supply):
        waves = tuple(_wave(points, scale, y, height, late=bool(n)) for n, points in enumerate(_waves_of(state)))
    elif isinstance(state, Decision):
        lanes = (
            Lane(
                "", y + 3.0, height - 6.0, _decided(state, scale, "unknown" if noun == NOUNS["resets"] else "unclear")
            ),
        )
    elif isinstance(state, On):
        lanes = (Lane("", y + 3.0, height - 6.0, _is_on(state, scale)),)
    elif isinstance(state, LoadState):
        half = (height - 5.0) / 2
        lanes = (
            Lane("ready", y + 2.0, half, _is_on(state.ready, scale)),
            Lane("running", y + 3.0 + half, half, _is_on(state.running, scale)),
        )
        slack = release_slack(line, name)
        if slack is not None and abs(slack.slack_s) < FOREVER_S:
            lost = slack.slack_s < 0.0
            note = f"{'-' if lost else '+'}{show(abs(slack.slack_s), _T, digits=3)} to release"
    shown = shortened(name, width=_LEFT - 24.0, size=13.0)
    return Row(name, shown, y, height, lanes, waves, note, lost, _says(name, noun, state, note))


def _wave(points: Sequence[tuple[float, float]], scale: Stretched, y: float, height: float, *, late: bool) -> Wave:
    most_v = max((level_v for _, level_v in points), default=0.0) or 1.0
    low_y, room = y + height - 5.0, height - 10.0
    if not points:
        return Wave(f"{scale.places[0]:g},{low_y:g} {scale.places[-1]:g},{low_y:g}", late)
    knots = [knot for knot in scale.knots if points[0][0] < knot < points[-1][0]]
    times = sorted({*knots, *(at_s for at_s, _ in points if abs(at_s) < FOREVER_S)})
    times = [scale.knots[0], *times, scale.knots[-1]]
    shown: list[str] = []
    for at_s in times:
        for level_v in _levels_v(points, at_s):
            place = f"{round(scale.at(at_s), 1):g},{round(low_y - room * level_v / most_v, 1):g}"
            if not shown or shown[-1] != place:
                shown.append(place)
    return Wave(" ".join(shown), late)


def _levels_v(points: Sequence[tuple[float, float]], at_s: float) -> Sequence[float]:
    """The level at a time; at a step, the one before it and the one after it."""
    here = [level_v for point_s, level_v in points if point_s == at_s]
    if here:
        return here
    before = [point for point in points if point[0] < at_s]
    after = [point for point in points if point[0] > at_s]
    if not before:
        return (after[0][1],)
    if not after or before[-1][0] == -FOREVER_S:
        return (before[-1][1],)
    (from_s, from_v), (to_s, to_v) = before[-1], after[0]
    return (from_v + (to_v - from_v) * (at_s - from_s) / (to_s - from_s),)


def _decided(state: Decision, scale: Stretched, unknown: str) -> tuple[Piece, ...]:
    def kind(at_s: float) -> str:
        if is_in(state.may_be_unknown, at_s):
            return unknown
        asserts, releases = is_in(state.may_assert, at_s), is_in(state.may_release, at_s)
        if asserts and releases:
            return "either"
        if releases:
            return "released"
        return "held" if is_in(state.may_be_held, at_s) else "asserted"

    return _pieces(_times_of(state), kind, scale)


def _is_on(state: On, scale: Stretched) -> tuple[Piece, ...]:
    def kind(at_s: float) -> str:
        on, off = is_in(state.may_be_on, at_s), is_in(state.may_be_off, at_s)
        return "maybe" if on and off else "on" if on else "off"

    return _pieces((state.may_be_on, state.may_be_off), kind, scale)


def _pieces(sets: Iterable[Times], kind: Callable[[float], str], scale: Stretched) -> tuple[Piece, ...]:
    """Stretches between the times at which anything changes, those alike made one, those too short to see left out."""
    first_s, last_s = scale.knots[0], scale.knots[-1]
    inner = {at_s for times in sets for span in times for at_s in span if first_s < at_s < last_s}
    ends = sorted({first_s, last_s, *inner})
    found: list[tuple[str, float, float]] = []
    for start_s, end_s in pairwise(ends):
        what = kind((start_s + end_s) / 2)
        if found and found[-1][0] == what:
            found[-1] = (what, found[-1][1], scale.at(end_s))
        else:
            found.append((what, scale.at(start_s), scale.at(end_s)))
    return tuple(Piece(what, round(x, 1), round(end - x, 1)) for what, x, end in found if end - x >= 0.05)


def _ticks(line: Timeline, chosen: Sequence[str], scale: Stretched) -> tuple[Tick, ...]:
    """Times of the axis: where reset may first and must last be released go before others."""
    wanted: list[float] = [0.0]
    for kinds in ((Decision,), (Supply,), (LoadState,), (On,)):
        for name in reversed(chosen) if kinds == (Decision,) else chosen:
            state = line.states[name]
            if isinstance(state, kinds):
                wanted += [at_s for at_s in _event_times(state) if abs(at_s) < FOREVER_S]
    times = [at_s for at_s in dict.fromkeys(wanted) if scale.knots[0] <= at_s <= scale.knots[-1]]
    labels = [show(at_s, _T, digits=3) for at_s in times]
    places = [(scale.at(at_s), text_width(label, _SMALL)) for at_s, label in zip(times, labels, strict=True)]
    inside = [
        number for number, (middle, width) in enumerate(places) if middle + width / 2 <= _RIGHT + 40.0
    ]  # fmt: skip
    kept = kept_apart([places[number] for number in inside], gap=6.0)
    shown = [inside[number] for number in kept]
    return tuple(sorted((Tick(places[number][0], labels[number]) for number in shown), key=lambda tick: tick.x))


def _says(name: str, noun: str, state: State, note: str) -> str:
    """A row in words, for who cannot see it."""
    if isinstance(state, Decision):
        first = next((start_s for start_s, _ in state.may_release), None)
        said = "never released" if first is None else f"released {_when(first)} at the earliest"
        last = max((end_s for _, end_s in state.may_assert), default=-FOREVER_S)
        if first is not None:
            said += ", always at the start" if last == -FOREVER_S else f", surely {_when(last)}"
        if state.may_be_unknown:
            said += "; may be unknown"
    elif isinstance(state, On | LoadState):
        on = state if isinstance(state, On) else state.ready
        word = "on" if isinstance(state, On) else "ready"
        first = next((start_s for start_s, _ in on.may_be_on), None)
        last = max((end_s for _, end_s in on.may_be_off), default=-FOREVER_S)
        said = f"never {word}" if first is None else f"{word} {_when(first)} at the earliest, surely {_when(last)}"
    else:
        said = "course of the supply"
    return f"{name}, {noun}: {said}{f'; {note}' if note else ''}"


def _when(at_s: float) -> str:
    if at_s == -FOREVER_S:
        return "from the start"
    if at_s == FOREVER_S:
        return "at no known time"
    return f"at {show(at_s, _T, digits=3)}"
