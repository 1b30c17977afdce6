"""Blech product: a published threshold, published current densities, and units against pint."""

from __future__ import annotations

import math
from typing import Any

import pint
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from tidegate.lint.physics.constants import ELEMENTARY_CHARGE_C
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.short_length import (
    blech_threshold_a_per_m,
    immune_length_m,
    short_length_product_a_per_m,
)

COPPER = {
    "atomic_volume_m3": 1.1807e-29,
    "stress_pa": 50e6,
    "effective_charge": 1.0,
    "resistivity_ohm_m": 1.724e-8,
}


def test_threshold_of_copper() -> None:
    # Printed as 2.1e3 A/cm (second-hand); reproduced as 2137 A/cm.
    threshold_a_per_cm = blech_threshold_a_per_m(**COPPER) / 100.0
    assert threshold_a_per_cm == pytest.approx(2.1e3, abs=50.0)
    assert threshold_a_per_cm == pytest.approx(2137.0, abs=0.5)


def test_threshold_against_the_stress_of_a_blocked_line_by_scipy() -> None:
    # The line at rest: O dS/dx = |Z*| q rho j all along it. SciPy integrates the stress over a line exactly
    # as long as is immune, and the ends differ by the stress the metal withstands.
    current_a, width_m, thickness_m = 2e-3, 0.4e-6, 0.3e-6
    length_m = immune_length_m(
        threshold_a_per_m=blech_threshold_a_per_m(**COPPER),
        current_a=current_a,
        width_m=width_m,
        thickness_m=thickness_m,
    )
    wind_n = ELEMENTARY_CHARGE_C * COPPER["resistivity_ohm_m"] * current_a / (width_m * thickness_m)
    solved = solve_ivp(lambda x, s: [wind_n / COPPER["atomic_volume_m3"]], (0.0, length_m), [0.0])
    assert solved.y[0, -1] == pytest.approx(COPPER["stress_pa"], rel=1e-9)


def test_published_current_density() -> None:
    # Glossary of Spirit Electronics, "Current density": 1 mA through a stripe 3 um wide and 1 um thick is
    # 0.33e5 A/cm^2. Taken here as the product with a length of 1 cm.
    product_a_per_m = short_length_product_a_per_m(current_a=1e-3, width_m=3e-6, thickness_m=1e-6, length_m=1e-2)
    assert product_a_per_m / 100.0 == pytest.approx(0.33e5, abs=0.005e5)


def test_product_against_pint() -> None:
    # Metal1 of GF180MCU at its 110 degC limit, 1.00 mA/um (google/gf180mcu-pdk, table 14.3), 0.55 um thick.
    unit: pint.UnitRegistry[Any] = pint.UnitRegistry()
    density = (1.0 * unit.milliampere / (1.0 * unit.micrometer * 0.55 * unit.micrometer)).to("A/cm^2")
    expected = (density * 50.0 * unit.micrometer).to("A/m").magnitude
    product = short_length_product_a_per_m(current_a=1e-3, width_m=1e-6, thickness_m=0.55e-6, length_m=50e-6)
    assert product == pytest.approx(expected, rel=1e-12)
    # 1 mA/um^2 is 1e5 A/cm^2, the usual slip.
    assert density.magnitude == pytest.approx(1e5 / 0.55, rel=1e-12)


lengths_m = st.floats(1e-8, 1e-3)


@settings(max_examples=60)
@given(st.floats(1e-9, 1.0), lengths_m, lengths_m, st.floats(1e3, 1e6))
def test_a_line_of_the_immune_length_is_at_the_threshold(
    current_a: float, width_m: float, thickness_m: float, threshold: float
) -> None:
    section = {"current_a": current_a, "width_m": width_m, "thickness_m": thickness_m}
    length_m = immune_length_m(threshold_a_per_m=threshold, **section)
    assert short_length_product_a_per_m(length_m=length_m, **section) == pytest.approx(threshold, rel=1e-9)
    longer = short_length_product_a_per_m(length_m=1.01 * length_m, **section)
    assert longer > threshold


@settings(max_examples=40)
@given(st.floats(1e6, 1e9), st.floats(1.0, 10.0), st.floats(0.5, 20.0))
def test_threshold_scales_with_stress_over_charge(stress: float, factor: float, charge: float) -> None:
    base = {**COPPER, "stress_pa": stress, "effective_charge": charge}
    threshold = blech_threshold_a_per_m(**base)
    stiffer = blech_threshold_a_per_m(**{**base, "stress_pa": factor * stress})
    pushed = blech_threshold_a_per_m(**{**base, "effective_charge": factor * charge})
    assert stiffer == pytest.approx(factor * threshold, rel=1e-12)
    assert pushed == pytest.approx(threshold / factor, rel=1e-12)


def test_without_current_every_length_is_immune() -> None:
    section = {"width_m": 1e-6, "thickness_m": 5e-7}
    assert immune_length_m(threshold_a_per_m=2e5, current_a=0.0, **section) == math.inf
    assert short_length_product_a_per_m(current_a=0.0, length_m=1.0, **section) == 0.0


@pytest.mark.parametrize("symbol", ["width_m", "thickness_m", "length_m"])
def test_a_segment_without_size_is_refused(symbol: str) -> None:
    sound = {"current_a": 1e-3, "width_m": 1e-6, "thickness_m": 5e-7, "length_m": 1e-4}
    with pytest.raises(DomainError) as refusal:
        short_length_product_a_per_m(**{**sound, symbol: 0.0})
    assert str(refusal.value) == f"{symbol} must be greater than 0 (found 0.0)"
    with pytest.raises(DomainError, match=r"^current_a must be at least 0 \(found -0\.001\)$"):
        short_length_product_a_per_m(**{**sound, "current_a": -1e-3})


@pytest.mark.parametrize("symbol", list(COPPER))
def test_a_metal_out_of_range_is_refused(symbol: str) -> None:
    with pytest.raises(DomainError) as refusal:
        blech_threshold_a_per_m(**{**COPPER, symbol: -1.0})
    assert str(refusal.value) == f"{symbol} must be greater than 0 (found -1.0)"


@pytest.mark.parametrize("symbol", ["threshold_a_per_m", "width_m", "thickness_m"])
def test_an_immune_length_out_of_range_is_refused(symbol: str) -> None:
    sound = {"threshold_a_per_m": 2e5, "current_a": 1e-3, "width_m": 1e-6, "thickness_m": 5e-7}
    with pytest.raises(DomainError) as refusal:
        immune_length_m(**{**sound, symbol: 0.0})
    assert str(refusal.value) == f"{symbol} must be greater than 0 (found 0.0)"
    with pytest.raises(DomainError, match=r"^current_a must be at least 0 \(found -1\.0\)$"):
        immune_length_m(**{**sound, "current_a": -1.0})
