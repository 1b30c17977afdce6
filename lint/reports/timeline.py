"""Timelines drawn with characters: one row an element, told apart without colour, readable at 80 columns."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final, NamedTuple

from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.columns import wrapped
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.reports.time_axis import Column, TimeAxis, time_axis
from tidegate.lint.timing.evaluate import LoadState, State
from tidegate.lint.timing.interval import FOREVER_S, Times, last_arrival
from tidegate.lint.timing.parts import LoadPart
from tidegate.lint.timing.scenario import Scene
from tidegate.lint.timing.slack import Slack, assert_slack, release_slack, worst
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import GivenSupply, Supply
from tidegate.lint.timing.timeline import Timeline, Timelines

_NAME: Final = 15  # columns for names
_EDGES: Final = 21  # columns for the earliest and the latest time
_LEAST: Final = 24
_APART: Final = 14  # columns between two times of the head
_NO_TIME_S: Final = 1e-9  # an edge sooner than this after the start is shown at 0 s
_T: Final = Dimension.DURATION


class Signs(NamedTuple):
    """The characters of the states."""

    off: str
    on: str
    held: str
    asserted: str
    released: str
    unknown: str
    between: str
    levels: str
    """A rail from 0 V to nominal."""
    slack: str
    short: str


UNICODE: Final = Signs("·", "━", "▒", "█", "─", "?", "╱", " ▁▂▃▄▅▆▇█", "╌", "!")
ASCII: Final = Signs(".", "+", "=", "#", "-", "?", "/", "0123456789", "~", "!")


def signs_for(encoding: str | None) -> Signs:
    """Box and block characters where the stream's encoding carries them, ASCII where it does not."""
    try:
        "".join(UNICODE).encode(encoding or "ascii")
    except (UnicodeEncodeError, LookupError):
        return ASCII
    return UNICODE


def legend(signs: Signs) -> str:
    """What each character stands for, on two lines."""
    decisions = (
        (signs.held, "held"), (signs.asserted, "asserts"), (signs.released, "releases"), (signs.unknown, "unknown"),
    )  # fmt: skip
    edge = "between the earliest and the latest edge"
    others = ((signs.off, "off"), (signs.on, "up, valid or ready"), (signs.between, edge))
    return "\n".join("  ".join(f"{sign} {word}" for sign, word in words) for words in (decisions, others))


def timeline_lines(lines: Timelines, line: Timeline, *, width: int, signs: Signs) -> Iterator[str]:
    """A scenario: its name, its time axis, a row for each element, and the slack of each load."""
    room = max(width - _NAME - _EDGES, _LEAST)
    edges = [edge for edge in _edges(lines, line) if abs(edge) < FOREVER_S] or [0.0]
    axis = time_axis(edges, room)
    yield plain(line.scenario.name)
    yield from (f"  {row}" for row in wrapped(plain(line.scenario.about), width - 2))
    yield _head(axis, min(edges))
    for section in ("rails", "references", "biases", "comparators", "output_stages", "resets", "loads"):
        for name in getattr(lines.description, section):
            if name in lines.read.parts and not _has_no_scale(lines, name):
                state = line.states[name]
                row, arrival = _row(lines, name, state, axis, signs), arrival_text(lines, name, state)
                yield f"{_name(name)}{row}  {arrival}".rstrip()
                if section == "loads":
                    yield from _slack_rows(lines, line, name, axis, signs)
    for name in lines.description.rails:
        if _has_no_scale(lines, name):
            yield f"{_name(name)}not drawn without its nominal level"
    for name, lacks in lines.read.lacks.items():
        if lacks.whole:
            yield f"{_name(name)}not drawn without {', '.join(lacks.whole)}"
    for name, error in lines.read.refused.items():
        yield f"{_name(name)}not drawn: {error}"


def _has_no_scale(lines: Timelines, name: str) -> bool:
    """Whether it is a rail of which nobody knows when it is up."""
    return name in lines.description.rails and name not in lines.ramps.by_rail


def _name(name: str) -> str:
    short = name if len(name) < _NAME else f"{name[: _NAME - 3]}.."
    return plain(short).ljust(_NAME)


def _head(axis: TimeAxis, first_s: float) -> str:
    """Times along the axis, from its first edge on as many as fit."""
    text = ""
    first = axis.column(first_s)
    for column in range(first, axis.width, _APART):
        label = f"|{show(first_s if column == first else axis.column_at(column).start_s, _T, digits=3)}"
        if column + len(label) < axis.width:
            text = text.ljust(column) + label
    return " " * _NAME + text.ljust(axis.width) + "  earliest .. latest"


def _edges(lines: Timelines, line: Timeline) -> Iterator[float]:
    """Every time at which a state may change."""
    for name in lines.read.parts:
        if _has_no_scale(lines, name):
            continue
        state = line.states[name]
        if isinstance(state, GivenSupply):
            yield from (at_s + state.least_s for at_s, _ in state.waveform.points)
        for times in _times_of(lines, name, state):
            for start, end in times:
                yield start
                yield end


def _times_of(lines: Timelines, name: str, state: State) -> Sequence[Times]:
    match state:
        case LoadState():
            return (*state.ready, *state.reset)
        case Supply():
            return _up(lines, name, state)
        case _:
            return tuple(state)


def _up(lines: Timelines, name: str, supply: Supply) -> On:
    """When a rail is up."""
    up_v = lines.up_v(name)
    return On(supply.may_be_high(rising_v=up_v, falling_v=up_v), supply.may_be_low(rising_v=up_v, falling_v=up_v))


def _row(lines: Timelines, name: str, state: State, axis: TimeAxis, signs: Signs) -> str:
    return "".join(_sign(lines, name, state, axis.column_at(number), signs) for number in range(axis.width))


def _sign(lines: Timelines, name: str, state: State, column: Column, signs: Signs) -> str:
    if isinstance(state, GivenSupply) and state.least_s == state.most_s:
        nominal_v = lines.ramps.by_rail[name].nominal_v
        share = state.waveform.level_v(column.middle_s - state.least_s) / nominal_v
        return signs.levels[min(max(int(share * (len(signs.levels) - 1) + 0.5), 0), len(signs.levels) - 1)]
    span = column.start_s, column.end_s
    if isinstance(state, Decision):
        return _decision_sign(state, span, signs)
    on = (
        state.ready if isinstance(state, LoadState) else _up(lines, name, state) if isinstance(state, Supply) else state
    )
    if _touches(on.may_be_on, span) and _touches(on.may_be_off, span):
        return signs.between
    return signs.on if _touches(on.may_be_on, span) else signs.off


def _decision_sign(state: Decision, span: tuple[float, float], signs: Signs) -> str:
    if _touches(state.may_be_unknown, span):
        return signs.unknown
    if _touches(state.may_assert, span):
        if _touches(state.may_release, span):
            return signs.between
        return signs.held if _touches(state.may_be_held, span) else signs.asserted
    return signs.released


def _touches(times: Times, span: tuple[float, float]) -> bool:
    return any(start < span[1] and end > span[0] for start, end in times)


def arrival_text(lines: Timelines, name: str, state: State) -> str:
    """Between which times an element comes up, or lets go, for the last time."""
    match state:
        case Decision():
            may_not, may = state.may_assert, state.may_release
        case LoadState():
            may_not, may = state.ready.may_be_off, state.ready.may_be_on
        case Supply() if _has_no_scale(lines, name):
            return ""
        case Supply():
            may, may_not = _up(lines, name, state)
        case _:
            may, may_not = state
    found = last_arrival(may, may_not)
    if found is None:
        return ""
    first = show(found.earliest_s if abs(found.earliest_s) > _NO_TIME_S else 0.0, _T, digits=3)
    last = "never surely" if found.latest_s == FOREVER_S else show(found.latest_s, _T, digits=3)
    return first if first == last else f"{first} .. {last}"


def _slack_rows(lines: Timelines, line: Timeline, load: str, axis: TimeAxis, signs: Signs) -> Iterator[str]:
    slack, words = slack_of(lines, line, load)
    if slack is None:
        return
    first_s, then_s = slack.first_s, slack.then_s
    if first_s == FOREVER_S:
        yield f"{'':{_NAME}}{words[0]} may never come before {words[1]} at {show(then_s, _T)}"
        return
    if first_s == -FOREVER_S:
        return
    first, then = axis.column(first_s), axis.column(then_s)
    low, high = min(first, then), max(first, then)
    fill = signs.slack if slack.slack_s >= 0.0 else signs.short
    yield f"{'':{_NAME}}{' ' * low}[{fill * max(high - low - 1, 0)}]"
    size = f"{'-' if slack.slack_s < 0.0 else '+'}{show(abs(slack.slack_s), _T)}"
    yield f"{'':{_NAME}}slack {size}: {words[0]} by {show(first_s, _T)}, {words[1]} from {show(then_s, _T)}"


def slack_of(lines: Timelines, line: Timeline, load: str) -> tuple[Slack | None, tuple[str, str]]:
    """The slack of a load in a scenario, and what its two times are: at release, or on the way down at assertion."""
    part = lines.read.parts.get(load)
    if not isinstance(part, LoadPart) or not part.resets:
        return None, ("", "")
    if line.scenario.scene is not Scene.FALL:
        return release_slack(line, load), ("ready", "released")
    falling = [(rail, works) for rail, works in part.works if isinstance(line.states[rail], GivenSupply)]
    slacks = (assert_slack(line, load, rail=rail, works=works) for rail, works in falling)
    return worst(slacks), ("asserted", "out of range")
