"""Releases that do not show where facts are missing: it is not known whether reset was asserted before."""

from __future__ import annotations

from collections.abc import Sequence

from tidegate.lint.timing.evaluate import LoadState
from tidegate.lint.timing.interval import FOREVER_S, both
from tidegate.lint.timing.scenario import Scene
from tidegate.lint.timing.timeline import Timeline, Timelines


def with_certain_releases(
    lines: Timelines, courses: Sequence[Timeline], other: Timelines, others: Sequence[Timeline], load: str
) -> Sequence[Timeline]:
    """The courses in which as many releases of a load are seen at one corner of the facts as at the other one.

    Where reset may stay released as well as be asserted and released again, the two are one stretch of time in which it
    may be released: at one corner a release is counted that is not at the other.  ``others`` are courses of the other
    corner, in which the same scenarios are looked for first.
    """
    if lines is other:
        return courses
    there = {line.scenario.name: line for line in others}
    found = []
    for line in courses:
        if line.scenario.scene is not Scene.START:  # in a start, reset is not released before the supply comes
            twin = there.get(line.scenario.name)
            if twin is None or twin.scenario != line.scenario:
                twin = other.at(line.scenario)
            if _all_along_until_s(line, load) != _all_along_until_s(twin, load):
                continue
        found.append(line)
    return found


def _all_along_until_s(line: Timeline, load: str) -> float:
    """Until when reset may be released as it was before and the load have its supply, in s."""
    state = line.states[load]
    assert isinstance(state, LoadState)
    spans = state.reset.may_release
    if not spans or spans[0][0] > -FOREVER_S:
        return -FOREVER_S
    fed = both(spans[:1], state.fed.may_be_on)
    return fed[-1][1] if fed else -FOREVER_S
