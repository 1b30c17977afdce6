"""Which stage is to blame for an unknown level, and what it waits for."""

from __future__ import annotations

from collections.abc import Iterable
from enum import Enum

import msgspec

from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.timing.evaluate import LoadState
from tidegate.lint.timing.interval import FOREVER_S, is_in
from tidegate.lint.timing.parts import ComparatorPart, ResetPart, SourcePart, StagePart
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import Supply
from tidegate.lint.timing.timeline import Timeline, Timelines


class Why(Enum):
    """Why an element is unknown by itself."""

    NOT_HELD = "a stage that is not alive, and has no hold"
    UNDECIDED = "a detector that cannot decide"
    INPUT = "a stage that is alive before its input is known"


class Blame(msgspec.Struct, frozen=True):
    """An element that is unknown by itself, why it is, and the way to it from where it was noticed."""

    element: str
    why: Why
    waits_for: str
    """What it waits for, in words."""
    path: Path


def blame_for_unknown(lines: Timelines, line: Timeline, start: str, at_s: float) -> Blame:
    """The element that makes a net unknown at a time: against the flow, the first that is so by itself."""
    hops = [Hop(start, "")]
    seen = {start}
    here = start
    while True:
        part = lines.read.every.get(here)
        if isinstance(part, ComparatorPart):
            return Blame(here, Why.UNDECIDED, _waits_for(lines, line, part, at_s), tuple(hops))
        if isinstance(part, StagePart) and part.hold == "none" and _is_down(lines, line, part, at_s):
            return Blame(here, Why.NOT_HELD, _waits_for(lines, line, part, at_s), tuple(hops))
        drivers = part.driven_by if isinstance(part, StagePart | ResetPart) else ()
        unknown = [(since, name) for name in drivers if name not in seen and (since := _unknown_at(line, name, at_s))]
        if not unknown:
            return Blame(here, Why.INPUT, "its input", tuple(hops))
        (at_s, _), here = max(unknown, key=lambda one: one[0][0])  # of several at once, the first that is named
        seen.add(here)
        hops.append(Hop(here, EdgeKind.DRIVES.backwards))


def _unknown_at(line: Timeline, name: str, at_s: float) -> tuple[float, float] | None:
    """The last time up to another at which an element may be unknown (a stage passes it on later), and since when."""
    state = line.states[name]
    if not isinstance(state, Decision):
        return None
    spans = [(min(end, at_s), start) for start, end in state.may_be_unknown if start <= at_s]
    return max(spans, default=None)


def _is_down(lines: Timelines, line: Timeline, part: StagePart, at_s: float) -> bool:
    return any(True for _ in _down(lines, line, part, at_s))


def _waits_for(lines: Timelines, line: Timeline, part: StagePart | ComparatorPart, at_s: float) -> str:
    """What an element waits for at a time, in words, the deepest cause first."""
    return next(iter(_down(lines, line, part, at_s)), "its answer")


def _down(
    lines: Timelines, line: Timeline, part: StagePart | ComparatorPart | SourcePart, at_s: float
) -> Iterable[str]:
    """What of the needs of an element may not be up at a time."""
    supply = line.states[part.rail]
    if isinstance(supply, Supply):
        level_v = max(part.works_from.most, 1e-9)
        if level_v < FOREVER_S and is_in(supply.may_be_low(rising_v=level_v, falling_v=level_v), at_s):
            yield f"{part.rail} at {level_v:.4g} V"
    for name in (part.domain, *part.needs):
        state = line.states[name]
        off = None
        if isinstance(state, On):
            off = state.may_be_off
        elif isinstance(state, LoadState):
            off = state.running.may_be_off
        elif isinstance(state, Decision):
            off = state.may_assert
        if off is not None and is_in(off, at_s):
            yield name
