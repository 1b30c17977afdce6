"""What an element may be at each time: on or off; or asserting, releasing, unknown."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final, NamedTuple

from tidegate.lint.timing.interval import ALWAYS, NEVER, Times, both, delayed, either, outside


class On(NamedTuple):
    """When something (a reference, a bias, a gate, a load) may be on, and when it may be off."""

    may_be_on: Times
    may_be_off: Times

    @property
    def surely_on(self) -> Times:
        """When it is on whatever the tolerances do."""
        return outside(self.may_be_off)


class Decision(NamedTuple):
    """When something on a reset path may assert reset, release it, or be unknown.

    ``may_be_held`` is the part of ``may_assert`` in which no stage drives and a passive hold keeps reset.
    """

    may_assert: Times
    may_release: Times
    may_be_unknown: Times
    may_be_held: Times = NEVER

    @property
    def surely_asserts(self) -> Times:
        """When it asserts whatever the tolerances do."""
        return outside(either(self.may_release, self.may_be_unknown))

    @property
    def surely_releases(self) -> Times:
        """When it releases whatever the tolerances do."""
        return outside(either(self.may_assert, self.may_be_unknown))


ALWAYS_ON: Final = On(ALWAYS, NEVER)
NEVER_ON: Final = On(NEVER, ALWAYS)
ANYTHING: Final = On(ALWAYS, ALWAYS)
"""What is known of an element whose facts are missing."""
NOTHING_KNOWN: Final = On(NEVER, NEVER)
"""What may be so whatever the missing facts of an element turn out to be: nothing."""
ANY_DECISION: Final = Decision(ALWAYS, ALWAYS, ALWAYS)
NO_DECISION: Final = Decision(NEVER, NEVER, NEVER)
KNOWN: Final = Decision(ALWAYS, ALWAYS, NEVER)
"""Asserts or releases, nobody knows when."""
RELEASED: Final = Decision(NEVER, ALWAYS, NEVER)
ASSERTED: Final = Decision(ALWAYS, NEVER, NEVER)


def all_on(parts: Iterable[On]) -> On:
    """On when every part is: on with the last of them, off with the first."""
    whole = ALWAYS_ON
    for part in parts:
        if whole is ALWAYS_ON or part is whole:
            whole = part
        elif part is not ALWAYS_ON:
            whole = On(both(whole.may_be_on, part.may_be_on), either(whole.may_be_off, part.may_be_off))
    return whole


def settled(part: On, *, least_s: float, most_s: float) -> On:
    """On when it has been on for a settling time that lies between two bounds."""
    if most_s == 0.0 == least_s:
        return part
    return On(
        delayed(part.may_be_on, least_s=least_s, most_s=0.0), delayed(part.may_be_off, least_s=0.0, most_s=most_s)
    )


def lets_go(decision: Decision) -> On:
    """What a decision gates: on when it releases, off when it asserts, and what is unknown may be either."""
    if not decision.may_be_unknown:
        return On(decision.may_release, decision.may_assert)
    return On(
        either(decision.may_release, decision.may_be_unknown), either(decision.may_assert, decision.may_be_unknown)
    )


def any_asserts(drivers: Sequence[Decision]) -> Decision:
    """Asserts when any driver does, releases when all do, unknown when one is unknown and none asserts."""
    if len(drivers) == 1:
        return drivers[0]
    asserts, releases, unknown, held = NEVER, ALWAYS, NEVER, NEVER
    for driver in drivers:
        asserts = either(asserts, driver.may_assert)
        releases = both(releases, driver.may_release)
        unknown = either(unknown, driver.may_be_unknown)
        held = either(held, driver.may_be_held)
    for driver in drivers if unknown else ():
        unknown = both(unknown, either(driver.may_release, driver.may_be_unknown))
    return Decision(asserts, releases, unknown, held)


def all_agree(drivers: Sequence[Decision]) -> Decision:
    """Asserts when all drivers do, releases when any does, unknown when one is unknown and none releases."""
    if len(drivers) == 1:
        return drivers[0]
    asserts, releases, unknown, held = ALWAYS, NEVER, NEVER, ALWAYS
    for driver in drivers:
        asserts = both(asserts, driver.may_assert)
        releases = either(releases, driver.may_release)
        unknown = either(unknown, driver.may_be_unknown)
        held = both(held, driver.may_be_held)
    for driver in drivers if unknown else ():
        unknown = both(unknown, either(driver.may_assert, driver.may_be_unknown))
    return Decision(asserts, releases, unknown, held)
