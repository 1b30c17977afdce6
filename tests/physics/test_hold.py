from __future__ import annotations

import math
from typing import Final

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.integrate import solve_ivp
from scipy.optimize import brentq
from scipy.special import lambertw

from tidegate.lint.physics.coupling import bump_peak_v
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.hold import (
    driven_level_v,
    hold_current_a,
    largest_hold_ohm,
    leakage_level_v,
    level_left_v,
    ramp_level_v,
    smallest_hold_for_driver_ohm,
    undriven_level_v,
)

# Displacement current through a pull-down, I = C dV/dt, long ramp: C, slope, R, level (derived; Ohm's law).
LONG_RAMPS = ((100e-15, 1e6, 1e6, 0.100), (10e-15, 3.3e6, 10e6, 0.330))


@pytest.mark.parametrize(
    ("c_f", "slope_v_per_s", "hold_ohm", "level_v"), LONG_RAMPS, ids=["100fF-1Mohm", "10fF-10Mohm"]
)
def test_long_ramp_reaches_resistance_times_displacement_current(
    c_f: float, slope_v_per_s: float, hold_ohm: float, level_v: float
) -> None:
    ramp_s = 50.0 * hold_ohm * c_f
    found_v = ramp_level_v(
        hold_ohm=hold_ohm, coupling_c_f=c_f, total_c_f=c_f, rise_v=slope_v_per_s * ramp_s, ramp_s=ramp_s
    )
    assert found_v == pytest.approx(level_v, rel=1e-12)


def test_short_ramp_gives_the_full_divider_kick() -> None:
    # 1.8 V through 1 fF of 101 fF: 17.822 mV (derived; two-capacitor divider).
    found_v = ramp_level_v(hold_ohm=1e9, coupling_c_f=1e-15, total_c_f=101e-15, rise_v=1.8, ramp_s=1e-9)
    assert found_v == pytest.approx(17.822e-3, rel=5e-5)


@pytest.mark.parametrize("ramp_s", [2e-8, 5e-7, 1e-5], ids=["short", "of-tau", "long"])
def test_level_follows_the_differential_equation(ramp_s: float) -> None:
    # SciPy's solve_ivp (DOP853) on C dv/dt = I + Cc s - v/R from the leakage level, in units of tau.
    hold_ohm, coupling_c_f, total_c_f, slope_v_per_s, leakage_a = 1e6, 120e-15, 500e-15, 2e6, 15e-9
    tau_s = hold_ohm * total_c_f

    def during(_: float, v: NDArray[np.float64]) -> NDArray[np.float64]:
        return hold_ohm * (leakage_a + coupling_c_f * slope_v_per_s) - v

    def after(_: float, v: NDArray[np.float64]) -> NDArray[np.float64]:
        return hold_ohm * leakage_a - v

    exact = {"rtol": 1e-11, "atol": 1e-14, "method": "DOP853"}
    leaking_v = leakage_level_v(leakage_a=leakage_a, hold_ohm=hold_ohm)
    rise = solve_ivp(during, (0.0, ramp_s / tau_s), [leaking_v], **exact)
    fall = solve_ivp(after, (ramp_s / tau_s, ramp_s / tau_s + 8.0), [rise.y[0, -1]], **exact)
    found_v = undriven_level_v(
        leakage_a=leakage_a,
        hold_ohm=hold_ohm,
        coupling_c_f=coupling_c_f,
        total_c_f=total_c_f,
        rise_v=slope_v_per_s * ramp_s,
        ramp_s=ramp_s,
    )
    assert found_v == pytest.approx(float(rise.y[0, -1]), rel=1e-8)
    # The end of the ramp is the highest point of the whole course.
    assert found_v >= float(max(rise.y[0].max(), fall.y[0].max())) * (1.0 - 1e-8)


def test_undriven_level_is_the_sum() -> None:
    ramp = {"coupling_c_f": 1e-13, "total_c_f": 4e-13, "rise_v": 0.1, "ramp_s": 1e-6}
    assert undriven_level_v(leakage_a=2e-9, hold_ohm=5e6, **ramp) == leakage_level_v(
        leakage_a=2e-9, hold_ohm=5e6
    ) + ramp_level_v(hold_ohm=5e6, **ramp)


grid = st.fixed_dictionaries(
    {
        "leakage_a": st.just(0.0) | st.floats(1e-13, 1e-6),
        "coupling_c_f": st.just(0.0) | st.floats(1e-16, 1e-12),
        "total_c_f": st.floats(1e-12, 1e-10),
        "rise_v": st.floats(1e-3, 1e2),
        "ramp_s": st.floats(1e-9, 1e-2),
    }
)


@settings(max_examples=100)
@given(node=grid, limit_v=st.floats(1e-3, 2.0))
def test_largest_hold_is_just_small_enough(node: dict[str, float], limit_v: float) -> None:
    hold_ohm = largest_hold_ohm(limit_v=limit_v, **node)
    if math.isinf(hold_ohm):
        assert node["leakage_a"] == 0.0
        assert undriven_level_v(hold_ohm=1e30, **node) <= limit_v * (1.0 + 1e-12)
        return
    assert undriven_level_v(hold_ohm=hold_ohm, **node) <= limit_v * (1.0 + 1e-9)
    # The level may hardly depend on R any more where it nears the divider kick: ten per cent is a step there.
    assert undriven_level_v(hold_ohm=1.1 * hold_ohm, **node) >= limit_v
    if hold_ohm * node["total_c_f"] < node["ramp_s"] or node["coupling_c_f"] == 0.0:
        assert undriven_level_v(hold_ohm=hold_ohm, **node) == pytest.approx(limit_v, rel=1e-9)
        assert undriven_level_v(hold_ohm=hold_ohm * (1.0 + 1e-6), **node) > limit_v


@pytest.mark.parametrize("leakage_a", [1e-12, 1e-9, 1e-7])
def test_largest_hold_agrees_with_scipys_root_finder(leakage_a: float) -> None:
    # The equation written out anew and solved by brentq.
    coupling_c_f, total_c_f, slope_v_per_s, ramp_s, limit_v = 2e-13, 1e-12, 1.8e6, 1e-6, 0.25

    def surplus_v(log_ohm: float) -> float:
        r_ohm = math.exp(log_ohm)
        settled = 1.0 - math.exp(-ramp_s / (r_ohm * total_c_f))
        return r_ohm * (leakage_a + coupling_c_f * slope_v_per_s * settled) - limit_v

    expected_ohm = math.exp(float(brentq(surplus_v, 0.0, 40.0, xtol=1e-14, rtol=1e-14)))
    found_ohm = largest_hold_ohm(
        limit_v=limit_v,
        leakage_a=leakage_a,
        coupling_c_f=coupling_c_f,
        total_c_f=total_c_f,
        rise_v=slope_v_per_s * ramp_s,
        ramp_s=ramp_s,
    )
    assert found_ohm == pytest.approx(expected_ohm, rel=1e-9)


def test_largest_hold_without_leakage_agrees_with_lambert_w() -> None:
    # y = (1 - exp(-x))/x, x = t/(R C), has the solution x = 1/y + W0(-exp(-1/y)/y) (SciPy's lambertw).
    coupling_c_f, total_c_f, slope_v_per_s, ramp_s, limit_v = 2e-13, 1e-12, 3e6, 1e-6, 0.2
    y = limit_v / (coupling_c_f / total_c_f * slope_v_per_s * ramp_s)
    x = 1.0 / y + float(lambertw(-math.exp(-1.0 / y) / y).real)
    found_ohm = largest_hold_ohm(
        limit_v=limit_v,
        leakage_a=0.0,
        coupling_c_f=coupling_c_f,
        total_c_f=total_c_f,
        rise_v=slope_v_per_s * ramp_s,
        ramp_s=ramp_s,
    )
    assert found_ohm == pytest.approx(ramp_s / (x * total_c_f), rel=1e-9)


def test_any_hold_does_where_even_the_full_kick_is_allowed() -> None:
    ramp = {"coupling_c_f": 1e-13, "total_c_f": 1e-12, "rise_v": 1.0, "ramp_s": 1e-6}
    assert largest_hold_ohm(limit_v=0.11, leakage_a=0.0, **ramp) == math.inf
    assert math.isfinite(largest_hold_ohm(limit_v=0.09, leakage_a=0.0, **ramp))
    assert math.isfinite(largest_hold_ohm(limit_v=0.11, leakage_a=1e-15, **ramp))
    still = {"coupling_c_f": 0.0, "total_c_f": 0.0, "rise_v": 0.0, "ramp_s": 0.0}
    assert largest_hold_ohm(limit_v=0.1, leakage_a=0.0, **still) == math.inf
    assert largest_hold_ohm(limit_v=0.1, leakage_a=5e-324, **still) == math.inf


@pytest.mark.parametrize(("leakage_a", "coupling_c_f", "slope_v_per_s"), [(2.0, 0.0, 0.0), (0.0, 3.0, 3.0)])
def test_largest_hold_at_sizes_far_from_a_chips(leakage_a: float, coupling_c_f: float, slope_v_per_s: float) -> None:
    # Amperes and farads: no term may be small beside another by habit. SciPy's root finder on the same sum as above.
    def surplus_v(r_ohm: float) -> float:
        return r_ohm * (leakage_a + coupling_c_f * slope_v_per_s * (1.0 - math.exp(-1e3 / (r_ohm * 4.0)))) - 5.0

    found_ohm = largest_hold_ohm(
        limit_v=5.0,
        leakage_a=leakage_a,
        coupling_c_f=coupling_c_f,
        total_c_f=4.0,
        rise_v=slope_v_per_s * 1e3,
        ramp_s=1e3,
    )
    assert found_ohm == pytest.approx(float(brentq(surplus_v, 1e-3, 1e3, xtol=1e-13)), rel=1e-9)


def test_leakage_alone_is_ohms_law() -> None:
    still = {"coupling_c_f": 0.0, "total_c_f": 1e-12, "rise_v": 0.0, "ramp_s": 0.0}
    assert leakage_level_v(leakage_a=10e-9, hold_ohm=20e6) == pytest.approx(0.2, rel=1e-12)
    assert largest_hold_ohm(limit_v=0.2, leakage_a=10e-9, **still) == pytest.approx(20e6, rel=1e-11)


@settings(max_examples=60)
@given(node=grid, hold_ohm=st.floats(1e3, 1e9))
def test_ramp_is_the_bump_of_an_edge(node: dict[str, float], hold_ohm: float) -> None:
    # The same node equation, solved for neighbours (coupling.bump_peak_v).
    ramp = {name: value for name, value in node.items() if name != "leakage_a"}
    assert ramp_level_v(hold_ohm=hold_ohm, **ramp) == pytest.approx(
        bump_peak_v(
            step_v=node["rise_v"], edge_s=node["ramp_s"], r_ohm=hold_ohm, coupling_c_f=node["coupling_c_f"],
            ground_c_f=node["total_c_f"] - node["coupling_c_f"],
        ),
        rel=1e-9,
    )  # fmt: skip


# What is not known at all stands at 0 or without end; each value is the limit of the formula there.
LIMITS: Final = (
    ({"ramp_s": 0.0}, 0.1),  # a step: V Cc/C
    ({"hold_ohm": math.inf}, 0.1),
    ({"ramp_s": math.inf}, 0.0),
    ({"hold_ohm": 0.0}, 0.0),
    ({"total_c_f": math.inf}, 0.0),
    ({"coupling_c_f": math.inf, "total_c_f": math.inf}, 1.0),
    ({"rise_v": math.inf}, math.inf),
    ({"rise_v": math.inf, "coupling_c_f": 0.0}, 0.0),
)  # fmt: skip


@pytest.mark.parametrize(("end", "level_v"), LIMITS)
def test_ramp_at_the_ends_of_what_is_not_known(end: dict[str, float], level_v: float) -> None:
    node = {"hold_ohm": 1e6, **GOOD_RAMP, **end}
    assert ramp_level_v(**node) == pytest.approx(level_v)
    near = {name: min(max(value, 1e-24), 1e24) if value else value for name, value in node.items()}
    near_v = ramp_level_v(**near)
    assert near_v > 1e20 if math.isinf(level_v) else near_v == pytest.approx(level_v, rel=1e-3, abs=1e-6)


@settings(max_examples=60)
@given(node=grid, hold_ohm=st.floats(1e3, 1e9), more=st.floats(1.01, 100.0))
def test_laws_of_the_undriven_level(node: dict[str, float], hold_ohm: float, more: float) -> None:
    level_v = undriven_level_v(hold_ohm=hold_ohm, **node)
    bound_v = hold_ohm * (node["leakage_a"] + node["coupling_c_f"] * node["rise_v"] / node["ramp_s"])
    assert 0.0 <= level_v <= bound_v * (1.0 + 1e-12)
    assert undriven_level_v(hold_ohm=more * hold_ohm, **node) >= level_v * (1.0 - 1e-12)
    longer = {**node, "ramp_s": more * node["ramp_s"], "rise_v": more * node["rise_v"]}  # of one slope
    assert undriven_level_v(hold_ohm=hold_ohm, **longer) >= level_v * (1.0 - 1e-12)
    slower = {**node, "ramp_s": more * node["ramp_s"]}
    assert undriven_level_v(hold_ohm=hold_ohm, **slower) <= level_v * (1.0 + 1e-12)
    larger = {**node, "total_c_f": more * node["total_c_f"]}
    assert undriven_level_v(hold_ohm=hold_ohm, **larger) <= level_v * (1.0 + 1e-12)


def test_driven_level_is_a_divider() -> None:
    # Voltage divider: 100k over 100k + 10k of 1.1 V is 1.0 V; the hold then takes 1.1 V/100k = 11 uA at most.
    assert driven_level_v(supply_v=1.1, hold_ohm=100e3, drive_ohm=10e3) == pytest.approx(1.0, rel=1e-12)
    assert driven_level_v(supply_v=1.1, hold_ohm=100e3, drive_ohm=0.0) == 1.1
    assert hold_current_a(supply_v=1.1, hold_ohm=100e3) == pytest.approx(11e-6, rel=1e-12)


@settings(max_examples=60)
@given(supply_v=st.floats(0.5, 5.0), drive_ohm=st.floats(1.0, 1e6), share=st.floats(0.01, 0.99))
def test_smallest_hold_for_a_driver_is_just_large_enough(supply_v: float, drive_ohm: float, share: float) -> None:
    needed_v = share * supply_v
    hold_ohm = smallest_hold_for_driver_ohm(supply_v=supply_v, drive_ohm=drive_ohm, needed_v=needed_v)
    reached_v = driven_level_v(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)
    assert reached_v == pytest.approx(needed_v, rel=1e-9)
    weaker_ohm = hold_ohm * (1.0 - 1e-6)
    assert driven_level_v(supply_v=supply_v, hold_ohm=weaker_ohm, drive_ohm=drive_ohm) < needed_v
    # Kirchhoff's current law at the node, by SciPy's root finder.
    balanced_v = brentq(lambda v: (supply_v - v) / drive_ohm - v / hold_ohm, 0.0, supply_v, xtol=1e-14)
    assert reached_v == pytest.approx(float(balanced_v), rel=1e-9)


def test_a_level_of_nothing_needs_no_hold_and_an_ideal_driver_wins_against_any() -> None:
    assert smallest_hold_for_driver_ohm(supply_v=1.8, drive_ohm=1e3, needed_v=0.0) == 0.0
    assert smallest_hold_for_driver_ohm(supply_v=1.8, drive_ohm=0.0, needed_v=1.2) == 0.0


@pytest.mark.parametrize("needed_v", [1.8, 2.0])
def test_no_hold_lets_a_driver_reach_its_supply(needed_v: float) -> None:
    with pytest.raises(DomainError) as refused:
        smallest_hold_for_driver_ohm(supply_v=1.8, drive_ohm=1e3, needed_v=needed_v)
    assert str(refused.value) == f"needed_v must be below supply_v (1.8) (found {needed_v!r})"


GOOD_RAMP = {"coupling_c_f": 1e-13, "total_c_f": 1e-12, "rise_v": 1.0, "ramp_s": 1e-6}


@pytest.mark.parametrize("symbol", GOOD_RAMP)
def test_each_symbol_of_the_ramp_is_refused(symbol: str) -> None:
    bad = {**GOOD_RAMP, symbol: -1.0}
    message = f"^{symbol} must be at least 0 \\(found -1\\.0\\)$"
    with pytest.raises(DomainError, match=message):
        ramp_level_v(hold_ohm=1e6, **bad)
    with pytest.raises(DomainError, match=message):
        undriven_level_v(leakage_a=0.0, hold_ohm=1e6, **bad)
    with pytest.raises(DomainError, match=message):
        largest_hold_ohm(limit_v=0.1, leakage_a=0.0, **bad)


def test_divider_at_the_ends_of_what_is_not_known() -> None:
    for hold_ohm, drive_ohm, share in (
        (math.inf, 1e3, 1.0), (1e3, math.inf, 0.0), (0.0, 1e3, 0.0), (0.0, 0.0, 1.0), (math.inf, math.inf, 1.0),
    ):  # fmt: skip
        assert driven_level_v(supply_v=1.8, hold_ohm=hold_ohm, drive_ohm=drive_ohm) == 1.8 * share
        assert level_left_v(supply_v=1.8, hold_ohm=hold_ohm, drive_ohm=drive_ohm) == 1.8 * (1.0 - share)
    assert driven_level_v(supply_v=math.inf, hold_ohm=0.0, drive_ohm=1e3) == 0.0
    assert level_left_v(supply_v=math.inf, hold_ohm=1e3, drive_ohm=0.0) == 0.0
    assert hold_current_a(supply_v=1.8, hold_ohm=0.0) == math.inf
    assert hold_current_a(supply_v=1.8, hold_ohm=math.inf) == 0.0
    assert hold_current_a(supply_v=0.0, hold_ohm=0.0) == 0.0
    assert leakage_level_v(leakage_a=math.inf, hold_ohm=0.0) == leakage_level_v(leakage_a=0.0, hold_ohm=math.inf) == 0.0


@settings(max_examples=60)
@given(supply_v=st.floats(0.5, 5.0), hold_ohm=st.floats(1.0, 1e9), drive_ohm=st.floats(1.0, 1e9))
def test_what_is_reached_and_what_is_left_are_the_supply(supply_v: float, hold_ohm: float, drive_ohm: float) -> None:
    ends = {"supply_v": supply_v, "hold_ohm": hold_ohm, "drive_ohm": drive_ohm}
    assert driven_level_v(**ends) + level_left_v(**ends) == pytest.approx(supply_v, rel=1e-12)


def test_step_that_alone_passes_the_limit_leaves_no_hold() -> None:
    step = {"coupling_c_f": 1e-13, "total_c_f": 1e-12, "rise_v": 1.0, "ramp_s": 0.0}
    assert largest_hold_ohm(limit_v=0.09, leakage_a=1e-9, **step) == 0.0
    assert largest_hold_ohm(limit_v=0.15, leakage_a=1e-9, **step) == pytest.approx(50e6, rel=1e-9)


def test_coupling_is_part_of_the_total() -> None:
    bad = {**GOOD_RAMP, "total_c_f": 0.5e-13}
    with pytest.raises(DomainError) as refused:
        ramp_level_v(hold_ohm=1e6, **bad)
    assert str(refused.value) == "total_c_f must be at least coupling_c_f (1e-13) (found 5e-14)"


def test_other_refusals() -> None:
    with pytest.raises(DomainError, match=r"^leakage_a must be at least 0 \(found -1\.0\)$"):
        leakage_level_v(leakage_a=-1.0, hold_ohm=1.0)
    for bad in (-1.0, math.nan):
        refusal = rf"^hold_ohm must be at least 0 \(found {bad}\)$"
        with pytest.raises(DomainError, match=refusal):
            leakage_level_v(leakage_a=1.0, hold_ohm=bad)
        with pytest.raises(DomainError, match=refusal):
            ramp_level_v(hold_ohm=bad, **GOOD_RAMP)
        with pytest.raises(DomainError, match=refusal):
            undriven_level_v(leakage_a=0.0, hold_ohm=bad, **GOOD_RAMP)
        with pytest.raises(DomainError, match=refusal):
            driven_level_v(supply_v=1.0, hold_ohm=bad, drive_ohm=1.0)
        with pytest.raises(DomainError, match=refusal):
            level_left_v(supply_v=1.0, hold_ohm=bad, drive_ohm=1.0)
        with pytest.raises(DomainError, match=refusal):
            hold_current_a(supply_v=1.0, hold_ohm=bad)
    with pytest.raises(DomainError, match=r"^limit_v must be greater than 0 \(found 0\.0\)$"):
        largest_hold_ohm(limit_v=0.0, leakage_a=0.0, **GOOD_RAMP)
    for bad in (-1.0, math.inf):
        with pytest.raises(DomainError, match=rf"^leakage_a must be at least 0 \(found {bad}\)$"):
            largest_hold_ohm(limit_v=0.1, leakage_a=bad, **GOOD_RAMP)
    with pytest.raises(DomainError, match=r"^supply_v must be at least 0 \(found -1\.0\)$"):
        driven_level_v(supply_v=-1.0, hold_ohm=1.0, drive_ohm=1.0)
    with pytest.raises(DomainError, match=r"^drive_ohm must be at least 0 \(found -1\.0\)$"):
        driven_level_v(supply_v=1.0, hold_ohm=1.0, drive_ohm=-1.0)
    with pytest.raises(DomainError, match=r"^supply_v must be greater than 0 \(found 0\.0\)$"):
        smallest_hold_for_driver_ohm(supply_v=0.0, drive_ohm=1.0, needed_v=0.0)
    with pytest.raises(DomainError, match=r"^needed_v must be at least 0 \(found -1\.0\)$"):
        smallest_hold_for_driver_ohm(supply_v=1.0, drive_ohm=1.0, needed_v=-1.0)
    with pytest.raises(DomainError, match=r"^drive_ohm must be at least 0 \(found -1\.0\)$"):
        smallest_hold_for_driver_ohm(supply_v=1.0, drive_ohm=-1.0, needed_v=0.5)
    with pytest.raises(DomainError, match=r"^supply_v must be at least 0 \(found -1\.0\)$"):
        hold_current_a(supply_v=-1.0, hold_ohm=1.0)
