"""Modes: what is awake and what watches over it."""

from __future__ import annotations

import random
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.modes import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
LIVE: Final = "modes/live_detector"
OVER: Final = "modes/over_voltage"
SAMPLING: Final = "modes/sampling"
EXAMPLES: Final = {
    LIVE: {(LIVE, "core_regulator")},  # the converter is off in that mode
    OVER: {(OVER, "avdd")},
    SAMPLING: {(SAMPLING, "uv")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def mode(facts: str) -> str:
    return f"modes: {{drift: null, self_test: null, nap: {{{facts}}}}}"


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []
    assert one("", LIVE, "adc").message == "watched in self_test"
    assert one(mode("off: [adc]"), LIVE, "adc").message == "is off in nap"


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# modes/live_detector


@pytest.mark.parametrize(
    ("facts", "why"),
    [
        ("off: [uv]", "uv is off"),
        ("masked: [uv]", "uv is masked"),
        ("off: [ref_fast]", "uv leans on ref_fast, which is off"),
        ("off: [bias_start]", "uv leans on bias_start, which is off"),
        ("off: [gather]", "no stage that is awake carries the decision of uv to it"),
    ],
)
def test_detector_that_does_not_watch_in_a_mode(facts: str, why: str) -> None:
    said = one(mode(facts), LIVE, "core_regulator")
    assert said.kind is FAIL
    assert said.message == f"in nap it is not off, and no detector of avdd watches over it: {why}"
    assert said.mend == "keep a detector of avdd awake in nap, or name core_regulator among what is off"


def test_way_to_what_is_off_is_shown() -> None:
    said = one(mode("off: [ref_fast]"), LIVE, "core_regulator")
    assert path_text(said.path) == "uv takes its reference from ref_fast"


def test_power_on_detector_does_not_stand_in_for_the_under_voltage_detector() -> None:
    assert one(mode("off: [uv]"), LIVE, "core_regulator").kind is FAIL
    alone = both("output_stages: {gather: {driven_by: [por_out, ov_latch]}}", mode("off: [uv]"))
    assert one(alone, LIVE, "core_regulator").kind is PASS  # por is all it has in service


@pytest.mark.parametrize("off", ["[adc]", "[analog]", "[core_regulator]"])
def test_load_that_is_off_needs_no_detector(off: str) -> None:
    patch = mode(f"off: {off}, masked: [uv]")
    assert one(patch, LIVE, "adc").message == "is off in nap"


def test_one_of_two_detectors_is_enough() -> None:
    twin = """
    comparators: {uv_twin: {role: under_voltage, watches: avdd, domain: aon, bias: bias_start, reference: ref_fast}}
    output_stages: {gather: {driven_by: [por_out, uv_out, ov_latch, uv_twin]}}
    """
    assert one(both(twin, mode("off: [uv]")), LIVE, "core_regulator").kind is PASS
    assert one(both(twin, mode("off: [uv, uv_twin]")), LIVE, "core_regulator").message.endswith(
        "uv_twin is off; uv is off"
    )


@pytest.mark.parametrize("fact", ["comparators.uv.bias", "comparators.uv.reference", "comparators.uv.domain"])
def test_live_detector_is_open_where_it_is_not_said_what_it_leans_on(fact: str) -> None:
    said = one(both(mode("off: [ref_main]"), without(fact)), LIVE, "core_regulator")
    assert (said.kind, said.missing) == (OPEN, (fact,))
    assert one(both(mode("masked: [ov]"), without(fact)), LIVE, "core_regulator").kind is PASS  # nothing is off


def test_description_without_modes() -> None:
    said = one("modes: null", LIVE, "adc")
    assert (said.kind, said.message) == (NONE, "no mode is described")


@pytest.mark.parametrize("seed", range(10))
def test_live_detectors_against_brute_force(seed: int) -> None:
    """Random things off and masked; brute force asks for each detector, by recursion, whether all it needs is on."""
    chance = random.Random(seed)
    off = set(chance.sample(["ref_fast", "bias_start", "uv", "uv_core", "uv_out", "gather", "core_out", "aon"], k=2))
    masked = set(chance.sample(["uv", "uv_core", "por"], k=1))
    needs = {
        "uv": ["aon", "bias_start", "ref_fast"], "uv_core": ["aon", "bias_start", "ref_fast"], "ref_fast": ["aon"],
        "bias_start": ["aon"], "uv_out": ["aon"], "gather": ["aon"], "core_out": ["aon"], "rst_out": ["aon"],
    }  # fmt: skip

    def is_on(name: str) -> bool:
        return name not in off and all(is_on(other) for other in needs.get(name, ()))

    ways = {
        "core_regulator": {"avdd": [("uv", ["uv_out", "gather", "rst_out"])]},
        "core_logic": {"vcore": [("uv_core", ["core_out"])]},
    }
    said = judged(mode(f"off: {sorted(off)}, masked: {sorted(masked)}"), RULES)
    for load, rails in ways.items():
        watched = all(
            any(d not in masked and is_on(d) and all(map(is_on, stages)) for d, stages in found)
            for found in rails.values()
        )
        assert said[LIVE, load].kind is (PASS if watched or "aon" in off else FAIL)  # aon feeds the maker of vcore too


# modes/over_voltage


def test_rail_without_its_over_voltage_detector_in_a_mode() -> None:
    said = one(mode("masked: [ov]"), OVER, "avdd")
    assert said.message == "in nap no over-voltage detector watches it: ov is masked"
    assert said.mend == "keep an over-voltage detector of avdd awake in nap"
    assert one("", OVER, "vcore").message == "no over-voltage detector watches it"
    moved = "comparators: {ov: {watches: vcore}}"
    assert one(both(moved, mode("masked: [ov]")), OVER, "vcore").kind is FAIL
    assert one(both(moved, mode("off: [core_regulator], masked: [ov]")), OVER, "vcore").kind is PASS


# modes/sampling


def sampled(period: str) -> str:
    return both(mode("sampled: [uv]"), f"comparators: {{uv: {{sampling: {period}}}}}")


def test_sampling_against_the_collapse() -> None:
    """Lowest falling level: 1.627 V less 0.4 %, 0.1 % and 3 times 0.4 mV over 0.367; 2 V/ms for 20 us are 40 mV."""
    falling_v = 1.627 * (1 - 0.004 - 0.001) - 3 * 0.4e-3 / 0.367
    said = one(sampled("20 us"), SAMPLING, "uv")
    assert said.measure is not None
    assert said.measure.need == pytest.approx(falling_v - 1.6, rel=1e-9)
    assert said.measure.have == pytest.approx(40e-3, rel=1e-9)
    assert said.message == "sampled in nap: between two samples avdd moves 40 mV, at most 15.6 mV needed"
    assert said.why == "2 V/ms for 20 us; adc works from 1.6 V, the level lies at 1.616 V at its worst"
    assert said.mend == "a period of 7.79 us or less"


@pytest.mark.parametrize(("share", "kind"), [(0.999, PASS), (1.0, PASS), (1.001, FAIL)])
def test_sampling_at_its_limit(share: float, kind: Kind) -> None:
    period_us = share * (1.627 * 0.995 - 3 * 0.4e-3 / 0.367 - 1.6) / 2e3 * 1e6
    assert one(sampled(f"{period_us!r} us"), SAMPLING, "uv").kind is kind


@pytest.mark.parametrize(
    "fact", ["comparators.uv.sampling", "rails.avdd.collapse", "comparators.uv.trip.falling", "loads.adc.needs.0.works"]
)
def test_sampling_is_open_without(fact: str) -> None:
    gone = both(sampled("4 us"), "comparators: {uv: {hysteresis: {amount: null}}}", without(fact))
    assert fact in one(gone, SAMPLING, "uv").missing


def test_detector_that_no_mode_samples() -> None:
    assert one("comparators: {uv: {sampling: 20 us}}", SAMPLING, "uv").message == "no mode names it as sampled"
