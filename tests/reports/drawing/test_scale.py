"""Scales: straight, stretched, round values, labels kept apart."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tidegate.lint.reports.drawing.scale import (
    Linear,
    kept_apart,
    round_values,
    shortened,
    stretched,
    text_width,
)

TIMES = st.lists(st.floats(0.0, 1.0, allow_subnormal=False), min_size=2, max_size=20, unique=True)


def test_linear_is_to_scale() -> None:
    scale = Linear(1.0, 2.0, 100.0, 300.0)
    assert [scale.at(value) for value in (1.0, 1.25, 2.0)] == [100.0, 150.0, 300.0]
    assert (scale.at(0.5), scale.at(3.0)) == (100.0, 300.0)
    assert scale.holds(1.5)
    assert not scale.holds(2.1)


@given(TIMES)
def test_stretched_keeps_the_order_and_the_ends(times: list[float]) -> None:
    scale = stretched(times, start=10.0, end=500.0, power=0.4)
    places = [scale.at(value) for value in sorted(times)]
    assert places == sorted(places)
    assert places[0] == 10.0
    assert places[-1] == pytest.approx(500.0)


def test_stretched_is_straight_between_knots_and_gives_short_stretches_more() -> None:
    scale = stretched([0.0, 1.0, 101.0], start=0.0, end=110.0, power=0.5)
    assert scale.at(1.0) == pytest.approx(10.0)  # 1 : sqrt(100) of 110
    assert scale.at(51.0) == pytest.approx(60.0)


@pytest.mark.parametrize(
    ("low", "high", "most", "expected"),
    [
        (0.0, 1.0, 5, [0.0, 0.2, 0.4, 0.6, 0.8]),
        (1.58, 2.01, 8, [1.6, 1.7, 1.8, 1.9, 2.0]),
        (0.0, 2.65, 8, [0.0, 0.5, 1.0, 1.5, 2.0, 2.5]),
    ],
)
def test_round_values(low: float, high: float, most: int, expected: list[float]) -> None:
    assert round_values(low=low, high=high, most=most) == pytest.approx(expected)


def test_shortened_fits_and_shows_both_ends() -> None:
    name = "under_voltage_detector_of_the_core"
    short = shortened(name, width=100.0, size=12.0)
    assert text_width(short, 12.0) <= 100.0
    assert name.startswith(short.partition("…")[0])
    assert name.endswith(short.partition("…")[2])
    assert shortened("uv", width=100.0, size=12.0) == "uv"


def test_labels_kept_apart_do_not_touch() -> None:
    places = [(0.0, 10.0), (12.0, 10.0), (30.0, 10.0), (5.0, 4.0)]
    assert kept_apart(places, gap=4.0) == [0, 2]
