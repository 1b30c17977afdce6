"""Crossings of piecewise-linear supplies against SciPy's event detection; ends, shift and refusals."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from tests.timing.random_subsystems import shifted
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.interval import FOREVER_S, Times
from tidegate.lint.timing.waveform import Waveform

BOUNCE = Waveform(((0.0, 0.0), (1.0, 1.8), (1.2, 1.8), (1.4, 0.9), (2.0, 1.8), (3.0, 0.1)))


def _scipy_crossings(waveform: Waveform, level_v: float) -> list[tuple[float, bool]]:
    """Times at which the supply, integrated from its slopes, passes a level, and whether upwards."""
    found = []
    for (from_s, from_v), (to_s, to_v) in pairwise(waveform.points):
        if to_s == from_s:
            continue
        slope = (to_v - from_v) / (to_s - from_s)

        def meets(_: float, v: np.ndarray) -> float:
            return float(v[0] - level_v)

        done = solve_ivp(lambda _, __, s=slope: [s], (from_s, to_s), [from_v], events=meets, rtol=1e-10, atol=1e-12)
        found += [(float(at), slope > 0.0) for at in done.t_events[0]]
    return found


@pytest.mark.parametrize("level_v", [0.2, 0.95, 1.3, 1.79])
def test_crossings_are_where_scipy_finds_them(level_v: float) -> None:
    spans = BOUNCE.above(rising_v=level_v, falling_v=level_v)
    ours = [(at, up) for start, end in spans for at, up in ((start, True), (end, False)) if abs(at) != FOREVER_S]
    theirs = _scipy_crossings(BOUNCE, level_v)
    assert [up for _, up in ours] == [up for _, up in theirs]
    assert [at for at, _ in ours] == pytest.approx([at for at, _ in theirs], rel=1e-8)


def test_a_detector_with_hysteresis_stays_until_the_falling_level() -> None:
    # Up through 1.5 V at 1.5/1.8 s; the bounce ends at 0.9 V and does not reach 0.8 V; down through it on the way out.
    (only,) = BOUNCE.above(rising_v=1.5, falling_v=0.8)
    assert only == pytest.approx((1.5 / 1.8, 2.0 + 1.0 / 1.7))
    # With 1.0 V it lets go in the bounce (1.2 s + 0.8/0.9 of 0.2 s) and comes back at 1.4 s + 0.6/0.9 of 0.6 s.
    first, second = BOUNCE.above(rising_v=1.5, falling_v=1.0)
    assert first == pytest.approx((1.5 / 1.8, 1.2 + 0.2 * 0.8 / 0.9))
    assert second == pytest.approx((1.4 + 0.6 * 0.6 / 0.9, 2.0 + 0.8 / 1.7))


def test_before_its_first_point_a_supply_has_been_there_for_ever() -> None:
    down = Waveform(((0.0, 1.8), (1.0, 0.0)))
    assert down.above(rising_v=1.0, falling_v=0.9) == ((-FOREVER_S, pytest.approx(0.5)),)
    assert down.above(rising_v=1.9, falling_v=0.9) == ()


def test_a_step_has_no_time_between() -> None:
    step = Waveform(((0.0, 0.0), (0.0, 2.0), (3.0, 2.0), (3.0, 0.0)))
    assert step.above(rising_v=1.0, falling_v=1.0) == ((0.0, 3.0),)
    assert step.level_v(0.0) == 2.0
    assert Waveform.__struct_config__.frozen
    assert step.level_v(3.0) == 0.0


@settings(max_examples=80, deadline=None)
@given(
    st.lists(st.tuples(st.floats(0.01, 3.0), st.floats(0.0, 3.0)), min_size=2, max_size=7),
    st.floats(0.05, 2.9), st.floats(0.0, 1.0), st.floats(-5.0, 5.0),
)  # fmt: skip
def test_shifting_a_supply_shifts_its_crossings(
    steps: list[tuple[float, float]], rising_v: float, below: float, by_s: float
) -> None:
    at_s, points = 0.0, []
    for wait_s, level_v in steps:
        points.append((at_s, level_v))
        at_s += wait_s
    waveform = Waveform(tuple(points))
    spans = waveform.above(rising_v=rising_v, falling_v=rising_v * (1.0 - below))
    later = shifted(waveform, by_s).above(rising_v=rising_v, falling_v=rising_v * (1.0 - below))
    assert len(later) == len(spans)
    for (start, end), (late_start, late_end) in zip(spans, later, strict=True):
        assert (late_start, late_end) == (pytest.approx(start + by_s), pytest.approx(end + by_s))


@pytest.mark.parametrize(
    ("at_s", "expected_v"),
    [
        (-1.0, 0.0),
        (0.0, 0.0),
        (0.5, 0.9),
        (1.0, 1.8),
        (1.1, 1.8),
        (1.35, 1.125),
        (1.4, 0.9),
        (2.5, 0.95),
        (3.0, 0.1),
        (9.0, 0.1),
    ],
)
def test_the_level_at_a_time_is_that_of_numpy(at_s: float, expected_v: float) -> None:
    assert BOUNCE.level_v(at_s) == pytest.approx(expected_v, abs=1e-12)
    assert expected_v == pytest.approx(np.interp(at_s, *zip(*BOUNCE.points, strict=True)), abs=1e-12)


def test_between_points_of_odd_times_and_levels() -> None:
    # From 1 V at 2 s to 4 V at 8 s: half a volt each second.
    line = Waveform(((2.0, 1.0), (8.0, 4.0)))
    assert [line.level_v(at_s) for at_s in (1.0, 2.0, 3.0, 6.0, 8.0)] == [1.0, 1.0, 1.5, 3.0, 4.0]
    assert line.above(rising_v=1.5, falling_v=1.5) == ((3.0, FOREVER_S),)
    assert line.above(rising_v=1.0, falling_v=1.0) == ((-FOREVER_S, FOREVER_S),)
    down = Waveform(((2.0, 4.0), (8.0, 1.0)))
    assert down.above(rising_v=1.5, falling_v=1.5) == ((-FOREVER_S, 7.0),)


PULSE = Waveform(((0.0, 0.0), (2.0, 1.0), (4.0, 1.0), (6.0, 0.0)))


@pytest.mark.parametrize(
    ("rising_v", "falling_v", "expected"),
    [
        (1.0, 1.0, ((2.0, 4.0),)),  # just reaches the level, and rests on it: not below it until it falls
        (1.0, 0.5, ((2.0, 5.0),)),
        (1.0, 0.0, ((2.0, FOREVER_S),)),  # comes down to the falling level, and not below it
        (0.5, 0.0, ((1.0, FOREVER_S),)),
        (1.0 + 1e-9, 0.5, ()),
        (0.0, 0.0, ((-FOREVER_S, FOREVER_S),)),  # before its first point it has reached the level
        (0.0, 0.5, ((-FOREVER_S, 5.0),)),
        (-1.0, -1.0, ((-FOREVER_S, FOREVER_S),)),
    ],
)
def test_levels_that_are_just_reached(rising_v: float, falling_v: float, expected: Times) -> None:
    assert PULSE.above(rising_v=rising_v, falling_v=falling_v) == expected


@pytest.mark.parametrize(
    ("points", "expected"),
    [
        (((0.0, 2.0), (0.0, 0.0)), ((-FOREVER_S, 0.0),)),
        (((1.0, 0.0), (1.0, 2.0), (1.0, 0.0)), ()),  # up and down at one time is never up
        (((1.0, 0.0), (1.0, 2.0), (2.0, 2.0), (2.0, 0.0), (2.0, 2.0)), ((1.0, 2.0), (2.0, FOREVER_S))),
        (((0.0, 1.0), (5.0, 1.0)), ((-FOREVER_S, FOREVER_S),)),
        (((3.0, 1.0),), ((-FOREVER_S, FOREVER_S),)),
        (((3.0, 0.5),), ()),
    ],
)
def test_steps_and_rests(points: tuple[tuple[float, float], ...], expected: Times) -> None:
    assert Waveform(points).above(rising_v=1.0, falling_v=1.0) == expected


def test_a_supply_that_begins_above_the_rising_level_and_below_the_falling_one() -> None:
    """Levels the wrong way round: it is taken for high where it begins, and lets go with the first piece."""
    wrong = Waveform(((0.0, 1.0), (2.0, 1.0), (4.0, 3.0)))
    assert wrong.above(rising_v=0.5, falling_v=2.0) == ((-FOREVER_S, 0.0), (2.0, FOREVER_S))
    ((_, goes_s),) = Waveform(((0.0, 1.0), (2.0, 1.5))).above(rising_v=0.5, falling_v=2.0)
    assert 0.0 <= goes_s <= 2.0


@pytest.mark.parametrize(
    ("points", "said"),
    [
        ((), "points must hold at least one point (found none)"),
        (((1.0, 0.0), (0.5, 1.0)), "at_s must not go back: 0.5 comes after 1.0"),
    ],
    ids=["empty", "back"],
)
def test_what_is_no_waveform_is_refused(points: tuple[tuple[float, float], ...], said: str) -> None:
    with pytest.raises(DomainError) as refused:
        Waveform(points)
    assert str(refused.value) == said


def test_a_level_that_is_no_number_is_refused() -> None:
    with pytest.raises(DomainError, match="level_v"):
        Waveform(((0.0, float("nan")),))
