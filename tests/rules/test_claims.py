"""Stated numbers against what their components make."""

from __future__ import annotations

import math

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.claims import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW


def said(rule: str, of: str, *patches: str) -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[f"claims/{rule}", of]


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_is_one_fault(rule: Rule) -> None:
    found = changed(rule.example.fails, RULES)
    kinds = {kind for (name, _), kind in found.items() if name == rule.id}
    assert kinds <= {FAIL, REVIEW} and kinds
    assert {name for name, _ in found} == {rule.id}
    after = [said.kind for (name, _), said in judged(rule.example.holds, RULES).items() if name == rule.id]
    assert PASS in after and not {FAIL, OPEN, REVIEW} & set(after)


# Hysteresis


def levels(rising: str, falling: str, amount: str) -> str:
    return f"comparators: {{uv: {{trip: {{rising: {rising}, falling: {falling}}}, hysteresis: {{amount: {amount}}}}}}}"


@pytest.mark.parametrize(
    ("rising", "falling", "amount", "kind"),
    [
        pytest.param("1.677 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="inside"),
        pytest.param("1.682 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="rounding_of_1_mV"),
        pytest.param("1.6821 V", "1.627 V", "{min: 46 mV, max: 54 mV}", FAIL, id="beyond_rounding"),
        pytest.param("1.672 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="rounding_below"),
        pytest.param("1.671 V", "1.627 V", "{min: 46 mV, max: 54 mV}", FAIL, id="below"),
        pytest.param("1.677 V", "1.627 V", "50 mV", PASS, id="single"),
        pytest.param("1.677 V", "1.627 V", "52 mV", FAIL, id="single_off"),
        # Two decimals: each level may be 5 mV off as printed, so that 45 mV is no contradiction to 40 mV.
        pytest.param("1.92 V", "1.88 V", "{typ: 45 mV}", PASS, id="two_decimals"),
        pytest.param("1.92 V", "1.88 V", "{typ: 51 mV}", FAIL, id="two_decimals_beyond"),
    ],
)
def test_difference_of_the_levels(rising: str, falling: str, amount: str, kind: Kind) -> None:
    assert said("hysteresis", "uv", levels(rising, falling, amount)).kind is kind


def test_tracked_ranges_are_not_held_extreme_against_extreme() -> None:
    """The trap: ranges that overlap, 1.6 V to 1.7 V and 1.56 V to 1.65 V, and 40 mV to 50 mV between them."""
    ranges = ("{min: 1.6 V, max: 1.7 V}", "{min: 1.56 V, max: 1.65 V}")
    assert said("hysteresis", "uv", levels(*ranges, "{min: 42 mV, max: 48 mV}")).kind is PASS
    answer = said("hysteresis", "uv", levels(*ranges, "{min: 70 mV, max: 90 mV}"))
    assert (answer.kind, answer.why) == (FAIL, "levels 40 mV to 50 mV apart; up to 10 mV is taken for rounding")
    untracked = "comparators: {uv: {tracked: false}}"  # -50 mV to 140 mV
    assert said("hysteresis", "uv", levels(*ranges, "{min: 70 mV, max: 90 mV}"), untracked).kind is PASS
    assert said("hysteresis", "uv", levels(*ranges, "{min: 160 mV, max: 180 mV}"), untracked).kind is FAIL


def test_words_of_a_hysteresis_that_is_not_between_the_levels() -> None:
    answer = said("hysteresis", "uv", levels("1.697 V", "1.627 V", "{min: 46 mV, max: 54 mV}"))
    assert answer.message == "hysteresis that the components make, greatest 70 mV, at most 55 mV needed"
    assert answer.why == "1.697 V rising less 1.627 V falling: 70 mV; up to 1 mV is taken for rounding"
    assert answer.mend == "state 70 mV, or correct the components"


def test_a_hysteresis_or_a_level_alone_claims_nothing() -> None:
    for fact in ("hysteresis", "trip.rising", "trip"):
        answer = judged(without(f"comparators.uv.{fact}"), RULES)["claims/hysteresis", "uv"]
        assert (answer.kind, answer.message) == (NONE, "does not state a hysteresis beside both levels")


# Divider and reference


@pytest.mark.parametrize(
    ("ratio", "kind"), [("0.3667", PASS), ("0.3648", FAIL), ("0.3649", PASS), ("0.3685", PASS), ("0.3686", FAIL)]
)
def test_ratio_of_two_resistances(ratio: str, kind: Kind) -> None:
    """2.2 Mohm of 6 Mohm is 0.36667; half a per cent of 0.365 is 0.0018."""
    assert said("divider_ratio", "uv", f"comparators: {{uv: {{divider: {{ratio: {ratio}}}}}}}").kind is kind


def test_ratio_over_the_spans_of_both() -> None:
    """2 Mohm below 4.2 Mohm at one end, 2.4 Mohm below 3.6 Mohm at the other: 0.3226 to 0.4."""
    spans = "top: {min: 3.6 Mohm, max: 4.2 Mohm}, bottom: {min: 2 Mohm, max: 2.4 Mohm}"
    for ratio, kind in ((0.322, PASS), (0.32, FAIL), (0.401, PASS), (0.403, FAIL)):
        patch = f"comparators: {{uv: {{divider: {{ratio: {ratio}, {spans}}}}}}}"
        assert said("divider_ratio", "uv", patch).kind is kind


def test_level_of_reference_and_divider() -> None:
    """0.6 V over 0.367 is 1.6349 V; uv decides from 1.627 V and 1.677 V with their errors on."""
    answer = said("level_from_reference", "uv")
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(0.6 / 0.367)
    lowest_v = 1.627 - 0.005 * 1.627 - 3 * 0.0004 / 0.367
    assert answer.measure.need == pytest.approx(lowest_v - 0.005 * 0.6 / 0.367)
    off = said("level_from_reference", "uv", "references: {ref_fast: {voltage: 0.65 V}}")
    assert (off.kind, off.message) == (FAIL, "level that reference and divider make 1.771 V, at most 1.698 V needed")
    for patch in (without("comparators.uv.divider"), without("references.ref_fast.voltage")):
        assert judged(patch, RULES)["claims/level_from_reference", "uv"].kind is NONE


# Times


def test_time_of_a_current_into_a_capacitance() -> None:
    """90 fF x 0.45 V / 60 nA and 110 fF x 0.53 V / 40 nA."""
    answer = said("filter", "uv")
    assert answer.measure is not None
    greatest_s = 110e-15 * 0.53 / 40e-9
    assert answer.measure.have == pytest.approx(greatest_s)
    assert answer.measure.need == pytest.approx(1.5e-6 + 0.005 * greatest_s)
    assert answer.why.startswith("a current into a capacitance: 675 ns to 1.458 us; ")


def stage(*facts: str) -> str:
    return f"output_stages: {{gather: {{{', '.join(facts)}}}}}"


def test_time_of_counted_periods() -> None:
    timing = "timing: {count: 100, period: {min: 9 us, max: 12 us}}"
    answer = said("stage_delay", "gather", stage("release_delay: {min: 0.9 ms, max: 1.2 ms}", timing))
    assert (answer.kind, answer.measure is not None and round(answer.measure.margin, 9)) == (PASS, 6e-6)
    answer = said("stage_delay", "gather", stage("release_delay: {min: 0.9 ms, max: 1.1 ms}", timing))
    assert answer.message == "release delay that the components make, greatest 1.2 ms, at most 1.106 ms needed"
    assert answer.mend == "state 900 us to 1.2 ms, or correct the components"
    assert said("stage_delay", "gather", stage("release_delay: {min: 1 ms, max: 1.3 ms}", timing)).kind is FAIL


def test_time_of_a_resistance_and_a_capacitance() -> None:
    """Charged from 1.71 V to 1.89 V; R C ln(V/(V - Vth)) at either end. The delay counts where no release delay is."""
    timing = (
        "timing: {resistance: {min: 0.8 Mohm, max: 1.2 Mohm}, capacitance: {min: 9 pF, max: 11 pF}, "
        "threshold: {min: 0.8 V, max: 1 V}}"
    )
    least_s = 0.8e6 * 9e-12 * math.log(1.89 / (1.89 - 0.8))
    most_s = 1.2e6 * 11e-12 * math.log(1.71 / (1.71 - 1.0))
    stated = f"delay: {{min: {least_s * 1e6:.6f} us, max: {most_s * 1e6:.6f} us}}"
    assert said("stage_delay", "gather", stage(stated, timing)).kind is PASS
    narrow = f"delay: {{min: {least_s * 1e6:.6f} us, max: {most_s * 0.99e6:.6f} us}}"
    answer = said("stage_delay", "gather", stage(narrow, timing))
    assert answer.kind is FAIL
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(most_s, rel=1e-6)
    assert answer.why.startswith("a resistance and a capacitance charged from avdd: ")


@pytest.mark.parametrize(
    ("timing", "missing"),
    [
        ("{count: 100}", ("timing.period",)),
        ("{period: 10 us}", ("timing.count",)),
        ("{current: 1 uA}", ("timing.capacitance", "timing.threshold")),
        ("{capacitance: 1 pF}", ("timing.threshold", "timing.resistance")),
    ],
)
def test_components_that_are_missing(timing: str, missing: tuple[str, ...]) -> None:
    answer = said("stage_delay", "gather", stage(f"timing: {timing}"))
    assert (answer.kind, answer.missing) == (OPEN, tuple(f"output_stages.gather.{fact}" for fact in missing))


def test_time_that_is_not_stated() -> None:
    answer = said("filter", "uv", without("comparators.uv.filter"))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.filter",))
    assert said("filter", "ov").message == "does not say what makes its filter (timing)"
    assert said("stage_delay", "rst_out").message == "does not say what makes its delay (timing)"


# Currents


@pytest.mark.parametrize(("current", "kind"), [("{typ: 1.11 uA}", PASS), ("{typ: 1.13 uA}", FAIL), ("0.9 uA", FAIL)])
def test_bias_current_by_ohms_law(current: str, kind: Kind) -> None:
    """0.6 V over 540 kohm to 660 kohm: 0.909 uA to 1.111 uA, and half a per cent."""
    assert said("bias_current", "bias_main", f"biases: {{bias_main: {{current: {current}}}}}").kind is kind


def test_bias_takes_what_it_makes() -> None:
    answer = said("bias_consumption", "bias_start", "biases: {bias_start: {consumes: {max: 80 nA}}}")
    assert (answer.kind, answer.message) == (REVIEW, "consumption 80 nA, at least 89.55 nA needed")
    assert said("bias_consumption", "bias_start", "biases: {bias_start: {consumes: {max: 89.55 nA}}}").kind is PASS
    assert said("bias_consumption", "bias_main").message == "does not make its current by itself"
    answer = said("bias_consumption", "bias_start", without("biases.bias_start.consumes"))
    assert (answer.kind, answer.message) == (
        NONE, "does not state its greatest consumption beside its greatest current",
    )  # fmt: skip


def test_reference_current_by_ohms_law() -> None:
    patch = "references: {ref_fast: {current: {min: 88 nA, max: 115 nA}, resistance: {min: 5.4 Mohm, max: 6.6 Mohm}}}"
    answer = said("reference_current", "ref_fast", patch)  # 90.9 nA to 111.1 nA
    assert answer.kind is PASS
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(0.6 / 6.6e6)
    assert said("reference_current", "ref_fast").kind is NONE
