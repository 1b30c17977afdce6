"""The edge of an RC node, against SciPy's solution of its differential equation."""

from __future__ import annotations

import math

import pytest
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.rc_edge import rc_edge_s


@pytest.mark.parametrize(("r_ohm", "c_f"), [(8e3, 400e-15), (1e6, 1e-12), (50.0, 2e-9)])
def test_edge_is_what_the_differential_equation_says(r_ohm: float, c_f: float) -> None:
    """dV/dt = (1 - V)/(R C), solved by SciPy in units of R C; a tenth and nine tenths found by root finding."""
    solved = solve_ivp(lambda _, v: 1.0 - v, (0.0, 5.0), [0.0], dense_output=True, rtol=1e-10, atol=1e-12)

    def reaches(share: float) -> float:
        return float(brentq(lambda at: float(solved.sol(at)[0]) - share, 0.0, 5.0))

    assert rc_edge_s(r_ohm=r_ohm, c_f=c_f) == pytest.approx((reaches(0.9) - reaches(0.1)) * r_ohm * c_f, rel=1e-6)


def test_edge_is_about_2_2_time_constants() -> None:
    """The rule of thumb 2.2 R C (common practice, no source) is ln 9 = 2.197 rounded."""
    assert rc_edge_s(r_ohm=1.0, c_f=1.0) == pytest.approx(2.2, abs=0.005)
    assert rc_edge_s(r_ohm=1.0, c_f=1.0) == pytest.approx(math.log(0.9 / 0.1), rel=1e-12)


@pytest.mark.parametrize("symbol", ["r_ohm", "c_f"])
@pytest.mark.parametrize("value", [-1.0, math.nan])
def test_what_is_below_zero_is_refused(symbol: str, value: float) -> None:
    with pytest.raises(DomainError, match=symbol):
        rc_edge_s(**({"r_ohm": 1.0, "c_f": 1.0} | {symbol: value}))


def test_what_is_not_known_stands_at_its_end() -> None:
    assert rc_edge_s(r_ohm=math.inf, c_f=1.0) == rc_edge_s(r_ohm=1.0, c_f=math.inf) == math.inf
    assert rc_edge_s(r_ohm=math.inf, c_f=0.0) == rc_edge_s(r_ohm=0.0, c_f=math.inf) == 0.0
