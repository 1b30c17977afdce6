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
RAIL_LOOP: Final = "self_bias/rail_loop_starts"
REFERENCE_LOOP: Final = "self_bias/reference_loop_starts"
BIAS_LOOP: Final = "self_bias/bias_loop_starts"
STAGE_LOOP: Final = "self_bias/stage_loop_starts"
LOAD_LOOP: Final = "self_bias/load_loop_starts"

# A power-on detector whose falling level lies between 1.2 V and 1.3 V, whatever the example says today.
POR: Final = """
comparators:
  por:
    trip: {{rising: {{min: 1.26 V, max: 1.36 V}}, falling: {{min: 1.2 V, max: 1.3 V}}}}
    works_from: {{max: {works}}}
biases: {{bias_start: {{works_from: {{max: {bias}}}}}}}
"""


def por(works: str = "0.9 V", bias: str = "0.9 V") -> str:
    return POR.format(works=works, bias=bias)


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
    RAIL_LOOP: {(RAIL_LOOP, "vcore"): FAIL, (LOAD_LOOP, "core_regulator"): NONE},
    REFERENCE_LOOP: {(REFERENCE_LOOP, "ref_main"): FAIL, (BIAS_LOOP, "bias_main"): NONE},
    BIAS_LOOP: {(BIAS_LOOP, "bias_main"): FAIL, (BIAS_LOOP, "bias_copy"): NONE, (BIAS, "bias_copy"): NONE},
    STAGE_LOOP: {(STAGE_LOOP, "por_out"): FAIL, (STAGE_LOOP, "gather"): NONE},
    LOAD_LOOP: {(LOAD_LOOP, "core_logic"): FAIL, (LOAD_LOOP, "adc"): NONE},
}
MENDED: Final = {
    BIAS: {(BIAS, "bias_start"): PASS},
    BIAS_LOOP: {(BIAS_LOOP, "bias_copy"): PASS, (BIAS, "bias_copy"): NONE},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_is_one_fault(rule: Rule) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]
    assert changed(rule.example.holds, RULES) == MENDED.get(rule.id, {})


@pytest.mark.parametrize("works", ["1.199 V", "1.2 V"])
@pytest.mark.parametrize("rule", [WORKS, UP])
def test_up_to_the_lowest_falling_level_it_holds(rule: str, works: str) -> None:
    judgement = one(por(works=works, bias=works), rule, "por")
    assert judgement.kind is PASS
    assert margin(judgement) == pytest.approx(1.2 - float(works[:-2]), abs=1e-12)
    assert judgement.mend == ""


def test_a_comparator_that_works_from_above_its_level_fails() -> None:
    judgement = one(por(works="1.201 V"), WORKS, "por")
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


def test_a_bias_that_works_from_above_the_level_fails() -> None:
    judgement = one(por(bias="1.201 V"), UP, "por")
    assert judgement.kind is FAIL
    assert judgement.message == "bias_start, which it leans on, works from 1.201 V, at most 1.2 V needed"
    assert judgement.why == "decides on avdd down to 1.2 V"
    assert (
        judgement.mend
        == "bias_start working from 1.2 V or less; now 1.201 V; or a lowest falling level of 1.21 V or more"
    )
    assert path_text(judgement.path) == "por biased by bias_start"


def test_the_worst_of_all_sources_is_shown_however_far_it_is() -> None:
    patch = """
        references: {ref_fast: {works_from: {max: 1.5 V}}}
        biases: {bias_start: {kind: from_reference, source: ref_fast, start_up: none}}
    """
    judgement = one(patch, UP, "por")
    assert judgement.kind is FAIL
    assert path_text(judgement.path) == "por biased by bias_start biased by ref_fast"


SLOPE: Final = """
conditions: {{junction_temperature: {{min: -40 degC, max: 125 degC}}}}
references: {{ref_fast: {{works_from: {{max: 1.0 V}}, works_from_slope: {slope}}}}}
comparators: {{por: {{reference: ref_fast, trip: {{falling: {{min: 1.2 V, max: 1.3 V}}}}}}}}
biases: {{bias_start: {{works_from: {{max: 0.85 V}}}}}}
"""


@pytest.mark.parametrize(
    ("slope", "have_v", "where"),
    [
        ("-1.7 mV/K", 1.0, "; ref_fast is worst at the cold end"),
        ("0 mV/K", 1.0, "; ref_fast is worst at the cold end"),
        ("1 mV/K", 1.165, "; ref_fast is worst at 125 degC"),  # 165 K of warming
        ("{min: 0.5 mV/K, max: 1 mV/K}", 1.165, "; ref_fast is worst at 125 degC"),
        ("null", 1.0, ""),
    ],
)
def test_the_lowest_supply_is_taken_at_the_worst_temperature(slope: str, have_v: float, where: str) -> None:
    judgement = one(SLOPE.format(slope=slope), UP, "por")
    assert judgement.kind is PASS
    assert margin(judgement) == pytest.approx(1.2 - have_v, abs=1e-12)
    assert judgement.why == "decides on avdd down to 1.2 V" + where


def test_a_slope_that_lifts_it_above_the_level_fails() -> None:
    judgement = one(SLOPE.format(slope="1.3 mV/K"), UP, "por")  # 1 V and 165 times 1.3 mV
    assert judgement.kind is FAIL
    assert judgement.message == "ref_fast, which it leans on, works from 1.214 V, at most 1.2 V needed"


def test_only_a_slope_above_zero_asks_for_temperatures() -> None:
    missing = "{{conditions: {{junction_temperature: null}}, references: {{ref_fast: {{works_from_slope: {}}}}}}}"
    assert one(missing.format("-1 mV/K"), UP, "uv").kind is PASS
    assert one(missing.format("1 mV/K"), UP, "uv").missing == ("conditions.junction_temperature",) * 1 or one(
        missing.format("1 mV/K"), UP, "uv"
    ).missing == ("conditions.junction_temperature.min", "conditions.junction_temperature.max")


@pytest.mark.parametrize(
    "facts",
    [
        ["comparators.uv.bias"],
        ["comparators.uv.reference"],
        ["biases.bias_start.kind"],
        ["biases.bias_start.works_from"],
        ["references.ref_fast.works_from"],
        ["references.ref_fast.domain"],
        ["comparators.uv.domain"],
        ["biases.bias_start.works_from", "references.ref_fast.works_from"],
        ["comparators.uv.bias", "references.ref_fast.works_from"],
    ],
)
def test_up_in_time_is_open(facts: list[str]) -> None:
    judgement = one(without(*facts), UP, "uv")
    assert judgement.kind is OPEN
    assert sorted(judgement.missing) == sorted(facts)


def test_a_source_of_unknown_parents_is_open() -> None:
    assert one("biases: {bias_start: {kind: from_reference}}", UP, "por").missing == ("biases.bias_start.source",)
    patch = "references: {ref_fast: {self_biased: null}}"
    assert one(patch, UP, "uv").missing == ("references.ref_fast.self_biased",)
    patch = "references: {ref_fast: {self_biased: false}}"
    assert one(patch, UP, "uv").missing == ("references.ref_fast.bias",)
    patch = "references: {ref_fast: {self_biased: null, kind: divider}}"
    assert one(patch, UP, "uv").kind is PASS


def test_a_source_on_a_rail_that_is_up_first_passes_and_says_so() -> None:
    judgement = one("rails: {vcore: {delay: {min: 20 us, max: 200 us}}}", UP, "uv_core")
    assert judgement.kind is PASS
    assert judgement.why.endswith("; vcore comes up after avdd, 20 us later or more")
    made = one("rails: {vcore: {after: null}}", UP, "uv_core")
    assert made.kind is PASS
    assert made.why.endswith("; vcore made by core_regulator supplied by avdd")


# A third rail of which nothing is said but its level, and a bias on it.
OTHER_RAIL: Final = """
rails: {{io: {{delivered: {{min: 2.9 V, max: 3.6 V}}, {order}}}}}
domains: {{pads: {{rail: io, kind: always_on}}}}
biases: {{bias_io: {{kind: resistor, domain: pads, works_from: {{max: 1 V}}}}}}
comparators: {{{who}: {{bias: bias_io}}}}
"""


def test_a_source_on_a_rail_of_unknown_order_is_for_a_person() -> None:
    judgement = one(OTHER_RAIL.format(who="por", order="after: null"), UP, "por")
    assert judgement.kind is REVIEW
    assert judgement.message == "rests on io being up before avdd"
    assert judgement.why == "bias_io, which it leans on, is fed from io, and nothing says that avdd comes up after it"
    assert judgement.mend == "give rails.avdd.after and its delay if it does; else feed bias_io from avdd"
    assert path_text(judgement.path) == "por biased by bias_io supplied by pads supplied by io"


def test_a_source_on_a_later_rail_fails_a_power_on_detector() -> None:
    judgement = one(OTHER_RAIL.format(who="por", order="after: avdd, delay: 1 ms"), UP, "por")
    assert judgement.kind is FAIL
    assert judgement.message == "bias_io, which it leans on, is fed from io, which comes up after avdd"
    assert judgement.why == "io comes up after avdd, 1 ms later or more"
    assert judgement.mend == "feed bias_io from avdd"
    assert path_text(judgement.path) == "por biased by bias_io supplied by pads supplied by io comes up after avdd"


def test_a_source_on_a_later_rail_is_for_a_person_where_another_detector_may_hold() -> None:
    judgement = one(OTHER_RAIL.format(who="uv", order="after: avdd"), UP, "uv")
    assert judgement.kind is REVIEW
    assert judgement.why == (
        "io comes up after avdd: until then its decision means nothing, and another detector must hold reset"
    )
    assert judgement.mend == "a detector that holds reset until io is up; or feed bias_io from avdd"


def test_a_detector_on_a_rail_of_unknown_order_is_for_a_person_too() -> None:
    patch = OTHER_RAIL.format(who="uv", order="after: null") + "domains: {pads: {rail: io, kind: always_on}}\n"
    patch = patch.replace("comparators: {uv: {bias: bias_io}}", "comparators: {uv: {domain: pads}}")
    judgement = one(patch, UP, "uv")
    assert judgement.kind is REVIEW
    assert judgement.why == "it is fed from io, and nothing says that avdd comes up after it"


def test_a_source_that_does_not_work_on_its_own_rail_fails() -> None:
    patch = OTHER_RAIL.format(who="uv_core", order="after: null").replace("max: 1 V", "max: 2.95 V")
    judgement = one(patch, UP, "uv_core")
    assert judgement.kind is FAIL
    assert judgement.message == "bias_io, which it leans on, works from 2.95 V, at most 2.9 V needed"
    assert judgement.why == "io is delivered down to 2.9 V"
    assert judgement.mend == "bias_io working from 2.9 V or less; now 2.95 V"


def test_a_reference_from_off_the_chip_is_for_a_person() -> None:
    judgement = one("references: {ref_fast: {kind: external}}", UP, "uv")
    assert judgement.kind is REVIEW
    assert judgement.message == "rests on ref_fast being there before avdd reaches its trip level"
    assert judgement.why == "ref_fast comes from off the chip, and no rail of the description says when"
    assert judgement.mend == "a source on the chip, fed from avdd"


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
    assert one(patch, UP, "por").kind is NONE
    assert one(patch, UP, "por").message == "vcore hangs on its own output (self_bias/no_loop says so)"
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
    assert one(patch, NOBODY, "por").message == (
        "bias_start is gated by por_n, which it gates itself (self_bias/no_loop says so)"
    )


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
        assert judgements[rule, "por"].message == f"cannot be judged without {fact}"


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
            "{domains: {spare: {rail: avdd, kind: switched, switched_by: uv_core}}, biases: {bias_start: {domain: spare}}}",
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


def test_an_external_bias_of_a_power_on_detector_is_one_finding() -> None:
    judgement = one("biases: {bias_start: {kind: external}}", UP, "por")
    assert judgement.kind is NONE
    assert judgement.message == "bias_start comes from off the chip (self_bias/leans_on_nobody says so)"


def test_leans_on_nobody_speaks_of_power_on_detectors_alone() -> None:
    assert kinds(judged("", RULES), NOBODY) == {"por": PASS, "uv": NONE, "ov": NONE, "uv_core": NONE}
    assert one("", NOBODY, "uv").message == "it is no power-on detector"
    assert one("", NOBODY, "por").message == "leans on nothing but avdd"


# A rail of 1.8 V at the least, that takes up to 20 ms: 90 V/s.
RAMP: Final = """
rails: {{avdd: {{nominal: {{min: 1.8 V, max: 1.9 V}}, rise: {{min: 50 us, max: 20 ms}}}}}}
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
def test_a_circuit_that_needs_no_ramp_needs_no_rail(rule: str, subject: str) -> None:
    patch = RAMP.format(slope="0 V/s") + "domains: {aon: null}\n" if False else RAMP.format(slope="0 V/s")
    judgement = one(patch, rule, subject)
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
    import yaml

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
            "{{domains: {{spare: {{rail: avdd, kind: switched}}}}, references: {{ref_fast: {{domain: spare, {start}}}}}}}",
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
    assert one("biases: {bias_main: {kind: null}}", BIAS, "bias_main").missing == ("biases.bias_main.kind",)


def test_each_loop_is_judged_at_its_first_element() -> None:
    fails = judged("loads: {adc: {leans_on: [core_logic]}, core_logic: {leans_on: [adc]}}", RULES)
    judgement = fails[LOAD_LOOP, "core_logic"]
    assert judgement.message == "waits for itself, and nothing starts it: core_logic leans on adc leans on core_logic"
    assert judgement.mend == "one step of the loop taken out, such as: adc leans on core_logic"
    assert path_text(judgement.path) == "core_logic leans on adc leans on core_logic"
    assert fails[LOAD_LOOP, "adc"].message == "its loop is judged at core_logic"


def test_a_ring_of_sources() -> None:
    ring = "references: {{ref_main: {{start_up: {one}}}}}\nbiases: {{bias_main: {{source: ref_main, start_up: {two}}}}}"
    circuit = "{by: a leak, least_slope: 0 V/s}"
    dead = one(ring.format(one="none", two="none"), REFERENCE_LOOP, "ref_main")
    assert dead.mend == "a start-up circuit in ref_main, which stands in for bias_main"
    assert dead.why == ""
    for started in (ring.format(one=circuit, two="none"), ring.format(one=circuit, two="null")):
        judgements = judged(started, RULES)
        assert judgements[REFERENCE_LOOP, "ref_main"].kind is PASS
        assert judgements[BIAS_LOOP, "bias_main"].message == "is in a loop that ref_main starts"
    unsaid = judged(ring.format(one="none", two="null"), RULES)
    assert unsaid[REFERENCE_LOOP, "ref_main"].missing == ("biases.bias_main.start_up",)
    assert unsaid[BIAS_LOOP, "bias_main"].kind is NONE
    both = judged(ring.format(one="null", two="null"), RULES)
    assert both[REFERENCE_LOOP, "ref_main"].missing == ("references.ref_main.start_up", "biases.bias_main.start_up")


def test_a_loop_that_starts_may_hold_another_that_does_not() -> None:
    patch = """
        references: {ref_main: {start_up: {by: a leak, least_slope: 0 V/s}}}
        biases:
          bias_main: {source: ref_main, start_up: none, gated_by: bias_more}
          bias_more: {kind: from_reference, source: bias_main, domain: analog, start_up: none}
    """
    judgements = judged(patch, RULES)
    assert judgements[REFERENCE_LOOP, "ref_main"].kind is NONE
    assert judgements[BIAS_LOOP, "bias_main"].kind is FAIL
    assert judgements[BIAS_LOOP, "bias_main"].why == "ref_main starts other ways of the loop"
    assert judgements[BIAS_LOOP, "bias_more"].message == "its loop is judged at bias_main"


def test_rails_that_wait_for_each_other() -> None:
    judgement = one("rails: {avdd: {after: vcore}}", RAIL_LOOP, "avdd")
    assert judgement.kind is FAIL
    assert judgement.message == (
        "waits for itself, and nothing starts it: avdd comes up after vcore comes up after avdd"
    )


def test_a_loop_through_a_detector_is_said_once() -> None:
    judgements = judged("biases: {bias_start: {gated_by: por_n}}", RULES)
    assert judgements[BIAS_LOOP, "bias_start"].kind is PASS


@pytest.mark.parametrize(
    ("fact", "rule", "subject"),
    [
        ("references.ref_main.domain", REFERENCE_LOOP, "ref_main"),
        ("references.ref_main.bias", REFERENCE_LOOP, "ref_main"),
        ("biases.bias_main.source", BIAS_LOOP, "bias_main"),
        ("biases.bias_main.kind", BIAS_LOOP, "bias_main"),
        ("domains.analog.switched_by", REFERENCE_LOOP, "ref_main"),
        ("domains.analog.switched_by", LOAD_LOOP, "adc"),
        ("domains.core.rail", LOAD_LOOP, "core_logic"),
        ("output_stages.gather.driven_by", STAGE_LOOP, "gather"),
        ("output_stages.gather.domain", STAGE_LOOP, "gather"),
        ("loads.adc.domain", LOAD_LOOP, "adc"),
    ],
)
def test_a_loop_that_could_hide_is_open(fact: str, rule: str, subject: str) -> None:
    assert one(without(fact), rule, subject).missing == (fact,)
