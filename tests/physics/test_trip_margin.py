"""Margins of the trip levels: the sign-off example, hand arithmetic, and what one more millivolt does."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest

from tidegate.lint.physics import trip_margin
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.trip_window import TripWindow, Window, window_from_ranges


def levels(falling: tuple[float, float], rising: tuple[float, float]) -> TripWindow:
    return window_from_ranges(rising=Window(*rising), falling=Window(*falling), hysteresis=None, tracked=True)


# Common practice, no source: signed off from 1.60 V, error +-10 mV, hysteresis 50 mV, placed to guarantee.
UNDER = levels((1.60, 1.62), (1.65, 1.67))
# The same error and hysteresis placed the other way round: always released above 1.60 V.
UNDER_REVERSED = levels((1.53, 1.55), (1.58, 1.60))
OVER = levels((1.98, 2.00), (2.03, 2.05))
POWER_ON = levels((1.10, 1.30), (1.20, 1.40))


def test_sign_off_example_guarantees_with_nothing_to_spare() -> None:
    assert trip_margin.under_voltage_guarantee_v(UNDER, droop_v=0.0, load_least_v=1.60) == pytest.approx(0.0)


def test_sign_off_example_the_other_way_round_is_silent_for_70_mv() -> None:
    found = trip_margin.under_voltage_guarantee_v(UNDER_REVERSED, droop_v=0.0, load_least_v=1.60)
    assert found == pytest.approx(1.53 - 1.60)


# Hand arithmetic on the levels above; every input other than 0.
MARGINS: tuple[tuple[str, Callable[[], float], float], ...] = (
    (
        "under-voltage-guarantee",
        lambda: trip_margin.under_voltage_guarantee_v(UNDER, droop_v=0.02, load_least_v=1.55),
        1.60 - 0.02 - 1.55,
    ),
    (
        "under-voltage-quiet",
        lambda: trip_margin.under_voltage_quiet_v(UNDER, delivered_least_v=1.71, ripple_v=0.02, load_step_v=0.03),
        1.71 - 0.01 - 0.03 - 1.62,
    ),
    (
        "under-voltage-comes-back",
        lambda: trip_margin.under_voltage_comes_back_v(UNDER, start_least_v=1.70, ripple_v=0.02),
        1.70 - 0.01 - 1.67,
    ),
    (
        "over-voltage-guarantee",
        lambda: trip_margin.over_voltage_guarantee_v(OVER, rise_v=0.03, load_most_v=2.10),
        2.10 - 2.05 - 0.03,
    ),
    (
        "over-voltage-quiet",
        lambda: trip_margin.over_voltage_quiet_v(OVER, delivered_most_v=1.89, ripple_v=0.04),
        2.03 - 1.89 - 0.02,
    ),
    (
        "over-voltage-comes-back",
        lambda: trip_margin.over_voltage_comes_back_v(OVER, delivered_most_v=1.89, ripple_v=0.04),
        1.98 - 1.89 - 0.02,
    ),
    (
        "power-on-guarantee",
        lambda: trip_margin.power_on_guarantee_v(POWER_ON, working_least_v=1.0),
        1.10 - 1.0,
    ),
    (
        "power-on-release",
        lambda: trip_margin.power_on_release_v(POWER_ON, delivered_least_v=1.62),
        1.62 - 1.40,
    ),
    (
        "power-on-quiet",
        lambda: trip_margin.power_on_quiet_v(POWER_ON, delivered_least_v=1.62, ripple_v=0.02, load_step_v=0.03),
        1.62 - 0.01 - 0.03 - 1.30,
    ),
    (
        "power-on-comes-back",
        lambda: trip_margin.power_on_comes_back_v(POWER_ON, start_least_v=1.62, ripple_v=0.02),
        1.62 - 0.01 - 1.40,
    ),
    (
        "power-on-before-under-voltage",
        lambda: trip_margin.power_on_before_under_voltage_v(POWER_ON, under_voltage=UNDER),
        1.65 - 1.40,
    ),
)


@pytest.mark.parametrize(("call", "expected"), [row[1:] for row in MARGINS], ids=[row[0] for row in MARGINS])
def test_margin_by_hand(call: Callable[[], float], expected: float) -> None:
    assert call() == pytest.approx(expected, abs=1e-12)


def test_power_on_guarantee_holds_for_whichever_level_is_lower() -> None:
    no_hysteresis = levels((1.20, 1.30), (1.15, 1.30))
    assert trip_margin.power_on_guarantee_v(no_hysteresis, working_least_v=1.0) == pytest.approx(0.15)


def test_moving_every_level_up_by_a_millivolt_moves_every_margin_by_one() -> None:
    # Under-voltage and power-on: guarantee gains, the rest lose; over-voltage: guarantee loses, the rest gain.
    step = 1e-3
    up = levels((1.601, 1.621), (1.651, 1.671))
    gains = (
        trip_margin.under_voltage_guarantee_v(up, droop_v=0.0, load_least_v=1.5)
        - trip_margin.under_voltage_guarantee_v(UNDER, droop_v=0.0, load_least_v=1.5),
        trip_margin.power_on_guarantee_v(up, working_least_v=1.5)
        - trip_margin.power_on_guarantee_v(UNDER, working_least_v=1.5),
        trip_margin.over_voltage_quiet_v(up, delivered_most_v=1.5, ripple_v=0.0)
        - trip_margin.over_voltage_quiet_v(UNDER, delivered_most_v=1.5, ripple_v=0.0),
        trip_margin.over_voltage_comes_back_v(up, delivered_most_v=1.5, ripple_v=0.0)
        - trip_margin.over_voltage_comes_back_v(UNDER, delivered_most_v=1.5, ripple_v=0.0),
    )
    losses = (
        trip_margin.under_voltage_quiet_v(up, delivered_least_v=1.8, ripple_v=0.0, load_step_v=0.0)
        - trip_margin.under_voltage_quiet_v(UNDER, delivered_least_v=1.8, ripple_v=0.0, load_step_v=0.0),
        trip_margin.under_voltage_comes_back_v(up, start_least_v=1.8, ripple_v=0.0)
        - trip_margin.under_voltage_comes_back_v(UNDER, start_least_v=1.8, ripple_v=0.0),
        trip_margin.power_on_release_v(up, delivered_least_v=1.8)
        - trip_margin.power_on_release_v(UNDER, delivered_least_v=1.8),
        trip_margin.over_voltage_guarantee_v(up, rise_v=0.0, load_most_v=1.8)
        - trip_margin.over_voltage_guarantee_v(UNDER, rise_v=0.0, load_most_v=1.8),
    )
    assert gains == pytest.approx([step] * len(gains), abs=1e-12)
    assert losses == pytest.approx([-step] * len(losses), abs=1e-12)


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (
        lambda: trip_margin.under_voltage_guarantee_v(UNDER, droop_v=-0.1, load_least_v=1.5),
        "droop_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: trip_margin.under_voltage_guarantee_v(UNDER, droop_v=0.1, load_least_v=math.nan),
        "load_least_v must be a finite number (found nan)",
    ),
    (
        lambda: trip_margin.under_voltage_quiet_v(UNDER, delivered_least_v=1.8, ripple_v=-0.1, load_step_v=0.0),
        "ripple_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: trip_margin.under_voltage_quiet_v(UNDER, delivered_least_v=1.8, ripple_v=0.1, load_step_v=-0.2),
        "load_step_v must be at least 0 (found -0.2)",
    ),
    (
        lambda: trip_margin.under_voltage_comes_back_v(UNDER, start_least_v=math.inf, ripple_v=0.1),
        "start_least_v must be a finite number (found inf)",
    ),
    (
        lambda: trip_margin.over_voltage_guarantee_v(OVER, rise_v=-0.1, load_most_v=2.0),
        "rise_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: trip_margin.over_voltage_guarantee_v(OVER, rise_v=0.1, load_most_v=math.nan),
        "load_most_v must be a finite number (found nan)",
    ),
    (
        lambda: trip_margin.over_voltage_quiet_v(OVER, delivered_most_v=math.nan, ripple_v=0.1),
        "delivered_most_v must be a finite number (found nan)",
    ),
    (
        lambda: trip_margin.over_voltage_comes_back_v(OVER, delivered_most_v=1.9, ripple_v=-0.1),
        "ripple_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: trip_margin.power_on_guarantee_v(POWER_ON, working_least_v=math.nan),
        "working_least_v must be a finite number (found nan)",
    ),
    (
        lambda: trip_margin.power_on_release_v(POWER_ON, delivered_least_v=math.nan),
        "delivered_least_v must be a finite number (found nan)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
