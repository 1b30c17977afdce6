from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.integrate import solve_ivp

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.hold_up import (
    capacitance_for_hold_up_f,
    constant_power_capacitance_f,
    constant_power_hold_up_time_s,
    hold_up_time_s,
    resistive_capacitance_f,
    resistive_hold_up_time_s,
    usable_energy_share,
)


def test_constant_current_examples() -> None:
    # automotive.ezvirtualtools.com (formula; rows multiplied out): 100 uF, 0.5 V, 10 mA; 50 mA, 10 us, 0.2 V.
    assert hold_up_time_s(c_f=100e-6, drop_v=0.5, load_a=10e-3) == pytest.approx(5.000e-3, rel=1e-12)
    assert capacitance_for_hold_up_f(time_s=10e-6, drop_v=0.2, load_a=50e-3) == pytest.approx(2.5e-6, rel=1e-12)


def test_constant_power_example() -> None:
    # vbatpower.com, hold-up time: 200 W, 20 ms, 400 V to 300 V need about 114 uF (114.286 before rounding).
    found_f = constant_power_capacitance_f(time_s=20e-3, start_v=400.0, end_v=300.0, load_w=200.0)
    assert found_f == pytest.approx(114e-6, abs=0.5e-6)
    assert found_f == pytest.approx(114.286e-6, abs=5e-10)


def test_usable_energy_examples() -> None:
    # huntsvilleengineers.com: 390 V to 300 V gives out 41 % (40.8 % before rounding); a rail down by 10 %, 19.0 %.
    assert usable_energy_share(start_v=390.0, end_v=300.0) == pytest.approx(0.408, abs=5e-4)
    assert usable_energy_share(start_v=1.0, end_v=0.9) == pytest.approx(0.190, rel=1e-9)
    assert usable_energy_share(start_v=1.2, end_v=1.2) == 0.0


C_F, START_V, END_V = 4.7e-6, 1.8, 1.55
LOADS: tuple[tuple[str, Callable[[float], float], float], ...] = (
    ("current", lambda v: 20e-3, hold_up_time_s(c_f=C_F, drop_v=START_V - END_V, load_a=20e-3)),
    (
        "power",
        lambda v: 30e-3 / v,
        constant_power_hold_up_time_s(c_f=C_F, start_v=START_V, end_v=END_V, load_w=30e-3),
    ),
    (
        "resistor",
        lambda v: v / 82.0,
        resistive_hold_up_time_s(c_f=C_F, start_v=START_V, end_v=END_V, load_ohm=82.0),
    ),
)


@pytest.mark.parametrize(("load_a", "time_s"), [row[1:] for row in LOADS], ids=[row[0] for row in LOADS])
def test_time_agrees_with_event_detection(load_a: Callable[[float], float], time_s: float) -> None:
    # SciPy's solve_ivp on C dv/dt = -I(v), event where the voltage reaches its end; time in units of the answer.
    def slope(_: float, v: NDArray[np.float64]) -> list[float]:
        return [-load_a(float(v[0])) * time_s / C_F]

    def reached(_: float, v: NDArray[np.float64]) -> float:
        return float(v[0]) - END_V

    solved = solve_ivp(slope, (0.0, 1.5), [START_V], events=reached, rtol=1e-11, atol=1e-13)
    assert float(solved.t_events[0][0]) == pytest.approx(1.0, rel=1e-8)


@settings(max_examples=60)
@given(
    time_s=st.floats(1e-7, 1.0),
    end_v=st.floats(0.5, 5.0),
    drop_v=st.floats(0.01, 5.0),
    load=st.floats(1e-6, 10.0),
)
def test_each_capacitance_is_just_enough(time_s: float, end_v: float, drop_v: float, load: float) -> None:
    fall = {"start_v": end_v + drop_v, "end_v": end_v}
    for capacitance_f, time_of_s in (
        (
            capacitance_for_hold_up_f(time_s=time_s, drop_v=drop_v, load_a=load),
            lambda c_f: hold_up_time_s(c_f=c_f, drop_v=drop_v, load_a=load),
        ),
        (
            constant_power_capacitance_f(time_s=time_s, load_w=load, **fall),
            lambda c_f: constant_power_hold_up_time_s(c_f=c_f, load_w=load, **fall),
        ),
        (
            resistive_capacitance_f(time_s=time_s, load_ohm=1.0 / load, **fall),
            lambda c_f: resistive_hold_up_time_s(c_f=c_f, load_ohm=1.0 / load, **fall),
        ),
    ):
        assert time_of_s(capacitance_f) == pytest.approx(time_s, rel=1e-9)
        assert time_of_s(capacitance_f * (1.0 - 1e-6)) < time_s


@settings(max_examples=40)
@given(end_v=st.floats(0.5, 2.0), drop_v=st.floats(0.01, 2.0), current_a=st.floats(1e-6, 1.0))
def test_load_laws_are_ordered(end_v: float, drop_v: float, current_a: float) -> None:
    # Equal current at the start: as the voltage falls, a resistor takes less and a constant power more.
    start_v = end_v + drop_v
    current_s = hold_up_time_s(c_f=1e-6, drop_v=start_v - end_v, load_a=current_a)
    power_s = constant_power_hold_up_time_s(c_f=1e-6, start_v=start_v, end_v=end_v, load_w=start_v * current_a)
    resistor_s = resistive_hold_up_time_s(c_f=1e-6, start_v=start_v, end_v=end_v, load_ohm=start_v / current_a)
    assert power_s < current_s < resistor_s


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


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("time_s", -1.0, "time_s must be at least 0 (found -1.0)"),
        ("drop_v", 0.0, "drop_v must be greater than 0 (found 0.0)"),
        ("load_a", -1.0, "load_a must be at least 0 (found -1.0)"),
    ],
)
def test_capacitance_refuses(symbol: str, value: float, message: str) -> None:
    good = {"time_s": 1e-6, "drop_v": 0.1, "load_a": 1e-3}
    with pytest.raises(DomainError) as refused:
        capacitance_for_hold_up_f(**{**good, symbol: value})
    assert str(refused.value) == message


FALL_REFUSALS = (
    ("start_v", math.inf, "start_v must be greater than 0 (found inf)"),
    ("end_v", 0.0, "end_v must be greater than 0 (found 0.0)"),
    ("start_v", 0.9, "start_v must be {0} end_v (1.0) (found 0.9)"),
)


@pytest.mark.parametrize(("symbol", "value", "message"), FALL_REFUSALS)
def test_each_fall_is_refused(symbol: str, value: float, message: str) -> None:
    fall = {"start_v": 1.8, "end_v": 1.0, symbol: value}
    calls: tuple[tuple[str, Callable[[], float]], ...] = (
        ("at least", lambda: constant_power_hold_up_time_s(c_f=1e-6, load_w=1.0, **fall)),
        ("at least", lambda: resistive_hold_up_time_s(c_f=1e-6, load_ohm=1.0, **fall)),
        ("at least", lambda: usable_energy_share(**fall)),
        ("above", lambda: constant_power_capacitance_f(time_s=1.0, load_w=1.0, **fall)),
        ("above", lambda: resistive_capacitance_f(time_s=1.0, load_ohm=1.0, **fall)),
    )
    for relation, call in calls:
        with pytest.raises(DomainError) as refused:
            call()
        assert str(refused.value) == message.format(relation)


def test_other_refusals() -> None:
    fall = {"start_v": 1.8, "end_v": 1.0}
    with pytest.raises(DomainError, match=r"^c_f must be at least 0 \(found -1\.0\)$"):
        constant_power_hold_up_time_s(c_f=-1.0, load_w=1.0, **fall)
    with pytest.raises(DomainError, match=r"^load_w must be greater than 0 \(found 0\.0\)$"):
        constant_power_hold_up_time_s(c_f=1.0, load_w=0.0, **fall)
    with pytest.raises(DomainError, match=r"^time_s must be at least 0 \(found -1\.0\)$"):
        constant_power_capacitance_f(time_s=-1.0, load_w=1.0, **fall)
    with pytest.raises(DomainError, match=r"^load_w must be at least 0 \(found -1\.0\)$"):
        constant_power_capacitance_f(time_s=1.0, load_w=-1.0, **fall)
    with pytest.raises(DomainError, match=r"^c_f must be at least 0 \(found -1\.0\)$"):
        resistive_hold_up_time_s(c_f=-1.0, load_ohm=1.0, **fall)
    with pytest.raises(DomainError, match=r"^load_ohm must be greater than 0 \(found 0\.0\)$"):
        resistive_hold_up_time_s(c_f=1.0, load_ohm=0.0, **fall)
    with pytest.raises(DomainError, match=r"^time_s must be at least 0 \(found -1\.0\)$"):
        resistive_capacitance_f(time_s=-1.0, load_ohm=1.0, **fall)
    with pytest.raises(DomainError, match=r"^load_ohm must be greater than 0 \(found 0\.0\)$"):
        resistive_capacitance_f(time_s=1.0, load_ohm=0.0, **fall)
    with pytest.raises(DomainError, match=r"^start_v must be above end_v \(1\.0\) \(found 1\.0\)$"):
        resistive_capacitance_f(time_s=1.0, load_ohm=1.0, start_v=1.0, end_v=1.0)
