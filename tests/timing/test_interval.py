"""Sets of times against the same sets on a fine grid, and intervals against the arithmetic written out."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.timing.interval import (
    ALWAYS,
    FOREVER_S,
    NEVER,
    Arrival,
    Times,
    both,
    delayed,
    either,
    filtered,
    is_in,
    joined,
    last_arrival,
    outside,
)

GRID = [number + 0.5 for number in range(-2, 42)]
"""Times between the whole numbers on which every span of a test begins and ends."""


@st.composite
def whole_times(draw: st.DrawFn) -> Times:
    ends = sorted(draw(st.sets(st.integers(0, 40), max_size=8)))
    spans = [(float(a), float(b)) for a, b in zip(ends[::2], ends[1::2], strict=False)]
    if spans and draw(st.booleans()):
        spans[0] = (-FOREVER_S, spans[0][1])
    if spans and draw(st.booleans()):
        spans[-1] = (spans[-1][0], FOREVER_S)
    return joined(spans) if spans else NEVER


def on_grid(times: Times) -> list[bool]:
    return [is_in(times, at) for at in GRID]


def of_grid(cells: list[bool]) -> Times:
    """The one set of times, in its plainest form, that holds these parts of the grid; the outermost ones for ever."""
    spans: list[tuple[float, float]] = []
    for number, holds in enumerate(cells):
        start = -FOREVER_S if number == 0 else GRID[number] - 0.5
        end = FOREVER_S if number == len(cells) - 1 else GRID[number] + 0.5
        if holds and spans and spans[-1][1] == start:
            spans[-1] = (spans[-1][0], end)
        elif holds:
            spans.append((start, end))
    return tuple(spans)


@settings(max_examples=150, deadline=None)
@given(whole_times(), whole_times())
def test_union_intersection_and_complement_are_those_of_every_time(first: Times, second: Times) -> None:
    a, b = on_grid(first), on_grid(second)
    assert either(first, second) == of_grid([x or y for x, y in zip(a, b, strict=True)])
    assert both(first, second) == of_grid([x and y for x, y in zip(a, b, strict=True)])
    assert outside(first) == of_grid([not x for x in a])
    assert outside(outside(first)) == first


LATER: Times = ((5.0, 9.0),)


@pytest.mark.parametrize(
    ("first", "second", "union", "common"),
    [
        (((1.0, 2.0),), LATER, ((1.0, 2.0), (5.0, 9.0)), NEVER),
        (((1.0, 5.0),), LATER, ((1.0, 9.0),), NEVER),  # they just touch
        (((9.0, 11.0),), LATER, ((5.0, 11.0),), NEVER),
        (((1.0, 6.0),), LATER, ((1.0, 9.0),), ((5.0, 6.0),)),
        (((5.0, 6.0),), LATER, LATER, ((5.0, 6.0),)),
        (((6.0, 7.0),), LATER, LATER, ((6.0, 7.0),)),
        (((7.0, 9.0),), LATER, LATER, ((7.0, 9.0),)),
        (((5.0, 9.0),), LATER, LATER, LATER),
        (((5.0, 11.0),), LATER, ((5.0, 11.0),), LATER),
        (((1.0, 9.0),), LATER, ((1.0, 9.0),), LATER),
        (((8.0, 11.0),), LATER, ((5.0, 11.0),), ((8.0, 9.0),)),
        (((-FOREVER_S, 5.0),), LATER, ((-FOREVER_S, 9.0),), NEVER),
        (((-FOREVER_S, 5.0),), ((5.0, FOREVER_S),), ALWAYS, NEVER),
        (((1.0, 2.0), (4.0, 5.0)), LATER, ((1.0, 2.0), (4.0, 9.0)), NEVER),
        (((1.0, 5.0), (9.0, 10.0)), LATER, ((1.0, 10.0),), NEVER),
        (((1.0, 5.0), (7.0, 9.0), (9.5, 12.0)), LATER, ((1.0, 9.0), (9.5, 12.0)), ((7.0, 9.0),)),
        (((1.0, 2.0), (3.0, 4.0)), ((1.5, 3.5), (3.75, 9.0)), ((1.0, 9.0),), ((1.5, 2.0), (3.0, 3.5), (3.75, 4.0))),
        (((1.0, 20.0), (30.0, 40.0)), LATER, ((1.0, 20.0), (30.0, 40.0)), LATER),
        (NEVER, LATER, LATER, NEVER),
        (NEVER, NEVER, NEVER, NEVER),
        (ALWAYS, LATER, ALWAYS, LATER),
        (ALWAYS, ALWAYS, ALWAYS, ALWAYS),
        (NEVER, ALWAYS, ALWAYS, NEVER),
    ],
)
def test_two_sets_either_way_round(first: Times, second: Times, union: Times, common: Times) -> None:
    assert either(first, second) == either(second, first) == union
    assert both(first, second) == both(second, first) == common


@pytest.mark.parametrize("scale", [1.0, -1.0])
def test_what_rounding_leaves_between_two_spans_is_no_gap(scale: float) -> None:
    """A gap of 1e-12 of the time at which it begins touches (here 1 s in 1e12 s, exact in a float); more does not."""
    edge = 1e12 * scale
    before, touching, apart = (edge - 5.0, edge), (edge + 1.0, edge + 3.0), (edge + 1.25, edge + 3.0)
    assert either((before,), (touching,)) == ((edge - 5.0, edge + 3.0),)
    assert either((before,), (apart,)) == (before, apart)
    third = (edge + 9.0, edge + 10.0)
    assert joined((before, touching, third)) == ((edge - 5.0, edge + 3.0), third)
    assert joined((before, apart, third)) == (before, apart, third)


def test_beside_time_zero_nothing_but_zero_touches() -> None:
    assert either(((-1.0, 0.0),), ((1e-300, 1.0),)) == ((-1.0, 0.0), (1e-300, 1.0))
    assert joined(((-1.0, 0.0), (1e-300, 1.0))) == ((-1.0, 0.0), (1e-300, 1.0))
    assert either(((-1.0, 0.0),), ((0.0, 1.0),)) == joined(((-1.0, 0.0), (0.0, 1.0))) == ((-1.0, 1.0),)


def test_spans_inside_one_another_are_joined_to_the_outermost() -> None:
    assert joined(((0.0, 10.0), (1.0, 2.0), (3.0, 12.0), (12.0, 13.0), (14.0, 15.0))) == ((0.0, 13.0), (14.0, 15.0))
    assert joined(((3.0, 4.0),)) == ((3.0, 4.0),)


def test_between_spans_that_touch_there_is_nothing_outside() -> None:
    assert outside(((0.0, 1.0), (1.0, 2.0))) == ((-FOREVER_S, 0.0), (2.0, FOREVER_S))


def test_a_span_holds_its_start_and_not_its_end() -> None:
    assert [is_in(((1.0, 2.0), (3.0, 4.0)), at) for at in (0.5, 1.0, 1.5, 2.0, 2.5, 3.0, 4.0)] == [
        False, True, True, False, False, True, False,
    ]  # fmt: skip


@settings(max_examples=150, deadline=None)
@given(whole_times(), st.integers(0, 5), st.integers(0, 5))
def test_a_delay_reaches_every_time_that_some_delay_reaches(times: Times, least: int, more: int) -> None:
    late = delayed(times, least_s=float(least), most_s=float(least + more))
    by_hand = [any(is_in(times, at - by) for by in (least + share / 4 for share in range(4 * more + 1))) for at in GRID]
    assert on_grid(late) == by_hand


@pytest.mark.parametrize(
    ("least_s", "most_s", "expected"),
    [
        (0.0, 0.0, ((0.0, 2.0), (4.0, 8.0))),
        (1.0, 1.0, ((1.0, 3.0), (5.0, 9.0))),
        (-1.0, -1.0, ((-1.0, 1.0), (3.0, 7.0))),
        (0.0, 1.0, ((0.0, 3.0), (4.0, 9.0))),
        (1.0, 0.0, ((1.0, 2.0), (5.0, 8.0))),
        (0.0, 2.0, ((0.0, 10.0),)),  # the first ends where the second begins
        (2.0, 0.0, ((6.0, 8.0),)),  # nothing is left of a span as long as it is delayed
        (-1.0, 0.0, ((-1.0, 2.0), (3.0, 8.0))),
        (0.0, -1.0, ((0.0, 1.0), (4.0, 7.0))),
        (0.0, -4.0, NEVER),
    ],
)
def test_a_delay_by_hand(least_s: float, most_s: float, expected: Times) -> None:
    assert delayed(((0.0, 2.0), (4.0, 8.0)), least_s=least_s, most_s=most_s) == expected


def test_a_delay_moves_no_infinite_end() -> None:
    assert delayed(ALWAYS, least_s=1.0, most_s=2.0) == ALWAYS
    assert delayed(NEVER, least_s=1.0, most_s=2.0) == NEVER
    assert delayed(((3.0, FOREVER_S),), least_s=1.0, most_s=FOREVER_S) == ((4.0, FOREVER_S),)
    assert delayed(((-FOREVER_S, 3.0),), least_s=1.0, most_s=2.0) == ((-FOREVER_S, 5.0),)


def test_a_span_of_which_a_negative_delay_leaves_nothing_falls_out() -> None:
    assert delayed(((0.0, 1.0), (4.0, 9.0)), least_s=2.0, most_s=0.0) == ((6.0, 9.0),)


def test_a_filter_ignores_what_is_surely_too_short_and_fills_gaps_it_may_ignore() -> None:
    times = ((0.0, 1.0), (10.0, 20.0), (22.0, 30.0))
    # 1 s is shorter than the 2 s that are surely ignored; the gap of 2 s is shorter than the 3 s that are surely seen.
    assert filtered(times, least_s=2.0, most_s=3.0) == ((12.0, 33.0),)
    # A gap as long as what is surely seen splits the span: each part comes by the least, goes by the most.
    assert filtered(((10.0, 20.0), (23.0, 30.0)), least_s=2.0, most_s=3.0) == ((12.0, 23.0), (25.0, 33.0))


@pytest.mark.parametrize(
    ("least_s", "most_s", "expected"),
    [
        (0.0, 0.0, ((0.0, 1.0), (3.0, 9.0))),
        (0.0, 1.0, ((0.0, 2.0), (3.0, 10.0))),
        (1.0, 1.0, ((1.0, 2.0), (4.0, 10.0))),  # what lasts exactly as long as is surely ignored may be seen
        (1.0, 2.0, ((1.0, 3.0), (4.0, 11.0))),  # a gap exactly as long as what is surely seen is none to fill
        (1.25, 2.0, ((4.25, 11.0),)),
        (1.25, 2.25, ((1.25, 11.25),)),  # the gap is filled first, so that the short span is part of a long one
        (9.0, 9.0, ((9.0, 18.0),)),
        (9.25, 9.25, NEVER),
    ],
)
def test_a_filter_by_hand(least_s: float, most_s: float, expected: Times) -> None:
    """Of spans of 1 s and 6 s with 2 s between."""
    assert filtered(((0.0, 1.0), (3.0, 9.0)), least_s=least_s, most_s=most_s) == expected


def test_a_filter_of_what_lasts_for_ever() -> None:
    assert filtered(NEVER, least_s=1.0, most_s=2.0) == NEVER
    assert filtered(ALWAYS, least_s=1.0, most_s=2.0) == ALWAYS
    assert filtered(((-FOREVER_S, 3.0),), least_s=1.0, most_s=2.0) == ((-FOREVER_S, 5.0),)
    # A filter of no known length may ignore any gap.
    assert filtered(((0.0, 1.0), (50.0, 51.0)), least_s=0.0, most_s=FOREVER_S) == ((0.0, FOREVER_S),)


def test_each_gap_is_held_against_the_end_of_what_came_before() -> None:
    times = ((0.0, 4.0), (5.0, 6.0), (7.0, 8.0), (12.0, 13.0))
    assert filtered(times, least_s=1.0, most_s=1.5) == ((1.0, 9.5), (13.0, 14.5))
    late = ((0.0, 4.0), (12.0, 13.0), (14.0, 15.0))
    assert filtered(late, least_s=1.0, most_s=1.5) == ((1.0, 5.5), (13.0, 16.5))


def test_the_last_of_needs_and_the_first_of_alternatives() -> None:
    """Needs meet in an intersection: the later of two, at both ends; alternatives in a union: the sooner of two."""
    early, late = ((1.0, FOREVER_S),), ((2.0, FOREVER_S),)
    not_early, not_late = ((-FOREVER_S, 4.0),), ((-FOREVER_S, 3.0),)
    assert last_arrival(both(early, late), either(not_early, not_late)) == Arrival(2.0, 4.0)
    assert last_arrival(either(early, late), both(not_early, not_late)) == Arrival(1.0, 3.0)


def test_what_never_comes_has_no_arrival_and_what_may_not_come_no_latest() -> None:
    assert last_arrival(NEVER, ALWAYS) is None
    assert last_arrival(ALWAYS, NEVER) is None
    assert last_arrival(((1.0, FOREVER_S),), ALWAYS) == Arrival(1.0, FOREVER_S)
    assert last_arrival(((1.0, 2.0), (5.0, 9.0)), ((-FOREVER_S, 1.5), (2.0, 6.0), (9.0, FOREVER_S))) == Arrival(
        5.0, 6.0
    )


def test_what_may_not_be_up_to_its_first_time_is_no_doubt_about_it() -> None:
    # It comes at 5 s or not before; that it may go at 7 s and come back at 9 s is no later arrival.
    assert last_arrival(((5.0, FOREVER_S),), ((-FOREVER_S, 5.0), (7.0, 9.0))) == Arrival(5.0, 5.0)
    assert last_arrival(((5.0, FOREVER_S),), NEVER) == Arrival(5.0, 5.0)
    assert last_arrival(((-FOREVER_S, 1.0), (3.0, 4.0)), ((1.0, 3.5), (4.0, 6.0))) == Arrival(3.0, 3.5)
    assert last_arrival(((-FOREVER_S, 1.0),), ((0.0, FOREVER_S),)) is None  # it goes; it does not come


def test_ends() -> None:
    assert either(NEVER, ALWAYS) == ALWAYS
    assert both(ALWAYS, NEVER) == NEVER
    assert outside(NEVER) == ALWAYS
    assert outside(ALWAYS) == NEVER
