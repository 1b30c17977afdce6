"""Electromigration: published acceleration factors, a published derating table, and an open data set."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace
from scipy.integrate import quad
from scipy.optimize import brentq

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.electromigration import (
    Exposure,
    Wear,
    acceleration_factor,
    carried_limit,
    damage_share,
    life_s,
)

HOUR_S = 3600.0
YEAR_S = 365.25 * 24.0 * HOUR_S


def kelvin(celsius: float) -> float:
    return celsius + 273.15


# NIST and reliability take k to 4 or 10 digits: 8.617e-5 is low by 4e-5, which the exponent (below 10 in all
# rows) turns into at most 4e-4 of the factor.
ROUNDED_K = 5e-4

# (activation energy eV, use K, stress K, expected, relative tolerance)
ACCELERATION_FACTORS = (
    pytest.param(0.5, kelvin(25), kelvin(125), 133.0, 0.5 / 133.0, id="nist-sematech-8.1.5.1-from-memory-0.5eV"),
    pytest.param(1.0, kelvin(25), kelvin(125), 17597.0, ROUNDED_K, id="nist-sematech-8.1.5.1-from-memory-1eV"),
    # Worked example in the documentation of the Python library reliability, "Acceleration factor"
    # (MatthewReid854/reliability, docs), 60 degC in use and 100 degC in test.
    pytest.param(1.2, kelvin(60), kelvin(100), 88.29574588463338, 1e-8, id="reliability-docs-1.2eV"),
    # Printed 77.5 after rounding by hand inside the exponent (second-hand).
    pytest.param(0.7, 328.0, 398.0, 77.5, 0.01, id="second-hand-0.7eV"),
    pytest.param(0.9, 378.15, 398.15, 4.0043, 2e-5, id="derived-0.9eV"),
    pytest.param(0.85, 378.15, 398.15, 3.7072, 2e-5, id="derived-0.85eV"),
    pytest.param(0.7, 378.15, 398.15, 2.9419, 2e-5, id="derived-0.7eV"),
)


@pytest.mark.parametrize(("energy_ev", "use_k", "stress_k", "expected", "rel"), ACCELERATION_FACTORS)
def test_acceleration_by_temperature(
    energy_ev: float, use_k: float, stress_k: float, expected: float, rel: float
) -> None:
    factor = acceleration_factor(wear=Wear(energy_ev, 2.0), current_ratio=1.0, use_k=use_k, stress_k=stress_k)
    assert factor == pytest.approx(expected, rel=rel)


@pytest.mark.parametrize(("exponent", "expected"), [(2.0, 6401.2), (1.0, 1280.2)], ids=["n2", "n1"])
def test_acceleration_by_temperature_and_current(exponent: float, expected: float) -> None:
    # Derived; the temperature part is confirmed by SciPy in the next test. 2.5 against 0.5 MA/cm^2.
    factor = acceleration_factor(wear=Wear(0.9, exponent), current_ratio=5.0, use_k=kelvin(105), stress_k=kelvin(200))
    assert factor == pytest.approx(expected, rel=1e-4)


def test_acceleration_against_scipy_quad() -> None:
    # d ln(life)/dT = -Ea/(k T^2), integrated by SciPy with the CODATA constants of SciPy.
    from scipy.constants import e, k

    energy_ev = 0.83
    gain, _ = quad(lambda kelvins: energy_ev * e / (k * kelvins**2), kelvin(45), kelvin(230))
    factor = acceleration_factor(wear=Wear(energy_ev, 1.6), current_ratio=3.0, use_k=kelvin(45), stress_k=kelvin(230))
    assert factor == pytest.approx(3.0**1.6 * math.exp(gain), rel=1e-9)


# google/gf180mcu-pdk, design manual 14.2: tables 14.3 and 14.4 at 85, 110 and 125 degC. The formula of section
# 14.2.2 (Ea 0.7 eV, n 2) is stated for below 110 degC; the 125 degC column follows it all the same. Metal 1 is
# printed to about 1 %; the coarser rows have two digits. The 11 kA bi-directional row (7, 3, 2.2 mA/um) does
# not follow the formula and is left out.
GF180_WEAR = Wear(0.7, 2.0)
GF180_LIFE_S = 100_000.0 * HOUR_S
GF180_ROWS = (
    ("metal1-uni", 2.09, 1.00, 0.67, 0.01),
    ("metal1-bi", 3.14, 1.50, 1.00, 0.01),
    ("top-6kA-uni", 3.3, 1.6, 1.07, 0.05),
    ("top-6kA-bi", 5.03, 2.4, 1.6, 0.05),
    ("top-9kA-uni", 3.77, 1.8, 1.21, 0.05),
    ("top-9kA-bi", 5.66, 2.7, 1.82, 0.05),
    ("top-11kA-uni", 4.5, 2.2, 1.5, 0.05),
    ("top-30kA-uni", 16.52, 8.01, 5.37, 0.05),
    ("top-30kA-bi", 24.78, 12.02, 8.06, 0.05),
    ("poly-contact-uni", 0.43, 0.21, 0.14, 0.05),
    ("poly-contact-bi", 0.65, 0.30, 0.21, 0.05),
    ("comp-contact-uni", 0.58, 0.28, 0.18, 0.05),
    ("comp-contact-bi", 0.87, 0.42, 0.28, 0.05),
    ("via-uni", 0.58, 0.28, 0.18, 0.05),
    ("via-bi", 0.87, 0.42, 0.28, 0.05),
)


@pytest.mark.parametrize(
    ("at_85", "at_110", "at_125", "rel"),
    [row[1:] for row in GF180_ROWS],
    ids=[f"gf180mcu-pdk-14.2-{row[0]}" for row in GF180_ROWS],
)
def test_published_derating_table(at_85: float, at_110: float, at_125: float, rel: float) -> None:
    def carried_to(celsius: float) -> float:
        return carried_limit(
            limit=at_110,
            wear=GF180_WEAR,
            stated_k=kelvin(110),
            use_k=kelvin(celsius),
            stated_life_s=GF180_LIFE_S,
            use_life_s=GF180_LIFE_S,
        )

    assert carried_to(85) == pytest.approx(at_85, rel=rel)
    assert carried_to(110) == pytest.approx(at_110, rel=1e-12)
    assert carried_to(125) == pytest.approx(at_125, rel=rel)


def test_carried_limit_against_scipy_root() -> None:
    # The carried limit is the current whose life, in Black's own form, is the one asked for.
    energy_ev, exponent, k_ev = 0.92, 1.3, 8.617333262e-5
    stated_k, use_k, stated_s, use_s, limit = kelvin(105), kelvin(125), 11 * YEAR_S, 15 * YEAR_S, 2e3
    scale = stated_s * limit**exponent * math.exp(-energy_ev / (k_ev * stated_k))
    root = brentq(lambda i: scale * i**-exponent * math.exp(energy_ev / (k_ev * use_k)) - use_s, 1.0, 1e5, xtol=1e-9)
    carried = carried_limit(
        limit=limit,
        wear=Wear(energy_ev, exponent),
        stated_k=stated_k,
        use_k=use_k,
        stated_life_s=stated_s,
        use_life_s=use_s,
    )
    assert carried == pytest.approx(root, rel=1e-8)


def test_damage_of_the_published_miner_example() -> None:
    # Documentation of the Python library reliability, "Palmgren-Miner linear damage model": lives of 50 000 h,
    # 6500 h and 1000 h; one cycle spends 40, 15 and 5 minutes there. Uses 0.01351 % a cycle, so 7400.37951
    # cycles, of which 9.86717 %, 28.463 % and 61.66983 %.
    lives_h = (50_000.0, 6_500.0, 1_000.0)
    minutes = (40.0, 15.0, 5.0)
    conditions: dict[str, Any] = {
        "limit": 1e-3,
        "wear": Wear(0.7, 2.0),
        "stated_k": kelvin(110),
        "use_k": kelvin(110),
        "stated_life_s": lives_h[0] * HOUR_S,
    }
    # At n = 2 the current for a life is the limit times the root of the ratio of lives.
    exposures = [
        Exposure(60.0 * spent, 1e-3 * math.sqrt(lives_h[0] / life_h))
        for spent, life_h in zip(minutes, lives_h, strict=True)
    ]
    damage = damage_share(exposures=exposures, **conditions)
    assert 100.0 * damage == pytest.approx(0.01351, abs=5e-6)
    assert 1.0 / damage == pytest.approx(7400.37951, abs=5e-6)
    parts = [100.0 * damage_share(exposures=[one], **conditions) / damage for one in exposures]
    assert parts == pytest.approx([9.86717, 28.463, 61.66983], abs=5e-6)


wears = st.builds(Wear, st.floats(0.3, 1.5), st.floats(0.8, 3.0))
temperatures_k = st.floats(220.0, 680.0)
lives_s = st.floats(1e5, 1e9)


@settings(max_examples=60)
@given(wears, temperatures_k, temperatures_k, lives_s, lives_s)
def test_carrying_a_limit_there_and_back_changes_nothing(
    wear: Wear, a_k: float, b_k: float, a_s: float, b_s: float
) -> None:
    there = carried_limit(limit=2e3, wear=wear, stated_k=a_k, use_k=b_k, stated_life_s=a_s, use_life_s=b_s)
    back = carried_limit(limit=there, wear=wear, stated_k=b_k, use_k=a_k, stated_life_s=b_s, use_life_s=a_s)
    assert back == pytest.approx(2e3, rel=1e-10)


@settings(max_examples=60)
@given(wears, temperatures_k, temperatures_k, lives_s, lives_s)
def test_at_the_carried_limit_the_life_is_the_one_asked_for(
    wear: Wear, stated_k: float, use_k: float, stated_s: float, use_s: float
) -> None:
    carried = carried_limit(
        limit=1e-3, wear=wear, stated_k=stated_k, use_k=use_k, stated_life_s=stated_s, use_life_s=use_s
    )
    assert life_s(
        current=carried, limit=1e-3, wear=wear, stated_k=stated_k, use_k=use_k, stated_life_s=stated_s
    ) == pytest.approx(use_s, rel=1e-9)


CONDITIONS: dict[str, Any] = {
    "limit": 1e-3,
    "wear": Wear(0.7, 2.0),
    "stated_k": kelvin(110),
    "use_k": kelvin(125),
    "stated_life_s": GF180_LIFE_S,
}


@settings(max_examples=40)
@given(st.floats(1e-6, 1.0))
def test_half_the_current_lives_four_times_as_long(current: float) -> None:
    full = life_s(current=current, **CONDITIONS)
    assert life_s(current=0.5 * current, **CONDITIONS) == pytest.approx(4.0 * full, rel=1e-12)


@settings(max_examples=40)
@given(st.floats(1.0, 1e9), st.floats(1e-6, 1.0), st.floats(0.1, 1e3))
def test_damage_is_linear_in_time(time_s: float, current: float, factor: float) -> None:
    once = damage_share(exposures=[Exposure(time_s, current)], **CONDITIONS)
    longer = damage_share(exposures=[Exposure(factor * time_s, current)], **CONDITIONS)
    assert longer == pytest.approx(factor * once, rel=1e-9)
    assert once == pytest.approx(time_s / life_s(current=current, **CONDITIONS), rel=1e-9)


@settings(max_examples=40)
@given(st.lists(st.builds(Exposure, st.floats(0.0, 1e9), st.floats(0.0, 1.0)), max_size=6))
def test_damage_adds_up_in_any_order(exposures: list[Exposure]) -> None:
    total = damage_share(exposures=exposures, **CONDITIONS)
    assert total == damage_share(exposures=exposures[::-1], **CONDITIONS)
    assert total == pytest.approx(sum(damage_share(exposures=[one], **CONDITIONS) for one in exposures))


@settings(max_examples=40)
@given(wears, st.floats(300.0, 450.0), st.floats(1.0, 50.0), st.floats(1e-6, 1.0))
def test_hotter_metal_never_lives_longer(wear: Wear, use_k: float, rise_k: float, current: float) -> None:
    def life_at(kelvins: float) -> float:
        return life_s(current=current, **{**CONDITIONS, "wear": wear, "use_k": kelvins})

    assert life_at(use_k + rise_k) < life_at(use_k)


def test_ends_of_the_scale() -> None:
    assert life_s(current=0.0, **CONDITIONS) == math.inf
    assert life_s(current=1e-300, **CONDITIONS) == math.inf
    assert life_s(current=1e300, **CONDITIONS) == 0.0
    assert damage_share(exposures=[], **CONDITIONS) == 0.0
    assert damage_share(exposures=[Exposure(1e9, 0.0), Exposure(0.0, 1e300)], **CONDITIONS) == 0.0
    assert damage_share(exposures=[Exposure(1.0, 1e300)], **CONDITIONS) == math.inf
    assert acceleration_factor(wear=Wear(0.7, 2.0), current_ratio=1e200, use_k=300.0, stress_k=400.0) == math.inf


def accelerate(**changes: Any) -> object:
    sound: dict[str, Any] = {"wear": Wear(0.7, 2.0), "current_ratio": 5.0, "use_k": 378.15, "stress_k": 473.15}
    return acceleration_factor(**{**sound, **changes})


def carry(**changes: Any) -> object:
    return carried_limit(**{**CONDITIONS, "use_life_s": 1e8, **changes})


def live(**changes: Any) -> object:
    return life_s(**{**CONDITIONS, "current": 1e-3, **changes})


def damage(**changes: Any) -> object:
    return damage_share(**{**CONDITIONS, "exposures": [Exposure(1.0, 1e-3)], **changes})


REFUSED = (
    (accelerate, "current_ratio", 0.0, "current_ratio must be greater than 0 (found 0.0)"),
    (accelerate, "use_k", 105.0, "use_k must lie in 200.0 to 700.0 (found 105.0)"),
    (accelerate, "stress_k", 701.0, "stress_k must lie in 200.0 to 700.0 (found 701.0)"),
    (carry, "limit", 0.0, "limit must be greater than 0 (found 0.0)"),
    (carry, "stated_k", 110.0, "stated_k must lie in 200.0 to 700.0 (found 110.0)"),
    (carry, "use_k", 85.0, "use_k must lie in 200.0 to 700.0 (found 85.0)"),
    (carry, "stated_life_s", 0.0, "stated_life_s must be greater than 0 (found 0.0)"),
    (carry, "use_life_s", math.inf, "use_life_s must be greater than 0 (found inf)"),
    (live, "current", -1e-3, "current must be at least 0 (found -0.001)"),
    (live, "limit", -1.0, "limit must be greater than 0 (found -1.0)"),
    (live, "stated_k", math.nan, "stated_k must lie in 200.0 to 700.0 (found nan)"),
    (live, "use_k", 0.0, "use_k must lie in 200.0 to 700.0 (found 0.0)"),
    (live, "stated_life_s", 0.0, "stated_life_s must be greater than 0 (found 0.0)"),
    (damage, "limit", 0.0, "limit must be greater than 0 (found 0.0)"),
    (damage, "stated_k", 110.0, "stated_k must lie in 200.0 to 700.0 (found 110.0)"),
    (damage, "use_k", 1e3, "use_k must lie in 200.0 to 700.0 (found 1000.0)"),
    (damage, "stated_life_s", -1.0, "stated_life_s must be greater than 0 (found -1.0)"),
)


@pytest.mark.parametrize(
    ("call", "symbol", "value", "message"), REFUSED, ids=[f"{row[0].__name__}-{row[1]}" for row in REFUSED]
)
def test_arguments_out_of_range_are_refused(
    call: Callable[..., object], symbol: str, value: object, message: str
) -> None:
    with pytest.raises(DomainError) as refusal:
        call(**{symbol: value})
    assert str(refusal.value) == message


def test_a_limit_beyond_the_range_of_a_float_is_refused() -> None:
    with pytest.raises(DomainError, match=r"^carried_limit must be a finite number \(found inf\)$"):
        carry(wear=Wear(0.7, 1e-3), use_life_s=1.0)
    with pytest.raises(DomainError, match=r"^carried_limit must be greater than 0 \(found 0\.0\)$"):
        carry(wear=Wear(0.7, 1e-3), use_life_s=1e10)


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("activation_energy_ev", -0.1, "activation_energy_ev must be at least 0 (found -0.1)"),
        ("activation_energy_ev", math.inf, "activation_energy_ev must be at least 0 (found inf)"),
        ("current_exponent", 0.0, "current_exponent must be greater than 0 (found 0.0)"),
        ("current_exponent", -2.0, "current_exponent must be greater than 0 (found -2.0)"),
    ],
)
def test_wear_out_of_range_is_refused(symbol: str, value: float, message: str) -> None:
    with pytest.raises(DomainError) as refusal:
        replace(Wear(0.7, 2.0), **{symbol: value})
    assert str(refusal.value) == message


def test_the_ends_of_what_is_not_known_of_the_law() -> None:
    """Ea = 0: exp(0) = 1 at every temperature; n without end: x^(1/n) is 1 for every x (limits of Black's law)."""
    assert carry(wear=Wear(0.0, 2.0), use_k=CONDITIONS["stated_k"] + 40.0) == pytest.approx(
        carry(wear=Wear(0.7, 2.0), use_k=CONDITIONS["stated_k"])
    )
    assert carry(wear=Wear(0.7, math.inf), use_life_s=1.0) == CONDITIONS["limit"]
    assert carry(wear=Wear(0.7, 1e9), use_life_s=1.0) == pytest.approx(CONDITIONS["limit"], rel=1e-6)
    assert live(wear=Wear(0.7, math.inf), current=0.99 * CONDITIONS["limit"]) == math.inf
    assert live(wear=Wear(0.7, math.inf), current=1.01 * CONDITIONS["limit"]) == 0.0


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("time_s", -1.0, "time_s must be at least 0 (found -1.0)"),
        ("current", math.inf, "current must be at least 0 (found inf)"),
    ],
)
def test_an_exposure_out_of_range_is_refused(symbol: str, value: float, message: str) -> None:
    with pytest.raises(DomainError) as refusal:
        replace(Exposure(1.0, 1e-3), **{symbol: value})
    assert str(refusal.value) == message
