"""Tolerances that two times share: what comes late for both cannot be late for one and early for the other."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import product as combinations
from operator import itemgetter
from typing import Final

from tidegate.lint.physics.domain import product
from tidegate.lint.timing.evaluate import Network, evaluate
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import ComparatorPart, LoadPart, times_of
from tidegate.lint.timing.scenario import Scenario
from tidegate.lint.timing.slack import Slack, release_slack, worst
from tidegate.lint.timing.timeline import Timeline, Timelines

_MOST_SHARED: Final = 4
"""So many shared elements are taken at either end at most; the rest stay between theirs, which is on the safe side."""


def release_slack_apart(
    lines: Timelines, load: str, courses: Iterable[Timeline], *, at_best_of: Timelines | None = None
) -> tuple[Slack, Sequence[str]]:
    """The least slack at release with each shared element at one end for both times; and which were taken so.

    Each time is the greatest of sums of what it waits for.  In the difference of two such times, one tolerance takes
    effect in one direction only, so that the least lies at an end of it.  Where the slack is enough without that, it
    stands.  ``at_best_of``: the timelines of which these are at the best corner; then it is always so, with the
    elements that are chosen there or those that are chosen here, whichever leaves more.
    """
    if at_best_of is None:
        return _apart(lines, load, courses, _shared(lines, load), always=False)
    courses = list(courses)
    chosen = {tuple(_shared(at, load)): None for at in (at_best_of, lines)}
    return max(
        (_apart(lines, load, courses, shared, always=True) for shared in chosen), key=lambda found: found[0].slack_s
    )


def _apart(
    lines: Timelines, load: str, courses: Iterable[Timeline], shared: Sequence[str], *, always: bool
) -> tuple[Slack, Sequence[str]]:
    """The same with some elements."""
    ends = _Ends(lines, load, shared)
    slacks = [(release_slack(line, load), number, line) for number, line in enumerate(courses)]
    found = [(slack.slack_s, number, line, slack) for slack, number, line in slacks if slack is not None]
    least: tuple[float, int, Slack] | None = None
    for slack_s, number, line, slack in sorted(found, key=itemgetter(0, 1)):
        if least is not None and slack_s > least[0]:
            break  # no end of a tolerance makes a slack less
        apart = ends.worst_of(line) if (slack_s < 0.0 or always) and shared else slack
        if apart is not None and (least is None or (apart.slack_s, number) < least[:2]):
            least = apart.slack_s, number, apart
    if least is None:  # at no combination of ends is reset released: what lies between them stands
        return min(found, key=itemgetter(0, 1))[3], ()
    return least[2], shared if min(found, key=itemgetter(0))[0] < 0.0 else ()


class _Ends:
    """The release of a load with every shared element at one end of its tolerances."""

    def __init__(self, lines: Timelines, load: str, shared: Sequence[str]) -> None:
        self._lines = lines
        self._load = load
        self._shared = shared
        self._networks: dict[str, Sequence[Network]] = {}

    def worst_of(self, line: Timeline) -> Slack | None:
        """The slack of the combination of ends that leaves least in a scenario."""
        at_ends = (
            Timeline(line.scenario, evaluate(net, line.scenario, line.states)) for net in self._at(line.scenario)
        )
        return worst(release_slack(at_end, self._load) for at_end in at_ends)

    def _at(self, scenario: Scenario) -> Sequence[Network]:
        """The network at each combination of ends, less what does not tell on the load."""
        rail = scenario.rail
        if rail not in self._networks:
            net = self._lines.between(self._shared, self._load, rail=rail)
            ends = combinations((False, True), repeat=len(self._shared))
            self._networks[rail] = [net.pinned(dict(zip(self._shared, end, strict=True))) for end in ends]
        return self._networks[rail]


def _shared(lines: Timelines, load: str) -> list[str]:
    """The elements with the widest tolerances that both the release and the readiness of a load wait for."""
    part = lines.read.every[load]
    assert isinstance(part, LoadPart)
    released_by = {name for net in part.resets for name in lines.behind(net)}
    both = [name for name in lines.behind(load, readiness=True) if name in released_by]
    widths = {name: _width_s(lines, name) for name in both}
    found = sorted((name for name in both if widths[name] > 0.0), key=lambda name: (-widths[name], name))
    return found[:_MOST_SHARED]


def _width_s(lines: Timelines, name: str) -> float:
    """How far apart the ends of an element's times are, in s; of its levels, on the slowest ramp of their rail.

    One of which an end is not known is taken at no end.
    """
    part = lines.read.every.get(name)
    if part is None:
        return 0.0
    widths = [time.most - time.least for time in times_of(part)]
    if isinstance(part, ComparatorPart) and (ramp := lines.ramps.by_rail.get(part.watches)) is not None:
        widths.append(product(part.rising.most - part.rising.least, ramp.rise.most / ramp.nominal_v))
    return max((width for width in widths if width < FOREVER_S), default=0.0)
