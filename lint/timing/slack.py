"""What the timelines leave between two things that must come in order."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Final

import msgspec

from tidegate.lint.timing.evaluate import LoadState
from tidegate.lint.timing.interval import FOREVER_S, NEVER, Times, both, either, outside
from tidegate.lint.timing.parts import Bounds, ResetPart
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import Supply
from tidegate.lint.timing.timeline import Timeline

_NEXT_TO_NOTHING_V: Final = 1e-9
"""A supply that has begun to rise."""


class Slack(msgspec.Struct, frozen=True):
    """Time between the latest of what must come first and the earliest of what must come after it, in s.

    Where what must come first may never come, ``first_s`` is infinite.
    """

    scenario: Scenario
    first_s: float
    then_s: float

    @property
    def from_s(self) -> float:
        """The time from which both are best counted: where the supply last begins to rise, if both come after that."""
        rises_s = self.scenario.rises_s
        return rises_s if min(self.first_s, self.then_s) >= rises_s else 0.0

    @property
    def slack_s(self) -> float:
        """How much time is left; below 0, how much is short."""
        if self.first_s == -FOREVER_S or self.then_s == FOREVER_S:
            return FOREVER_S
        return self.then_s - self.first_s


def worst(slacks: Iterable[Slack | None]) -> Slack | None:
    """The one that leaves least; None where there is none."""
    return min((slack for slack in slacks if slack is not None), key=lambda slack: slack.slack_s, default=None)


def release_slack(line: Timeline, load: str) -> Slack | None:
    """Between the latest time at which a load is ready and the earliest at which its reset is released.

    Of several releases, the one that leaves least; None where reset is not released in the course of the scenario.
    """
    state = line.states[load]
    assert isinstance(state, LoadState)
    return worst(
        Slack(line.scenario, _ready_by_s(state.ready.may_be_off, at_s), at_s) for at_s in _let_go_at_s(line, state)
    )


def _let_go_at_s(line: Timeline, state: LoadState) -> Iterator[float]:
    """Each earliest time at which reset is released, of stretches in which the load may have its supply."""
    for start_s, end_s in state.reset.may_release:
        fed = both(((start_s, end_s),), state.fed.may_be_on)
        if not fed:
            continue
        if start_s > -FOREVER_S:
            yield start_s
        elif line.scenario.scene is Scene.START:
            yield fed[0][0]  # never in reset before its supply comes


def _ready_by_s(not_ready: Times, release_s: float) -> float:
    """The end of the last stretch that begins before a release and in which a load may not be ready, in s."""
    by_s = -FOREVER_S
    for start_s, end_s in not_ready:
        if start_s <= release_s:
            by_s = end_s
    return by_s


def assert_slack(line: Timeline, load: str, *, rail: str, works: Bounds) -> Slack | None:
    """Between the latest time at which a load is in reset and the one at which a falling rail leaves its range.

    None where the rail does not leave it.  A reset that may stay released, or unknown, never surely asserts.
    """
    state, supply = line.states[load], line.states[rail]
    assert isinstance(state, LoadState)
    assert isinstance(supply, Supply)
    low = supply.may_be_low(rising_v=works.least, falling_v=works.least)
    leaves_s = next((start for start, _ in low if start > -FOREVER_S), None)
    if leaves_s is None:
        return None
    return Slack(line.scenario, _surely_asserts_s(state.reset), leaves_s)


def _surely_asserts_s(reset: Decision) -> float:
    """When a reset that is released in service surely asserts, in s; infinite where it may not."""
    let_go = either(reset.may_release, reset.may_be_unknown)
    if not let_go or let_go[0][0] > 0.0:
        return -FOREVER_S
    return let_go[0][1]


def is_missed(line: Timeline, load: str) -> bool:
    """Whether a dip may pass without the load being reset at any time."""
    state = line.states[load]
    assert isinstance(state, LoadState)
    asserts = outside(either(state.reset.may_release, state.reset.may_be_unknown))
    return not any(end > 0.0 for _, end in asserts)


def unknown_while_read(line: Timeline, part: ResetPart, *, nominal_v: float = FOREVER_S) -> Times:
    """When a reset net may be unknown while its receivers have a supply at which they read it.

    Receivers of which it is not known from where on they read do so at nominal.
    """
    state, supply = line.states[part.id], line.states[part.rail]
    assert isinstance(state, Decision)
    if not state.may_be_unknown:
        return NEVER
    if isinstance(supply, On):
        return both(state.may_be_unknown, supply.may_be_on)
    assert isinstance(supply, Supply)
    reads_v = nominal_v if part.reads_from_v == FOREVER_S else max(part.reads_from_v, _NEXT_TO_NOTHING_V)
    return both(state.may_be_unknown, supply.may_be_high(rising_v=reads_v, falling_v=reads_v))


def begin_slack(line: Timeline, *, rail: str, after: str, up_v: float) -> Slack | None:
    """Between the latest time at which a rail is up and the earliest at which another begins to rise.

    None where the other does not rise in the course of the scenario.
    """
    first, then = line.states[after], line.states[rail]
    if not isinstance(first, Supply) or not isinstance(then, Supply):
        anything = any(isinstance(state, On) and state.may_be_on for state in (first, then))
        return Slack(line.scenario, FOREVER_S, -FOREVER_S) if anything else None
    forced = line.scenario.waveforms.get(rail)
    begun_v = _NEXT_TO_NOTHING_V + (forced.points[0][1] if forced is not None else 0.0)  # what is left is no beginning
    begins = then.may_be_high(rising_v=begun_v, falling_v=begun_v)
    not_up = first.may_be_low(rising_v=up_v, falling_v=up_v)
    if not begins:
        return None
    return Slack(line.scenario, not_up[0][1] if not_up else -FOREVER_S, begins[0][0])
