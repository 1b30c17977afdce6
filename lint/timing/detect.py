"""What a detector's output may be over time."""

from __future__ import annotations

from tidegate.lint.timing.interval import NEVER, Times, both, delayed, either, filtered
from tidegate.lint.timing.parts import ComparatorPart
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import Supply


def decision_of(part: ComparatorPart, *, watched: Supply, valid: On, armed: On) -> Decision:
    """The decision of a detector, while it can decide, is armed, and has answered; else what its output is then.

    While it is not armed its output releases; while it cannot decide (its rail, bias or reference not up), its output
    is what ``undecided`` says.  A pulse is a level that lasts its length on after the rising level was passed, and that
    only a supply below the level of re-arming brings back.
    """
    asserts, releases = _crossings(part, watched)
    can = On(
        delayed(valid.may_be_on, least_s=part.delay.least, most_s=part.delay.most),
        delayed(valid.may_be_off, least_s=0.0, most_s=part.delay.most),
    )
    asserts, releases = both(asserts, can.may_be_on), both(releases, can.may_be_on)
    unknown: Times = NEVER
    if can.may_be_off:
        if part.undecided == "asserts":
            asserts = either(asserts, can.may_be_off)
        elif part.undecided == "releases":
            releases = either(releases, can.may_be_off)
        else:
            unknown = can.may_be_off
    if armed.may_be_off:
        asserts, unknown = both(asserts, armed.may_be_on), both(unknown, armed.may_be_on)
        releases = either(releases, armed.may_be_off)
    return Decision(asserts, releases, unknown)


def _crossings(part: ComparatorPart, watched: Supply) -> tuple[Times, Times]:
    """When the output may assert and when it may release, by the level of the rail alone."""
    low = watched.may_be_low(rising_v=part.rising.most, falling_v=part.falling.most)
    high = watched.may_be_high(rising_v=part.rising.least, falling_v=part.falling.least)
    asserts, releases = (high, low) if part.over else (low, high)
    least_s, most_s = part.filter
    asserts = filtered(asserts, least_s=least_s, most_s=most_s)
    releases = filtered(releases, least_s=least_s, most_s=most_s)
    least_s, most_s = part.delay
    return (
        delayed(asserts, least_s=least_s, most_s=most_s + part.pulse.most),
        delayed(releases, least_s=least_s + part.pulse.least, most_s=most_s),
    )
