"""Self-bias: start-up circuits, and loops of elements that wait for each other."""

from __future__ import annotations

from typing import Final

import pytest
import yaml

from tests.rules.sound import judged, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.self_bias import RULES

PASS, FAIL, REVIEW, NONE = Kind.PASS, Kind.FAIL, Kind.REVIEW, Kind.NOT_APPLICABLE

REFERENCE: Final = "self_bias/reference_starts"
BIAS: Final = "self_bias/bias_starts"
LOOP: Final = "self_bias/loop_starts"


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def margin(judgement: Judgement) -> float:
    assert judgement.measure is not None
    return judgement.measure.margin


# A rail of 1.8 V, that takes up to 20 ms: 90 V/s. How exactly the source is 1.8 V, delivered says.
RAMP: Final = """
rails: {{avdd: {{nominal: 1.8 V, rise: {{min: 50 us, max: 20 ms}}}}}}
references: {{ref_fast: {{start_up: {{by: a pulse, least_slope: {slope}}}}}}}
biases: {{bias_start: {{kind: self_biased, start_up: {{by: a pulse, least_slope: {slope}}}}}}}
"""
BOTH: Final = [(REFERENCE, "ref_fast"), (BIAS, "bias_start")]


@pytest.mark.parametrize(("rule", "subject"), BOTH)
def test_a_start_up_circuit_works_on_the_slowest_ramp(rule: str, subject: str) -> None:
    for slope, spare in (("89 V/s", 1.0), ("90 V/s", 0.0)):
        judgement = one(RAMP.format(slope=slope), rule, subject)
        assert judgement.kind is PASS
        assert margin(judgement) == pytest.approx(spare, abs=1e-9)
    judgement = one(RAMP.format(slope="91 V/s"), rule, subject)
    assert judgement.kind is FAIL
    assert judgement.message == "its start-up circuit needs a ramp of 91 V/s, at most 90 V/s needed"
    assert judgement.why == "slowest ramp of avdd: 1.8 V in 20 ms"
    # 1.8 V at 91 V/s are 19.78 ms, rounded down
    assert judgement.mend == (
        "a start-up circuit that works on 90 V/s or less; now 91 V/s; or a rise of avdd in 19.7 ms or less; now 20 ms"
    )


@pytest.mark.parametrize(("rule", "subject"), BOTH)
def test_a_nominal_level_between_two_ends_makes_a_slope_between_two_ends(rule: str, subject: str) -> None:
    """1.75 V to 1.85 V in 20 ms: 87.5 V/s to 92.5 V/s."""
    ends = RAMP.replace("nominal: 1.8 V", "nominal: {{min: 1.75 V, max: 1.85 V}}")
    for slope, kind in (("87 V/s", PASS), ("90 V/s", Kind.OPEN), ("93 V/s", FAIL)):
        judgement = one(ends.format(slope=slope), rule, subject)
        assert (judgement.kind, judgement.missing) == (kind, ("rails.avdd.nominal.typ",))


@pytest.mark.parametrize(("rule", "subject"), BOTH)
def test_a_circuit_that_needs_no_ramp_needs_no_rail(rule: str, subject: str) -> None:
    unsaid = RAMP.format(slope="0 V/s").replace(
        "rails: {avdd: {", "rails: {avdd: {nominal: null, rise: null}, vcore: {"
    )
    judgement = one(unsaid, rule, subject)
    assert judgement.kind is PASS
    assert judgement.message == "its start-up circuit works on any ramp"


@pytest.mark.parametrize(("rule", "subject"), BOTH)
def test_no_start_up_circuit_fails_and_none_said_is_open(rule: str, subject: str) -> None:
    section = "references" if rule == REFERENCE else "biases"
    patch = RAMP.format(slope="0 V/s").replace("start_up: {by: a pulse, least_slope: 0 V/s}", "start_up: {}")
    none = one(patch.replace("start_up: {}", "start_up: none"), rule, subject)
    assert none.kind is FAIL
    assert none.message == "feeds itself and has no start-up circuit: it may stay in the state in which nothing flows"
    assert none.mend == "a start-up circuit that works on any ramp, and is cut off once the output is up"
    assert one(patch.replace("start_up: {}", "start_up: null"), rule, subject).missing == (
        f"{section}.{subject}.start_up",
    )
    no_slope = patch.replace("start_up: {}", "start_up: {by: a pulse, least_slope: null}")
    assert one(no_slope, rule, subject).missing == (f"{section}.{subject}.start_up.least_slope",)


@pytest.mark.parametrize(
    "facts",
    [
        ["references.ref_fast.domain"],
        ["domains.aon.kind"],
        ["domains.aon.rail"],
        ["domains.aon.kind", "domains.aon.rail"],
        ["rails.avdd.nominal"],
        ["rails.avdd.rise"],
        ["rails.avdd.nominal", "rails.avdd.rise"],
        ["references.ref_fast.self_biased"],
    ],
)
def test_start_up_on_a_ramp_is_open(facts: list[str]) -> None:
    patch = yaml.safe_load("references: {ref_fast: {start_up: {by: a pulse, least_slope: 50 V/s}}}")
    for section, name, fact in (path.split(".") for path in facts):
        patch.setdefault(section, {}).setdefault(name, {})[fact] = None
    assert one(yaml.safe_dump(patch), REFERENCE, "ref_fast").missing == tuple(facts)


@pytest.mark.parametrize(
    ("patch", "by"),
    [
        ("references: {{ref_fast: {{gated_by: uv_core, {start}}}}}", "by uv_core"),
        ("references: {{ref_fast: {{domain: analog, {start}}}}}", "by por_n"),
        (
            "{{domains: {{spare: {{rail: avdd, kind: switched}}}}, "
            "references: {{ref_fast: {{domain: spare, {start}}}}}}}",
            "with spare",
        ),
    ],
)
def test_a_ramp_behind_a_switch_is_for_a_person(patch: str, by: str) -> None:
    judgement = one(patch.format(start="start_up: {by: a pulse, least_slope: 10 V/s}"), REFERENCE, "ref_fast")
    assert judgement.kind is REVIEW
    assert judgement.message == f"its start-up circuit needs a ramp of 10 V/s, and it is switched on {by}"
    assert judgement.why == (
        "when it is switched on, avdd may stand still; the ramp it sees is that of the switch, which is not described"
    )


def test_what_does_not_feed_itself_needs_no_start_up_circuit() -> None:
    assert one("", REFERENCE, "ref_main").message == "it is not self-biased"
    assert one("", BIAS, "bias_start").message == "a bias of the kind resistor does not feed itself"
    divider = one("references: {ref_main: {kind: divider, self_biased: null}}", REFERENCE, "ref_main")
    assert divider.message == "a reference of the kind divider does not feed itself"
    unsaid = one("biases: {bias_main: {kind: null, start_up: none}}", BIAS, "bias_main")
    assert (unsaid.kind, unsaid.missing) == (Kind.OPEN, ("biases.bias_main.kind",))


def test_each_loop_is_judged_at_its_first_element() -> None:
    fails = judged("loads: {adc: {leans_on: [core_logic]}, core_logic: {leans_on: [adc]}}", RULES)
    judgement = fails[LOOP, "adc"]
    assert judgement.message == "waits for itself, and nothing starts it: adc leans on core_logic leans on adc"
    assert judgement.mend == "one step of the loop taken out, such as: core_logic leans on adc"
    assert path_text(judgement.path) == "adc leans on core_logic leans on adc"
    assert fails[LOOP, "core_logic"].message == "its loop is judged at adc"


def test_a_ring_of_sources() -> None:
    ring = "references: {{ref_main: {{start_up: {one}}}}}\nbiases: {{bias_main: {{source: ref_main, start_up: {two}}}}}"
    circuit = "{by: a leak, least_slope: 0 V/s}"
    dead = one(ring.format(one="none", two="none"), LOOP, "bias_main")
    assert dead.kind is FAIL
    assert dead.mend == "a start-up circuit in bias_main, which stands in for ref_main"
    assert dead.why == ""
    for started in (ring.format(one=circuit, two="none"), ring.format(one=circuit, two="null")):
        judgements = judged(started, RULES)
        assert judgements[LOOP, "ref_main"].kind is PASS
        assert judgements[LOOP, "bias_main"].message == "is in a loop that ref_main starts"
    unsaid = judged(ring.format(one="none", two="null"), RULES)
    assert unsaid[LOOP, "bias_main"].missing == ("biases.bias_main.start_up",)
    assert unsaid[LOOP, "ref_main"].kind is NONE
    both = judged(ring.format(one="null", two="null"), RULES)
    assert set(both[LOOP, "bias_main"].missing) == {"references.ref_main.start_up", "biases.bias_main.start_up"}


def test_a_bias_that_waits_for_its_own_copy() -> None:
    copy = "biases: {bias_main: {source: bias_copy, start_up: none}, bias_copy: {kind: from_reference, SOURCE, domain: "
    copy += (
        "analog, current: 1 uA, leakage: 10 nA, consumes: 1 uA, works_from: 1.2 V, settling: 20 us, start_up: none}}"
    )
    found = judged(copy.replace("SOURCE", "source: bias_main"), RULES)
    assert (found[LOOP, "bias_copy"].kind, found[LOOP, "bias_main"].kind) == (FAIL, NONE)
    found = judged(copy.replace("SOURCE", "source: ref_fast"), RULES)
    assert (found[LOOP, "bias_copy"].kind, found[LOOP, "bias_main"].kind) == (PASS, PASS)


def test_a_loop_that_starts_may_hold_another_that_does_not() -> None:
    patch = """
        references: {ref_main: {start_up: {by: a leak, least_slope: 0 V/s}}}
        biases:
          bias_main: {source: ref_main, start_up: none, gated_by: bias_more}
          bias_more: {kind: from_reference, source: bias_main, domain: analog, start_up: none}
    """
    judgements = judged(patch, RULES)
    assert judgements[LOOP, "ref_main"].kind is NONE
    assert judgements[LOOP, "bias_main"].kind is FAIL
    assert judgements[LOOP, "bias_main"].why == "ref_main starts other ways of the loop"
    assert judgements[LOOP, "bias_more"].message == "its loop is judged at bias_main"


def test_rails_that_wait_for_each_other() -> None:
    judgement = one("rails: {avdd: {after: vcore}}", LOOP, "avdd")
    assert judgement.kind is FAIL
    assert judgement.message == (
        "waits for itself, and nothing starts it: avdd comes up after vcore comes up after avdd"
    )


@pytest.mark.parametrize(
    ("patch", "rule", "subject", "step"),
    [
        ("output_stages: {por_out: {gated_by: gather}}", LOOP, "gather", "por_out gated by gather"),
        ("loads: {core_regulator: {domain: core}}", LOOP, "core_regulator", "vcore made by core_regulator"),
    ],
)
def test_the_step_that_could_be_taken_out_is_the_last_one(patch: str, rule: str, subject: str, step: str) -> None:
    judgement = one(patch, rule, subject)
    assert judgement.kind is FAIL
    assert judgement.mend == f"one step of the loop taken out, such as: {step}"


def test_several_start_up_circuits_of_a_loop_are_named() -> None:
    leak = "start_up: {by: a leak, least_slope: 0 V/s}"
    patch = f"{{references: {{ref_main: {{{leak}}}}}, biases: {{bias_main: {{source: ref_main, {leak}}}}}}}"
    judgement = one(patch, LOOP, "ref_main")
    assert (judgement.kind, judgement.message) == (PASS, "is in a loop that bias_main and ref_main start")


def test_a_loop_through_a_detector_is_said_once() -> None:
    judgements = judged("biases: {bias_start: {gated_by: por_n}}", RULES)
    assert judgements[LOOP, "bias_start"].kind is PASS


@pytest.mark.parametrize(
    ("fact", "rule", "subject"),
    [
        ("references.ref_main.domain", LOOP, "ref_main"),
        ("references.ref_main.bias", LOOP, "ref_main"),
        ("biases.bias_main.source", LOOP, "bias_main"),
        ("biases.bias_main.kind", LOOP, "bias_main"),
        ("domains.analog.switched_by", LOOP, "ref_main"),
        ("domains.analog.switched_by", LOOP, "adc"),
        ("domains.core.rail", LOOP, "core_logic"),
        ("output_stages.gather.driven_by", LOOP, "gather"),
        ("output_stages.gather.domain", LOOP, "gather"),
        ("loads.adc.domain", LOOP, "adc"),
        # What it leans on, at some distance, might lean on it.
        ("references.ref_main.bias", LOOP, "adc"),
        ("loads.core_regulator.domain", LOOP, "core_logic"),
        ("output_stages.gather.domain", LOOP, "adc"),
    ],
)
def test_a_loop_that_could_hide_is_open(fact: str, rule: str, subject: str) -> None:
    assert one(without(fact), rule, subject).missing == (fact,)


def test_a_gap_of_a_detector_hides_no_loop_without_it() -> None:
    """Ways through a detector are another rule's."""
    assert one(without("comparators.uv.bias"), LOOP, "gather").kind is PASS


def test_the_order_of_the_description_does_not_choose_the_subject() -> None:
    ring = ("core_logic: {leans_on: [adc]}", "adc: {leans_on: [core_logic]}")
    for order in (ring, ring[::-1]):
        assert one(f"loads: {{{', '.join(order)}}}", LOOP, "adc").kind is FAIL
