"""Releases that are seen at one corner of the facts alone, by hand."""

from __future__ import annotations

from typing import cast

from tidegate.lint.timing.evaluate import LoadState
from tidegate.lint.timing.hidden import with_certain_releases
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import ALWAYS_ON, Decision, On
from tidegate.lint.timing.timeline import Timeline, Timelines

ALL_ALONG: Times = ((-FOREVER_S, FOREVER_S),)
AGAIN: Times = ((-FOREVER_S, 2.0), (5.0, FOREVER_S))


class Lines:
    """Timelines that know one timeline of any scenario."""

    def __init__(self, release: Times, fed: Times = ALWAYS) -> None:
        self._states = {"core": LoadState(On(fed, NEVER), ALWAYS_ON, Decision(NEVER, release, NEVER), ALWAYS_ON)}

    def at(self, scenario: Scenario) -> Timeline:
        return Timeline(scenario, dict(self._states))


def shows(here: Lines, there: Lines, *, scene: Scene = Scene.DIP, tried_there: bool = True) -> bool:
    """Whether a course counts; where it was not tried there, another one of the same name was."""
    course = here.at(Scenario("tried", "tried", scene, {}))
    others = [there.at(course.scenario) if tried_there else Lines(NEVER).at(Scenario("tried", "another", scene, {}))]
    found = with_certain_releases(cast(Timelines, here), [course], cast(Timelines, there), others, "core")
    assert found in ([], [course])
    return bool(found)


def test_a_release_after_what_may_not_have_been_a_reset_is_seen_at_neither_corner() -> None:
    for tried_there in (True, False):
        assert not shows(Lines(ALL_ALONG), Lines(AGAIN), tried_there=tried_there)
        assert not shows(Lines(AGAIN), Lines(ALL_ALONG), tried_there=tried_there)
        assert shows(Lines(AGAIN), Lines(AGAIN), tried_there=tried_there)
        assert shows(Lines(ALL_ALONG), Lines(ALL_ALONG), tried_there=tried_there)


def test_a_release_of_what_was_surely_in_reset_is_seen() -> None:
    """Where it is asserted from the beginning at both corners, the wider stretch only begins sooner."""
    assert shows(Lines(((3.0, FOREVER_S),)), Lines(((5.0, FOREVER_S),)))
    assert shows(Lines(NEVER), Lines(((5.0, FOREVER_S),)))
    assert not shows(Lines(ALL_ALONG), Lines(((5.0, FOREVER_S),)))


def test_where_the_supply_comes_every_release_is_seen() -> None:
    assert shows(Lines(ALL_ALONG), Lines(AGAIN), scene=Scene.START)


def test_without_supply_no_release_hides() -> None:
    fed: Times = ((-FOREVER_S, 1.0), (6.0, FOREVER_S))
    late: Times = ((-FOREVER_S, 3.0), (7.0, FOREVER_S))
    assert shows(Lines(late, fed), Lines(((-FOREVER_S, 2.0), (7.0, FOREVER_S)), fed))
    assert not shows(Lines(((-FOREVER_S, 8.0),), fed), Lines(late, fed))
    assert shows(Lines(late, NEVER), Lines(AGAIN, NEVER))


def test_timelines_without_corners_are_not_tried_twice() -> None:
    lines = Lines(AGAIN)
    courses = [lines.at(Scenario("tried", "tried", Scene.DIP, {}))]
    assert with_certain_releases(cast(Timelines, lines), courses, cast(Timelines, lines), [], "core") is courses
