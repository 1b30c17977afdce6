"""What is left between two things that must come in order, by hand: several releases, ends, and what never comes."""

from __future__ import annotations

import pytest

from tidegate.lint.timing.evaluate import LoadState, State
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import Bounds, ResetPart
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.slack import (
    Slack,
    assert_slack,
    begin_slack,
    is_missed,
    release_slack,
    unknown_while_read,
    worst,
)
from tidegate.lint.timing.state import ALWAYS_ON, ANYTHING, NOTHING_KNOWN, RELEASED, Decision, On
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.timeline import Timeline
from tidegate.lint.timing.waveform import Waveform

START = Scenario("tried", "tried", Scene.START, {})
FALL = Scenario("tried", "tried", Scene.FALL, {})
UP = GivenSupply(Waveform(((0.0, 0.0), (4.0, 2.0))))
"""Half a volt a second, from 0 s to 4 s."""
DOWN = GivenSupply(Waveform(((0.0, 2.0), (4.0, 0.0))))


def line(states: dict[str, State], scenario: Scenario = START) -> Timeline:
    return Timeline(scenario, states)


def load(
    *, release: Times, not_ready: Times = NEVER, fed: Times = ALWAYS, unknown: Times = NEVER, asserts: Times = NEVER
) -> dict[str, State]:
    ready = On(ALWAYS, not_ready)
    return {"core": LoadState(On(fed, NEVER), ready, Decision(asserts, release, unknown), ALWAYS_ON)}


def slack_at_release(states: dict[str, State], scenario: Scenario = START) -> tuple[float, float] | None:
    found = release_slack(line(states, scenario), "core")
    return None if found is None else (found.first_s, found.then_s)


def test_release_after_ready_and_before() -> None:
    not_ready: Times = ((-FOREVER_S, 5.0),)
    assert slack_at_release(load(release=((8.0, FOREVER_S),), not_ready=not_ready)) == (5.0, 8.0)
    assert slack_at_release(load(release=((3.0, FOREVER_S),), not_ready=not_ready)) == (5.0, 3.0)
    assert slack_at_release(load(release=((3.0, FOREVER_S),))) == (-FOREVER_S, 3.0)  # ready always
    assert slack_at_release(load(release=((3.0, FOREVER_S),), not_ready=ALWAYS)) == (FOREVER_S, 3.0)
    assert slack_at_release(load(release=NEVER, not_ready=not_ready)) is None


def test_a_load_that_ceases_to_be_ready_just_as_it_is_released_is_not_ready_then() -> None:
    release: Times = ((8.0, FOREVER_S),)
    assert slack_at_release(load(release=release, not_ready=((-FOREVER_S, 5.0), (8.0, 9.0)))) == (9.0, 8.0)
    assert slack_at_release(load(release=release, not_ready=((-FOREVER_S, 5.0), (8.5, 9.0)))) == (5.0, 8.0)


def test_of_several_releases_the_one_that_leaves_least() -> None:
    release: Times = ((8.0, 10.0), (20.0, FOREVER_S))
    not_ready: Times = ((-FOREVER_S, 5.0), (11.0, 19.0))
    assert slack_at_release(load(release=release, not_ready=not_ready)) == (19.0, 20.0)
    assert slack_at_release(load(release=release, not_ready=((-FOREVER_S, 7.5), (11.0, 12.0)))) == (7.5, 8.0)


def test_a_release_without_supply_is_none() -> None:
    release: Times = ((1.0, 2.0), (8.0, FOREVER_S))
    assert slack_at_release(load(release=release, not_ready=((-FOREVER_S, 5.0),), fed=((4.0, FOREVER_S),))) == (
        5.0,
        8.0,
    )
    assert slack_at_release(load(release=((1.0, 2.0),), fed=((4.0, FOREVER_S),))) is None
    # Released before the supply comes, and still so when it does: the release counts from its own time.
    assert slack_at_release(load(release=((3.0, 9.0),), fed=((4.0, FOREVER_S),))) == (-FOREVER_S, 3.0)


def test_a_load_that_was_never_in_reset_starts_with_its_supply() -> None:
    states = load(release=ALWAYS, not_ready=((-FOREVER_S, 6.0),), fed=((4.0, FOREVER_S),))
    assert slack_at_release(states) == (6.0, 4.0)
    assert slack_at_release(states, FALL) is None  # in service: released long ago
    twice = load(release=ALWAYS, not_ready=((-FOREVER_S, 6.0),), fed=((4.0, 5.0), (5.5, FOREVER_S)))
    assert slack_at_release(twice) == (6.0, 4.0)
    states = load(release=((-FOREVER_S, 5.0), (9.0, FOREVER_S)), not_ready=((-FOREVER_S, 6.0),))
    assert slack_at_release(states, FALL) == (6.0, 9.0)


def test_the_worst_leaves_least() -> None:
    more, less = Slack(START, 1.0, 4.0), Slack(START, 2.0, 3.0)
    assert worst([more, None, less]) is less
    assert worst([less, more]) is less
    assert worst([None]) is None
    assert worst([]) is None
    assert less.slack_s == 1.0
    assert all(kind.__struct_config__.frozen for kind in (Slack, Scenario, Timeline))
    assert Slack(START, 3.0, 1.0).slack_s == -2.0
    assert Slack(START, FOREVER_S, 1.0).slack_s == -FOREVER_S


@pytest.mark.parametrize(
    ("first_s", "then_s", "from_s"),
    [(5.0, 6.0, 5.0), (6.0, 5.0, 5.0), (4.0, 6.0, 0.0), (6.0, 4.0, 0.0), (-FOREVER_S, 9.0, 0.0), (7.0, 9.0, 5.0)],
)
def test_times_are_counted_from_where_the_supply_last_rises(first_s: float, then_s: float, from_s: float) -> None:
    again = Scenario("again", "again", Scene.CYCLE, {}, rises_s=5.0)
    assert Slack(again, first_s, then_s).from_s == from_s


WORKS = Bounds(1.0, 3.0)


@pytest.mark.parametrize(
    ("release", "unknown", "first_s"),
    [
        (((-FOREVER_S, 1.5),), NEVER, 1.5),
        (((-FOREVER_S, 1.5),), ((1.0, 1.75),), 1.75),  # unknown is not asserted
        (((-FOREVER_S, 1.5),), ((1.75, 2.0),), 1.5),  # surely asserted in between
        (((0.0, 1.5),), NEVER, 1.5),
        (((0.25, 1.5),), NEVER, -FOREVER_S),  # in reset when the fall begins
        (NEVER, NEVER, -FOREVER_S),
        (NEVER, ((-FOREVER_S, 1.5),), 1.5),
        (ALWAYS, NEVER, FOREVER_S),
    ],
)
def test_reset_against_a_supply_that_leaves_its_range(release: Times, unknown: Times, first_s: float) -> None:
    states = load(release=release, unknown=unknown) | {"vdd": DOWN}
    found = assert_slack(line(states, FALL), "core", rail="vdd", works=WORKS)
    assert found is not None
    assert (found.first_s, found.then_s) == (first_s, 2.0)  # 2 V falls to 1 V in 2 s


def test_a_supply_that_stays_leaves_no_range() -> None:
    states = load(release=ALWAYS) | {"vdd": GivenSupply(Waveform(((0.0, 2.0), (1.0, 1.0))))}
    assert assert_slack(line(states, FALL), "core", rail="vdd", works=WORKS) is None
    gone = load(release=ALWAYS) | {"vdd": GivenSupply(Waveform(((0.0, 0.5), (1.0, 2.0), (2.0, 2.0), (3.0, 0.0))))}
    found = assert_slack(line(gone, FALL), "core", rail="vdd", works=WORKS)
    assert found is not None
    assert found.then_s == 2.5  # low at first, and from 2.5 s on again


@pytest.mark.parametrize(
    ("release", "unknown", "missed"),
    [
        (ALWAYS, NEVER, True),
        (((-FOREVER_S, 1.0), (2.0, FOREVER_S)), NEVER, False),
        (((-FOREVER_S, 1.0), (2.0, FOREVER_S)), ((0.5, 2.5),), True),
        (((0.0, FOREVER_S),), NEVER, True),  # in reset before the dip, not in its course
        (((-1.0, FOREVER_S),), NEVER, True),
        (((0.5, FOREVER_S),), NEVER, False),
        (NEVER, NEVER, False),
    ],
)
def test_a_dip_is_missed_where_reset_never_surely_asserts(release: Times, unknown: Times, missed: bool) -> None:
    assert is_missed(line(load(release=release, unknown=unknown)), "core") is missed


def net(reads_from_v: float) -> ResetPart:
    return ResetPart("rst", (), False, (), "vdd", reads_from_v)


def test_an_unknown_net_counts_where_it_is_read() -> None:
    states: dict[str, State] = {"rst": Decision(NEVER, NEVER, ((-FOREVER_S, 3.0),)), "vdd": UP}
    assert unknown_while_read(line(states), net(1.0)) == ((2.0, 3.0),)
    assert unknown_while_read(line(states), net(1.5)) == NEVER
    (from_nothing,) = unknown_while_read(line(states), net(0.0))
    assert from_nothing == (pytest.approx(2e-9, rel=1e-6), 3.0)  # from 1 nV on
    assert unknown_while_read(line(states | {"vdd": ANYTHING}), net(1.0)) == ((-FOREVER_S, 3.0),)
    assert unknown_while_read(line(states | {"rst": RELEASED}), net(1.0)) == NEVER


def test_a_rail_that_begins_after_another_is_up() -> None:
    late = GivenSupply(Waveform(((0.0, 0.0), (4.0, 2.0))), least_s=5.0, most_s=6.0)
    found = begin_slack(line({"first": UP, "then": late}), rail="then", after="first", up_v=1.5)
    assert found is not None
    assert found.first_s == 3.0
    assert found.then_s == pytest.approx(5.0, abs=1e-8)
    up_already = GivenSupply(Waveform(((0.0, 2.0),)))
    found = begin_slack(line({"first": up_already, "then": late}), rail="then", after="first", up_v=1.5)
    assert found is not None
    assert found.first_s == -FOREVER_S


def test_what_comes_again_does_not_count() -> None:
    twice = GivenSupply(Waveform(((0.0, 0.0), (4.0, 2.0), (8.0, 0.0), (12.0, 2.0))))
    late = GivenSupply(twice.waveform, least_s=5.0, most_s=5.0)
    found = begin_slack(line({"first": twice, "then": late}), rail="then", after="first", up_v=1.5)
    assert found is not None
    assert found.first_s == 3.0
    assert found.then_s == pytest.approx(5.0, abs=1e-8)


def test_a_rail_that_does_not_begin_is_after_nothing() -> None:
    flat = GivenSupply(Waveform(((0.0, 0.0),)))
    assert begin_slack(line({"first": UP, "then": flat}), rail="then", after="first", up_v=1.5) is None
    # Of one of which nothing is known it may be up never, and begin long ago; at the best corner nothing is said.
    for unknown in ({"first": ANYTHING, "then": UP}, {"first": UP, "then": ANYTHING}):
        slack = begin_slack(line(unknown), rail="then", after="first", up_v=1.5)
        assert slack is not None
        assert slack.slack_s == -FOREVER_S
    assert begin_slack(line({"first": NOTHING_KNOWN, "then": UP}), rail="then", after="first", up_v=1.5) is None


def test_what_is_left_on_a_rail_is_no_beginning() -> None:
    left = Waveform(((0.0, 0.25), (1.0, 0.25), (4.0, 1.75)))  # half a volt a second from 1 s on
    scenario = Scenario("left", "left", Scene.START, {"then": left})
    states: dict[str, State] = {"first": UP, "then": GivenSupply(left)}
    found = begin_slack(line(states, scenario), rail="then", after="first", up_v=1.5)
    assert found is not None
    assert found.then_s == pytest.approx(1.0, abs=1e-8)
    assert found.then_s > 1.0
    at_once = Waveform(((0.0, 0.25), (3.0, 1.75)))
    scenario = Scenario("left", "left", Scene.START, {"then": at_once})
    states = {"first": UP, "then": GivenSupply(at_once)}
    found = begin_slack(line(states, scenario), rail="then", after="first", up_v=1.5)
    assert found is not None
    assert found.then_s == pytest.approx(0.0, abs=1e-8)
