"""Sets of times against the same sets on a fine grid, and intervals against the arithmetic written out."""

from __future__ import annotations

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


@settings(max_examples=150, deadline=None)
@given(whole_times(), whole_times())
def test_union_intersection_and_complement_are_those_of_every_time(first: Times, second: Times) -> None:
    a, b = on_grid(first), on_grid(second)
    assert on_grid(either(first, second)) == [x or y for x, y in zip(a, b, strict=True)]
    assert on_grid(both(first, second)) == [x and y for x, y in zip(a, b, strict=True)]
    assert on_grid(outside(first)) == [not x for x in a]
    assert outside(outside(first)) == first


@settings(max_examples=150, deadline=None)
@given(whole_times(), st.integers(0, 5), st.integers(0, 5))
def test_a_delay_reaches_every_time_that_some_delay_reaches(times: Times, least: int, more: int) -> None:
    late = delayed(times, least_s=float(least), most_s=float(least + more))
    by_hand = [any(is_in(times, at - by) for by in (least + share / 4 for share in range(4 * more + 1))) for at in GRID]
    assert on_grid(late) == by_hand


def test_a_span_of_which_a_negative_delay_leaves_nothing_falls_out() -> None:
    assert delayed(((0.0, 1.0), (4.0, 9.0)), least_s=2.0, most_s=0.0) == ((6.0, 9.0),)


def test_a_filter_ignores_what_is_surely_too_short_and_fills_gaps_it_may_ignore() -> None:
    times = ((0.0, 1.0), (10.0, 20.0), (22.0, 30.0))
    # 1 s is shorter than the 2 s that are surely ignored; the gap of 2 s is shorter than the 3 s that are surely seen.
    assert filtered(times, least_s=2.0, most_s=3.0) == ((12.0, 33.0),)
    # A gap as long as what is surely seen splits the span: each part comes by the least, goes by the most.
    assert filtered(((10.0, 20.0), (23.0, 30.0)), least_s=2.0, most_s=3.0) == ((12.0, 23.0), (25.0, 33.0))


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


def test_ends() -> None:
    assert either(NEVER, ALWAYS) == ALWAYS
    assert both(ALWAYS, NEVER) == NEVER
    assert outside(NEVER) == ALWAYS
    assert outside(ALWAYS) == NEVER
