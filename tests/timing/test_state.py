"""Where states meet, against every choice that could be made at every time; and settling, written out."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import product

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times, is_in, joined
from tidegate.lint.timing.state import (
    ALWAYS_ON,
    ANY_DECISION,
    ANYTHING,
    ASSERTED,
    NEVER_ON,
    RELEASED,
    Decision,
    On,
    all_agree,
    all_on,
    any_asserts,
    lets_go,
    settled,
)

CELLS = 6
"""Spans of 1 s, of which the first and the last go on for ever."""
WORDS = ("assert", "release", "unknown")
May = Sequence[frozenset[str]]
"""What something may be in each cell."""


def times_of(may: May, word: str) -> Times:
    ends = [-FOREVER_S, *(float(number) for number in range(1, CELLS)), FOREVER_S]
    spans = [(ends[number], ends[number + 1]) for number, words in enumerate(may) if word in words]
    return joined(spans) if spans else NEVER


def decision_of(may: May) -> Decision:
    return Decision(times_of(may, "assert"), times_of(may, "release"), times_of(may, "unknown"))


def may_of(decision: Decision) -> May:
    return [
        frozenset(word for word, times in zip(WORDS, decision, strict=False) if is_in(times, number + 0.5))
        for number in range(CELLS)
    ]


def choices(*words: str) -> st.SearchStrategy[May]:
    """In each cell one or more of some words."""
    cell = st.sets(st.sampled_from(words), min_size=1).map(frozenset)
    return st.lists(cell, min_size=CELLS, max_size=CELLS)


def every_choice(drivers: Sequence[May], meet: Callable[[Sequence[str]], str]) -> May:
    """In each cell what can come out, of all that the drivers may be."""
    return [frozenset(meet(words) for words in product(*cell)) for cell in zip(*drivers, strict=True)]


def strongest(*order: str) -> Callable[[Sequence[str]], str]:
    return lambda words: next(word for word in order if word in words)


@settings(max_examples=60, deadline=None)
@given(st.lists(choices(*WORDS), min_size=1, max_size=3))
def test_drivers_that_meet_are_what_some_choice_makes_of_them(drivers: list[May]) -> None:
    given_ = [decision_of(driver) for driver in drivers]
    assert may_of(any_asserts(given_)) == every_choice(drivers, strongest("assert", "unknown", "release"))
    assert may_of(all_agree(given_)) == every_choice(drivers, strongest("release", "unknown", "assert"))


@settings(max_examples=60, deadline=None)
@given(choices(*WORDS))
def test_what_surely_is_may_not_be_otherwise(may: May) -> None:
    decision = decision_of(may)
    assert [is_in(decision.surely_asserts, n + 0.5) for n in range(CELLS)] == [cell == {"assert"} for cell in may]
    assert [is_in(decision.surely_releases, n + 0.5) for n in range(CELLS)] == [cell == {"release"} for cell in may]
    gate = lets_go(decision)
    assert [is_in(gate.may_be_on, n + 0.5) for n in range(CELLS)] == [bool(cell - {"assert"}) for cell in may]
    assert [is_in(gate.may_be_off, n + 0.5) for n in range(CELLS)] == [bool(cell - {"release"}) for cell in may]


def on_of(may: May) -> On:
    return On(times_of(may, "on"), times_of(may, "off"))


@settings(max_examples=60, deadline=None)
@given(st.lists(choices("on", "off"), max_size=4))
def test_all_on_is_on_with_all_and_off_with_any(parts: list[May]) -> None:
    whole = all_on(map(on_of, parts))
    either_way = every_choice(parts, strongest("off", "on")) if parts else [frozenset({"on"})] * CELLS
    assert whole == on_of(either_way)
    assert [is_in(whole.surely_on, n + 0.5) for n in range(CELLS)] == [cell == {"on"} for cell in either_way]


def test_all_on_leaves_what_is_always_on_out_of_it() -> None:
    part = On(((1.0, FOREVER_S),), ((-FOREVER_S, 2.0),))
    assert all_on([]) == ALWAYS_ON
    assert all_on([ALWAYS_ON, part, ALWAYS_ON]) == all_on([part, part]) == all_on([part, ALWAYS_ON, part]) == part
    assert all_on([part, NEVER_ON]) == all_on([NEVER_ON, part]) == NEVER_ON
    assert all_on([part, ANYTHING]) == On(((1.0, FOREVER_S),), ALWAYS)


def test_nothing_that_drives_neither_asserts_nor_keeps_any_from_releasing() -> None:
    assert any_asserts([]) == RELEASED
    assert all_agree([]) == Decision(ALWAYS, NEVER, NEVER, ALWAYS)


def test_what_a_hold_keeps_goes_through_where_drivers_meet() -> None:
    held = Decision(((0.0, 3.0),), ((3.0, 9.0),), NEVER, ((0.0, 2.0),))
    late = Decision(((0.0, 5.0),), ((5.0, 9.0),), NEVER, ((1.0, 4.0),))
    assert any_asserts([held]) is held
    assert all_agree([held]) is held
    assert any_asserts([held, late]) == Decision(((0.0, 5.0),), ((5.0, 9.0),), NEVER, ((0.0, 4.0),))
    assert all_agree([held, late]) == Decision(((0.0, 3.0),), ((3.0, 9.0),), NEVER, ((1.0, 2.0),))
    assert any_asserts([ASSERTED, ANY_DECISION]) == Decision(ALWAYS, NEVER, NEVER)
    assert all_agree([RELEASED, ANY_DECISION]) == Decision(NEVER, ALWAYS, NEVER)


ONCE: Times = ((1.0, 6.0),)
"""On from 1 s to 6 s at most, surely from 2 s to 5 s."""
NOT_ONCE: Times = ((-FOREVER_S, 2.0), (5.0, FOREVER_S))


@pytest.mark.parametrize(
    ("on", "off", "least_s", "most_s", "on_then", "off_then"),
    [
        (ONCE, NOT_ONCE, 0.0, 0.0, ONCE, NOT_ONCE),
        (ONCE, NOT_ONCE, 0.5, 1.0, ((1.5, 6.0),), ((-FOREVER_S, 3.0), (5.0, FOREVER_S))),
        (ONCE, NOT_ONCE, 0.0, 1.0, ((1.0, 6.0),), ((-FOREVER_S, 3.0), (5.0, FOREVER_S))),
        # It may just be settled when it goes: then it never surely is.
        (ONCE, NOT_ONCE, 1.0, 3.0, ((2.0, 6.0),), ALWAYS),
        # It settles in exactly the time for which it may be on: it never is.
        (ONCE, NOT_ONCE, 5.0, 5.0, NEVER, ALWAYS),
        (ONCE, NOT_ONCE, 4.0, 5.0, ((5.0, 6.0),), ALWAYS),
        # Twice: the first time too short to settle.
        (((0.0, 2.0), (4.0, FOREVER_S)), ((-FOREVER_S, 0.0), (2.0, 4.0)), 2.0, 2.5,
         ((6.0, FOREVER_S),), ((-FOREVER_S, 6.5),)),
        (((0.0, 2.0), (4.0, 9.0)), ((-FOREVER_S, 0.0), (2.0, 4.0), (9.0, 10.0)), 1.0, 1.0,
         ((1.0, 2.0), (5.0, 9.0)), ((-FOREVER_S, 1.0), (2.0, 5.0), (9.0, 11.0))),
        (ALWAYS, NEVER, 1.0, 2.0, ALWAYS, NEVER),
        (ALWAYS, NEVER, 1.0, FOREVER_S, ALWAYS, NEVER),
        (NEVER, ALWAYS, 1.0, 2.0, NEVER, ALWAYS),
        (((1.0, FOREVER_S),), ((-FOREVER_S, 2.0),), 1.0, FOREVER_S, ((2.0, FOREVER_S),), ALWAYS),
    ],
)  # fmt: skip
def test_settling_by_hand(
    on: Times, off: Times, least_s: float, most_s: float, on_then: Times, off_then: Times
) -> None:
    assert settled(On(on, off), least_s=least_s, most_s=most_s) == On(on_then, off_then)
