"""Lambert's W against SciPy and mpmath, and the printed diode example of a general library."""

from __future__ import annotations

import math
from collections.abc import Callable

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import special
from scipy.optimize import brentq

from tidegate.lint.physics import lambert_w as lambert_w_module
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.lambert_w import (
    diode_current_a,
    lambert_w_of_exp,
    lower_lambert_w_of_exp,
)


def test_upper_branch_against_scipy() -> None:
    y = np.concatenate([np.linspace(-700.0, 700.0, 4001), np.logspace(3, 300, 100)])
    found = lambert_w_of_exp(y)
    # w carries the rounding of y, |y|/(1 + w) of them; below that both agree to a few units of the last place.
    assert np.max(np.abs(found / special.wrightomega(y) - 1.0)) < 2e-14


def test_upper_branch_against_mpmath() -> None:
    for y in (-50.0, -36.9, -1.0, 0.0, 1.0, 22.1, 700.0, 5e4):
        with mpmath.workdps(40):
            expected = float(mpmath.lambertw(mpmath.exp(mpmath.mpf(y))).real)
        assert float(lambert_w_of_exp(y)) == pytest.approx(expected, rel=1e-14)
    assert float(lambert_w_of_exp(1.0)) == pytest.approx(1.0, rel=1e-15)  # identity: 1 + ln 1 = 1
    # The omega constant, value from memory.
    assert float(lambert_w_of_exp(0.0)) == pytest.approx(0.567143290409783873, rel=1e-15)


def test_lower_branch_against_scipy_and_mpmath() -> None:
    y = 1.0 + np.logspace(-6, 2.8, 500)
    # exp(-y) loses what is next to the branch point: sqrt(eps/(y - 1)) of the result at the least.
    tolerance = 1e-15 / np.sqrt(y - 1.0) ** 2 + 1e-13
    reference = -special.lambertw(-np.exp(-y), -1).real
    assert np.all(np.abs(lower_lambert_w_of_exp(y) / reference - 1.0) < tolerance)
    for value in (1.0 + 2.0**-30, 1.5, 2.0, 10.0, 700.0, 1e5):
        with mpmath.workdps(40):
            expected = float(-mpmath.lambertw(-mpmath.exp(-mpmath.mpf(value)), -1).real)
        assert float(lower_lambert_w_of_exp(value)) == pytest.approx(expected, rel=1e-11)


def test_both_branches_meet() -> None:
    assert float(lower_lambert_w_of_exp(1.0)) == pytest.approx(1.0, abs=1e-7)


# What each step leaves: the start, then an error raised to the fourth power (Fritsch, Shafer and Crowley, 1973).
def test_upper_branch_starts_within_two_percent_and_gains_by_the_fourth_power(monkeypatch: pytest.MonkeyPatch) -> None:
    y = np.concatenate([np.linspace(-37.0, 60.0, 2001), np.logspace(2, 300, 300)])
    reference = special.wrightomega(y)
    for steps, error in ((0, 0.02), (1, 3e-9), (2, 1e-14)):
        monkeypatch.setattr(lambert_w_module, "_STEPS", steps)
        assert np.max(np.abs(lambert_w_of_exp(y) / reference - 1.0)) < error


def test_lower_branch_starts_within_five_percent_and_gains_by_the_fourth_power(monkeypatch: pytest.MonkeyPatch) -> None:
    y = 1.0 + np.logspace(-3, 2.8, 400)
    with mpmath.workdps(40):
        reference = [float(-mpmath.lambertw(-mpmath.exp(-mpmath.mpf(value)), -1).real) for value in y]
    for steps, error in ((0, 0.05), (1, 5e-7), (2, 1e-13)):
        monkeypatch.setattr(lambert_w_module, "_STEPS", steps)
        assert np.max(np.abs(lower_lambert_w_of_exp(y) / np.array(reference) - 1.0)) < error


@settings(max_examples=60, deadline=None)
@given(y=st.floats(-700.0, 1e6))
def test_upper_branch_solves_its_equation(y: float) -> None:
    w = float(lambert_w_of_exp(y))
    assert w + math.log(w) == pytest.approx(y, rel=1e-13, abs=1e-13)


@settings(max_examples=60, deadline=None)
@given(y=st.floats(1.0, 1e6))
def test_lower_branch_solves_its_equation(y: float) -> None:
    z = float(lower_lambert_w_of_exp(y))
    assert z >= 1.0
    assert z - math.log(z) == pytest.approx(y, rel=1e-14)


# Boost C++ libraries, math, example/lambert_w_diode.cpp: IS 25 fA, n = 1; its rounded constants k = 1.38e-23,
# q = 1.6e-19 and 298 K reproduce the printed digits.
BOOST_EMISSION_V = 1.38e-23 * 298.0 / 1.6e-19
BOOST_SATURATION_A = 25e-15


def test_printed_diode_example() -> None:
    series_ohm = 249.0 + 0.3
    x = BOOST_SATURATION_A * series_ohm / BOOST_EMISSION_V
    assert x == pytest.approx(2.42486e-10, rel=3e-6)
    # Its w is for the argument x exp((V + IS R)/(n V_T)).
    y = math.log(x) + (0.9 + BOOST_SATURATION_A * series_ohm) / BOOST_EMISSION_V
    assert float(lambert_w_of_exp(y)) == pytest.approx(10.5225, abs=5e-5)
    found = diode_current_a(
        source_v=0.9, series_ohm=series_ohm, saturation_a=BOOST_SATURATION_A, emission_v=BOOST_EMISSION_V
    )
    assert float(found) == pytest.approx(0.00108485, abs=5e-9)


# Same device, other resistances; derived, and solved by SciPy's brentq below.
DERIVED_OHM = np.array([0.3, 2.48, 10.3, 51.3, 249.3])
DERIVED_A = {
    0.9: np.array([0.39603, 0.066412, 0.0191, 0.0045533, 0.0010849]),
    0.6: np.array([3.4229e-4, 3.3280e-4, 3.0421e-4, 2.2106e-4, 1.1388e-4]),
}


@pytest.mark.parametrize("source_v", [0.6, 0.9], ids=["scipy-0.6-V", "scipy-0.9-V"])
def test_diode_behind_a_resistor_against_scipy(source_v: float) -> None:
    found = diode_current_a(
        source_v=source_v,
        series_ohm=DERIVED_OHM,
        saturation_a=BOOST_SATURATION_A,
        emission_v=BOOST_EMISSION_V,
    )
    assert found == pytest.approx(DERIVED_A[source_v], rel=5e-5)  # five digits, some of which end in zeros
    for ohm, amp in zip(DERIVED_OHM, found, strict=True):

        def excess_a(v: float, ohm: float = ohm) -> float:
            return BOOST_SATURATION_A * math.expm1(v / BOOST_EMISSION_V) - (source_v - v) / ohm

        v_d = brentq(excess_a, 0.0, source_v, xtol=1e-16, rtol=1e-14)
        assert amp == pytest.approx((source_v - v_d) / ohm, rel=1e-9)


@settings(max_examples=60, deadline=None)
@given(
    source_v=st.floats(0.0, 1000.0),
    series_ohm=st.floats(1.0, 1e8),
    saturation_a=st.floats(1e-20, 1e-9),
    emission_v=st.floats(0.015, 0.08),
)
def test_diode_keeps_kirchhoffs_law(source_v: float, series_ohm: float, saturation_a: float, emission_v: float) -> None:
    branch = {"series_ohm": series_ohm, "saturation_a": saturation_a, "emission_v": emission_v}
    current_a = float(diode_current_a(source_v=source_v, **branch))
    device_v = source_v - current_a * series_ohm
    law_v = emission_v * math.log1p(current_a / saturation_a)
    # A current much below IS is the difference of two that are almost equal.
    assert device_v == pytest.approx(law_v, abs=1e-9)


def test_no_source_no_current() -> None:
    # Two equal currents are subtracted: with 1 Mohm and 26 mV their difference comes out below 0.
    for series_ohm, emission_v in ((1e4, 0.0259), (1e6, 0.026)):
        found = diode_current_a(source_v=0.0, series_ohm=series_ohm, saturation_a=1e-15, emission_v=emission_v)
        assert 0.0 <= float(found) < 1e-28


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: lambert_w_of_exp(math.nan), "y must be a finite number (found nan)"),
    (lambda: lower_lambert_w_of_exp(0.9), "y must be at least 1 (found 0.9)"),
    (lambda: lower_lambert_w_of_exp(math.inf), "y must be a finite number (found inf)"),
    (
        lambda: diode_current_a(source_v=-1.0, series_ohm=1.0, saturation_a=1e-15, emission_v=0.026),
        "source_v must be at least 0 (found -1.0)",
    ),
    (
        lambda: diode_current_a(source_v=1.0, series_ohm=0.0, saturation_a=1e-15, emission_v=0.026),
        "series_ohm must be greater than 0 (found 0.0)",
    ),
    (
        lambda: diode_current_a(source_v=1.0, series_ohm=1.0, saturation_a=0.0, emission_v=0.026),
        "saturation_a must be greater than 0 (found 0.0)",
    ),
    (
        lambda: diode_current_a(source_v=1.0, series_ohm=1.0, saturation_a=1e-15, emission_v=-0.026),
        "emission_v must be greater than 0 (found -0.026)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
