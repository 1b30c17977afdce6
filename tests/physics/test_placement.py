"""Placement: a level inside the interval keeps every margin, one step outside fails exactly the one it names."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from tidegate.lint.physics import trip_margin
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.placement import (
    Level,
    LevelError,
    Limit,
    Requirement,
    Side,
    largest_hysteresis_v,
    over_voltage_limits,
    placement,
    power_on_limits,
    under_voltage_limits,
)
from tidegate.lint.physics.trip_window import Combination, TripWindow, Window, window_from_ranges

TEN_MV = LevelError(0.010, share=0.0, method=Combination.WORST_CASE)


def windows_at(falling_v: float, hysteresis_v: float, falling: LevelError, rising: LevelError) -> TripWindow:
    rising_v = falling_v + hysteresis_v
    f, r = falling.at_v(falling_v), rising.at_v(rising_v)
    return window_from_ranges(
        rising=Window(rising_v - r, rising_v + r),
        falling=Window(falling_v - f, falling_v + f),
        hysteresis=None,
        tracked=True,
    )


def sign_off_limits(*, start_least_v: float) -> tuple[Limit, ...]:
    return under_voltage_limits(
        falling_error=TEN_MV,
        rising_error=TEN_MV,
        load_least_v=1.60,
        droop_v=0.0,
        delivered_least_v=1.71,
        start_least_v=start_least_v,
        ripple_v=0.0,
        load_step_v=0.0,
    )


def test_sign_off_example() -> None:
    # Common practice, no source: signed off from 1.60 V, error +-10 mV, hysteresis 50 mV: nominal falling level 1.61 V,
    # so that F lies in 1.60..1.62 V and R in 1.65..1.67 V.
    found = placement(sign_off_limits(start_least_v=1.71), hysteresis_v=0.05)
    assert found.least_v == pytest.approx(1.61)
    assert found.limited_below_by is Requirement.GUARANTEE
    assert found.most_v == pytest.approx(1.65)
    assert found.limited_above_by is Requirement.COMES_BACK
    assert found.short_v == 0.0


def test_where_nothing_fits_the_shortage_is_told() -> None:
    # With start-up due at 1.65 V the rising level must be at most 1.64 V, 20 mV below the 1.66 V of the guarantee.
    found = placement(sign_off_limits(start_least_v=1.65), hysteresis_v=0.05)
    assert found.short_v == pytest.approx(0.02)
    assert found.least_v - found.most_v == pytest.approx(0.02)
    assert largest_hysteresis_v(sign_off_limits(start_least_v=1.65)) == pytest.approx(0.03)
    assert placement(sign_off_limits(start_least_v=1.65), hysteresis_v=0.03 - 1e-9).short_v == 0.0
    assert placement(sign_off_limits(start_least_v=1.65), hysteresis_v=0.03 + 1e-9).short_v > 0.0


def test_of_equal_limits_the_first_is_named() -> None:
    for side, first, second in (
        (Side.LEAST, Requirement.GUARANTEE, Requirement.QUIET),
        (Side.MOST, Requirement.QUIET, Requirement.COMES_BACK),
    ):
        found = placement([Limit(by, Level.FALLING, side, 1.5) for by in (first, second)], hysteresis_v=0.05)
        assert (found.limited_below_by, found.limited_above_by) == (
            (first, None) if side is Side.LEAST else (None, first)
        )


def test_largest_hysteresis_lies_between_the_rising_ceiling_and_the_falling_floor_alone() -> None:
    # By hand: 2.0 V less 1.0 V, whatever else the levels must keep.
    limits = [
        Limit(Requirement.RELEASE, Level.RISING, Side.MOST, 2.0),
        Limit(Requirement.GUARANTEE, Level.RISING, Side.LEAST, 1.2),
        Limit(Requirement.QUIET, Level.FALLING, Side.MOST, 1.6),
        Limit(Requirement.GUARANTEE, Level.FALLING, Side.LEAST, 1.0),
    ]
    assert largest_hysteresis_v(limits) == 1.0


def test_without_limits_anything_goes() -> None:
    found = placement((), hysteresis_v=0.05)
    assert (found.least_v, found.most_v, found.short_v) == (-math.inf, math.inf, 0.0)
    assert (found.limited_below_by, found.limited_above_by) == (None, None)
    assert largest_hysteresis_v(()) == math.inf


def test_one_limit_is_moved_by_the_hysteresis_where_it_holds_for_the_rising_level() -> None:
    rising = Limit(Requirement.RELEASE, Level.RISING, Side.MOST, 1.50)
    assert placement([rising], hysteresis_v=0.05).most_v == pytest.approx(1.45)
    falling = Limit(Requirement.QUIET, Level.FALLING, Side.MOST, 1.50)
    assert placement([falling], hysteresis_v=0.05).most_v == 1.50


error = st.builds(
    LevelError,
    fixed_v=st.floats(0.0, 0.05),
    share=st.floats(0.0, 0.05),
    method=st.sampled_from(Combination),
)
small = st.floats(0.0, 0.05)


@settings(max_examples=60, deadline=None)
@given(error=error, end_v=st.floats(-0.5, 5.0))
def test_nominal_level_against_a_root_finder(error: LevelError, end_v: float) -> None:
    # SciPy as the reference: the root of V -+ E(V) = end.
    low = brentq(lambda v: v - error.at_v(v) - end_v, -2.0, 8.0, xtol=1e-14)
    high = brentq(lambda v: v + error.at_v(v) - end_v, -2.0, 8.0, xtol=1e-14)
    assert error.lowest_nominal_v(end_v) == pytest.approx(low, abs=1e-12)
    assert error.highest_nominal_v(end_v) == pytest.approx(high, abs=1e-12)


Margins = dict[Requirement, float]


def assert_placement_is_exact(
    limits: tuple[Limit, ...], hysteresis_v: float, margins_at: Callable[[float], Margins]
) -> None:
    """Inside every margin holds; one step outside only what is named fails, unless two limits lie within the step."""
    step = 1e-6
    found = placement(limits, hysteresis_v=hysteresis_v)
    assume(found.least_v + 2 * step < found.most_v)
    for inside in (found.least_v + 1e-9, 0.5 * (found.least_v + found.most_v), found.most_v - 1e-9):
        assert min(margins_at(inside).values()) >= 0.0
    for outside, named in (
        (found.least_v - step, found.limited_below_by),
        (found.most_v + step, found.limited_above_by),
    ):
        failing = {by for by, margin in margins_at(outside).items() if margin < 0.0}
        close = {by for by, margin in margins_at(outside).items() if abs(margin) <= 3 * step}
        assert named in failing
        assert failing <= close
        if len(close) == 1:
            assert failing == {named}


@settings(max_examples=60, deadline=None)
@given(falling=error, rising=error, h=small, droop=small, ripple=small, step=small, start=st.floats(1.70, 2.0))
def test_under_voltage_placement_is_exact(
    *, falling: LevelError, rising: LevelError, h: float, droop: float, ripple: float, step: float, start: float
) -> None:
    def margins_at(falling_v: float) -> Margins:
        at = windows_at(falling_v, h, falling, rising)
        return {
            Requirement.GUARANTEE: trip_margin.under_voltage_guarantee_v(at, droop_v=droop, load_least_v=1.4),
            Requirement.QUIET: trip_margin.under_voltage_quiet_v(
                at, delivered_least_v=1.8, ripple_v=ripple, load_step_v=step
            ),
            Requirement.COMES_BACK: trip_margin.under_voltage_comes_back_v(at, start_least_v=start, ripple_v=ripple),
        }

    limits = under_voltage_limits(
        falling_error=falling,
        rising_error=rising,
        load_least_v=1.4,
        droop_v=droop,
        delivered_least_v=1.8,
        start_least_v=start,
        ripple_v=ripple,
        load_step_v=step,
    )
    assert_placement_is_exact(limits, h, margins_at)


@settings(max_examples=60, deadline=None)
@given(falling=error, rising=error, h=small, rise=small, ripple=small, most=st.floats(2.1, 2.6))
def test_over_voltage_placement_is_exact(
    *, falling: LevelError, rising: LevelError, h: float, rise: float, ripple: float, most: float
) -> None:
    def margins_at(falling_v: float) -> Margins:
        at = windows_at(falling_v, h, falling, rising)
        return {
            Requirement.GUARANTEE: trip_margin.over_voltage_guarantee_v(at, rise_v=rise, load_most_v=most),
            Requirement.QUIET: trip_margin.over_voltage_quiet_v(at, delivered_most_v=1.9, ripple_v=ripple),
            Requirement.COMES_BACK: trip_margin.over_voltage_comes_back_v(at, delivered_most_v=1.9, ripple_v=ripple),
        }

    limits = over_voltage_limits(
        falling_error=falling,
        rising_error=rising,
        load_most_v=most,
        rise_v=rise,
        delivered_most_v=1.9,
        ripple_v=ripple,
    )
    assert_placement_is_exact(limits, h, margins_at)


@settings(max_examples=60, deadline=None)
@given(
    falling=error,
    rising=error,
    h=small,
    ripple=small,
    step=small,
    start=st.floats(1.5, 1.8),
    under=st.none() | st.floats(1.4, 1.8),
)
def test_power_on_placement_is_exact(
    *,
    falling: LevelError,
    rising: LevelError,
    h: float,
    ripple: float,
    step: float,
    start: float,
    under: float | None,
) -> None:
    def margins_at(falling_v: float) -> Margins:
        at = windows_at(falling_v, h, falling, rising)
        margins = {
            Requirement.GUARANTEE: trip_margin.power_on_guarantee_v(at, working_least_v=1.1),
            Requirement.QUIET: trip_margin.power_on_quiet_v(
                at, delivered_least_v=1.6, ripple_v=ripple, load_step_v=step
            ),
            Requirement.RELEASE: trip_margin.power_on_release_v(at, delivered_least_v=1.6),
            Requirement.COMES_BACK: trip_margin.power_on_comes_back_v(at, start_least_v=start, ripple_v=ripple),
        }
        if under is not None:
            margins[Requirement.BEFORE_UNDER_VOLTAGE] = trip_margin.power_on_before_under_voltage_v(
                at, under_voltage=windows_at(under, 0.0, ZERO, ZERO)
            )
        return margins

    limits = power_on_limits(
        falling_error=falling,
        rising_error=rising,
        working_least_v=1.1,
        delivered_least_v=1.6,
        start_least_v=start,
        ripple_v=ripple,
        load_step_v=step,
        under_voltage_rising_least_v=under,
    )
    assert_placement_is_exact(limits, h, margins_at)


ZERO = LevelError(0.0, share=0.0, method=Combination.WORST_CASE)


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (
        lambda: LevelError(-0.01, share=0.0, method=Combination.WORST_CASE),
        "fixed_v must be at least 0 (found -0.01)",
    ),
    (
        lambda: LevelError(0.01, share=-0.1, method=Combination.WORST_CASE),
        "share must be at least 0 (found -0.1)",
    ),
    (lambda: LevelError(0.01, share=1.0, method=Combination.WORST_CASE), "share must be below 1 (found 1.0)"),
    (lambda: placement((), hysteresis_v=-0.01), "hysteresis_v must be at least 0 (found -0.01)"),
    (
        lambda: sign_off_limits(start_least_v=math.nan),
        "start_least_v must be a finite number (found nan)",
    ),
    (
        lambda: over_voltage_limits(
            falling_error=ZERO,
            rising_error=ZERO,
            load_most_v=2.0,
            rise_v=-0.1,
            delivered_most_v=1.9,
            ripple_v=0.0,
        ),
        "rise_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: power_on_limits(
            falling_error=ZERO,
            rising_error=ZERO,
            working_least_v=1.0,
            delivered_least_v=1.6,
            start_least_v=1.6,
            ripple_v=0.0,
            load_step_v=0.0,
            under_voltage_rising_least_v=math.nan,
        ),
        "under_voltage_rising_least_v must be a finite number (found nan)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
