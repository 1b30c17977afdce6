from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.hysteresis import (
    Connection,
    Levels,
    disturbance_v,
    positive_feedback_levels_v,
    release_droop_v,
    steepest_ripple_v_per_s,
    supply_travel_v,
)


def test_ti_non_inverting_comparator() -> None:
    # TI SBOA313 / CIRCUIT060078: 3 V supply, levels 1.7 V and 1.3 V. Ratio 100k/750k and reference 1.5 V derived.
    levels = positive_feedback_levels_v(
        connection=Connection.NON_INVERTING,
        reference_v=1.5,
        input_ohm=100e3,
        feedback_ohm=750e3,
        output_low_v=0.0,
        output_high_v=3.0,
    )
    assert levels.rising_v == pytest.approx(1.7, rel=1e-12)
    assert levels.falling_v == pytest.approx(1.3, rel=1e-12)
    assert levels.hysteresis_v == pytest.approx(0.4, rel=1e-12)


def test_published_inverting_comparator() -> None:
    # theprimecalculator.com, comparator hysteresis: 2.5 V reference, 100k/10k, 0 V and 5 V; printed to three digits.
    levels = positive_feedback_levels_v(
        connection=Connection.INVERTING,
        reference_v=2.5,
        input_ohm=10e3,
        feedback_ohm=100e3,
        output_low_v=0.0,
        output_high_v=5.0,
    )
    assert levels.rising_v == pytest.approx(2.727, abs=5e-4)
    assert levels.falling_v == pytest.approx(2.273, abs=5e-4)
    assert levels.hysteresis_v == pytest.approx(0.455, abs=5e-4)


def _level_by_root_v(
    connection: Connection, reference_v: float, input_ohm: float, feedback_ohm: float, output_v: float
) -> float:
    """The signal at which both comparator inputs are equal, by SciPy's root finder on the node current."""

    def surplus_a(signal_v: float) -> float:
        if connection is Connection.NON_INVERTING:
            source_v, positive_v = signal_v, reference_v
        else:
            source_v, positive_v = reference_v, signal_v
        return (source_v - positive_v) / input_ohm - (positive_v - output_v) / feedback_ohm

    return float(optimize.brentq(surplus_a, -1e4, 1e4, xtol=1e-13, rtol=1e-14))


@settings(max_examples=60)
@given(
    connection=st.sampled_from(Connection),
    reference_v=st.floats(-2.0, 5.0),
    input_ohm=st.floats(1e2, 1e6),
    feedback_ohm=st.floats(1e3, 1e7),
    output_low_v=st.floats(-5.0, 1.0),
    swing_v=st.floats(0.0, 10.0),
)
def test_levels_balance_the_node_currents(
    *,
    connection: Connection,
    reference_v: float,
    input_ohm: float,
    feedback_ohm: float,
    output_low_v: float,
    swing_v: float,
) -> None:
    # Kirchhoff's current law at the positive input, solved by SciPy.
    output_high_v = output_low_v + swing_v
    levels = positive_feedback_levels_v(
        connection=connection,
        reference_v=reference_v,
        input_ohm=input_ohm,
        feedback_ohm=feedback_ohm,
        output_low_v=output_low_v,
        output_high_v=output_high_v,
    )
    before_rising_v, before_falling_v = (
        (output_low_v, output_high_v) if connection is Connection.NON_INVERTING else (output_high_v, output_low_v)
    )
    for found_v, output_v in ((levels.rising_v, before_rising_v), (levels.falling_v, before_falling_v)):
        expected_v = _level_by_root_v(connection, reference_v, input_ohm, feedback_ohm, output_v)
        assert found_v == pytest.approx(expected_v, rel=1e-9, abs=1e-9)
    assert levels.hysteresis_v >= -1e-9


def test_hysteresis_is_the_distance_of_the_levels() -> None:
    assert Levels(rising_v=1.65, falling_v=1.6).hysteresis_v == 1.65 - 1.6


def test_disturbances_add() -> None:
    assert disturbance_v(
        ripple_v=10e-3, dip_v=0.0, release_droop_v=20e-3, neighbours_v=5e-3, noise_v=6.6e-3
    ) == pytest.approx(41.6e-3, rel=1e-12)


DISTURBANCES = ("ripple_v", "dip_v", "release_droop_v", "neighbours_v", "noise_v")


@pytest.mark.parametrize("symbol", DISTURBANCES)
def test_each_disturbance_counts_in_full(symbol: str) -> None:
    quiet = dict.fromkeys(DISTURBANCES, 0.0)
    assert disturbance_v(**quiet) == 0.0
    assert disturbance_v(**{**quiet, symbol: 0.03}) == 0.03


@pytest.mark.parametrize("symbol", DISTURBANCES)
def test_disturbance_refuses_each_symbol(symbol: str) -> None:
    quiet = dict.fromkeys(DISTURBANCES, 0.0)
    with pytest.raises(DomainError, match=f"^{symbol} must be at least 0 \\(found -0\\.001\\)$"):
        disturbance_v(**{**quiet, symbol: -1e-3})


def test_droop_and_travel() -> None:
    # Ohm's law and the definition of slope: 50 mA over 0.4 ohm is 20 mV; 1 V/ms for 5 us is 5 mV.
    assert release_droop_v(load_step_a=50e-3, source_ohm=0.4) == pytest.approx(20e-3, rel=1e-12)
    assert supply_travel_v(slope_v_per_s=1e3, delay_s=5e-6) == pytest.approx(5e-3, rel=1e-12)


@settings(max_examples=30)
@given(peak_to_peak_v=st.floats(1e-3, 1.0), frequency_hz=st.floats(1.0, 1e7))
def test_steepest_ripple_equals_the_largest_slope_found_by_search(peak_to_peak_v: float, frequency_hz: float) -> None:
    # SciPy's bounded minimiser on the finite difference of the sine; the place is in periods.
    def ripple_v(periods: float) -> float:
        return 0.5 * peak_to_peak_v * math.sin(2.0 * math.pi * periods)

    def falling_slope_v_per_s(periods: float) -> float:
        return (ripple_v(periods - 1e-5) - ripple_v(periods + 1e-5)) / (2e-5 / frequency_hz)

    found = optimize.minimize_scalar(falling_slope_v_per_s, bounds=(-0.4, 0.3), method="bounded")
    expected = steepest_ripple_v_per_s(peak_to_peak_v=peak_to_peak_v, frequency_hz=frequency_hz)
    assert -float(found.fun) == pytest.approx(expected, rel=1e-6)


def test_small_functions_refuse() -> None:
    with pytest.raises(DomainError, match=r"^load_step_a must be at least 0 \(found -1\.0\)$"):
        release_droop_v(load_step_a=-1.0, source_ohm=1.0)
    with pytest.raises(DomainError, match=r"^source_ohm must be at least 0 \(found -1\.0\)$"):
        release_droop_v(load_step_a=1.0, source_ohm=-1.0)
    with pytest.raises(DomainError, match=r"^slope_v_per_s must be at least 0 \(found -1\.0\)$"):
        supply_travel_v(slope_v_per_s=-1.0, delay_s=1.0)
    with pytest.raises(DomainError, match=r"^delay_s must be at least 0 \(found nan\)$"):
        supply_travel_v(slope_v_per_s=1.0, delay_s=math.nan)
    with pytest.raises(DomainError, match=r"^peak_to_peak_v must be at least 0 \(found -1\.0\)$"):
        steepest_ripple_v_per_s(peak_to_peak_v=-1.0, frequency_hz=1.0)
    with pytest.raises(DomainError, match=r"^frequency_hz must be greater than 0 \(found 0\.0\)$"):
        steepest_ripple_v_per_s(peak_to_peak_v=1.0, frequency_hz=0.0)


@pytest.mark.parametrize("connection", Connection)
@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("reference_v", math.inf, "reference_v must be a finite number (found inf)"),
        ("input_ohm", 0.0, "input_ohm must be greater than 0 (found 0.0)"),
        ("feedback_ohm", -1.0, "feedback_ohm must be greater than 0 (found -1.0)"),
        ("output_low_v", math.nan, "output_low_v must be a finite number (found nan)"),
        ("output_high_v", math.nan, "output_high_v must be a finite number (found nan)"),
        ("output_high_v", -0.5, "output_high_v must be at least output_low_v (0.0) (found -0.5)"),
    ],
)
def test_feedback_refuses(connection: Connection, symbol: str, value: float, message: str) -> None:
    good = {
        "reference_v": 1.5,
        "input_ohm": 100e3,
        "feedback_ohm": 750e3,
        "output_low_v": 0.0,
        "output_high_v": 3.0,
    }
    with pytest.raises(DomainError) as refused:
        positive_feedback_levels_v(connection=connection, **{**good, symbol: value})
    assert str(refused.value) == message
