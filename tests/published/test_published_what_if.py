"""Published numbers with a supposition of the reader's laid over them: the traps that real circuits set.

What is supposed is said in each test; every other number is published, and its source stands in the description.
Expected numbers are worked out beside the check by plain arithmetic.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any, Final

import pytest

from tests.published.reading import ROUNDING_V, Patch, judged, plain, supposed
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import trip_window

STILL: Final = {"dip": {"depth": "0 V"}, "load_step": "0 A", "source_impedance": "0 ohm"}
"""Suppose that nothing but ripple disturbs the rail."""


def rail(name: str) -> str:
    """The rail that a description's detectors watch."""
    return "dvdd" if name == "rp2350_core_supply" else next(iter(plain(name)["rails"]))


def covers(name: str, subject: str, folder: Path, *patches: Patch, ripple_v: float) -> Judgement:
    """Whether the hysteresis covers a ripple, where nothing else disturbs the rail."""
    quiet: dict[str, Any] = {detector: {"kick": "0 fC"} for detector in plain(name)["comparators"]}
    still: dict[str, Any] = {
        "conditions": {"coverage": 3},
        "complete": ["neighbours"],
        "comparators": {**quiet, subject: {**quiet[subject], "noise": {"rms": "0 V"}, "filter": "none"}},
        "rails": {rail(name): {**STILL, "ripple": {"peak_to_peak": f"{ripple_v:.9f} V"}}},
    }
    return judged(supposed(name, folder, still, *patches))["hysteresis/covers_disturbance", subject]


def lets_go(name: str, subject: str, folder: Path, *patches: Patch) -> Judgement:
    """Whether the level that lets go is reached in service; none of these detectors is said to guard anything."""
    return judged(supposed(name, folder, *patches), (trip_window.RULES,))["trip_window/release", subject]


def verdict(answer: Judgement) -> Kind:
    """What is said; what is told under another failure is one."""
    return Kind.FAIL if answer.under else answer.kind


def margin_v(answer: Judgement) -> float:
    assert answer.measure is not None
    return answer.measure.margin


def on(subject: str, **facts: Any) -> Patch:
    return {"comparators": {subject: facts}}


def supply(name: str, *, least: str, ripple_v: float) -> Patch:
    return {"rails": {rail(name): {"delivered": {"min": least}, "ripple": {"peak_to_peak": f"{ripple_v:.6f} V"}}}}


# Levels whose ranges overlap


@pytest.mark.parametrize(
    ("name", "subject", "ends_v", "typical_v"),
    [
        # DocID025743 Rev 6, Table 20: 1.84/1.92/2.00 V rising, 1.80/1.88/1.96 V falling; PDR hysteresis 40 mV typ
        pytest.param("stm32f031_por_pdr", "por_pdr", (1.84 - 1.80, 2.00 - 1.96), 0.040, id="STM32F031"),
        # STM1403, Table 6: 3.00/3.17 V rising, 3.00/3.15 V falling; hysteresis 10 mV typ (footnote 9)
        pytest.param("stm1403_supervisor", "reset_t", (3.00 - 3.00, 3.17 - 3.15), 0.010, id="STM1403"),
        # RP2350, Table 539: 97.4 % and 105 % of 0.946 V rising, 96.5 % and 103.5 % falling; typical 101 % and 100 %
        pytest.param("rp2350_core_supply", "bod", (0.009 * 0.946, 0.015 * 0.946), 0.01 * 0.946, id="RP2350-bod"),
        # RP2350, Table 1442: 87 % and 93 % of 1.1 V rising, 84 % and 90 % falling
        pytest.param("rp2350_core_supply", "vout_ok", (0.033, 0.033), 0.033, id="RP2350-vout_ok"),
        # SLASEX0D, 7.6.1: 1.55/1.59/1.62 V rising, 1.54/1.58/1.61 V falling
        pytest.param("mspm0l1306_por_bor", "bor", (0.010, 0.010), 0.010, id="SLASEX0D-bor"),
    ],
)
def test_levels_that_overlap_are_sound_where_they_move_together(
    name: str, subject: str, ends_v: tuple[float, float], typical_v: float, tmp_path: Path
) -> None:
    """Suppose that the levels share their errors: then the overlap says nothing, and typical lies between the ends."""
    together = on(subject, tracked=True, hysteresis={"amount": None, "feedback": "positive"})
    loaded = supposed(name, tmp_path, together)
    levels = loaded.description.comparators[subject].trip
    assert levels is not None and levels.rising is not None and levels.falling is not None
    assert levels.rising.least is not None and levels.falling.most is not None
    assert levels.rising.least < levels.falling.most  # they do overlap
    answers = judged(loaded)
    assert answers["hysteresis/present", subject].kind is Kind.PASS
    assert answers["hysteresis/sense", subject].kind is Kind.PASS
    assert ends_v[0] - ROUNDING_V <= typical_v <= ends_v[1] + ROUNDING_V
    measure = covers(name, subject, tmp_path, together, ripple_v=0.0).measure
    assert measure is not None
    assert measure.have == pytest.approx(ends_v[0], abs=ROUNDING_V)


def test_levels_that_overlap_can_be_swapped_where_they_do_not_move_together(tmp_path: Path) -> None:
    """Suppose the opposite: DocID025743, Table 20, 1.84 V at the least rising against 1.96 V at the most falling."""
    apart = on("por_pdr", tracked=False, hysteresis={"amount": None, "feedback": "positive"})
    answer = judged(supposed("stm32f031_por_pdr", tmp_path, apart))["hysteresis/sense", "por_pdr"]
    assert answer.kind is Kind.FAIL
    assert "120 mV" in answer.message


# A hysteresis that is small


@pytest.mark.parametrize(
    ("name", "subject", "patch", "least_v"),
    [
        # SLASEX0D, 7.6.1, VHYS,POR least 30 mV: the amount counts, not the ends of the levels (0.95 - 0.9 = 50 mV)
        pytest.param("mspm0l1306_por_bor", "por", {}, 0.030, id="SLASEX0D"),
        # nRF54LM20A Datasheet, VPOFHYST least 40 mV
        pytest.param("nrf54lm20a_power_fail", "power_fail", {}, 0.040, id="nRF54LM20A"),
        # STM1403, Table 6, footnote 9: 10 mV, supposed to be exact
        pytest.param(
            "stm1403_supervisor", "reset_t", on("reset_t", hysteresis={"amount": "10 mV"}), 0.010, id="STM1403"
        ),
    ],
)  # fmt: skip
def test_a_small_hysteresis_is_too_small_and_not_missing(
    name: str, subject: str, patch: Patch, least_v: float, tmp_path: Path
) -> None:
    """Suppose a ripple of just the least hysteresis, and of 1 mV more."""
    assert covers(name, subject, tmp_path, patch, ripple_v=least_v).kind is Kind.PASS
    beyond = covers(name, subject, tmp_path, patch, ripple_v=least_v + 0.001)
    assert beyond.kind is Kind.FAIL
    assert margin_v(beyond) == pytest.approx(-0.001, abs=ROUNDING_V)
    assert judged(supposed(name, tmp_path, patch))["hysteresis/present", subject].kind is Kind.PASS


def test_a_typical_ripple_is_no_bound(tmp_path: Path) -> None:
    """Suppose the LMZ10500 as the source (JAJSB44H, October 2023): ripple at 1.8 V, 650 mA, 8 mV, typical only."""
    source = {"rails": {"vdd": {"ripple": {"peak_to_peak": {"typ": "8 mV"}}}}}
    answer = lets_go("mspm0l1306_por_bor", "por", tmp_path, source)
    assert answer.kind is Kind.OPEN
    assert set(answer.missing) == {"rails.vdd.ripple.peak_to_peak.max", "rails.vdd.delivered"}


# A level that must protect


def test_the_least_supply_of_the_core_lies_above_the_level_of_its_brownout_detector(tmp_path: Path) -> None:
    """RP2350: DVDD from 1.05 V (Table 1441), brownout at 96.5 % of 0.946 V at the least (Table 539).

    Suppose that the supply falls without end and without haste: between the two the core is out of its range, unreset.
    """
    calm = {"rails": {"dvdd": {"collapse": "0 V/s"}}}
    answers = judged(supposed("rp2350_core_supply", tmp_path, calm), (trip_window.RULES,))
    answer = answers["trip_window/guarantee", "bod"]
    assert answer.kind is Kind.FAIL
    assert margin_v(answer) == pytest.approx(0.965 * 0.946 - 1.05, abs=ROUNDING_V)


# A release level that must be reached


def test_a_release_level_that_is_bounded_is_not_the_trip_level_plus_hysteresis(tmp_path: Path) -> None:
    """STM1403, Table 6: rises to 3.17 V at the most, although 3.15 V (falling, most) and 10 mV would make 3.16 V.

    Suppose a supply of at least 3.19 V with 20 mV of ripple, so 3.18 V at its lowest: 10 mV of room, not 20 mV.
    """
    name = "stm1403_supervisor"
    exact = on("reset_t", hysteresis={"amount": "10 mV"})
    answer = lets_go(name, "reset_t", tmp_path, exact, supply(name, least="3.19 V", ripple_v=0.020))
    assert answer.kind is Kind.PASS
    assert margin_v(answer) == pytest.approx(3.19 - 0.020 / 2 - 3.17, abs=ROUNDING_V)


@pytest.mark.parametrize(("ripple_v", "kind"), [(0.0, Kind.PASS), (0.002, Kind.FAIL)])
def test_the_least_supply_of_the_data_sheet_is_just_enough_to_start(
    ripple_v: float, kind: Kind, tmp_path: Path
) -> None:
    """SLASEX0D: VDD from 1.62 V (7.3), released up to 1.62 V (7.6.1).

    Suppose that the source keeps just that range, still or with 2 mV of ripple, and that the levels move together.
    """
    name = "mspm0l1306_por_bor"
    answer = lets_go(name, "bor", tmp_path, on("bor", tracked=True), supply(name, least="1.62 V", ripple_v=ripple_v))
    assert answer.kind is kind
    assert margin_v(answer) == pytest.approx(-ripple_v / 2, abs=ROUNDING_V)


@pytest.mark.parametrize(("ripple_v", "kind"), [(0.1474, Kind.PASS), (0.1494, Kind.FAIL)])
def test_the_regulator_leaves_the_detector_of_the_same_chip_room(ripple_v: float, kind: Kind, tmp_path: Path) -> None:
    """RP2350: delivered from 97 % of 1.1 V (Table 1442), released up to 105 % of 0.946 V (Table 539): 73.7 mV apart.

    Suppose a ripple of twice that, and 2 mV more, and that the levels move together.
    """
    ripple = {"rails": {"dvdd": {"ripple": {"peak_to_peak": f"{ripple_v} V"}}}}
    answer = lets_go("rp2350_core_supply", "bod", tmp_path, ripple, on("bod", tracked=True))
    assert verdict(answer) is kind
    assert margin_v(answer) == pytest.approx(1.1 * 0.97 - ripple_v / 2 - 1.05 * 0.946, abs=ROUNDING_V)


@pytest.mark.parametrize("tenths", range(17, 33))
def test_tolerance_and_hysteresis_give_the_release_level_of_every_code(tenths: int, tmp_path: Path) -> None:
    """nRF54LM20A: a nominal falling level within 2 % (VPOFTOL), released by up to 55 mV more (VPOFHYST).

    Suppose this code chosen, and a supply that keeps just the highest release level, or 1 mV less.
    """
    name, subject = "nrf54lm20a_power_fail", "power_fail"
    highest_v = tenths / 10 * 1.02 + 0.055
    codes = plain(name)["comparators"][subject]["codes"]
    # A data sheet's tolerance is the whole error of its threshold.
    whole = {"tolerance": {"of": "total"}}
    chosen = on(subject, trip=codes[f"v{tenths // 10}_{tenths % 10}"], errors=whole)
    for less_v, kind in ((0.0, Kind.PASS), (0.001, Kind.FAIL)):
        answer = lets_go(
            name, subject, tmp_path, chosen, supply(name, least=f"{highest_v - less_v:.6f} V", ripple_v=0.0)
        )
        assert answer.kind is kind
        assert margin_v(answer) == pytest.approx(-less_v, abs=ROUNDING_V)


def test_a_code_in_the_middle_of_the_range_lets_go_within_the_pin_range(tmp_path: Path) -> None:
    """sky130_ajc_ip__brownout, code 100: falls at 2.65301 V at the most, lets go by up to 208.3 mV more.

    Suppose a supply of at least 3.0 V, where the pin table begins, with 50 mV of ripple.
    """
    name = "sky130_brownout"
    answer = lets_go(name, "out", tmp_path, supply(name, least="3.0 V", ripple_v=0.050))
    assert answer.kind is Kind.PASS
    assert margin_v(answer) == pytest.approx(3.0 - 0.025 - (2.65301 + 0.2083), abs=ROUNDING_V)
