"""Windows of the trip levels: the sign-off example, published tolerance laws, and brute force over the contributors."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.tolerance import Contributor, Kind
from tidegate.lint.physics.trip_window import (
    Combination,
    TripWindow,
    Window,
    combined_error_v,
    droop_during_response_v,
    response_time_s,
    window_from_contributors,
    window_from_falling,
    window_from_ranges,
    window_from_rising,
)


def bound(size_v: float, *, tracks: bool) -> Contributor:
    return Contributor("bound", size_v, Kind.BOUND, coverage=None, rectangular=False, tracks=tracks)


def sigma(size_v: float, *, tracks: bool) -> Contributor:
    return Contributor("sigma", size_v, Kind.SIGMA, coverage=1.0, rectangular=False, tracks=tracks)


def ends(window: Window) -> tuple[float, float]:
    return (window.least_v, window.most_v)


def windows_of(*contributors: Contributor, hysteresis_error_v: float, method: Combination) -> TripWindow:
    return window_from_contributors(
        rising_v=1.66,
        falling_v=1.61,
        contributors=contributors,
        hysteresis_error_v=hysteresis_error_v,
        coverage=3.0,
        method=method,
    )


def test_signed_off_minimum_placed_to_guarantee() -> None:
    # Common practice, no source: signed off from 1.60 V, error +-10 mV, hysteresis 50 mV.
    found = windows_of(bound(0.010, tracks=True), hysteresis_error_v=0.0, method=Combination.WORST_CASE)
    assert ends(found.falling) == pytest.approx((1.60, 1.62))
    assert ends(found.rising) == pytest.approx((1.65, 1.67))
    assert ends(found.hysteresis) == pytest.approx((0.05, 0.05))
    assert found.tracked


def test_signed_off_minimum_placed_the_other_way_round() -> None:
    # Common practice, no source: always released above 1.60 V; the flag may stay silent down to 1.53 V.
    found = window_from_contributors(
        rising_v=1.59,
        falling_v=1.54,
        contributors=[bound(0.010, tracks=True)],
        hysteresis_error_v=0.0,
        coverage=3.0,
        method=Combination.WORST_CASE,
    )
    assert found.rising.most_v == pytest.approx(1.60)
    assert found.falling.least_v == pytest.approx(1.53)


def test_tracked_errors_cancel_in_the_hysteresis_though_the_windows_overlap() -> None:
    found = windows_of(bound(0.040, tracks=True), hysteresis_error_v=0.005, method=Combination.WORST_CASE)
    assert found.falling.most_v > found.rising.least_v
    assert ends(found.hysteresis) == pytest.approx((0.045, 0.055))
    assert ends(found.rising) == pytest.approx((1.62, 1.70))  # the error of the difference widens no level


def test_untracked_errors_enter_the_hysteresis_twice() -> None:
    mixed = (bound(0.040, tracks=True), bound(0.004, tracks=False), sigma(0.001, tracks=False))
    worst = windows_of(*mixed, hysteresis_error_v=0.002, method=Combination.WORST_CASE)
    assert not worst.tracked
    assert ends(worst.falling) == pytest.approx((1.61 - 0.047, 1.61 + 0.047))
    assert ends(worst.hysteresis) == pytest.approx((0.05 - 0.016, 0.05 + 0.016))

    rss = windows_of(*mixed, hysteresis_error_v=0.002, method=Combination.ROOT_SUM_SQUARE)
    assert rss.falling.most_v - 1.61 == pytest.approx(math.sqrt(0.040**2 + 0.004**2 + 0.003**2))
    assert rss.hysteresis.most_v - 0.05 == pytest.approx(math.sqrt(0.002**2 + 2 * (0.004**2 + 0.003**2)))


SIZES = st.lists(st.tuples(st.floats(0.0, 0.1), st.booleans()), min_size=1, max_size=4)


@settings(max_examples=40, deadline=None)
@given(rows=SIZES, hysteresis_error_v=st.floats(0.0, 0.02))
def test_worst_case_windows_are_what_brute_force_finds(
    rows: list[tuple[float, bool]], hysteresis_error_v: float
) -> None:
    contributors = [bound(size, tracks=tracks) for size, tracks in rows]
    found = windows_of(*contributors, hysteresis_error_v=hysteresis_error_v, method=Combination.WORST_CASE)
    rising, falling, hysteresis = [], [], []
    # Every contributor at either end: one sign where it tracks, one for each level where it does not.
    for signs in itertools.product((-1.0, 1.0), repeat=2 * len(rows)):
        up = sum(s * size for s, (size, _) in zip(signs[::2], rows, strict=True))
        down = sum(
            (s if tracks else other) * size
            for s, other, (size, tracks) in zip(signs[::2], signs[1::2], rows, strict=True)
        )
        rising.append(1.66 + up)
        falling.append(1.61 + down)
        hysteresis.append(0.05 + up - down)
    assert ends(found.rising) == pytest.approx((min(rising), max(rising)))
    assert ends(found.falling) == pytest.approx((min(falling), max(falling)))
    expected = (min(hysteresis) - hysteresis_error_v, max(hysteresis) + hysteresis_error_v)
    assert ends(found.hysteresis) == pytest.approx(expected)


def test_root_sum_square_windows_against_drawn_parts() -> None:
    # NumPy as the reference: standard deviation of 200 000 drawn parts; its own relative error is 1/sqrt(2 n) = 0.16 %.
    draw = np.random.default_rng(20240607).standard_normal((3, 200_000))
    shared, up, down = 0.008 * draw[0], 0.003 * draw[1], 0.003 * draw[2]
    found = windows_of(
        sigma(0.008, tracks=True),
        sigma(0.003, tracks=False),
        hysteresis_error_v=0.0,
        method=Combination.ROOT_SUM_SQUARE,
    )
    assert (found.rising.most_v - 1.66) / 3.0 == pytest.approx(np.std(shared + up), rel=0.008)
    assert (found.hysteresis.most_v - 0.05) / 3.0 == pytest.approx(np.std(up - down), rel=0.008)


def test_ranges_of_tracked_levels_pair_low_with_low() -> None:
    rising, falling = Window(1.62, 1.70), Window(1.58, 1.64)
    tracked = window_from_ranges(rising=rising, falling=falling, hysteresis=None, tracked=True)
    assert ends(tracked.hysteresis) == pytest.approx((0.04, 0.06))
    apart = window_from_ranges(rising=rising, falling=falling, hysteresis=None, tracked=False)
    assert ends(apart.hysteresis) == pytest.approx((-0.02, 0.12))
    stated = window_from_ranges(rising=rising, falling=falling, hysteresis=Window(0.045, 0.055), tracked=True)
    assert stated.hysteresis == Window(0.045, 0.055)
    assert (stated.rising, stated.falling) == (rising, falling)


def test_ranges_that_narrow_upwards_still_give_a_window() -> None:
    found = window_from_ranges(rising=Window(1.65, 1.66), falling=Window(1.58, 1.62), hysteresis=None, tracked=True)
    assert ends(found.hysteresis) == pytest.approx((0.04, 0.07))


def test_a_level_reached_through_the_hysteresis() -> None:
    from_falling = window_from_falling(falling=Window(1.60, 1.62), hysteresis=Window(0.03, 0.05))
    assert ends(from_falling.rising) == pytest.approx((1.63, 1.67))
    from_rising = window_from_rising(rising=Window(1.63, 1.67), hysteresis=Window(0.03, 0.05))
    assert ends(from_rising.falling) == pytest.approx((1.58, 1.64))
    assert from_falling.tracked
    assert from_rising.tracked


def test_dynamic_extension() -> None:
    # Arithmetic: a supply that collapses by 5 mV/us for 2 us + 3 us + 10 us ends 75 mV lower.
    delay_s = response_time_s(delay_s=2e-6, filter_s=3e-6, sampling_period_s=10e-6)
    assert delay_s == pytest.approx(15e-6)
    assert droop_during_response_v(slew_v_per_s=5e3, delay_s=delay_s) == pytest.approx(0.075)


@pytest.mark.parametrize("method", list(Combination))
def test_more_error_never_narrows_a_window(method: Combination) -> None:
    contributors = [bound(0.01, tracks=True), sigma(0.002, tracks=False)]
    less = combined_error_v(contributors, coverage=3.0, method=method)
    more = combined_error_v([*contributors, bound(1e-3, tracks=True)], coverage=3.0, method=method)
    assert more > less > 0.0


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: Window(1.0, 0.9), "least_v must be at most most_v, 0.9 (found 1.0)"),
    (lambda: Window(math.nan, 0.9), "least_v must be a finite number (found nan)"),
    (lambda: Window(0.0, math.inf), "most_v must be a finite number (found inf)"),
    (
        lambda: windows_of(hysteresis_error_v=-0.001, method=Combination.WORST_CASE),
        "hysteresis_error_v must be at least 0 (found -0.001)",
    ),
    (
        lambda: window_from_contributors(
            rising_v=math.nan,
            falling_v=1.0,
            contributors=(),
            hysteresis_error_v=0.0,
            coverage=3.0,
            method=Combination.WORST_CASE,
        ),
        "rising_v must be a finite number (found nan)",
    ),
    (
        lambda: combined_error_v([], coverage=0.0, method=Combination.ROOT_SUM_SQUARE),
        "coverage must be greater than 0 (found 0.0)",
    ),
    (
        lambda: response_time_s(delay_s=-1.0, filter_s=0.0, sampling_period_s=0.0),
        "delay_s must be at least 0 (found -1.0)",
    ),
    (
        lambda: response_time_s(delay_s=0.0, filter_s=0.0, sampling_period_s=-1.0),
        "sampling_period_s must be at least 0 (found -1.0)",
    ),
    (
        lambda: droop_during_response_v(slew_v_per_s=-1.0, delay_s=0.0),
        "slew_v_per_s must be at least 0 (found -1.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
