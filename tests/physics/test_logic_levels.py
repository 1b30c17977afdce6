from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.logic_levels import STANDARDS, InputLevels, InputShares, input_levels_v

# JEDEC JESD8 family as quoted by others: standard, supply, highest low, lowest high, and where it was seen.
PUBLISHED = (
    # Microchip, "2.3.7 3.3V LVTTL": 0.8 V and 2.0 V.
    ("JESD8C.01", 3.3, 0.8, 2.0, "Microchip-3V3-LVTTL"),
    # Intel document 683794, "2.5 V LVTTL and LVCMOS": 0.7 V and 1.7 V (second-hand).
    ("JESD8-5A.01", 2.5, 0.7, 1.7, "Intel-683794-2V5"),
    # Noise-margin example at nominal supply: 0.63 V and 1.17 V (second-hand).
    ("JESD8-7A", 1.8, 0.63, 1.17, "JESD8-7A-nominal"),
    # Ends of the normal ranges: 0.35 and 0.65 of the supply, second-hand, multiplied out.
    ("JESD8-7A", 1.65, 0.5775, 1.0725, "JESD8-7A-least"),
    ("JESD8-7A", 1.95, 0.6825, 1.2675, "JESD8-7A-most"),
    # Microchip, "1.5V LVCMOS (JESD8-11)": 0.35 and 0.65 of the supply.
    ("JESD8-11A", 1.4, 0.490, 0.910, "Microchip-JESD8-11-least"),
    # IGLOO nano data sheet, "1.2 V LVCMOS (JESD8-12A)"; JESD220G table 6.3 agrees (second-hand).
    ("JESD8-12A.01", 1.1, 0.385, 0.715, "IGLOO-nano-least"),
    ("JESD8-12A.01", 1.3, 0.455, 0.845, "IGLOO-nano-most"),
)


@pytest.mark.parametrize(
    ("standard", "supply_v", "low_most_v", "high_least_v"),
    [row[:4] for row in PUBLISHED],
    ids=[row[4] for row in PUBLISHED],
)
def test_levels_are_the_published_ones(standard: str, supply_v: float, low_most_v: float, high_least_v: float) -> None:
    found = input_levels_v(standard=standard, supply_v=supply_v)
    assert found.low_most_v == pytest.approx(low_most_v, rel=1e-12)
    assert found.high_least_v == pytest.approx(high_least_v, rel=1e-12)


# Outputs of a standard against its own inputs: highest low output, lowest high output, margins (second-hand).
NOISE_MARGINS = (
    ("JESD8C.01", 3.3, 0.4, 2.4, 0.4, 0.4),
    ("JESD8-7A", 1.8, 0.45, 1.35, 0.18, 0.18),
)


@pytest.mark.parametrize(
    ("standard", "supply_v", "output_low_v", "output_high_v", "low_margin_v", "high_margin_v"),
    NOISE_MARGINS,
    ids=["JESD8C.01-margins", "JESD8-7A-margins"],
)
def test_noise_margins_are_the_published_ones(
    *,
    standard: str,
    supply_v: float,
    output_low_v: float,
    output_high_v: float,
    low_margin_v: float,
    high_margin_v: float,
) -> None:
    found = input_levels_v(standard=standard, supply_v=supply_v)
    assert found.low_most_v - output_low_v == pytest.approx(low_margin_v, rel=1e-9)
    assert output_high_v - found.high_least_v == pytest.approx(high_margin_v, rel=1e-9)


def test_a_1_8_v_output_cannot_drive_a_3_3_v_input() -> None:
    # JESD8-7A output of 1.35 V into JESD8C.01: margin -0.65 V (second-hand).
    found = input_levels_v(standard="JESD8C.01", supply_v=3.3)
    assert 1.35 - found.high_least_v == pytest.approx(-0.65, rel=1e-9)


def test_the_table_is_keyed_by_name_and_cannot_be_changed() -> None:
    assert list(STANDARDS) == ["JESD8C.01", "JESD8-5A.01", "JESD8-7A", "JESD8-11A", "JESD8-12A.01"]
    assert all(name == standard.name for name, standard in STANDARDS.items())
    with pytest.raises(TypeError):
        STANDARDS["another"] = STANDARDS["JESD8-7A"]  # type: ignore[index]


@pytest.mark.parametrize("name", STANDARDS)
def test_ranges_nest_and_levels_fit_into_them(name: str) -> None:
    standard = STANDARDS[name]
    assert standard.wide.least_v <= standard.normal.least_v < standard.normal.most_v <= standard.wide.most_v
    for supply_v in (standard.wide.least_v, standard.normal.least_v, standard.wide.most_v):
        levels = input_levels_v(standard=name, supply_v=supply_v)
        assert 0.0 < levels.low_most_v < levels.high_least_v < supply_v


# Normal ranges as the titles of the standards give them: nominal and half-width (JESD8C.01 and JESD8-5A.01: value from
# memory; JESD8-7A, JESD8-11A.01, JESD8-12A.01: titles as quoted, second-hand), and the wide range.
TITLES = (
    ("JESD8C.01", 3.3, 0.3, 2.7, 3.6),
    ("JESD8-5A.01", 2.5, 0.2, 1.8, 2.7),
    ("JESD8-7A", 1.8, 0.15, 1.2, 1.95),
    ("JESD8-11A", 1.5, 0.1, 0.9, 1.6),
    ("JESD8-12A.01", 1.2, 0.1, 0.8, 1.3),
)


@pytest.mark.parametrize(
    ("name", "nominal_v", "half_width_v", "wide_least_v", "wide_most_v"),
    TITLES,
    ids=[f"{row[0]}-title" for row in TITLES],
)
def test_supply_ranges_are_those_of_the_titles(
    name: str, nominal_v: float, half_width_v: float, wide_least_v: float, wide_most_v: float
) -> None:
    standard = STANDARDS[name]
    assert standard.normal.least_v == pytest.approx(nominal_v - half_width_v, rel=1e-12)
    assert standard.normal.most_v == pytest.approx(nominal_v + half_width_v, rel=1e-12)
    assert (standard.wide.least_v, standard.wide.most_v) == (wide_least_v, wide_most_v)


@settings(max_examples=40)
@given(name=st.sampled_from(list(STANDARDS)), along=st.floats(0.0, 1.0))
def test_levels_stand_still_or_follow_the_supply(name: str, along: float) -> None:
    standard = STANDARDS[name]
    supply_v = min(
        standard.wide.most_v,
        standard.wide.least_v + along * (standard.wide.most_v - standard.wide.least_v),
    )
    found = input_levels_v(standard=name, supply_v=supply_v)
    if isinstance(standard.inputs, InputShares):
        # Both shares lie equally far from half the supply.
        assert found.low_most_v + found.high_least_v == pytest.approx(supply_v, rel=1e-12)
    else:
        assert found == standard.inputs


@pytest.mark.parametrize("name", STANDARDS)
def test_supply_outside_the_wide_range_is_refused(name: str) -> None:
    wide = STANDARDS[name].wide
    for at_v in (wide.least_v, wide.most_v):
        assert isinstance(input_levels_v(standard=name, supply_v=at_v), InputLevels)
    for at_v in (math.nextafter(wide.least_v, 0.0), math.nextafter(wide.most_v, 9.0), math.nan):
        with pytest.raises(DomainError) as refused:
            input_levels_v(standard=name, supply_v=at_v)
        assert str(refused.value) == (f"supply_v must lie in {wide.least_v!r} to {wide.most_v!r} (found {at_v!r})")


def test_unknown_standard_is_refused() -> None:
    with pytest.raises(DomainError) as refused:
        input_levels_v(standard="JESD8-7B", supply_v=1.8)
    assert str(refused.value) == (
        "standard must be one of JESD8C.01, JESD8-5A.01, JESD8-7A, JESD8-11A, JESD8-12A.01 (found 'JESD8-7B')"
    )
