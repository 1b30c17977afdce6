"""The slope of a ramp: units against pint, and refusals."""

from __future__ import annotations

import math
from typing import Any

import pint
import pytest

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.ramp import ramp_slope_v_per_s


def test_slope_against_pint() -> None:
    unit: pint.UnitRegistry[Any] = pint.UnitRegistry()
    expected = (1.8 * unit.volt / (50.0 * unit.microsecond)).to("V/s").magnitude
    assert ramp_slope_v_per_s(rise_v=1.8, rise_s=50e-6) == pytest.approx(expected, rel=1e-12)


def test_a_supply_that_stands_still_has_no_slope() -> None:
    assert ramp_slope_v_per_s(rise_v=0.0, rise_s=1e-6) == 0.0


@pytest.mark.parametrize(
    ("rise_v", "rise_s", "limit"),
    [(1.8, 0.0, math.inf), (1.8, math.inf, 0.0), (math.inf, 1.0, math.inf), (0.0, 0.0, 0.0), (0.0, math.inf, 0.0)],
)
def test_at_the_ends_of_what_is_not_known(rise_v: float, rise_s: float, limit: float) -> None:
    # Limits of V/t (IEEE 1788-2015, 10.5.3); nothing has no slope, in however short a time.
    assert ramp_slope_v_per_s(rise_v=rise_v, rise_s=rise_s) == limit


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("rise_v", -1.8, "rise_v must be at least 0 (found -1.8)"),
        ("rise_s", -1.0, "rise_s must be at least 0 (found -1.0)"),
    ],
)
def test_refused(symbol: str, value: float, message: str) -> None:
    with pytest.raises(DomainError) as refused:
        ramp_slope_v_per_s(**{"rise_v": 1.8, "rise_s": 1e-3, symbol: value})
    assert str(refused.value) == message
