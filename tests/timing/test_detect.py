"""What a detector says over time, by hand: levels, filter, delay, pulse, and what it says while it cannot decide."""

from __future__ import annotations

import msgspec
import pytest

from tests.timing.random_subsystems import comparator
from tidegate.lint.timing.detect import decision_of
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import NOTHING, Bounds, ComparatorPart
from tidegate.lint.timing.state import ALWAYS_ON, NEVER_ON, Decision, On
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.waveform import Waveform

RISING, FALLING = Bounds(2.0, 3.0), Bounds(1.0, 1.5)
HILL = GivenSupply(Waveform(((0.0, 0.0), (10.0, 10.0), (20.0, 0.0))))
"""A volt a second up, and down: passes 2 V to 3 V on the way up, 1.5 V to 1 V from 18.5 s to 19 s."""
LATE = On(((4.0, FOREVER_S),), ((-FOREVER_S, 6.0),))


def part(
    *, delay: Bounds = NOTHING, filter: Bounds = NOTHING, pulse: Bounds = NOTHING, over: bool = False,
    undecided: str = "undefined", falling: Bounds = FALLING,
) -> ComparatorPart:  # fmt: skip
    made = comparator(
        "uv", needs=(), works_from=NOTHING, rising=RISING, falling=falling, delay=delay, filter=filter, pulse=pulse,
        undecided=undecided,
    )  # fmt: skip
    return msgspec.structs.replace(made, over=over)


def said(detector: ComparatorPart, *, valid: On = ALWAYS_ON, armed: On = ALWAYS_ON) -> Decision:
    return decision_of(detector, watched=HILL, valid=valid, armed=armed)


def test_levels_alone() -> None:
    asserts: Times = ((-FOREVER_S, 3.0), (18.5, FOREVER_S))
    assert said(part()) == Decision(asserts, ((2.0, 19.0),), NEVER)
    assert said(part(over=True)) == Decision(((2.0, 19.0),), asserts, NEVER)


def test_a_delay_and_a_filter_add_up() -> None:
    asserts: Times = ((-FOREVER_S, 6.0), (19.0, FOREVER_S))
    assert said(part(delay=Bounds(0.5, 3.0))) == Decision(asserts, ((2.5, 22.0),), NEVER)
    assert said(part(filter=Bounds(0.5, 3.0))) == Decision(asserts, ((2.5, 22.0),), NEVER)
    both = said(part(delay=Bounds(0.25, 1.0), filter=Bounds(0.25, 2.0)))
    assert both == Decision(asserts, ((2.5, 22.0),), NEVER)


def test_a_pulse_lasts_its_length_beyond_the_rising_level() -> None:
    found = said(part(pulse=Bounds(4.0, 5.0), delay=Bounds(0.5, 1.0)))
    assert found == Decision(((-FOREVER_S, 9.0), (19.0, FOREVER_S)), ((6.5, 20.0),), NEVER)


CANNOT: Times = ((-FOREVER_S, 7.0),)
"""Its supply is surely there from 6 s on, and it answers within 0.5 s to 1 s."""


@pytest.mark.parametrize(
    ("undecided", "expected"),
    [
        ("undefined", Decision(((19.0, FOREVER_S),), ((4.5, 20.0),), CANNOT)),
        ("asserts", Decision(((-FOREVER_S, 7.0), (19.0, FOREVER_S)), ((4.5, 20.0),), NEVER)),
        ("releases", Decision(((19.0, FOREVER_S),), ((-FOREVER_S, 20.0),), NEVER)),
    ],
)
def test_what_it_says_while_it_cannot_decide(undecided: str, expected: Decision) -> None:
    assert said(part(delay=Bounds(0.5, 1.0), undecided=undecided), valid=LATE) == expected


@pytest.mark.parametrize(
    ("undecided", "expected"),
    [
        ("undefined", Decision(((19.0, FOREVER_S),), ((-FOREVER_S, 20.0),), ((4.0, 7.0),))),
        ("asserts", Decision(((4.0, 7.0), (19.0, FOREVER_S)), ((-FOREVER_S, 20.0),), NEVER)),
        ("releases", Decision(((19.0, FOREVER_S),), ((-FOREVER_S, 20.0),), NEVER)),
    ],
)
def test_it_releases_while_it_is_not_armed(undecided: str, expected: Decision) -> None:
    assert said(part(delay=Bounds(0.5, 1.0), undecided=undecided), valid=LATE, armed=LATE) == expected


def test_one_that_never_can_or_is_never_armed() -> None:
    assert said(part(), valid=NEVER_ON) == Decision(NEVER, NEVER, ALWAYS)
    assert said(part(undecided="asserts"), valid=NEVER_ON) == Decision(ALWAYS, NEVER, NEVER)
    assert said(part(), armed=NEVER_ON) == Decision(NEVER, ALWAYS, NEVER)
