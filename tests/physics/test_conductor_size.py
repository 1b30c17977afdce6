"""Line and via limits: published limits of two open process kits, exact fractions, and the way back."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Any

import pint
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.physics.conductor_size import line_limit_a, vias_for_current, width_for_current_m
from tidegate.lint.physics.domain import DomainError

# (limit in mA/um, source); widths and currents below are ours, the unit conversion is checked against pint.
PER_WIDTH = (
    pytest.param(1.00, id="gf180mcu-pdk-table-14.3-metal1-110C"),
    pytest.param(16.52, id="gf180mcu-pdk-table-14.3-top-30kA-85C"),
    pytest.param(2.0, id="ihp-sg13g2-spec-2.15-metal2"),
    pytest.param(15.0, id="ihp-sg13g2-spec-2.15-topmetal1"),
)


@pytest.mark.parametrize("ma_per_um", PER_WIDTH)
def test_line_limit_against_pint(ma_per_um: float) -> None:
    unit: pint.UnitRegistry[Any] = pint.UnitRegistry()
    per_width = ma_per_um * unit.milliampere / unit.micrometer
    expected = (per_width * (0.40 - 0.02) * unit.micrometer).to(unit.ampere).magnitude
    per_width_a_per_m = per_width.to(unit.ampere / unit.meter).magnitude
    assert line_limit_a(
        drawn_width_m=0.40e-6, width_bias_m=0.02e-6, per_width_a_per_m=per_width_a_per_m
    ) == pytest.approx(expected, rel=1e-12)


# Limits of one via or contact from the SG13G2 process specification of IHP, section 2.15 (0.3 mA a contact,
# 0.4 mA a Via1, 1.4 mA a TopVia1); the counts follow by exact fractions.
PER_VIA = ("0.3e-3", "0.4e-3", "1.4e-3")


@pytest.mark.parametrize("per_via", PER_VIA, ids=["contact", "via1", "topvia1"])
def test_whole_multiples_take_no_extra_via(per_via: str) -> None:
    for count in range(1, 200):
        whole = count * Fraction(per_via)
        assert vias_for_current(current_a=float(whole), per_via_a=float(per_via)) == count
        assert vias_for_current(current_a=float(whole * Fraction(1001, 1000)), per_via_a=float(per_via)) > count
        assert vias_for_current(current_a=float(whole * Fraction(999, 1000)), per_via_a=float(per_via)) <= count


def test_rounding_that_a_plain_ceiling_would_get_wrong() -> None:
    current_a, contact_a = 1.5e-3, 0.3e-3
    assert math.ceil(current_a / contact_a) == 6
    assert vias_for_current(current_a=current_a, per_via_a=contact_a) == 5


@settings(max_examples=60)
@given(st.floats(1e-9, 1.0), st.floats(1e-6, 1e-1))
def test_the_count_carries_the_current_and_one_less_does_not(current_a: float, per_via_a: float) -> None:
    count = vias_for_current(current_a=current_a, per_via_a=per_via_a)
    assert count >= 1
    assert count * per_via_a >= current_a * (1.0 - 2e-9)
    assert (count - 1) * per_via_a < current_a


@settings(max_examples=60)
@given(st.floats(1e-6, 1.0), st.floats(100.0, 1e5), st.floats(0.0, 1e-7))
def test_width_and_limit_invert_each_other(current_a: float, per_width: float, bias_m: float) -> None:
    width_m = width_for_current_m(current_a=current_a, per_width_a_per_m=per_width, width_bias_m=bias_m)
    carried_a = line_limit_a(drawn_width_m=width_m, width_bias_m=bias_m, per_width_a_per_m=per_width)
    # The bias may be a thousand times the width that carries, which costs three digits.
    assert carried_a == pytest.approx(current_a, rel=1e-11)


@settings(max_examples=40)
@given(st.floats(1e-7, 1e-4), st.floats(1.0, 10.0), st.floats(0.0, 9e-8))
def test_a_wider_line_never_carries_less(width_m: float, factor: float, bias_m: float) -> None:
    def limit_a(drawn_width_m: float) -> float:
        return line_limit_a(drawn_width_m=drawn_width_m, width_bias_m=bias_m, per_width_a_per_m=1e3)

    assert limit_a(factor * width_m) >= limit_a(width_m)


def test_no_current_needs_no_metal() -> None:
    assert vias_for_current(current_a=0.0, per_via_a=1e-3) == 0
    assert width_for_current_m(current_a=0.0, per_width_a_per_m=1e3, width_bias_m=2e-8) == 2e-8


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"drawn_width_m": 0.0}, "drawn_width_m must be greater than 0 (found 0.0)"),
        ({"drawn_width_m": 2e-8}, "drawn_width_m must be above width_bias_m = 2e-08 (found 2e-08)"),
        ({"width_bias_m": -1e-8}, "width_bias_m must be at least 0 (found -1e-08)"),
        ({"per_width_a_per_m": 0.0}, "per_width_a_per_m must be greater than 0 (found 0.0)"),
    ],
)
def test_a_line_out_of_range_is_refused(changes: dict[str, float], message: str) -> None:
    sound = {"drawn_width_m": 4e-7, "width_bias_m": 2e-8, "per_width_a_per_m": 1e3}
    with pytest.raises(DomainError) as refusal:
        line_limit_a(**{**sound, **changes})
    assert str(refusal.value) == message


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"current_a": -1.0}, "current_a must be at least 0 (found -1.0)"),
        ({"width_bias_m": -1e-8}, "width_bias_m must be at least 0 (found -1e-08)"),
        ({"per_width_a_per_m": 0.0}, "per_width_a_per_m must be greater than 0 (found 0.0)"),
    ],
)
def test_a_width_out_of_range_is_refused(changes: dict[str, float], message: str) -> None:
    sound = {"current_a": 1e-3, "width_bias_m": 2e-8, "per_width_a_per_m": 1e3}
    with pytest.raises(DomainError) as refusal:
        width_for_current_m(**{**sound, **changes})
    assert str(refusal.value) == message


@pytest.mark.parametrize(
    ("current_a", "per_via_a", "message"),
    [
        (-1e-3, 1e-3, "current_a must be at least 0 (found -0.001)"),
        (1e-3, 0.0, "per_via_a must be greater than 0 (found 0.0)"),
        (1e10, 1e-300, "current_a_over_per_via_a must be a finite number (found inf)"),
    ],
)
def test_vias_out_of_range_are_refused(current_a: float, per_via_a: float, message: str) -> None:
    with pytest.raises(DomainError) as refusal:
        vias_for_current(current_a=current_a, per_via_a=per_via_a)
    assert str(refusal.value) == message
