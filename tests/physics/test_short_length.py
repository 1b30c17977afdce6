"""Blech product: a published current density, and units against pint."""

from __future__ import annotations

from typing import Any

import pint
import pytest

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.short_length import short_length_product_a_per_m


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


def test_without_current_there_is_no_product() -> None:
    assert short_length_product_a_per_m(current_a=0.0, width_m=1e-6, thickness_m=5e-7, length_m=1.0) == 0.0


@pytest.mark.parametrize("symbol", ["width_m", "thickness_m", "length_m"])
def test_a_segment_without_size_is_refused(symbol: str) -> None:
    sound = {"current_a": 1e-3, "width_m": 1e-6, "thickness_m": 5e-7, "length_m": 1e-4}
    with pytest.raises(DomainError) as refusal:
        short_length_product_a_per_m(**{**sound, symbol: 0.0})
    assert str(refusal.value) == f"{symbol} must be greater than 0 (found 0.0)"
    with pytest.raises(DomainError, match=r"^current_a must be at least 0 \(found -0\.001\)$"):
        short_length_product_a_per_m(**{**sound, "current_a": -1e-3})
