from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.timer import charge_time_s, counted_time_s, current_charge_time_s

# Time constants until a residual is left, from exp(-N): value from memory, reproduced by every RC settling table
# (Texas Instruments SLYW038D prints the same relation in bits).
SETTLING = ((0.10, 2.3026), (0.05, 2.9957), (0.02, 3.9120), (0.01, 4.6052), (0.001, 6.9078))


@pytest.mark.parametrize(("residual", "constants"), SETTLING, ids=[f"residual_{r:g}" for r, _ in SETTLING])
def test_rc_charge_against_settling_table(residual: float, constants: float) -> None:
    time_s = charge_time_s(r_ohm=1e6, c_f=1e-9, v_final_v=1.8, v_th_v=1.8 * (1 - residual))
    assert time_s == pytest.approx(constants * 1e-3, rel=3e-5)  # four decimals are printed


def test_rc_charge_against_an_ode_solver() -> None:
    r_ohm, c_f, final_v, level_v = 2.2e6, 15e-12, 1.71, 0.9

    def reaches(_: float, v: list[float]) -> float:
        return v[0] - level_v

    reaches.terminal = True  # type: ignore[attr-defined]
    solved = solve_ivp(
        lambda _, v: [(final_v - v[0]) / (r_ohm * c_f)], (0.0, 1e-3), [0.0], events=reaches, rtol=1e-10, atol=1e-12
    )
    time_s = charge_time_s(r_ohm=r_ohm, c_f=c_f, v_final_v=final_v, v_th_v=level_v)
    assert time_s == pytest.approx(solved.t_events[0][0], rel=1e-7)


def test_current_charge_against_hold_up_example() -> None:
    """C = I t / dV of the hold-up note quoted in most power textbooks: 50 mA for 10 us over 0.2 V takes 2.5 uF."""
    assert current_charge_time_s(current_a=50e-3, c_f=2.5e-6, v_th_v=0.2) == pytest.approx(10e-6, rel=1e-12)


def test_counted_periods() -> None:
    """A watch crystal of 32 768 Hz: 32 768 periods are one second (definition)."""
    assert counted_time_s(count=32768, period_s=1 / 32768) == pytest.approx(1.0, rel=1e-15)


@given(level=st.floats(0.01, 0.98), more=st.floats(1.001, 1.01))
@settings(max_examples=50, deadline=None)
def test_a_higher_threshold_is_never_reached_sooner(level: float, more: float) -> None:
    low_s = charge_time_s(r_ohm=1e6, c_f=1e-12, v_final_v=1.0, v_th_v=level)
    assert charge_time_s(r_ohm=1e6, c_f=1e-12, v_final_v=1.0, v_th_v=level * more) > low_s
    slow_s = current_charge_time_s(current_a=1e-7, c_f=1e-12, v_th_v=level)
    assert current_charge_time_s(current_a=1e-7, c_f=1e-12, v_th_v=level * more) > slow_s


def test_rc_charge_refuses_a_threshold_that_is_never_reached() -> None:
    with pytest.raises(DomainError) as refused:
        charge_time_s(r_ohm=1e6, c_f=1e-12, v_final_v=1.0, v_th_v=1.0)
    assert str(refused.value) == "v_th_v must be below v_final_v, 1.0 (found 1.0)"


RC = {"r_ohm": 1e6, "c_f": 1e-12, "v_final_v": 1.0, "v_th_v": 0.5}
BY_CURRENT = {"current_a": 1e-7, "c_f": 1e-12, "v_th_v": 0.5}


@pytest.mark.parametrize("symbol", ["r_ohm", "c_f", "v_final_v"])
def test_rc_charge_refuses(symbol: str) -> None:
    with pytest.raises(DomainError, match=f"^{symbol} must be greater than 0"):
        charge_time_s(**(RC | {symbol: 0.0}))


@pytest.mark.parametrize("symbol", ["current_a", "c_f"])
def test_current_charge_refuses(symbol: str) -> None:
    with pytest.raises(DomainError, match=f"^{symbol} must be greater than 0"):
        current_charge_time_s(**(BY_CURRENT | {symbol: math.nan}))


def test_negative_thresholds_and_no_periods_are_refused() -> None:
    with pytest.raises(DomainError, match=r"^v_th_v must be at least 0"):
        charge_time_s(**(RC | {"v_th_v": -0.1}))
    with pytest.raises(DomainError, match=r"^v_th_v must be at least 0"):
        current_charge_time_s(**(BY_CURRENT | {"v_th_v": -0.1}))
    with pytest.raises(DomainError, match=r"^count must be greater than 0"):
        counted_time_s(count=0, period_s=1e-6)
    with pytest.raises(DomainError, match=r"^period_s must be greater than 0"):
        counted_time_s(count=1, period_s=0.0)
