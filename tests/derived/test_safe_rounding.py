from __future__ import annotations

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tidegate.lint.derived.safe_rounding import show_down, show_up, width_up_um
from tidegate.lint.quantity import Dimension, parse

SIZES = st.floats(min_value=1e-14, max_value=1e9)


@pytest.mark.parametrize(
    ("ohm", "down", "up"),
    [
        (1.4e6, "1.4 Mohm", "1.4 Mohm"),
        (1400000.0000000002, "1.4 Mohm", "1.4 Mohm"),  # what is left of 1.4 Mohm after a division
        (865400.0, "865 kohm", "866 kohm"),
        (999.6, "999 ohm", "1 kohm"),
        (941176.47, "941 kohm", "942 kohm"),
        (0.0, "0 ohm", "0 ohm"),
        (math.inf, "without end", "without end"),
    ],
)
def test_size_is_rounded_to_the_side_on_which_it_still_does(ohm: float, down: str, up: str) -> None:
    assert show_down(ohm, Dimension.RESISTANCE) == down
    assert show_up(ohm, Dimension.RESISTANCE) == up


@given(SIZES)
def test_rounding_never_goes_to_the_wrong_side_nor_far(ohm: float) -> None:
    down = parse(show_down(ohm, Dimension.RESISTANCE), Dimension.RESISTANCE)
    up = parse(show_up(ohm, Dimension.RESISTANCE), Dimension.RESISTANCE)
    assert down <= ohm * (1 + 1e-11)
    assert up >= ohm * (1 - 1e-11)
    if ohm >= 1e-3:  # below, the smallest unit is shown with an exponent of its own
        assert up - down <= 0.0101 * ohm


@pytest.mark.parametrize(
    ("width_m", "text"),
    [
        (0.9e-6, "0.9 um"),
        (0.3e-6 + 0.6e-6, "0.9 um"),  # a hair above, by rounding alone
        (1.14903e-6, "1.15 um"),
        (6.4716e-6, "6.48 um"),
        (1.0000001e-6, "1.01 um"),
        (12.0e-6, "12 um"),
    ],
)
def test_width_is_rounded_up_to_the_grid(width_m: float, text: str) -> None:
    assert width_up_um(width_m) == text


@given(st.integers(min_value=1, max_value=100_000))
def test_width_on_the_grid_stays(steps: int) -> None:
    assert Decimal(width_up_um(steps * 1e-8).removesuffix(" um")) == Decimal(steps) / 100
