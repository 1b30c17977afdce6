"""Laws of the timing: slower never helps, a hold never harms, and nothing depends on when the clock starts."""

from __future__ import annotations

import random

import msgspec
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.timing.random_subsystems import random_parts, random_waveform, shifted, supplied_with, with_supply
from tidegate.lint.timing.evaluate import LoadState, States, evaluate
from tidegate.lint.timing.interval import Times, both, outside
from tidegate.lint.timing.parts import Bounds, SourcePart, StagePart
from tidegate.lint.timing.slack import Slack, release_slack, worst
from tidegate.lint.timing.state import Decision
from tidegate.lint.timing.timeline import Timeline
from tidegate.lint.timing.waveform import Waveform

SEEDS = st.integers(0, 100_000)
LONG = 1e6  # s: beyond every edge of a test


def _length_s(times: Times) -> float:
    """How long in all, within a time beyond every edge."""
    return sum(min(end, LONG) - max(start, -LONG) for start, end in times)


def _ramp(chance: random.Random) -> Waveform:
    """A supply that comes and stays: a start-up with one release."""
    return Waveform(((0.0, 0.0), (chance.uniform(1.0, 40.0), 1.9)))


def _slack_s(states: States, waveform: Waveform) -> float:
    slack: Slack | None = worst([release_slack(Timeline(supplied_with(waveform), states), "core")])
    return float("inf") if slack is None else slack.slack_s


@settings(max_examples=60, deadline=None)
@given(SEEDS, st.floats(0.0, 5.0))
def test_a_load_that_is_ready_later_never_has_more_slack(seed: int, later_s: float) -> None:
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), _ramp(chance)
    before_s = _slack_s(evaluate(with_supply(parts), supplied_with(waveform)), waveform)
    core = parts["core"]
    ready = Bounds(core.ready.least, core.ready.most + later_s)  # type: ignore[union-attr]
    parts["core"] = msgspec.structs.replace(core, ready=ready)
    assert _slack_s(evaluate(with_supply(parts), supplied_with(waveform)), waveform) <= before_s + 1e-9


@settings(max_examples=60, deadline=None)
@given(SEEDS, st.floats(0.0, 5.0))
def test_a_reference_that_may_settle_later_never_has_more_slack(seed: int, later_s: float) -> None:
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), _ramp(chance)
    before_s = _slack_s(evaluate(with_supply(parts), supplied_with(waveform)), waveform)
    ref = parts["ref"]
    assert isinstance(ref, SourcePart)
    slower = Bounds(ref.settling.least, ref.settling.most + later_s)
    parts["ref"] = msgspec.structs.replace(ref, settling=slower)
    assert _slack_s(evaluate(with_supply(parts), supplied_with(waveform)), waveform) <= before_s + 1e-9


def _unknown(states: States) -> Times:
    state = states["rst"]
    assert isinstance(state, Decision)
    return state.may_be_unknown


@settings(max_examples=60, deadline=None)
@given(SEEDS, st.sampled_from(["first", "gather", "last"]))
def test_a_hold_never_adds_an_unknown_interval(seed: int, name: str) -> None:
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), random_waveform(chance)
    stage = parts[name]
    assert isinstance(stage, StagePart)
    parts[name] = msgspec.structs.replace(stage, hold="none")
    bare = _unknown(evaluate(with_supply(parts), supplied_with(waveform)))
    parts[name] = msgspec.structs.replace(stage, hold="asserts")
    held = _unknown(evaluate(with_supply(parts), supplied_with(waveform)))
    added = both(held, outside(bare))
    assert _length_s(added) == pytest.approx(0.0, abs=1e-9)


@settings(max_examples=60, deadline=None)
@given(SEEDS, st.floats(-50.0, 50.0))
def test_a_shift_in_time_shifts_every_edge_and_changes_nothing_else(seed: int, by_s: float) -> None:
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), random_waveform(chance)
    net = with_supply(parts)
    now, later = evaluate(net, supplied_with(waveform)), evaluate(net, supplied_with(shifted(waveform, by_s)))
    for name in parts:
        for times, late in zip(_sets(now, name), _sets(later, name), strict=True):
            # A span as long as a tolerance to the last digit may come or go with rounding.
            first = [span for span in times if span[1] - span[0] > 1e-9]
            second = [span for span in late if span[1] - span[0] > 1e-9]
            assert len(first) == len(second)
            for (start, end), (late_start, late_end) in zip(first, second, strict=True):
                assert late_start == pytest.approx(start + by_s, abs=1e-6)
                assert late_end == pytest.approx(end + by_s, abs=1e-6)


def _sets(states: States, name: str) -> tuple[Times, ...]:
    state = states[name]
    if isinstance(state, LoadState):
        return (*state.fed, *state.ready, *state.reset, *state.running)
    assert isinstance(state, tuple)
    return tuple(state)


@settings(max_examples=60, deadline=None)
@given(SEEDS)
def test_at_every_time_something_may_be(seed: int) -> None:
    """No time at which an element could be nothing at all."""
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), random_waveform(chance)
    states = evaluate(with_supply(parts), supplied_with(waveform))
    for name in ("por", "uv", "first", "gather", "last", "rst"):
        state = states[name]
        assert isinstance(state, Decision)
        nothing = outside(both_any(state.may_assert, state.may_release, state.may_be_unknown))
        assert _length_s(nothing) == 0.0


def both_any(*sets: Times) -> Times:
    """When any of several is so, by the complement of what all of them are not."""
    none = outside(())
    for times in sets:
        none = both(none, outside(times))
    return outside(none)
