"""Budget: currents of a domain, and small currents beside their leakage."""

from __future__ import annotations

import math
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import passive_default
from tidegate.rules.budget import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
WITHIN: Final = "budget/within"
BIAS: Final = "budget/bias_above_leakage"
TIMING: Final = "budget/timing_above_leakage"
EXAMPLES: Final = {
    WITHIN: {(WITHIN, "aon")},
    BIAS: {(BIAS, "bias_start")},
    TIMING: {(TIMING, "uv")},
}

HOLDS_A: Final = 1.89 / 1.6e6 + 1.89 / 0.8e6 + 1.89 / 0.8e6  # gather, rst_out, core_out
CIRCUITS_A: Final = 1.2e-6 + 0.2e-6 + 0.4e-6 + 3 * 0.35e-6 + 5 * 5e-9 + 10e-9 + 15e-9
DIVIDERS_A: Final = 1.89 / (3.8e6 + 2.2e6) + 1.89 / (4.14e6 + 1.86e6)  # uv and ov; that of uv_core hangs on vcore
TAKEN_A: Final = HOLDS_A + CIRCUITS_A + DIVIDERS_A


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# budget/within


def test_all_that_a_domain_takes_is_added_up() -> None:
    assert pytest.approx(9.43625e-6, rel=1e-12) == TAKEN_A
    said = one("domains: {aon: {budget: 9 uA}}", WITHIN, "aon")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A, rel=1e-12)
    assert said.message == "takes at rest 9.436 uA, at most 9 uA needed"
    assert said.why == (
        "hold of rst_out 2.362 uA, hold of core_out 2.362 uA, ref_fast 1.2 uA, hold of gather 1.181 uA, por 400 nA, "
        "13 more 1.93 uA"
    )
    assert said.mend == "take 437 nA less, or a budget of at least 9.44 uA"


@pytest.mark.parametrize(("budget", "kind"), [("9.43624", FAIL), ("9.43625", PASS), ("9.43626", PASS)])
def test_budget_at_its_limit(budget: str, kind: Kind) -> None:
    assert one(f"domains: {{aon: {{budget: {budget} uA}}}}", WITHIN, "aon").kind is kind


def test_divider_from_another_rail_counts_where_it_hangs() -> None:
    """uv_core lives in aon, and its divider of 2.3 Mohm and 2.72 Mohm hangs on vcore, at most 1.26 V."""
    said = one("", WITHIN, "core")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(1.26 / 5.02e6, rel=1e-12)
    assert said.why == "divider of uv_core 251 nA"


def test_no_divider_takes_nothing() -> None:
    """Of the 9.43625 uA, the divider of uv takes 1.89 V over 6 Mohm; of vcore it takes all."""
    said = one("comparators: {uv: {divider: none}}", WITHIN, "aon")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(9.43625e-6 - 1.89 / 6e6, rel=1e-12)
    said = one("comparators: {uv_core: {divider: none}}", WITHIN, "core")
    assert said.measure is None or said.measure.have == 0.0


def test_holds_and_circuits_that_pass_it_alone_are_told_by_another_rule() -> None:
    """At 8.80625 uA the other rule still holds; with one step less it says so, and the number is kept."""
    assert pytest.approx(8.80625e-6, rel=1e-12) == HOLDS_A + CIRCUITS_A
    for budget, under in (("8.80625 uA", ""), ("8.80624 uA", "passive_default/holds_within_budget")):
        found = judged(f"domains: {{aon: {{budget: {budget}}}}}", (*RULES, *passive_default.RULES))[WITHIN, "aon"]
        assert (found.kind, found.under) == (NONE if under else FAIL, under)
        assert found.measure is not None
        assert found.measure.have == pytest.approx(TAKEN_A, rel=1e-12)


def test_the_account_adds_up_to_what_is_taken() -> None:
    said = one("", WITHIN, "aon")
    assert said.measure is not None
    assert sum(line.value for line in said.account) == pytest.approx(said.measure.have, rel=1e-12)
    assert {"hold of gather", "ref_fast", "divider of uv"} <= {line.name for line in said.account}


def test_circuits_alone_fail_where_nothing_is_held() -> None:
    """A domain without holds is no matter of the other rule: 1.2 uA and 40 uA of what lives in analog."""
    said = one("domains: {analog: {budget: 41 uA}}", WITHIN, "analog")
    assert (said.kind, said.message) == (FAIL, "takes at rest 41.2 uA, at most 41 uA needed")
    assert said.why == "ref_main 40 uA, bias_main 1.2 uA; 1.2 uA in drift; 1.2 uA in self_test"


def test_domain_in_which_nothing_takes_current() -> None:
    said = one("domains: {spare: {rail: avdd, kind: always_on, budget: 1 uA}}", WITHIN, "spare")
    assert (said.kind, said.message) == (PASS, "takes at rest 0 A, at most 1 uA needed")
    assert said.why == "nothing in it takes current"


def test_the_thriftiest_modes_are_told() -> None:
    """Of 9.43625 uA: without all, without uv, ov, uv_core and their dividers on avdd, without uv, without por."""
    off = {"b": "[uv]", "a": "[por]", "d": "[aon]", "c": "[uv, ov, uv_core]", "e": "[adc]"}
    modes = ", ".join(f"{name}: {{off: {names}}}" for name, names in off.items())
    said = one(f"modes: {{drift: null, self_test: null, {modes}}}", WITHIN, "aon")
    assert pytest.approx(7.75625e-6) == TAKEN_A - 3 * 0.35e-6 - DIVIDERS_A
    assert pytest.approx(8.77125e-6) == TAKEN_A - 0.35e-6 - 1.89 / 6e6
    assert said.why.endswith("; 0 A in d; 7.756 uA in c; 8.771 uA in b")


def test_what_is_off_in_a_mode_takes_nothing_there() -> None:
    """Without uv and its divider: 9.43625 uA - 0.35 uA - 0.315 uA."""
    said = one("modes: {drift: {off: [ref_main, adc, uv]}}", WITHIN, "aon")
    assert said.why.endswith("; 8.771 uA in drift")
    assert one("modes: {drift: {off: [analog]}}", WITHIN, "analog").why.endswith("; 0 A in drift; 1.2 uA in self_test")


@pytest.mark.parametrize(
    ("fact", "sure_a", "best_a"),
    [
        ("domains.aon.budget", -TAKEN_A, math.inf),
        ("domains.aon.rail", -math.inf, 12e-6 - CIRCUITS_A),
        ("rails.avdd.delivered", -math.inf, 12e-6 - CIRCUITS_A),
        ("references.ref_fast.consumes", -math.inf, 12e-6 - TAKEN_A + 1.2e-6),
        ("output_stages.rst_out.consumes", -math.inf, 12e-6 - TAKEN_A + 10e-9),
        ("output_stages.rst_out.hold", -math.inf, 12e-6 - TAKEN_A + 1.89 / 0.8e6),
        ("output_stages.rst_out.hold.resistance", -math.inf, 12e-6 - TAKEN_A + 1.89 / 0.8e6),
        ("biases.bias_start.consumes", -math.inf, 12e-6 - TAKEN_A + 0.2e-6),
        ("comparators.por.consumes", -math.inf, 12e-6 - TAKEN_A + 0.4e-6),
        ("comparators.uv.divider", -math.inf, 12e-6 - TAKEN_A + 1.89 / 6e6),
    ],
)  # fmt: skip
def test_within_is_open_without(fact: str, sure_a: float, best_a: float) -> None:
    """What is not given may be anything; all that is given counts."""
    said = one(without(fact), WITHIN, "aon")
    assert (said.kind, said.missing) == (OPEN, (fact,))
    assert said.measure is not None
    assert said.measure.sure_margin == pytest.approx(sure_a)
    assert said.measure.best_margin == pytest.approx(best_a, rel=1e-9)


@pytest.mark.parametrize(("fact", "left_ohm"), [("top", 2.2e6), ("bottom", 3.8e6)])
def test_a_divider_of_which_half_is_known_takes_at_most_what_that_half_does(fact: str, left_ohm: float) -> None:
    said = one(without(f"comparators.uv.divider.{fact}"), WITHIN, "aon")
    assert (said.kind, said.missing) == (PASS, (f"comparators.uv.divider.{fact}",))
    assert said.measure is not None
    without_it_a = TAKEN_A - 1.89 / 6e6
    assert said.measure.sure_margin == pytest.approx(12e-6 - without_it_a - 1.89 / left_ohm, rel=1e-9)
    assert said.measure.best_margin == pytest.approx(12e-6 - without_it_a, rel=1e-9)


def test_known_takers_above_the_budget_fail_whatever_is_missing() -> None:
    """The holds and ref_fast alone take 7.1 uA; what uv takes can only add to it."""
    said = one(both(without("comparators.uv.consumes"), "domains: {aon: {budget: 5 uA}}"), WITHIN, "aon")
    assert said.kind is FAIL
    assert said.measure is not None
    assert (said.measure.sure_margin, said.measure.best_margin) == (
        -math.inf, pytest.approx(5e-6 - TAKEN_A + 0.35e-6, rel=1e-9),
    )  # fmt: skip
    assert said.message.endswith("whatever consumption of uv may be")


def test_what_has_no_domain_may_hang_on_each() -> None:
    """uv takes 0.35 uA, and its divider 0.315 uA, either in aon or elsewhere; core may have to feed it too."""
    gone = without("comparators.uv.domain")
    aon, core = one(gone, WITHIN, "aon"), one(gone, WITHIN, "core")
    for said in (aon, core):
        assert (said.kind, said.missing) == (PASS, ("comparators.uv.domain",))
        assert said.measure is not None
    assert aon.measure is not None and core.measure is not None
    assert aon.measure.sure_margin == pytest.approx(12e-6 - TAKEN_A, rel=1e-9)
    assert aon.measure.best_margin == pytest.approx(12e-6 - TAKEN_A + 0.35e-6 + 1.89 / 6e6, rel=1e-9)
    assert core.measure.sure_margin == pytest.approx(40e-6 - 1.26 / 5.02e6 - 0.35e-6, rel=1e-9)
    assert core.measure.best_margin == pytest.approx(40e-6 - 1.26 / 5.02e6, rel=1e-9)


def test_a_source_from_off_the_chip_hangs_on_no_domain() -> None:
    outside = "references: {ref_board: {kind: external, voltage: 1.2 V}}"
    assert one(outside, WITHIN, "aon").measure == one("", WITHIN, "aon").measure


def test_a_domain_of_which_it_is_not_said_whether_it_is_switched() -> None:
    """The divider of uv_core hangs on vcore, and counts in core if that is always on."""
    said = one(without("domains.core.kind"), WITHIN, "core")
    assert said.kind is PASS
    assert said.measure is not None
    assert said.measure.sure_margin == pytest.approx(40e-6 - 1.26 / 5.02e6, rel=1e-9)
    assert said.measure.best_margin == pytest.approx(40e-6, rel=1e-9)


def test_a_detector_said_to_have_no_divider_takes_none() -> None:
    said = one("comparators: {uv: {divider: {ratio: 1, top: null, bottom: null}}}", WITHIN, "aon")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A - 1.89 / 6e6, rel=1e-9)
    assert said.measure.is_exact


def test_everything_that_is_missing_is_named_at_once() -> None:
    gone = ("domains.aon.budget", "comparators.uv.divider.top", "references.ref_fast.consumes")
    assert set(one(without(*gone), WITHIN, "aon").missing) == set(gone)


def test_a_budget_that_is_not_given_is_asked_for_in_any_domain() -> None:
    assert one(without("domains.analog.budget"), WITHIN, "analog").missing == ("domains.analog.budget",)


# leakage


@pytest.mark.parametrize(("leakage", "kind"), [("3.999 nA", PASS), ("4 nA", PASS), ("4.001 nA", FAIL)])
def test_bias_current_is_ten_times_its_leakage(leakage: str, kind: Kind) -> None:
    """40 nA at its least, and ten times 4 nA."""
    assert one(f"biases: {{bias_start: {{leakage: {{max: {leakage}}}}}}}", BIAS, "bias_start").kind is kind


def test_bias_that_drowns() -> None:
    said = one("biases: {bias_start: {leakage: {max: 6 nA}}}", BIAS, "bias_start")
    assert said.message == "its current at its least 40 nA, at least 60 nA needed"
    assert said.why == "10 times 6 nA, which leaks on its node at the hottest corner"
    assert said.mend == "a current of at least 60 nA, or leakage of at most 4 nA"


@pytest.mark.parametrize("fact", ["biases.bias_start.current", "biases.bias_start.leakage"])
def test_bias_is_open_without(fact: str) -> None:
    said = one(without(fact), BIAS, "bias_start")
    assert (said.kind, said.missing) == (OPEN, (fact,))


def test_a_bias_of_unknown_kind_is_judged_as_one_on_the_chip() -> None:
    """40 nA and ten times 2 nA hold wherever it applies; 6 nA would not, unless it came from off the chip."""
    assert one(without("biases.bias_start.kind"), BIAS, "bias_start").kind is PASS
    said = one(both(without("biases.bias_start.kind"), "biases: {bias_start: {leakage: 6 nA}}"), BIAS, "bias_start")
    assert (said.kind, said.missing) == (OPEN, ("biases.bias_start.kind",))
    assert one("biases: {bias_start: {kind: external}}", BIAS, "bias_start").kind is NONE


def test_timing_through_a_resistance() -> None:
    """(1.71 V - 0.5 V) through 20 Mohm are 60.5 nA: ten times 6.05 nA."""
    timing = "comparators: {uv: {timing: {current: null, resistance: {max: 20 Mohm}, threshold: {max: 0.5 V}, LEAK}}}"
    for leakage, kind in (("6.05 nA", PASS), ("6.06 nA", FAIL)):
        patch = timing.replace("LEAK", f"leakage: {{max: {leakage}}}")
        said = one(patch, TIMING, "uv")
        assert said.measure is not None
        assert (said.kind, said.measure.have) == (kind, pytest.approx(60.5e-9, rel=1e-12))


def test_threshold_that_the_resistance_never_reaches() -> None:
    """Above the least supply of 1.71 V nothing flows into the capacitor: no current stands above its leakage."""
    timing = "current: null, resistance: {max: 20 Mohm}, threshold: {max: 1.8 V}, leakage: {max: 1 nA}"
    said = one(f"comparators: {{uv: {{timing: {{{timing}}}}}}}", TIMING, "uv")
    assert said.message == (
        "the current through its resistance, at the threshold, at its least 0 A, at least 10 nA needed"
    )
    assert said.mend == "a current of at least 10 nA, or leakage of at most 0 A"
    assert said.at == "comparators.uv.timing.resistance"


def test_timing_through_no_resistance_is_out_of_range() -> None:
    said = one("comparators: {uv: {timing: {current: null, resistance: 0 ohm}}}", TIMING, "uv")
    assert said.kind is OPEN
    assert said.message.endswith("outside the range of the formula: r_ohm must be greater than 0 (found 0.0)")


def test_a_current_that_is_stated_counts_beside_a_resistance_and_without_one() -> None:
    """40 nA at the least, 1 nA of leakage; without current and resistance it is the current that is asked for."""
    with_both = one("comparators: {uv: {timing: {resistance: {max: 20 Mohm}}}}", TIMING, "uv")
    assert with_both.message == "the current that times it at its least 40 nA, at least 10 nA needed"
    neither = one(without("comparators.uv.timing.current"), TIMING, "uv")
    assert (neither.kind, neither.missing) == (OPEN, ("comparators.uv.timing.current",))


@pytest.mark.parametrize("counted", ["count: 100", "period: {min: 9 us, max: 12 us}"])
def test_counted_time_does_not_leak(counted: str) -> None:
    said = one(f"output_stages: {{core_out: {{timing: {{{counted}}}}}}}", TIMING, "core_out")
    assert (said.kind, said.message) == (NONE, "its time is counted, and leakage does not change it")
    assert one("", TIMING, "core_out").message == "does not say what makes a time of it (timing)"


def test_timing_is_open_without_its_leakage() -> None:
    gone = both(without("comparators.uv.timing.leakage"))
    assert one(gone, TIMING, "uv").missing == ("comparators.uv.timing.leakage",)
