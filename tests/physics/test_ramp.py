"""The slope of a ramp: units against pint, and refusals."""

from __future__ import annotations

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
    ("symbol", "value", "message"),
    [
        ("rise_v", -1.8, "rise_v must be at least 0 (found -1.8)"),
        ("rise_s", 0.0, "rise_s must be greater than 0 (found 0.0)"),
    ],
)
def test_refused(symbol: str, value: float, message: str) -> None:
    with pytest.raises(DomainError) as refused:
        ramp_slope_v_per_s(**{"rise_v": 1.8, "rise_s": 1e-3, symbol: value})
    assert str(refused.value) == message
