from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.hysteresis import release_droop_v, steepest_ripple_v_per_s, supply_travel_v


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
    with pytest.raises(DomainError, match=r"^frequency_hz must be at least 0 \(found -1\.0\)$"):
        steepest_ripple_v_per_s(peak_to_peak_v=1.0, frequency_hz=-1.0)


@pytest.mark.parametrize(
    ("first", "second", "limit"),
    [(0.0, math.inf, 0.0), (math.inf, 0.0, 0.0), (2.0, math.inf, math.inf), (math.inf, 2.0, math.inf)],
)
def test_what_has_no_end_times_nothing_is_nothing(first: float, second: float, limit: float) -> None:
    # IEEE 1788-2015, 10.5.3: zero times anything is zero.
    assert release_droop_v(load_step_a=first, source_ohm=second) == limit
    assert supply_travel_v(slope_v_per_s=first, delay_s=second) == limit
    assert steepest_ripple_v_per_s(peak_to_peak_v=first, frequency_hz=second) == limit
