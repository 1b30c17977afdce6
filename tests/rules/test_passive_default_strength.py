from __future__ import annotations

import math
from typing import Final

import pytest
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from tests.rules.sound import judged, of_kind
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.passive_default import RULES

STRENGTH: Final = "passive_default/hold_strength"
DRIVER: Final = "passive_default/driver_wins"

# por_n and what drives it, turned round: held high, resets when high.
HIGH: Final = """
output_stages:
  gather: {{hold: {{to: high}}}}
  rst_out: {{hold: {{to: high}}, {stage}}}
  core_out: {{driven_by: [uv_core]}}
resets: {{por_n: {{active: high, {net}}}}}
"""


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def high(stage: str = "", net: str = "") -> str:
    return HIGH.format(stage=stage, net=net)


def ramp_v(*, hold_ohm: float, coupling_f: float, total_f: float, slope_v_per_s: float, ramp_s: float) -> float:
    """The node equation C dv/dt = Cc s - v/R from rest, solved by SciPy."""
    solved = solve_ivp(
        lambda _, v: (coupling_f * slope_v_per_s - v / hold_ohm) / total_f,
        (0.0, ramp_s), [0.0], method="LSODA", rtol=1e-10, atol=1e-15,
    )  # fmt: skip
    return float(solved.y[0, -1])


# passive_default/hold_strength


def test_strength_of_the_sound_example_against_the_node_equation() -> None:
    said = one("", STRENGTH, "rst_out")
    # 20 nA from the stage and 2 nA from its receivers, 1.2 Mohm at the most; 1.8 V in 50 us through 4 fF of 400 fF
    leaks_v = (20e-9 + 2e-9) * 1.2e6
    adds_v = ramp_v(hold_ohm=1.2e6, coupling_f=4e-15, total_f=400e-15, slope_v_per_s=1.8 / 50e-6, ramp_s=50e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(leaks_v + adds_v, rel=1e-7)
    assert said.measure.need == 0.45
    assert said.message == "not driven, it rises to 26.57 mV, at most 450 mV needed"
    assert said.why == (
        "26.4 mV from 22 nA through 1.2 Mohm + 172.8 uV from a ramp of 36 V/ms; por_n surely reads low up to 450 mV"
    )


def test_ramp_that_is_short_against_the_node() -> None:
    # tau = 1.2 Mohm * 4 pF = 4.8 us against a rise of 1 us: the node follows the capacitive divider, nearly
    patch = """
output_stages: {rst_out: {load: {min: 4 pF, max: 9 pF}, hold: {coupling: {min: 0 fF, max: 0.8 pF}}}}
rails: {avdd: {rise: {min: 1 us, max: 20 ms}}}
"""
    said = one(patch, STRENGTH, "rst_out")
    adds_v = ramp_v(hold_ohm=1.2e6, coupling_f=0.8e-12, total_f=4e-12, slope_v_per_s=1.8e6, ramp_s=1e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(22e-9 * 1.2e6 + adds_v, rel=1e-7)
    assert 0.3 < adds_v < 1.8 * 0.8 / 4


def test_too_weak_a_hold_and_the_one_that_would_do() -> None:
    said = one("resets: {por_n: {receivers: {leakage: {max: 500 nA}}}}", STRENGTH, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "not driven, it rises to 624.2 mV, at most 450 mV needed"
    assert said.why == (
        "624 mV from 520 nA through 1.2 Mohm + 172.8 uV from a ramp of 36 V/ms; por_n surely reads low up to 450 mV"
    )

    def above_v(hold_ohm: float) -> float:
        tau_s = hold_ohm * 400e-15
        coupled_v = hold_ohm * 4e-15 * 36e3 * -math.expm1(-50e-6 / tau_s)
        return 520e-9 * hold_ohm + coupled_v - 0.45

    largest_ohm = brentq(above_v, 1e3, 1e7, xtol=1e-3)
    assert math.floor(largest_ohm / 1e3) == 865  # rounded down: a larger one would not do
    assert said.mend == "a hold of 865 kohm or less; now up to 1.2 Mohm"
    assert said.at == "output_stages.rst_out.hold.resistance"


@pytest.mark.parametrize(("threshold", "kind"), [("26.39", "fail"), ("26.4", "pass"), ("26.41", "pass")])
def test_strength_at_its_limit(threshold: str, kind: str) -> None:
    # without coupling the level is 22 nA * 1.2 Mohm = 26.4 mV
    patch = f"""
output_stages: {{rst_out: {{hold: {{coupling: 0 fF}}}}}}
resets: {{por_n: {{receivers: {{threshold: {{min: {threshold} mV, max: 1.2 V}}}}}}}}
"""
    said = one(patch, STRENGTH, "rst_out")
    assert said.kind == kind
    assert said.why.startswith("26.4 mV from 22 nA through 1.2 Mohm; por_n")


def test_without_coupling_neither_load_nor_ramp_is_asked_for() -> None:
    patch = """
output_stages: {rst_out: {hold: {coupling: 0 fF}, load: null, domain: null}}
rails: {avdd: {rise: null, nominal: null}}
"""
    assert one(patch, STRENGTH, "rst_out").kind is Kind.PASS


def test_the_strictest_reader_decides() -> None:
    patch = """
output_stages: {rst_out: {threshold: {min: 0.4 V, max: 1.25 V}}}
resets:
  also_n: {driven_by: [rst_out], active: low, receivers: {threshold: {min: 0.2 V, max: 1.3 V}, leakage: 8 nA}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert "36 mV from 30 nA through 1.2 Mohm" in strength.why  # 20 + 2 + 8 nA
    assert strength.why.endswith("also_n surely reads low up to 200 mV")
    assert driver.why.endswith("also_n surely reads high from 1.3 V on")


# Input levels at a pin, as quoted by others from the JEDEC JESD8 family (second-hand; see lint/physics/logic_levels.py)
STANDARD_LEVELS: Final = (
    # standard, rail of the stage and the receivers least and most, low up to, high from
    ("JESD8-7A", "1.71 V", "1.89 V", 0.35 * 1.71, 0.65 * 1.71),
    ("JESD8-5A.01", "2.4 V", "2.6 V", 0.7, 1.7),
    ("JESD8C.01", "3.0 V", "3.6 V", 0.8, 2.0),
)


@pytest.mark.parametrize(("standard", "least", "most", "low_v", "high_v"), STANDARD_LEVELS)
def test_receivers_at_a_pin_keep_a_published_standard(
    standard: str, least: str, most: str, low_v: float, high_v: float
) -> None:
    patch = f"""
rails: {{avdd: {{delivered: {{min: {least}, max: {most}}}}}}}
resets: {{por_n: {{receivers: {{threshold: null, levels: {standard}}}}}}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert strength.measure is not None
    assert driver.measure is not None
    assert strength.measure.need == pytest.approx(low_v, rel=1e-12)
    assert driver.measure.need == pytest.approx(high_v, rel=1e-12)
    assert f"por_n ({standard}) surely reads low" in strength.why


def test_standard_on_another_rail_is_taken_at_the_end_that_is_worst() -> None:
    patch = """
output_stages: {rst_out: {drive: 8 kohm}}
resets: {por_n: {domain: core, receivers: {threshold: null, levels: JESD8-12A.01}}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert strength.measure is not None
    assert driver.measure is not None
    assert strength.measure.need == pytest.approx(0.35 * 1.14)  # the least that vcore delivers
    assert driver.measure.need == pytest.approx(0.65 * 1.26)  # the most


def test_standard_outside_its_supply_range_is_open() -> None:
    said = one("resets: {por_n: {receivers: {threshold: null, levels: JESD8C.01}}}", STRENGTH, "rst_out")
    assert said.kind is Kind.OPEN
    assert said.message == (
        "the numbers given lie outside the range of the formula: supply_v must lie in 2.7 to 3.6 (found 1.71)"
    )


def test_a_threshold_beside_a_standard_counts_too() -> None:
    both = "resets: {por_n: {receivers: {threshold: {min: 0.2 V, max: 1.5 V}, levels: JESD8-7A}}}"
    assert one(both, STRENGTH, "rst_out").why.endswith("por_n surely reads low up to 200 mV")
    loose = "resets: {por_n: {receivers: {threshold: {min: 0.8 V, max: 0.9 V}, levels: JESD8-7A}}}"
    assert one(loose, STRENGTH, "rst_out").why.endswith("por_n (JESD8-7A) surely reads low up to 598.5 mV")


def test_standard_asks_for_the_domain_of_the_receivers() -> None:
    patch = "resets: {por_n: {domain: null, receivers: {threshold: null, levels: JESD8-7A}}}"
    assert one(patch, STRENGTH, "rst_out").missing == ("resets.por_n.domain",)


# A hold to the rail: levels count from the rail downwards


def test_hold_to_high_counts_from_the_least_supply() -> None:
    said = one(high(), STRENGTH, "rst_out")
    # the node stays behind the ramp by what charges its whole load through the hold
    behind_v = ramp_v(hold_ohm=1.2e6, coupling_f=400e-15, total_f=400e-15, slope_v_per_s=36e3, ramp_s=50e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(1.71 - 22e-9 * 1.2e6 - behind_v, rel=1e-7)
    assert said.measure.need == 1.2
    assert said.message == "not driven, it stays up at 1.666 V, at least 1.2 V needed"
    assert said.why == (
        "1.71 V less 26.4 mV from 22 nA through 1.2 Mohm + 17.28 mV from a ramp of 36 V/ms; "
        "por_n surely reads high from 1.2 V on"
    )
    assert of_kind(judged(high(), RULES), Kind.FAIL, Kind.OPEN) == []


@pytest.mark.parametrize(("threshold", "kind"), [("1.6835", "pass"), ("1.6836", "pass"), ("1.6837", "fail")])
def test_hold_to_high_at_its_limit(threshold: str, kind: str) -> None:
    # without load nothing stays behind: 1.71 V - 26.4 mV = 1.6836 V
    patch = high("load: 0 fF", f"receivers: {{threshold: {{min: 0.45 V, max: {threshold} V}}}}")
    assert one(patch, STRENGTH, "rst_out").kind == kind


def test_too_weak_a_hold_to_high() -> None:
    patch = high("load: 0 fF", "receivers: {leakage: {max: 480 nA}}")
    said = one(patch, STRENGTH, "rst_out")
    assert said.message == "not driven, it stays up at 1.11 V, at least 1.2 V needed"
    assert said.mend == "a hold of 1.02 Mohm or less; now up to 1.2 Mohm"  # 510 mV / 500 nA


def test_no_hold_to_high_does_where_the_supply_does_not_reach_the_reader() -> None:
    said = one(high("", "receivers: {threshold: {min: 0.45 V, max: 1.72 V}}"), STRENGTH, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.mend == "no hold will do: a supply, or a reader, with room between the two levels"


# passive_default/driver_wins


@pytest.mark.parametrize(("threshold", "kind"), [("1.367", "pass"), ("1.368", "pass"), ("1.369", "fail")])
def test_driver_against_a_hold_to_low_at_its_limit(threshold: str, kind: str) -> None:
    # 1.71 V * 800/(800 + 200) = 1.368 V
    patch = f"""
output_stages: {{rst_out: {{drive: 200 kohm}}}}
resets: {{por_n: {{receivers: {{threshold: {{min: 0.45 V, max: {threshold} V}}}}}}}}
"""
    assert one(patch, DRIVER, "rst_out").kind == kind


def test_driver_that_loses_against_a_hold_to_low() -> None:
    said = one("output_stages: {rst_out: {drive: {max: 400 kohm}}}", DRIVER, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "driven high, it reaches 1.14 V, at least 1.2 V needed"
    assert said.why == (
        "1.71 V through 400 kohm of drive against a hold of 800 kohm; por_n surely reads high from 1.2 V on"
    )
    # 400 kohm * 1.2/(1.71 - 1.2) = 941.18 kohm, rounded up: a smaller one would not do
    assert said.mend == "a hold of 942 kohm or more; now down to 800 kohm"


@pytest.mark.parametrize(("threshold", "kind"), [("0.379", "pass"), ("0.378", "pass"), ("0.377", "fail")])
def test_driver_against_a_hold_to_high_at_its_limit(threshold: str, kind: str) -> None:
    # 1.89 V * 200/(800 + 200) = 0.378 V
    patch = high("drive: 200 kohm", f"receivers: {{threshold: {{min: {threshold} V, max: 1.2 V}}}}")
    assert one(patch, DRIVER, "rst_out").kind == kind


def test_driver_that_loses_against_a_hold_to_high() -> None:
    said = one(high("drive: 300 kohm"), DRIVER, "rst_out")
    assert said.message == "driven low, it comes down to 515.5 mV, at most 450 mV needed"
    assert said.why == (
        "1.89 V through 300 kohm of drive against a hold of 800 kohm; por_n surely reads low up to 450 mV"
    )
    assert said.mend == "a hold of 960 kohm or more; now down to 800 kohm"  # 300 kohm * 1.44/0.45


def test_no_hold_does_for_a_reader_above_the_supply_of_its_driver() -> None:
    said = one("output_stages: {rst_out: {domain: core}}", DRIVER, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.mend == "no hold will do: a supply, or a reader, with room between the two levels"


def test_reader_that_is_low_at_any_level_is_no_error() -> None:
    said = one(high("", "receivers: {threshold: {min: 2 V, max: 2.2 V}}"), DRIVER, "rst_out")
    assert said.kind is Kind.PASS
