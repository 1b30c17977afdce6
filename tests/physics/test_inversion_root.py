"""Line against the law of inversion: SciPy's root finder from weak to strong inversion, and where nothing meets."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq, minimize_scalar

from tidegate.lint.physics import inversion_root as inversion_root_module
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.inversion_root import inversion_root


def softplus(x: float) -> float:
    return max(x, 0.0) + math.log1p(math.exp(-abs(x)))


exponents = st.floats(-5.0, 5.0)


@settings(max_examples=120, deadline=None)
@given(p_exponent=exponents, p_sign=st.sampled_from((-1.0, 1.0)), q_exponent=st.floats(-4.0, 3.0))
def test_falling_line_against_scipy(p_exponent: float, p_sign: float, q_exponent: float) -> None:
    p, q = p_sign * 10.0**p_exponent, -(10.0**q_exponent)
    found = inversion_root(constant=p, slope=q)
    assert bool(found.exists)
    high = 1.0 + math.sqrt(abs(p)) + abs(p / q)
    low = -high - 0.5 * math.log1p(2.0 / abs(q)) - abs(p / q)
    expected = brentq(lambda x: p + q * x - softplus(x) ** 2, low, high, xtol=1e-14, rtol=1e-14, maxiter=500)
    assert float(found.x) == pytest.approx(expected, rel=1e-9, abs=1e-9)


@settings(max_examples=120, deadline=None)
@given(p_exponent=exponents, p_sign=st.sampled_from((-1.0, 1.0)), q_exponent=st.floats(-4.0, 3.0))
def test_rising_line_against_scipy(p_exponent: float, p_sign: float, q_exponent: float) -> None:
    p, q = p_sign * 10.0**p_exponent, 10.0**q_exponent
    found = inversion_root(constant=p, slope=q)

    def h(x: float) -> float:
        return p + q * x - softplus(x) ** 2

    high = 2.0 + q + math.sqrt(abs(p))
    low = -50.0 - abs(p / q)
    top = float(minimize_scalar(lambda x: -h(x), bounds=(low, high), method="bounded", options={"xatol": 1e-9}).x)
    size = abs(p) + q * abs(top)
    if abs(h(top)) < 1e-6 * size:
        return  # a line that all but touches: which side it is on is a matter of rounding
    assert bool(found.exists) is (h(top) > 0.0)
    if found.exists:
        expected = brentq(h, top, high, xtol=1e-14, rtol=1e-14, maxiter=500)
        assert float(found.x) == pytest.approx(expected, rel=1e-8, abs=1e-8)


def test_level_line_is_solved_in_closed_form() -> None:
    p = np.array([1e-6, 0.25, 4.0, 1e4])
    found = inversion_root(constant=p, slope=0.0)
    assert found.x == pytest.approx(np.log(np.expm1(np.sqrt(p))), rel=1e-12, abs=1e-12)
    assert found.exists.all()


def test_a_line_that_touches_the_square_alone_meets_nothing() -> None:
    # 200 x - 10^4 touches x^2 at 100, and ln^2(1 + e^x) lies above x^2 by a hair; one unit further up it is met, at
    # 100 + 1 to the last digit, and one unit further down it is far away.
    found = inversion_root(constant=np.array([-9999.0, -10000.0, -10001.0]), slope=200.0)
    assert found.exists.tolist() == [True, False, False]
    assert float(found.x[0]) == pytest.approx(101.0, rel=1e-12)


MANY_P = np.concatenate([-(10.0 ** np.linspace(6, -8, 60)), 10.0 ** np.linspace(-8, 6, 60)])
MANY_Q = 10.0 ** np.linspace(-8, 4, 60)


@pytest.mark.parametrize(
    ("p", "q", "steps"),
    [
        pytest.param(MANY_P, -MANY_Q, 6, id="falling"),
        pytest.param(MANY_P[MANY_P < 0.0], MANY_Q, 6, id="rising, below at 0"),
        pytest.param(MANY_P[MANY_P > 0.0], MANY_Q, 10, id="rising, above at 0"),
    ],
)
def test_the_start_is_close_wherever_the_line_lies(
    p: np.ndarray, q: np.ndarray, steps: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    # From a start that is merely right of the root, Newton's method goes left by half a unit a step in weak inversion.
    p, q = np.meshgrid(p, q)
    expected = inversion_root(constant=p, slope=q)
    monkeypatch.setattr(inversion_root_module, "_MOST_STEPS", steps)
    found = inversion_root(constant=p, slope=q)
    assert np.array_equal(found.exists, expected.exists)
    monkeypatch.setattr(inversion_root_module, "_MOST_STEPS", 2)
    with pytest.raises(DomainError, match=r"^constant and slope leave a root that does not settle$"):
        inversion_root(constant=p, slope=q)


def test_corners_with_and_without_a_root_side_by_side() -> None:
    found = inversion_root(constant=np.array([1.0, -1.0, -1.0, 0.0]), slope=np.array([0.5, 0.5, -0.5, 0.0]))
    assert found.exists.tolist() == [True, False, True, False]
    assert np.isfinite(found.x).all()
    alone = inversion_root(constant=1.0, slope=0.5)
    assert float(found.x[0]) == pytest.approx(float(alone.x), rel=1e-15)


@pytest.mark.parametrize("name", ["constant", "slope"])
def test_refused(name: str) -> None:
    with pytest.raises(DomainError) as caught:
        inversion_root(**{"constant": 1.0, "slope": 1.0, name: math.nan})
    assert str(caught.value) == f"{name} must be a finite number (found nan)"
