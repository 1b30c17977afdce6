"""The root finder of placement, against SciPy's and against itself at the edges."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from tidegate.lint.derived.monotone_root import monotone_root


def root(value: Callable[[float], float], *, slope: float = 1.0, start: float = 0.0, low: float = -1e6) -> float:
    return monotone_root(value, start=start, slope=slope, low=low, high=1e6, tolerance=1e-14)


lines = st.lists(st.tuples(st.floats(0.01, 5.0), st.floats(-3.0, 3.0)), min_size=1, max_size=4)


@settings(max_examples=200, deadline=None)
@given(parts=lines, least=st.booleans(), falls=st.booleans(), start=st.floats(-5.0, 5.0))
def test_piecewise_lines_against_scipy(
    parts: list[tuple[float, float]], *, least: bool, falls: bool, start: float
) -> None:
    def value(place: float) -> float:
        return (min if least else max)(a * place + b for a, b in parts)

    sign = -1.0 if falls else 1.0
    expected = brentq(value, -1e4, 1e4, xtol=1e-14)
    found = root(lambda place: sign * value(place), slope=sign, start=start)
    assert found == pytest.approx(expected, abs=1e-10)


@settings(max_examples=60, deadline=None)
@given(share=st.floats(0.0, 0.2), fixed=st.floats(0.0, 0.1), end=st.floats(0.2, 9.0))
def test_squares_against_scipy(share: float, fixed: float, end: float) -> None:
    def value(place: float) -> float:
        return place - math.hypot(share * place, fixed) - end

    assert root(value, start=1.0, low=0.0) == pytest.approx(brentq(value, 0.0, 50.0, xtol=1e-14), abs=1e-11)


@pytest.mark.parametrize("slope", [1.0, -1.0])
@pytest.mark.parametrize("size", [3.0, math.inf])
def test_what_never_crosses_lies_beyond_an_end(size: float, slope: float) -> None:
    assert root(lambda _: size, slope=slope) == -slope * math.inf
    assert root(lambda _: -size, slope=slope) == slope * math.inf
    assert math.isnan(root(lambda _: math.nan, slope=slope))


def test_a_value_without_end_counts_with_its_sign() -> None:
    assert root(lambda place: math.inf if place > 2.0 else -1.0) == pytest.approx(2.0, abs=1e-12)
    assert root(lambda place: -math.inf if place < 2.0 else place - 1.5) == pytest.approx(2.0, abs=1e-12)


def test_a_line_takes_three_looks() -> None:
    looks = []

    def value(place: float) -> float:
        looks.append(place)
        return 0.995 * (1.6 + place) - 1.607

    assert root(value) == pytest.approx(1.607 / 0.995 - 1.6, abs=1e-14)
    assert len(looks) <= 3
