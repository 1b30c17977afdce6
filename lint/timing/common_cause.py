"""Tolerances that two times share: what comes late for both cannot be late for one and early for the other."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import product
from typing import Final

from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import ComparatorPart, LoadPart, times_of
from tidegate.lint.timing.slack import Slack, release_slack, worst
from tidegate.lint.timing.timeline import Timeline, Timelines

_MOST_SHARED: Final = 4
"""So many shared elements are taken at either end at most; the rest stay between theirs, which is on the safe side."""


def release_slack_apart(lines: Timelines, load: str, courses: Iterable[Timeline]) -> tuple[Slack, Sequence[str]]:
    """The least slack at release with each shared element at one end for both times; and which were taken so.

    Each time is the greatest of sums of what it waits for.  In the difference of two such times, one tolerance takes
    effect in one direction only, so that the least lies at an end of it.
    """
    shared = _shared(lines, load)
    found: list[Slack] = []
    taken = False
    for line in courses:
        slack = release_slack(line, load)
        if slack is None:
            continue
        if slack.slack_s < 0.0 and shared:
            taken = True
            ends = product((False, True), repeat=len(shared))
            slack = worst(
                release_slack(lines.at(line.scenario, pinned=dict(zip(shared, end, strict=True))), load) for end in ends
            )
        if slack is not None:
            found.append(slack)
    least = worst(found)
    assert least is not None
    return least, shared if taken else ()


def _shared(lines: Timelines, load: str) -> list[str]:
    """The elements with the widest tolerances that both the release and the readiness of a load wait for."""
    part = lines.read.parts[load]
    assert isinstance(part, LoadPart)
    released_by = {name for net in part.resets for name in lines.behind(net)}
    both = [name for name in lines.behind(load, readiness=True) if name in released_by]
    widths = {name: _width_s(lines, name) for name in both}
    return sorted((name for name in both if widths[name] > 0.0), key=lambda name: -widths[name])[:_MOST_SHARED]


def _width_s(lines: Timelines, name: str) -> float:
    """How far apart the ends of an element's times are, in s; of its levels, on the slowest ramp of their rail.

    What is not bounded does not count.
    """
    part = lines.read.parts.get(name)
    if part is None:
        return 0.0
    widths = [time.most - time.least for time in times_of(part)]
    if isinstance(part, ComparatorPart) and (ramp := lines.ramps.by_rail.get(part.watches)) is not None:
        widths.append((part.rising.most - part.rising.least) / ramp.nominal_v * ramp.rise.most)
    return max((width for width in widths if width < FOREVER_S), default=0.0)
