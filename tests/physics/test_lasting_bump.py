from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp
from scipy.optimize import minimize_scalar

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.lasting_bump import decayed_kick_v, decoupling_for_lasting_bump_f, lasting_bump_v

R_OHM, CC_F, CG_F, STEP_V = 1.4e6, 0.8e-15, 250e-15, 1.89
TAU_S = R_OHM * (CC_F + CG_F)
LASTS_S = 0.5e-6


def _node(edge: Callable[[float], float], times_s: list[float]) -> list[float]:
    """SciPy's solution of the node equation, in units of tau, for an edge given by its slope over time."""
    share = STEP_V * CC_F / (CC_F + CG_F)
    solved = solve_ivp(
        lambda t, v: share * edge(t * TAU_S) * TAU_S - v, (0.0, times_s[-1] / TAU_S), [0.0],
        t_eval=np.array(times_s) / TAU_S, rtol=1e-9, atol=1e-12, max_step=0.01,
    )  # fmt: skip
    return [float(v) for v in solved.y[0]]


def test_the_worst_edge_reaches_the_bound() -> None:
    # SciPy's solve_ivp: a jump (here within a thousandth of tau) to L, then a rise that holds the node at L for T.
    level_v = lasting_bump_v(lasts_s=LASTS_S, step_v=STEP_V, r_ohm=R_OHM, coupling_c_f=CC_F, ground_c_f=CG_F)
    jump = level_v * (CC_F + CG_F) / CC_F / STEP_V
    jump_s = 1e-3 * TAU_S
    slopes = jump / jump_s, (1.0 - jump) / LASTS_S
    levels = _node(
        lambda t_s: slopes[0] if t_s < jump_s else slopes[1], [jump_s + share * LASTS_S for share in (0.01, 0.5, 1.0)]
    )
    assert levels == pytest.approx([level_v] * 3, rel=2e-3)  # what decays within the jump


@pytest.mark.parametrize("edge_s", [1e-9, 0.1e-6, 0.3e-6, 0.5e-6, 0.7e-6, 1e-6, 3e-6])
def test_no_straight_edge_exceeds_the_bound(edge_s: float) -> None:
    # The level that a straight edge holds for T is v0 (e^x - 1)/(x (e^x - 1 + e^h)), x = tr/tau, h = T/tau (derived
    # from bump_at_v by setting it equal at both ends of T), solved here on a fine grid instead.
    grid_s = [float(t) for t in np.linspace(1e-10, edge_s + 3e-6, 3000)]
    v = np.array(_node(lambda t_s: 1.0 / edge_s if t_s < edge_s else 0.0, grid_s))
    spacing_s = grid_s[1] - grid_s[0]
    window = int(LASTS_S / spacing_s)
    held_v = max(float(min(v[i], v[i + window])) for i in range(len(v) - window))  # a bump with one peak
    bound_v = lasting_bump_v(lasts_s=LASTS_S, step_v=STEP_V, r_ohm=R_OHM, coupling_c_f=CC_F, ground_c_f=CG_F)
    assert held_v <= bound_v


def test_without_time_the_bump_is_the_capacitive_divider() -> None:
    # 1.8 V through 1 fF onto 100 fF: 17.822 mV (two-capacitor divider, printed digits).
    assert lasting_bump_v(lasts_s=0.0, step_v=1.8, r_ohm=1e6, coupling_c_f=1e-15, ground_c_f=100e-15) == pytest.approx(
        17.822e-3, rel=5e-5
    )


@pytest.mark.parametrize(
    ("least_c_f", "most_c_f"), [(8e-12, 10e-12), (1e-12, 2e-12), (1e-12, 5e-12), (1e-12, math.inf)]
)
def test_worst_capacitance_is_found(least_c_f: float, most_c_f: float) -> None:
    # SciPy's bounded minimiser over the capacitance; 200 kohm and 0.5 us have their worst at 2.5 pF.
    found = minimize_scalar(
        lambda c_f: -4e-15 / c_f * math.exp(-0.5e-6 / (200e3 * c_f)),
        bounds=(least_c_f, min(most_c_f, 100e-12)), method="bounded", options={"xatol": 1e-20},
    )  # fmt: skip
    assert decayed_kick_v(
        lasts_s=0.5e-6, charge_c=4e-15, r_ohm=200e3, least_c_f=least_c_f, most_c_f=most_c_f
    ) == pytest.approx(-float(found.fun), rel=1e-6)


def test_a_kick_that_need_not_last_is_whole() -> None:
    # 4 fC on 8 pF: 0.5 mV (definition of capacitance).
    kick_v = decayed_kick_v(lasts_s=0.0, charge_c=4e-15, r_ohm=200e3, least_c_f=8e-12, most_c_f=math.inf)
    assert kick_v == pytest.approx(0.5e-3)


@settings(max_examples=60)
@given(
    charge_c=st.floats(0.0, 1e-12), r_ohm=st.floats(1e3, 1e8), lasts_s=st.floats(0.0, 1e-3),
    least_c_f=st.floats(1e-15, 1e-10), wider=st.floats(1.0, 100.0), share=st.floats(0.0, 1.0),
)  # fmt: skip
def test_no_capacitance_within_holds_more(
    charge_c: float, r_ohm: float, lasts_s: float, least_c_f: float, wider: float, share: float
) -> None:
    c_f = least_c_f * (1.0 + share * (wider - 1.0))
    bound_v = decayed_kick_v(
        lasts_s=lasts_s, charge_c=charge_c, r_ohm=r_ohm, least_c_f=least_c_f, most_c_f=least_c_f * wider
    )
    held_v = charge_c / c_f * math.exp(-lasts_s / (r_ohm * c_f))
    assert held_v <= bound_v * (1.0 + 1e-12)


@settings(max_examples=60)
@given(
    lasts_s=st.floats(0.0, 1e-5), step_v=st.floats(0.1, 5.0), r_ohm=st.floats(1e4, 1e8),
    coupling_c_f=st.floats(1e-16, 1e-13), share=st.floats(1e-4, 0.99),
)  # fmt: skip
def test_sizing_is_just_enough(lasts_s: float, step_v: float, r_ohm: float, coupling_c_f: float, share: float) -> None:
    node = {"lasts_s": lasts_s, "step_v": step_v, "r_ohm": r_ohm, "coupling_c_f": coupling_c_f}
    bare_v = lasting_bump_v(ground_c_f=0.0, **node)
    c_f = decoupling_for_lasting_bump_f(allowed_v=share * bare_v, **node)
    assert lasting_bump_v(ground_c_f=c_f, **node) == pytest.approx(share * bare_v, rel=1e-6)
    assert decoupling_for_lasting_bump_f(allowed_v=bare_v * 1.001, **node) == 0.0


def test_no_coupling_no_bump() -> None:
    assert lasting_bump_v(lasts_s=0.0, step_v=1.8, r_ohm=1e6, coupling_c_f=0.0, ground_c_f=0.0) == 0.0


BUMP = {"lasts_s": 1e-6, "step_v": 1.8, "r_ohm": 1e6, "coupling_c_f": 1e-15, "ground_c_f": 1e-13}
KICK = {"lasts_s": 1e-6, "charge_c": 1e-15, "r_ohm": 1e6, "least_c_f": 1e-12, "most_c_f": 2e-12}
SIZING = {"allowed_v": 1e-3, "lasts_s": 1e-6, "step_v": 1.8, "r_ohm": 1e6, "coupling_c_f": 1e-15}


@pytest.mark.parametrize(
    ("function", "symbols", "wrong", "message"),
    [
        (lasting_bump_v, BUMP, {"lasts_s": -1.0}, "lasts_s must be at least 0 (found -1.0)"),
        (lasting_bump_v, BUMP, {"step_v": -1.0}, "step_v must be at least 0 (found -1.0)"),
        (lasting_bump_v, BUMP, {"r_ohm": -1.0}, "r_ohm must be at least 0 (found -1.0)"),
        (lasting_bump_v, BUMP, {"coupling_c_f": -1.0}, "coupling_c_f must be at least 0 (found -1.0)"),
        (lasting_bump_v, BUMP, {"ground_c_f": math.nan}, "ground_c_f must be at least 0 (found nan)"),
        (decayed_kick_v, KICK, {"lasts_s": -1.0}, "lasts_s must be at least 0 (found -1.0)"),
        (decayed_kick_v, KICK, {"charge_c": -1.0}, "charge_c must be at least 0 (found -1.0)"),
        (decayed_kick_v, KICK, {"r_ohm": -1.0}, "r_ohm must be at least 0 (found -1.0)"),
        (decayed_kick_v, KICK, {"least_c_f": -1.0}, "least_c_f must be at least 0 (found -1.0)"),
        (decayed_kick_v, KICK, {"most_c_f": 1e-13}, "most_c_f must be at least least_c_f, 1e-12 (found 1e-13)"),
        (decayed_kick_v, KICK, {"most_c_f": math.nan}, "most_c_f must be at least least_c_f, 1e-12 (found nan)"),
        (decoupling_for_lasting_bump_f, SIZING, {"allowed_v": 0.0}, "allowed_v must be greater than 0 (found 0.0)"),
        (decoupling_for_lasting_bump_f, SIZING, {"r_ohm": -1.0}, "r_ohm must be greater than 0 (found -1.0)"),
        (decoupling_for_lasting_bump_f, SIZING, {"lasts_s": -1.0}, "lasts_s must be at least 0 (found -1.0)"),
        (decoupling_for_lasting_bump_f, SIZING, {"step_v": -1.0}, "step_v must be at least 0 (found -1.0)"),
        (decoupling_for_lasting_bump_f, SIZING, {"coupling_c_f": -1.0}, "coupling_c_f must be at least 0 (found -1.0)"),
    ],
)
def test_refuses(function: Any, symbols: dict[str, float], wrong: dict[str, float], message: str) -> None:
    with pytest.raises(DomainError) as refused:
        function(**{**symbols, **wrong})
    assert str(refused.value) == message


@pytest.mark.parametrize(
    ("ends", "limit_v"),
    [
        ({"lasts_s": math.inf}, 0.0),
        ({"r_ohm": 0.0}, 0.0),
        ({"r_ohm": 0.0, "lasts_s": 0.0}, 1.8 * 1e-15 / 1.01e-13),
        ({"r_ohm": math.inf}, 1.8 * 1e-15 / 1.01e-13),
        ({"coupling_c_f": math.inf}, 1.8),
        ({"ground_c_f": math.inf}, 0.0),
        ({"step_v": math.inf}, math.inf),
        ({"step_v": math.inf, "coupling_c_f": 0.0}, 0.0),
    ],
)
def test_lasting_bump_at_the_ends_of_what_is_not_known(ends: dict[str, float], limit_v: float) -> None:
    # Limits of V Cc/(Cc + Cg + T/R), taken by hand.
    assert lasting_bump_v(**{**BUMP, **ends}) == pytest.approx(limit_v, rel=1e-12)


@pytest.mark.parametrize(
    ("ends", "limit_v"),
    [
        ({"lasts_s": math.inf}, 0.0),
        ({"r_ohm": 0.0}, 0.0),
        ({"r_ohm": math.inf}, 1e-15 / 1e-12),
        ({"least_c_f": 0.0, "most_c_f": math.inf}, 1e-15 / 1e-12 * math.exp(-1.0)),  # C = T/R = 1 pF
        ({"least_c_f": 0.0, "lasts_s": 0.0}, math.inf),
        ({"least_c_f": math.inf, "most_c_f": math.inf}, 0.0),
        ({"charge_c": math.inf}, math.inf),
        ({"charge_c": math.inf, "r_ohm": 0.0}, 0.0),
        ({"charge_c": 0.0, "least_c_f": 0.0, "lasts_s": 0.0}, 0.0),
    ],
)
def test_decayed_kick_at_the_ends_of_what_is_not_known(ends: dict[str, float], limit_v: float) -> None:
    # Limits of (Q/C) exp(-T/(R C)) over the capacitances there can be, taken by hand.
    assert decayed_kick_v(**{**KICK, **ends}) == pytest.approx(limit_v, rel=1e-12)
