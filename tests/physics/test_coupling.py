from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.integrate import solve_ivp

from tidegate.lint.physics.coupling import (
    bump_at_v,
    bump_peak_v,
    charge_kick_v,
    decoupling_for_bump_f,
    decoupling_for_charge_f,
    settling_time_s,
    shared_impedance_bump_v,
)
from tidegate.lint.physics.domain import DomainError

# Capacitive divider: step, coupling, other capacitance, bump (derived; two-capacitor divider, printed digits).
DIVIDER_KICKS = ((1.8, 1e-15, 100e-15, 17.822e-3), (3.3, 5e-15, 100e-15, 157.14e-3))


@pytest.mark.parametrize(
    ("step_v", "coupling_c_f", "ground_c_f", "bump_v"), DIVIDER_KICKS, ids=["1fF-100fF", "5fF-100fF"]
)
def test_ideal_step_is_a_capacitive_divider(
    step_v: float, coupling_c_f: float, ground_c_f: float, bump_v: float
) -> None:
    node = {"step_v": step_v, "r_ohm": 1e6, "coupling_c_f": coupling_c_f, "ground_c_f": ground_c_f}
    assert bump_peak_v(edge_s=0.0, **node) == pytest.approx(bump_v, rel=5e-5)
    assert bump_at_v(t_s=0.0, edge_s=0.0, **node) == bump_peak_v(edge_s=0.0, **node)
    # An edge of a millionth of tau differs from the ideal step by half a millionth.
    tau_s = 1e6 * (coupling_c_f + ground_c_f)
    assert bump_peak_v(edge_s=1e-6 * tau_s, **node) == pytest.approx(bump_v, rel=6e-5)


def test_slow_edge_settles_to_displacement_current_times_resistance() -> None:
    # 100 fF at 1 V/us is 0.1 uA, over 1 Mohm 0.100 V (derived: I = C dV/dt and Ohm's law).
    assert bump_peak_v(step_v=100.0, edge_s=100e-6, r_ohm=1e6, coupling_c_f=100e-15, ground_c_f=0.0) == pytest.approx(
        0.1, rel=1e-12
    )


# Nodes with a long edge, one as long as tau, and a short one: V, tr, R, Cc, Cg.
NODES = tuple(
    dict(zip(("step_v", "edge_s", "r_ohm", "coupling_c_f", "ground_c_f"), values, strict=True))
    for values in (
        (1.8, 5e-6, 1e6, 40e-15, 160e-15),
        (1.8, 0.2e-6, 1e6, 50e-15, 150e-15),
        (3.3, 1e-9, 200e3, 20e-15, 1e-12),
    )
)


class _Transient:
    """SciPy's solution of the node equation, in units of tau, during the edge and after it."""

    def __init__(
        self, *, step_v: float, edge_s: float, r_ohm: float, coupling_c_f: float, ground_c_f: float, level_v: float
    ) -> None:
        self.tau_s = r_ohm * (coupling_c_f + ground_c_f)
        self.edge = edge_s / self.tau_s
        drive_v = coupling_c_f * (step_v / edge_s) * r_ohm

        def during(_: float, v: NDArray[np.float64]) -> NDArray[np.float64]:
            return drive_v - v

        def after(_: float, v: NDArray[np.float64]) -> NDArray[np.float64]:
            return -v

        def crossing(_: float, v: NDArray[np.float64]) -> float:
            return float(v[0] - level_v)

        exact = {"rtol": 1e-11, "atol": 1e-14, "dense_output": True, "method": "DOP853", "events": crossing}
        self.rise = solve_ivp(during, (0.0, self.edge), [0.0], **exact)
        self.peak_v = float(self.rise.y[0, -1])
        self.fall = solve_ivp(after, (self.edge, self.edge + 12.0), [self.peak_v], **exact)

    def at_v(self, t_s: float) -> float:
        t = t_s / self.tau_s
        return float((self.rise if t <= self.edge else self.fall).sol(t)[0])

    def above_s(self) -> float:
        return float(self.fall.t_events[0][0] - self.rise.t_events[0][0]) * self.tau_s


@pytest.mark.parametrize("node", NODES, ids=["slow-edge", "edge-of-tau", "fast-edge"])
def test_bump_follows_the_differential_equation(node: dict[str, float]) -> None:
    # SciPy's solve_ivp (DOP853) on (Cc + Cg) dv/dt = Cc dVs/dt - v/R.
    peak_v = bump_peak_v(**node)
    transient = _Transient(**node, level_v=0.3 * peak_v)
    assert peak_v == pytest.approx(transient.peak_v, rel=1e-8)
    for share in (0.0, 0.1, 0.5, 0.9, 0.995, 1.0):
        t_s = share * node["edge_s"]
        assert bump_at_v(t_s=t_s, **node) == pytest.approx(transient.at_v(t_s), rel=1e-7, abs=1e-12)
    for later_tau in (0.01, 0.3, 1.0, 4.0, 10.0):
        t_s = node["edge_s"] + later_tau * transient.tau_s
        assert bump_at_v(t_s=t_s, **node) == pytest.approx(transient.at_v(t_s), rel=1e-7)


nodes = st.fixed_dictionaries(
    {
        "step_v": st.floats(0.1, 5.0),
        "edge_s": st.floats(1e-10, 1e-5),
        "r_ohm": st.floats(1e3, 1e8),
        "coupling_c_f": st.floats(1e-16, 1e-12),
        "ground_c_f": st.floats(0.0, 1e-10),
    }
)


@settings(max_examples=60)
@given(node=nodes, longer=st.floats(1.01, 100.0), later=st.floats(0.0, 3.0))
def test_laws_of_the_bump(node: dict[str, float], longer: float, later: float) -> None:
    peak_v = bump_peak_v(**node)
    divider_v = node["step_v"] * node["coupling_c_f"] / (node["coupling_c_f"] + node["ground_c_f"])
    assert 0.0 < peak_v <= divider_v * (1.0 + 1e-12)
    assert bump_peak_v(**{**node, "edge_s": longer * node["edge_s"]}) <= peak_v * (1.0 + 1e-12)
    assert bump_peak_v(**{**node, "r_ohm": longer * node["r_ohm"]}) >= peak_v * (1.0 - 1e-12)
    assert bump_peak_v(**{**node, "ground_c_f": 1e-13 + longer * node["ground_c_f"]}) <= peak_v * (1 + 1e-12)
    assert bump_at_v(t_s=later * node["edge_s"], **node) <= peak_v * (1.0 + 1e-12)


sizing = st.fixed_dictionaries(
    {
        "step_v": st.floats(0.5, 5.0),
        "edge_s": st.just(0.0) | st.floats(1e-10, 1e-6),
        "r_ohm": st.floats(1e4, 1e8),
        "coupling_c_f": st.floats(1e-15, 1e-12),
    }
)


@settings(max_examples=100)
@given(node=sizing, share=st.floats(1e-4, 0.99))
def test_decoupling_is_just_enough(node: dict[str, float], share: float) -> None:
    bare_v = bump_peak_v(ground_c_f=0.0, **node)
    allowed_v = share * bare_v
    ground_c_f = decoupling_for_bump_f(allowed_v=allowed_v, **node)
    node_c_f = ground_c_f + node["coupling_c_f"]
    assert ground_c_f > 0.0
    assert bump_peak_v(ground_c_f=ground_c_f, **node) == pytest.approx(allowed_v, rel=1e-9)
    # One step of a thousandth of the node's capacitance to either side; after an edge of many tau the peak no longer
    # depends on the capacitance to working precision, so the step shows only where the edge is shorter.
    if node["edge_s"] < 10.0 * node["r_ohm"] * node["coupling_c_f"]:
        step_c_f = min(1e-3 * node_c_f, ground_c_f)
        assert bump_peak_v(ground_c_f=ground_c_f - step_c_f, **node) > allowed_v
        assert bump_peak_v(ground_c_f=ground_c_f + step_c_f, **node) < allowed_v


@settings(max_examples=40)
@given(node=sizing, excess=st.floats(1.0, 3.0))
def test_no_decoupling_where_the_bump_is_allowed(node: dict[str, float], excess: float) -> None:
    bare_v = bump_peak_v(ground_c_f=0.0, **node)
    assert decoupling_for_bump_f(allowed_v=excess * bare_v, **node) == 0.0


def test_decoupling_at_the_plateau_of_a_long_edge() -> None:
    # A thousand tau: the peak is R Cc V/tr whatever the capacitance, and rounding must not break the sizing.
    node = {"step_v": 1.8, "edge_s": 1e-4, "r_ohm": 1e6, "coupling_c_f": 1e-13}
    bare_v = bump_peak_v(ground_c_f=0.0, **node)
    just_below_v = math.nextafter(bare_v, 0.0)
    ground_c_f = decoupling_for_bump_f(allowed_v=just_below_v, **node)
    assert bump_peak_v(ground_c_f=ground_c_f, **node) == pytest.approx(just_below_v, rel=1e-12)


def test_decoupling_that_rounding_would_make_negative_is_none() -> None:
    # The limit lies one rounding below the bump, and the equation for the capacitance comes out 2.5e-29 F below 0.
    node = {
        "step_v": 0.7747726655306707,
        "edge_s": 1.5137744935735672e-07,
        "r_ohm": 3068314.3107899204,
        "coupling_c_f": 1.5610278594204043e-13,
    }
    allowed_v = 0.66428079087331
    assert bump_peak_v(ground_c_f=0.0, **node) > allowed_v
    assert decoupling_for_bump_f(allowed_v=allowed_v, **node) == 0.0


def test_decoupling_of_an_ideal_step_is_the_divider_turned_round() -> None:
    # 1.8 V through 1 fF, 17.822 mV allowed: 100 fF (derived; the divider row above).
    assert decoupling_for_bump_f(
        allowed_v=17.822e-3, step_v=1.8, edge_s=0.0, r_ohm=1e6, coupling_c_f=1e-15
    ) == pytest.approx(100e-15, rel=5e-5)


def test_without_coupling_nothing_happens() -> None:
    node = {"step_v": 1.8, "edge_s": 1e-9, "r_ohm": 1e6, "coupling_c_f": 0.0}
    for ground_c_f in (0.0, 1e-12):
        assert bump_peak_v(ground_c_f=ground_c_f, **node) == 0.0
        assert bump_at_v(t_s=2e-9, ground_c_f=ground_c_f, **node) == 0.0
    assert decoupling_for_bump_f(allowed_v=1e-3, **node) == 0.0


# Settling in time constants: for a residual (natural logarithm tables), and TI SLYW038D, where n tau settle to so
# many bits and so many bits take n tau. The table's 16-bit row is a misprint and left out.
RESIDUAL_ROWS = (
    (0.10, 2.3026),
    (0.05, 2.9957),
    (0.02, 3.9120),
    (0.01, 4.6052),
    (0.005, 5.2983),
    (1e-3, 6.9078),
    (1e-4, 9.2103),
    (1e-5, 11.5129),
    (1e-6, 13.8155),
)
BITS_AFTER_TAU = (
    (1, 1.44),
    (2, 2.89),
    (3, 4.33),
    (4, 5.77),
    (5, 7.21),
    (6, 8.66),
    (7, 10.10),
    (8, 11.54),
    (9, 12.98),
    (10, 14.43),
    (12, 17.31),
    (18, 25.97),
)
TAU_FOR_BITS = (
    (9, 6.24),
    (10, 6.93),
    (11, 7.62),
    (12, 8.32),
    (13, 9.01),
    (14, 9.70),
    (15, 10.40),
    (17, 11.78),
    (20, 13.86),
    (24, 16.64),
)


@pytest.mark.parametrize(("residual", "time_constants"), RESIDUAL_ROWS, ids=lambda value: f"{value:g}")
def test_settling_to_a_residual(residual: float, time_constants: float) -> None:
    assert settling_time_s(r_ohm=1e3, c_f=1e-9, residual=residual) == pytest.approx(time_constants * 1e-6, abs=5.1e-11)


@pytest.mark.parametrize(("time_constants", "bits"), BITS_AFTER_TAU, ids=lambda value: f"SLYW038D-{value:g}")
def test_bits_settled_after_time_constants(time_constants: int, bits: float) -> None:
    found = settling_time_s(r_ohm=1.0, c_f=1.0, residual=2.0**-bits)
    # Printed to 0.01 bit, which is ln 2 / 100 time constants.
    assert found == pytest.approx(time_constants, abs=0.0051 * math.log(2.0))


@pytest.mark.parametrize(("bits", "time_constants"), TAU_FOR_BITS, ids=lambda value: f"SLYW038D-{value:g}")
def test_time_constants_for_bits(bits: int, time_constants: float) -> None:
    assert settling_time_s(r_ohm=1.0, c_f=1.0, residual=2.0**-bits) == pytest.approx(time_constants, abs=0.0051)


def test_settling_of_a_converter_input() -> None:
    # 12 bit to 1/8 LSB, 100 kohm and 10 pF: 10.4 us (3roam.com, printed to three digits).
    assert settling_time_s(r_ohm=100e3, c_f=10e-12, residual=2.0**-15) == pytest.approx(10.4e-6, abs=5e-9)
    # 12 bit to 1/4 LSB, 10 kohm and 12 pF: 1164.448 ns (electronics.stackexchange.com, question 180057), which
    # was computed with a rounded logarithm; hence 1e-4.
    assert settling_time_s(r_ohm=10e3, c_f=12e-12, residual=2.0**-14) == pytest.approx(1164.448e-9, rel=1e-4)


def test_settling_agrees_with_event_detection() -> None:
    # SciPy's solve_ivp: error of an RC node in units of its time constant.
    def reached(_: float, error: NDArray[np.float64]) -> float:
        return float(error[0] - 1e-3)

    solved = solve_ivp(lambda _, error: -error, (0.0, 10.0), [1.0], events=reached, rtol=1e-11, atol=1e-14)
    expected_s = float(solved.t_events[0][0]) * 47e3 * 33e-12
    assert settling_time_s(r_ohm=47e3, c_f=33e-12, residual=1e-3) == pytest.approx(expected_s, rel=1e-7)


def test_nothing_to_settle_takes_no_time() -> None:
    assert settling_time_s(r_ohm=1e3, c_f=1e-9, residual=1.0) == 0.0
    assert settling_time_s(r_ohm=1e3, c_f=0.0, residual=0.1) == 0.0


def test_charge_and_shared_impedance() -> None:
    # Definition of capacitance: 1 pC on 100 pF is 10 mV. Ohm's law: 10 mA in 0.5 ohm is 5 mV.
    assert charge_kick_v(charge_c=1e-12, c_f=100e-12) == pytest.approx(10e-3, rel=1e-12)
    assert decoupling_for_charge_f(charge_c=1e-12, allowed_v=10e-3) == pytest.approx(100e-12, rel=1e-12)
    assert shared_impedance_bump_v(step_a=10e-3, impedance_ohm=0.5) == pytest.approx(5e-3, rel=1e-12)


@settings(max_examples=40)
@given(charge_c=st.floats(1e-18, 1e-6), allowed_v=st.floats(1e-6, 10.0))
def test_decoupling_for_charge_is_just_enough(charge_c: float, allowed_v: float) -> None:
    c_f = decoupling_for_charge_f(charge_c=charge_c, allowed_v=allowed_v)
    assert charge_kick_v(charge_c=charge_c, c_f=c_f) == pytest.approx(allowed_v, rel=1e-9)
    assert charge_kick_v(charge_c=charge_c, c_f=c_f * (1.0 - 1e-6)) > allowed_v


GOOD_NODE = {"step_v": 1.8, "edge_s": 1e-9, "r_ohm": 1e6, "coupling_c_f": 1e-15, "ground_c_f": 1e-13}


@pytest.mark.parametrize("symbol", GOOD_NODE)
def test_each_symbol_of_the_node_is_refused(symbol: str) -> None:
    bad = {**GOOD_NODE, symbol: -1.0}
    message = f"^{symbol} must be at least 0 \\(found -1\\.0\\)$"
    with pytest.raises(DomainError, match=message):
        bump_peak_v(**bad)
    with pytest.raises(DomainError, match=message):
        bump_at_v(t_s=1e-9, **bad)
    if symbol != "ground_c_f":
        del bad["ground_c_f"]
        with pytest.raises(DomainError, match=message):
            decoupling_for_bump_f(allowed_v=1e-3, **bad)


def test_other_refusals() -> None:
    with pytest.raises(DomainError, match=r"^t_s must be at least 0 \(found -1\.0\)$"):
        bump_at_v(t_s=-1.0, **GOOD_NODE)
    with pytest.raises(DomainError, match=r"^allowed_v must be greater than 0 \(found 0\.0\)$"):
        decoupling_for_bump_f(allowed_v=0.0, step_v=1.0, edge_s=0.0, r_ohm=1.0, coupling_c_f=1e-15)
    with pytest.raises(DomainError, match=r"^residual must lie in 0\.0 to 1\.0 \(found 1\.5\)$"):
        settling_time_s(r_ohm=1.0, c_f=1.0, residual=1.5)
    with pytest.raises(DomainError, match=r"^residual must be greater than 0 \(found 0\.0\)$"):
        settling_time_s(r_ohm=1.0, c_f=1.0, residual=0.0)
    with pytest.raises(DomainError, match=r"^r_ohm must be greater than 0 \(found 0\.0\)$"):
        settling_time_s(r_ohm=0.0, c_f=1.0, residual=0.5)
    with pytest.raises(DomainError, match=r"^c_f must be at least 0 \(found -1\.0\)$"):
        settling_time_s(r_ohm=1.0, c_f=-1.0, residual=0.5)
    with pytest.raises(DomainError, match=r"^charge_c must be at least 0 \(found -1\.0\)$"):
        charge_kick_v(charge_c=-1.0, c_f=1.0)
    with pytest.raises(DomainError, match=r"^c_f must be at least 0 \(found -1\.0\)$"):
        charge_kick_v(charge_c=1.0, c_f=-1.0)
    with pytest.raises(DomainError, match=r"^charge_c must be at least 0 \(found -1\.0\)$"):
        decoupling_for_charge_f(charge_c=-1.0, allowed_v=1.0)
    with pytest.raises(DomainError, match=r"^allowed_v must be greater than 0 \(found 0\.0\)$"):
        decoupling_for_charge_f(charge_c=1.0, allowed_v=0.0)
    with pytest.raises(DomainError, match=r"^step_a must be at least 0 \(found -1\.0\)$"):
        shared_impedance_bump_v(step_a=-1.0, impedance_ohm=1.0)
    with pytest.raises(DomainError, match=r"^impedance_ohm must be at least 0 \(found -1\.0\)$"):
        shared_impedance_bump_v(step_a=1.0, impedance_ohm=-1.0)


LIMITS = (
    ({"step_v": 0.0, "r_ohm": math.inf}, 0.0),
    ({"step_v": math.inf}, math.inf),
    ({"step_v": math.inf, "coupling_c_f": 0.0}, 0.0),
    ({"coupling_c_f": math.inf}, 1.8),
    ({"ground_c_f": math.inf}, 0.0),
    ({"r_ohm": 0.0}, 0.0),
    ({"r_ohm": 0.0, "edge_s": 0.0}, 1.8 * 1e-15 / 1.01e-13),
    ({"r_ohm": math.inf}, 1.8 * 1e-15 / 1.01e-13),
    ({"edge_s": math.inf}, 0.0),
    ({"coupling_c_f": 1e-15, "ground_c_f": 0.0, "r_ohm": math.inf}, 1.8),
)


@pytest.mark.parametrize(("ends", "limit_v"), LIMITS)
def test_bump_at_the_ends_of_what_is_not_known(ends: dict[str, float], limit_v: float) -> None:
    # Limits of V (R Cc/tr)(1 - exp(-tr/tau)), taken by hand: a divider without resistance, nothing behind a short, ...
    assert bump_peak_v(**{**GOOD_NODE, **ends}) == pytest.approx(limit_v, rel=1e-12)


@pytest.mark.parametrize(("ends", "limit_v"), [row for row in LIMITS if row[0].get("step_v") != math.inf])
def test_the_ends_are_what_very_large_and_small_sizes_come_to(ends: dict[str, float], limit_v: float) -> None:
    # The formula itself, written out, at 1e-9 and 1e9 of the usual size in place of nothing and of no end.
    size = {name: 1e9 * GOOD_NODE[name] if math.isinf(end) else end or 1e-9 * GOOD_NODE[name]
            for name, end in ends.items()}  # fmt: skip
    node = {**GOOD_NODE, **size}
    if ends.keys() >= {"r_ohm", "edge_s"}:
        node["edge_s"] = 1e-9 * node["r_ohm"] * 1e-13  # the step comes before the node gives it back
    r_ohm, coupling_c_f, edge_s = node["r_ohm"], node["coupling_c_f"], node["edge_s"]
    tau_s = r_ohm * (coupling_c_f + node["ground_c_f"])
    near_v = node["step_v"] * r_ohm * coupling_c_f / edge_s * -math.expm1(-edge_s / tau_s)
    assert near_v == pytest.approx(limit_v, rel=2e-3, abs=1e-5)


def test_charge_and_impedance_at_the_ends() -> None:
    # A charge on no capacitance has no end, on an endless one nothing; nothing times what has no end is nothing.
    assert charge_kick_v(charge_c=1e-15, c_f=0.0) == math.inf
    assert charge_kick_v(charge_c=0.0, c_f=0.0) == 0.0
    assert charge_kick_v(charge_c=1e-15, c_f=math.inf) == 0.0
    assert charge_kick_v(charge_c=math.inf, c_f=1e-12) == math.inf
    assert shared_impedance_bump_v(step_a=0.0, impedance_ohm=math.inf) == 0.0
    assert shared_impedance_bump_v(step_a=math.inf, impedance_ohm=1.0) == math.inf
