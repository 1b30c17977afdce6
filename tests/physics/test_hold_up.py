"""Hold-up time: a worked example, event detection by SciPy, and a law."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.hold_up import hold_up_time_s


def test_constant_current_example() -> None:
    # automotive.ezvirtualtools.com (formula; row multiplied out): 100 uF, 0.5 V, 10 mA.
    assert hold_up_time_s(c_f=100e-6, drop_v=0.5, load_a=10e-3) == pytest.approx(5.000e-3, rel=1e-12)


def test_time_agrees_with_event_detection() -> None:
    # SciPy's solve_ivp on C dv/dt = -I, event where the voltage reaches its end; time in us.
    c_f, start_v, end_v, load_a = 4.7e-6, 1.8, 1.55, 20e-3
    solved = solve_ivp(
        lambda _t, _v: [-load_a / c_f * 1e-6],
        (0.0, 100.0),
        [start_v],
        events=lambda _t, v: v[0] - end_v,
        rtol=1e-11,
        atol=1e-13,
    )
    found_s = hold_up_time_s(c_f=c_f, drop_v=start_v - end_v, load_a=load_a)
    assert found_s == pytest.approx(1e-6 * float(solved.t_events[0][0]), rel=1e-9)


@settings(max_examples=40)
@given(c_f=st.floats(1e-12, 1e-3), drop_v=st.floats(1e-3, 5.0), load_a=st.floats(1e-9, 10.0))
def test_charge_that_flows_is_the_charge_that_is_lost(c_f: float, drop_v: float, load_a: float) -> None:
    assert load_a * hold_up_time_s(c_f=c_f, drop_v=drop_v, load_a=load_a) == pytest.approx(c_f * drop_v, rel=1e-12)


def test_nothing_to_lose_lasts_no_time() -> None:
    assert hold_up_time_s(c_f=0.0, drop_v=0.1, load_a=1e-3) == 0.0
    assert hold_up_time_s(c_f=1e-6, drop_v=0.0, load_a=1e-3) == 0.0


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("c_f", -1.0, "c_f must be at least 0 (found -1.0)"),
        ("drop_v", -1.0, "drop_v must be at least 0 (found -1.0)"),
        ("load_a", 0.0, "load_a must be greater than 0 (found 0.0)"),
    ],
)
def test_time_refuses(symbol: str, value: float, message: str) -> None:
    good = {"c_f": 1e-6, "drop_v": 0.1, "load_a": 1e-3}
    with pytest.raises(DomainError) as refused:
        hold_up_time_s(**{**good, symbol: value})
    assert str(refused.value) == message
