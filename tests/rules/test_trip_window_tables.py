"""Published threshold tables, judged on a rail that the test supposes: margins are differences of printed numbers.

Sources, read as text at onlinedocs.microchip.com (publication/topic):
  BOD33_85C  46.11.3 Brown-Out Detectors (BOD) Characteristics, GUID-57D3515A-D13A-4FB6-B2E6-46A8E304CC60-en-US-9 /
             GUID-BAA4DA17-CA2E-482B-AC51-1F684200F099
  BOD33_D    34.10.3 Brown-Out Detectors (BOD) Characteristics, GUID-2BBF0A73-A043-4A40-A6CA-0FF154E4BFFE-en-US-11 /
             GUID-508FACA9-5CEF-43A5-A1FD-C59DF52ACB56
  VBOT       32.5 System and Reset Characteristics, GUID-74F8229E-4C43-4FA0-BE7D-1AA303C6F8A4-en-US-6 /
             GUID-8FC98155-BE46-49E1-8D9F-3562442374A1
  VBOD       37.11 RST and BOD, GUID-A033CDA8-8724-46BD-B29F-D830FF21A623-en-US-12 /
             GUID-01CEF2DF-55F5-4E98-AF76-6AB88C70DF16
Not affiliated. What no table gives (the rail, its ripple, the load) is supposed in each test.
"""

from __future__ import annotations

import datetime
import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest

from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import claims, trip_window

TODAY = datetime.date(2026, 1, 1)
Levels = tuple[str, str]


def judged(
    folder: Path, *, delivered: Levels, works_from: str, collapse: str = "0 V/s", ripple: str = "0 V", **detector: Any
) -> Mapping[str, Judgement]:
    """What is said about one under-voltage detector that resets one load on one rail, by rule."""
    data = {
        "rails": {
            "vdd": {
                "delivered": {"min": delivered[0], "max": delivered[1]}, "collapse": collapse,
                "ripple": {"peak_to_peak": ripple}, "load_step": "0 A", "source_impedance": "0 ohm",
            }
        },
        "comparators": {
            "bod": {
                "role": "under_voltage", "watches": "vdd", "delay": "0 s", "filter": "none", "sampling": "none",
                **detector,
            }
        },
        "output_stages": {"out": {"driven_by": ["bod"]}},
        "resets": {"rst": {"driven_by": ["out"], "active": "low", "guards": ["chip"]}},
        "loads": {"chip": {"needs": [{"rail": "vdd", "works": {"min": works_from}}]}},
    }  # fmt: skip
    file = folder / "table.json"
    file.write_text(json.dumps(data), "utf-8")
    result = review(load(file), Catalogue([trip_window.RULES, claims.RULES]), today=TODAY)
    assert result.faults == ()
    return {said.rule: said for said in result.judgements if said.subject == "bod"}


def margin_mv(said: Judgement) -> float:
    assert said.measure is not None
    return round(said.measure.margin * 1e3, 6)


def span(least: float, typical: float, most: float) -> dict[str, str]:
    return {"min": f"{least} V", "typ": f"{typical} V", "max": f"{most} V"}


BOD33_85C = {
    "level_6": {"rising": span(1.66, 1.68, 1.70), "falling": span(1.61, 1.64, 1.65)},
    "level_7": {"rising": span(1.70, 1.72, 1.74), "falling": span(1.65, 1.67, 1.68)},
    "level_39": {"rising": span(2.79, 2.84, 2.89), "falling": span(2.74, 2.78, 2.80)},
    "level_48": {"rising": span(3.12, 3.18, 3.20), "falling": span(3.04, 3.09, 3.11)},
}


def test_codes_of_a_brown_out_detector_on_a_supposed_1_8_v_rail(tmp_path: Path) -> None:
    """1.71 V less half of 20 mV is 1.70 V: level 6 lets go just there, level 7 is 40 mV short; the others never fit."""
    said = judged(
        tmp_path, delivered=("1.71 V", "1.89 V"), works_from="1.6 V", ripple="20 mV", codes=BOD33_85C,
        ships_with="level_6", hysteresis={"amount": {"min": "40 mV", "max": "180 mV"}},
    )  # fmt: skip
    assert margin_mv(said["trip_window/guarantee"]) == 10  # 1.61 - 1.60
    assert margin_mv(said["trip_window/nuisance"]) == 50  # 1.70 - 1.65
    assert (said["trip_window/release"].kind, margin_mv(said["trip_window/release"])) == (Kind.PASS, 0)  # 1.70 - 1.70
    assert margin_mv(said["trip_window/spread"]) == 60  # (1.70 - 1.60) - (1.65 - 1.61)
    codes = said["trip_window/codes"]
    assert codes.message == (
        "these codes suit vdd: level_6; these do not: level_7, level_39, level_48 (level_6, which it ships with, does)"
    )
    assert codes.why.startswith("level_7: 40 mV short of trip_window/release; level_39: 1.1 V short of ")
    # 1.68 - 1.64 is the least hysteresis printed: no contradiction, and not "missing".
    assert said["claims/hysteresis"].kind is Kind.PASS


def test_a_bounded_release_level_is_not_the_falling_level_and_the_hysteresis_again(tmp_path: Path) -> None:
    """BOD33_D: rising 2.74 V at the most, falling 2.65 V at the most, hysteresis 170 mV at the most."""
    said = judged(
        tmp_path, delivered=("2.85 V", "3.15 V"), works_from="2.5 V",
        trip={"rising": {"typ": "2.68 V", "max": "2.74 V"}, "falling": span(2.51, 2.59, 2.65)},
        hysteresis={"amount": {"min": "35 mV", "max": "170 mV"}},
    )  # fmt: skip
    assert margin_mv(said["trip_window/release"]) == 110  # 2.85 - 2.74, and not 2.85 - (2.65 + 0.17)
    assert margin_mv(said["trip_window/guarantee"]) == 10
    assert said["claims/hysteresis"].kind is Kind.PASS  # 2.68 - 2.59


VBOT = {
    "bodlevel_110": {"falling": span(1.7, 1.8, 2.0)},
    "bodlevel_101": {"falling": span(2.5, 2.7, 2.9)},
    "bodlevel_100": {"falling": span(4.1, 4.3, 4.5)},
}


@pytest.mark.parametrize(
    ("code", "guarantee_mv", "nuisance_mv"),
    [("bodlevel_110", -2080, 2500), ("bodlevel_101", -1280, 1600), ("bodlevel_100", 320, 0)],
)
def test_a_level_that_suits_the_rail_and_not_the_most_demanding_load(
    tmp_path: Path, code: str, guarantee_mv: float, nuisance_mv: float
) -> None:
    """VBOT on 5 V, 10 % either way; at 16 MHz the chip works from 3.78 V (value from memory)."""
    said = judged(
        tmp_path, delivered=("4.5 V", "5.5 V"), works_from="3.78 V", codes=VBOT, ships_with=code,
        hysteresis={"amount": {"typ": "50 mV"}},
    )  # fmt: skip
    assert margin_mv(said["trip_window/guarantee"]) == guarantee_mv
    assert margin_mv(said["trip_window/nuisance"]) == nuisance_mv
    # A typical hysteresis bounds no level: it lets go 50 mV above its highest falling level, or higher still.
    release = said["trip_window/release"]
    assert release.measure is not None
    assert release.measure.best_margin == pytest.approx((nuisance_mv - 50) / 1e3, abs=1e-9)
    assert release.kind is (Kind.FAIL if nuisance_mv < 50 else Kind.OPEN)
    assert set(release.missing) == {"comparators.bod.hysteresis.amount.min", "comparators.bod.hysteresis.amount.max"}


@pytest.mark.parametrize(
    ("sampling", "moved_v"), [("7.81 ms", 0.1 * (7.81 + 0.003)), ("31.25 ms", 0.1 * (31.25 + 0.003))]
)
def test_sampled_operation_against_the_slew(tmp_path: Path, sampling: str, moved_v: float) -> None:
    """VBOD, BODLEVEL3 2.7 / 2.85 / 3.0 V, sampled at 128 Hz or 32 Hz, 3 us to the reset; a rail that falls 0.1 V/ms."""
    said = judged(
        tmp_path, delivered=("3.1 V", "3.5 V"), works_from="1.8 V", collapse="0.1 V/ms",
        trip={"falling": span(2.7, 2.85, 3.0)}, delay="3 us", sampling=sampling,
    )  # fmt: skip
    guarantee = said["trip_window/guarantee"]
    assert margin_mv(guarantee) == pytest.approx((2.7 - moved_v - 1.8) * 1e3, abs=1e-6)
    assert guarantee.kind is (Kind.PASS if sampling == "7.81 ms" else Kind.FAIL)
