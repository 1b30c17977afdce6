"""Self-bias: where each rule passes, fails, asks and stays open; limits worked out by hand."""

from __future__ import annotations

from typing import Final

import pytest

from tests.rules.sound import Judgements, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.self_bias import RULES

PASS, FAIL, OPEN, REVIEW, NONE = Kind.PASS, Kind.FAIL, Kind.OPEN, Kind.REVIEW, Kind.NOT_APPLICABLE

WORKS: Final = "self_bias/works_at_own_trip"
UP: Final = "self_bias/up_in_time"
LOOP: Final = "self_bias/no_loop"
NOBODY: Final = "self_bias/leans_on_nobody"
REFERENCE: Final = "self_bias/reference_starts"
BIAS: Final = "self_bias/bias_starts"
STARTS: Final = "self_bias/loop_starts"

# A power-on detector whose falling level lies between 1.2 V and 1.3 V, whatever the example says today.
POR: Final = """
comparators:
  por:
    trip: {{rising: {{min: 1.26 V, max: 1.36 V}}, falling: {{min: 1.2 V, max: 1.3 V}}}}
    works_from: {{max: {works}}}
"""


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def margin(judgement: Judgement) -> float:
    assert judgement.measure is not None
    return judgement.measure.margin


def kinds(judgements: Judgements, rule: str) -> dict[str, Kind]:
    return {subject: judgement.kind for (name, subject), judgement in judgements.items() if name == rule}


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, REVIEW) == []


# What each example changes beside the subject that it is about; the loop of several elements is judged at the first.
FAULTS: Final = {
    WORKS: {(WORKS, "por"): FAIL},
    UP: {(UP, "por"): FAIL},
    LOOP: {(LOOP, "uv"): FAIL},
    NOBODY: {(NOBODY, "por"): FAIL},
    REFERENCE: {(REFERENCE, "ref_fast"): FAIL},
    BIAS: {(BIAS, "bias_start"): FAIL},
    STARTS: {(STARTS, "core_regulator"): FAIL, (STARTS, "vcore"): NONE},
}
MENDED: Final = {BIAS: {(BIAS, "bias_start"): PASS}}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_is_one_fault(rule: Rule) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]
    assert changed(rule.example.holds, RULES) == MENDED.get(rule.id, {})


@pytest.mark.parametrize("works", ["1.199 V", "1.2 V"])
def test_up_to_the_lowest_falling_level_a_comparator_works(works: str) -> None:
    judgement = one(POR.format(works=works), WORKS, "por")
    assert judgement.kind is PASS
    assert margin(judgement) == pytest.approx(1.2 - float(works[:-2]), abs=1e-12)
    assert judgement.mend == ""


def test_a_comparator_that_works_from_above_its_level_fails() -> None:
    judgement = one(POR.format(works="1.201 V"), WORKS, "por")
    assert judgement.kind is FAIL
    assert judgement.message == "decides correctly from 1.201 V, at most 1.2 V needed"
    assert judgement.why == "decides on avdd down to 1.2 V"
    assert judgement.mend == (
        "a comparator that works from 1.2 V or less; now 1.201 V; or a lowest falling level of 1.21 V or more"
    )
    assert judgement.at == "comparators.por.works_from"


def test_the_level_of_a_detector_with_errors_is_its_worst_one() -> None:
    # uv falls at 1.627 V; 0.5 % of that, and three times 0.4 mV through a divider of 0.367, add up.
    patch = "comparators: {uv: {trip: {falling: 1.627 V, rising: 1.677 V}}}"
    least_v = 1.627 - (1.627 * 0.005 + 3 * 0.4e-3 / 0.367)
    assert margin(one(patch, WORKS, "uv")) == pytest.approx(least_v - 1.05, abs=1e-12)


def test_the_lowest_of_all_codes_counts() -> None:
    codes = "low: {falling: {min: 1.3 V, max: 1.35 V}}, high: {falling: {min: 1.4 V, max: 1.45 V}}"
    patch = f"comparators: {{uv: {{works_from: {{max: 1.31 V}}, trip: null, codes: {{{codes}}}}}}}"
    judgement = one(patch, WORKS, "uv")
    assert judgement.kind is FAIL
    assert judgement.message == "decides correctly from 1.31 V, at most 1.3 V needed"
    assert judgement.why == "decides on avdd down to 1.3 V at low"
    assert one(patch.replace("1.31 V", "1.3 V"), WORKS, "uv").kind is PASS


def test_a_comparator_on_another_rail_works_wherever_that_rail_is_delivered() -> None:
    # uv_core judges vcore near 1.1 V and lives on avdd: that level says nothing about its own supply.
    patch = (
        "{{rails: {{avdd: {{delivered: {{min: 1.7 V, max: 1.89 V}}}}}}, comparators: {{uv_core: {{works_from: {}}}}}}}"
    )
    assert one(patch.format("1.7 V"), WORKS, "uv_core").kind is PASS
    judgement = one(patch.format("1.701 V"), WORKS, "uv_core")
    assert judgement.kind is FAIL
    assert judgement.message == "decides correctly from 1.701 V, at most 1.7 V needed"
    assert judgement.why == "avdd is delivered down to 1.7 V"
    assert judgement.mend == "a comparator that works from 1.7 V or less; now 1.701 V"


@pytest.mark.parametrize(
    ("subject", "facts"),
    [
        ("por", ["comparators.por.works_from"]),
        ("por", ["comparators.por.trip.falling", "comparators.por.hysteresis.amount"]),
        ("por", ["comparators.por.domain"]),
        ("por", ["domains.aon.rail"]),
        ("uv_core", ["rails.avdd.delivered"]),
        ("uv_core", ["comparators.uv_core.works_from", "rails.avdd.delivered"]),
    ],
)
def test_works_at_own_trip_is_open(subject: str, facts: list[str]) -> None:
    judgement = one(without(*facts), WORKS, subject)
    assert judgement.kind is OPEN
    shown = [fact for fact in facts if not fact.endswith("hysteresis.amount")]  # the level is what is asked for
    assert judgement.missing == tuple(shown)


def test_a_bias_on_a_rail_that_the_detector_gates_is_judged_once() -> None:
    # por -> bias_start -> core -> vcore -> core_regulator, which por_n holds in reset, which por drives.
    patch = "biases: {bias_start: {domain: core}}"
    judgement = one(patch, LOOP, "por")
    assert judgement.kind is FAIL
    assert judgement.message == "its own output comes back to it: core_regulator is guarded by por_n"
    assert judgement.why == "por_n waits for por, and por waits for por_n"
    assert judgement.mend == "let core_regulator come up without por_n, or let por lean on something else"
    assert path_text(judgement.path) == (
        "por biased by bias_start supplied by core supplied by vcore made by core_regulator guarded by por_n "
        "driven by rst_out driven by gather driven by por_out driven by por"
    )
    up = one(patch, UP, "por")
    assert (up.kind, up.under) == (NONE, LOOP)
    assert up.message.startswith("bias_start, which it leans on, is fed from vcore, which hangs on its own output")
    assert one(patch, NOBODY, "por").kind is PASS  # on nobody but the two supplies; their order is judged above
    assert one(patch, NOBODY, "por").message == "leans on nothing but avdd and vcore"


def test_every_detector_on_a_gated_bias_has_its_own_loop() -> None:
    patch = "biases: {bias_start: {gated_by: por_n}}"
    assert kinds(judged(patch, RULES), LOOP) == {"por": FAIL, "uv": FAIL, "ov": FAIL, "uv_core": PASS}
    judgement = one(patch, LOOP, "uv")
    assert judgement.message == "its own output comes back to it: bias_start is gated by por_n"
    assert changed(patch, RULES) == {
        (LOOP, "por"): FAIL, (LOOP, "uv"): FAIL, (LOOP, "ov"): FAIL, (NOBODY, "por"): NONE,
    }  # fmt: skip
    nobody = one(patch, NOBODY, "por")
    assert nobody.under == LOOP
    assert nobody.message.startswith("leans on another than its supply: bias_start is gated by por_n")


def test_a_detector_that_its_own_output_enables() -> None:
    judgement = one("comparators: {uv: {gated_by: uv}}", LOOP, "uv")
    assert judgement.message == "its own output comes back to it: it is gated by uv"
    assert judgement.mend == "let it come up without uv"
    armed = one("comparators: {uv: {armed_by: por_n}}", LOOP, "uv")
    assert armed.message == "its own output comes back to it: it is gated by por_n"
    assert path_text(armed.path) == "uv gated by por_n driven by rst_out driven by gather driven by uv_out driven by uv"


def test_watching_a_rail_that_it_gates_is_no_loop() -> None:
    # uv judges vcore, which it lets come up: what it leans on is avdd.
    assert one("comparators: {uv: {watches: vcore}}", LOOP, "uv").kind is PASS


def test_a_detector_in_a_domain_that_its_reset_guards_is_no_loop() -> None:
    # The net resets the logic of the domain; the domain stays supplied, and the detector has no reset.
    assert changed("resets: {por_n: {guards: [aon]}}", RULES) == {}


@pytest.mark.parametrize(
    ("fact", "rules"),
    [
        ("comparators.por.domain", {WORKS, UP, LOOP, NOBODY}),
        ("comparators.por.bias", {UP, LOOP, NOBODY}),
        ("biases.bias_start.domain", {UP, LOOP, NOBODY}),
        ("biases.bias_start.kind", {UP, LOOP, NOBODY}),
        ("domains.aon.kind", {LOOP, NOBODY}),
        ("domains.aon.rail", {WORKS, UP, LOOP, NOBODY}),
        ("resets.por_n.guards", {LOOP}),
        ("comparators.por.works_from", {WORKS}),
    ],
)
def test_what_is_open_about_a_power_on_detector(fact: str, rules: set[str]) -> None:
    judgements = judged(without(fact), RULES)
    found = {rule for rule, subject in of_kind(judgements, OPEN) if subject == "por"}
    assert found == rules
    for rule in rules:
        assert judgements[rule, "por"].missing == (fact,)


def test_no_loop_is_open_on_what_is_far_away() -> None:
    # What feeds the regulator is not said: whether uv_core's bias on vcore hangs on uv_core cannot be seen.
    patch = "{biases: {bias_start: {domain: core}}, loads: {core_regulator: {domain: null}}}"
    assert one(patch, LOOP, "uv_core").missing == ("loads.core_regulator.domain",)
    assert one(patch, LOOP, "por").kind is FAIL  # a loop that is seen needs no more


@pytest.mark.parametrize(
    ("patch", "message", "path"),
    [
        (
            "comparators: {por: {gated_by: uv_core}}",
            "leans on another than its supply: it is gated by uv_core",
            "por gated by uv_core",
        ),
        (
            "biases: {bias_start: {kind: external}}",
            "leans on another than its supply: bias_start comes from off the chip",
            "por biased by bias_start",
        ),
        (
            "biases: {bias_start: {gated_by: uv_core}}",
            "leans on another than its supply: bias_start is gated by uv_core",
            "por biased by bias_start gated by uv_core",
        ),
        (
            "{domains: {spare: {rail: avdd, kind: switched, switched_by: uv_core}}, "
            "biases: {bias_start: {domain: spare}}}",
            "leans on another than its supply: spare is gated by uv_core",
            "por biased by bias_start supplied by spare gated by uv_core",
        ),
        (
            "{domains: {spare: {rail: avdd, kind: switched}}, biases: {bias_start: {domain: spare}}}",
            "leans on another than its supply: spare is switched",
            "por biased by bias_start supplied by spare",
        ),
        (
            "biases: {bias_start: {leans_on: [uv_core]}}",
            "leans on another than its supply: bias_start leans on uv_core",
            "por biased by bias_start leans on uv_core",
        ),
    ],
)
def test_a_power_on_detector_that_leans_on_others(patch: str, message: str, path: str) -> None:
    judgement = one(patch, NOBODY, "por")
    assert judgement.kind is FAIL
    assert judgement.message == message
    assert path_text(judgement.path) == path
    assert judgement.why == ""


def test_all_others_are_named() -> None:
    judgement = one("{comparators: {por: {armed_by: uv_core}}, biases: {bias_start: {kind: external}}}", NOBODY, "por")
    assert judgement.message == "leans on another than its supply: it is gated by uv_core"
    assert judgement.why == "also bias_start comes from off the chip"
    assert judgement.mend == "let it come up without uv_core"
    assert path_text(judgement.path) == "por gated by uv_core"


def test_what_it_gates_itself_is_left_to_the_loop_and_hides_nothing_else() -> None:
    loops = one("comparators: {por: {gated_by: por_out, armed_by: gather}}", NOBODY, "por")
    assert (loops.kind, loops.under) == (NONE, LOOP)
    assert loops.message.startswith("leans on another than its supply: it is gated by por_out")
    patch = "{biases: {bias_x: {kind: external}}, comparators: {por: {bias: bias_x, gated_by: por_out}}}"
    judgement = one(patch, NOBODY, "por")
    assert (judgement.kind, judgement.under, judgement.why) == (FAIL, "", "")
    assert judgement.message == "leans on another than its supply: bias_x comes from off the chip"


def test_leans_on_nobody_speaks_of_power_on_detectors_alone() -> None:
    assert kinds(judged("", RULES), NOBODY) == {"por": PASS, "uv": NONE, "ov": NONE, "uv_core": NONE}
    assert one("", NOBODY, "uv").message == "it is no power-on detector"
    assert one("", NOBODY, "por").message == "leans on nothing but avdd"
