"""What an output stage makes of its input over time: delay, release delay, latch, and its hold while not alive."""

from __future__ import annotations

from typing import NamedTuple

from tidegate.lint.timing.interval import NEVER, Times, both, delayed, either, first_from, joined, outside
from tidegate.lint.timing.parts import NOTHING, StagePart
from tidegate.lint.timing.state import Decision, On


def output_of(part: StagePart, *, given: Decision, alive: On) -> Decision:
    """The output of a stage: what it makes of its input while it is alive, else its hold, else nothing known."""
    driven = _Driven(given.may_assert, given.may_release, given.may_be_unknown)
    if part.latches:
        driven = _latched(part, driven, alive)
    if part.release_delay != NOTHING:
        driven = _released_late(part, driven, alive)
    asserts = _through(driven.asserts, part, alive)
    releases = _through(driven.releases, part, alive)
    unknown = _through(driven.unknown, part, alive, least_s=0.0)
    held: Times = NEVER
    if alive.may_be_off:
        if part.hold == "asserts":
            held = alive.may_be_off
            asserts = either(asserts, held)
        elif part.hold == "releases":
            releases = either(releases, alive.may_be_off)
        else:
            unknown = either(unknown, alive.may_be_off)
    return Decision(asserts, releases, unknown, held)


def _through(times: Times, part: StagePart, alive: On, *, least_s: float | None = None) -> Times:
    """Times of the input at the output; a stage that comes alive takes its input as if it had been so before."""
    if not times:
        return NEVER
    delay = part.delay
    seen = both(times, alive.may_be_on)
    if not seen or delay == NOTHING:
        return seen
    least_s = delay.least if least_s is None else least_s
    if not alive.may_be_off:
        return both(delayed(seen, least_s=least_s, most_s=delay.most), alive.may_be_on)
    spans = [(min(start + least_s, first_from(alive.may_be_off, start)), end + delay.most) for start, end in seen]
    spans = [(start, end) for start, end in spans if start < end]
    return both(joined(spans), alive.may_be_on) if spans else NEVER


class _Driven(NamedTuple):
    asserts: Times
    releases: Times
    unknown: Times


def _released_late(part: StagePart, given: _Driven, alive: On) -> _Driven:
    """The input, released only once it has been free of assertion for the release delay.

    An unknown input may run the delay down or set it back.  After an assertion too short to discharge what makes the
    delay, all that it had run before may still count.
    """
    least_s, most_s = part.release_delay
    free = both(either(given.releases, given.unknown), alive.may_be_on)
    through: list[tuple[float, float]] = []
    ended_s, run_s = -float("inf"), 0.0
    for start, end in free:
        if start - ended_s >= part.discharge_s:
            run_s = 0.0
        begins_s = start + (least_s - run_s)
        if begins_s < end:
            through.append((begins_s, end))
        ended_s, run_s = end, min(run_s + (end - start), least_s)
    run_down = tuple(through)
    asserts = delayed(either(given.asserts, given.unknown), least_s=0.0, most_s=most_s)
    not_alive = delayed(alive.may_be_off, least_s=0.0, most_s=most_s)
    return _Driven(either(asserts, not_alive), both(given.releases, run_down), both(given.unknown, run_down))


def _latched(part: StagePart, given: _Driven, alive: On) -> _Driven:
    """A latch that remembers an assertion until its supply goes; an unknown input may set it.

    One that asserts at power-up lets its drivers release it and remembers from then on as they do: it follows them.
    """
    if part.power_up == "asserts":
        return given
    surely_set: Times = NEVER
    sets = outside(either(given.releases, given.unknown))
    for start, end in outside(alive.may_be_off):
        surely_set = either(surely_set, _from_first(both(sets, ((start, end),)), end))
    until_set = both(alive.may_be_on, outside(surely_set))
    asserts: Times = NEVER
    unknown: Times = NEVER
    for start, end in alive.may_be_on:
        span: Times = ((start, end),)
        asserts = either(asserts, _from_first(both(either(given.asserts, given.unknown), span), end))
        unknown = either(unknown, _from_first(both(given.unknown, span), end))
    if part.power_up == "releases":
        return _Driven(asserts, until_set, both(unknown, until_set))
    return _Driven(asserts, NEVER, until_set)


def _from_first(times: Times, end_s: float) -> Times:
    """From the first time on, up to an end."""
    return ((times[0][0], end_s),) if times else NEVER
