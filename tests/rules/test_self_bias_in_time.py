"""Self-bias: whether the bias and the references of a detector are up where it must decide."""

from __future__ import annotations

import math
from typing import Final

import pytest

from tests.rules.sound import both, judged, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.self_bias import RULES

PASS, FAIL, OPEN, REVIEW, NONE = Kind.PASS, Kind.FAIL, Kind.OPEN, Kind.REVIEW, Kind.NOT_APPLICABLE

UP: Final = "self_bias/up_in_time"

# A power-on detector whose falling level lies between 1.2 V and 1.3 V, whatever the example says today.
POR: Final = """
comparators:
  por:
    trip: {{rising: {{min: 1.26 V, max: 1.36 V}}, falling: {{min: 1.2 V, max: 1.3 V}}}}
biases: {{bias_start: {{works_from: {{max: {bias}}}}}}}
"""


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def margin(judgement: Judgement) -> float:
    assert judgement.measure is not None
    return judgement.measure.margin


@pytest.mark.parametrize("bias", ["1.199 V", "1.2 V"])
def test_up_to_the_lowest_falling_level_it_holds(bias: str) -> None:
    judgement = one(POR.format(bias=bias), UP, "por")
    assert judgement.kind is PASS
    assert margin(judgement) == pytest.approx(1.2 - float(bias[:-2]), abs=1e-12)
    assert judgement.mend == ""


def test_a_bias_that_works_from_above_the_level_fails() -> None:
    judgement = one(POR.format(bias="1.201 V"), UP, "por")
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
        ("null", 1.0, ""),  # it then holds for all temperatures
    ],
)
def test_the_lowest_supply_is_taken_at_the_worst_temperature(slope: str, have_v: float, where: str) -> None:
    judgement = one(SLOPE.format(slope=slope), UP, "por")
    assert judgement.kind is PASS
    assert margin(judgement) == pytest.approx(1.2 - have_v, abs=1e-12)
    assert judgement.why == "decides on avdd down to 1.2 V" + where


@pytest.mark.parametrize("slope", ["{min: -2 mV/K}", "{typ: -1 mV/K}"])
def test_a_slope_of_unknown_sign_may_lift_it(slope: str) -> None:
    """Stated is the lowest supply at the cold end; 200 mV are left until it is worse at the hot one."""
    judgement = one(SLOPE.format(slope=slope), UP, "por")
    assert (judgement.kind, judgement.missing) == (OPEN, ("references.ref_fast.works_from_slope.max",))
    assert judgement.measure is not None
    assert judgement.measure.sure_margin == -math.inf
    assert judgement.measure.best_margin == pytest.approx(0.2, abs=1e-12)
    cold = SLOPE.format(slope=slope).replace("max: 1.0 V", "max: 1.21 V")
    assert one(cold, UP, "por").kind is FAIL  # at the cold end already, whatever the slope is


def test_a_slope_at_one_temperature_moves_nothing() -> None:
    still = SLOPE.format(slope="{min: -2 mV/K}").replace("{min: -40 degC, max: 125 degC}", "27 degC")
    assert one(still, UP, "por").kind is PASS


def test_a_slope_that_lifts_it_above_the_level_fails() -> None:
    judgement = one(SLOPE.format(slope="1.3 mV/K"), UP, "por")  # 1 V and 165 times 1.3 mV
    assert judgement.kind is FAIL
    assert judgement.message == "ref_fast, which it leans on, works from 1.214 V, at most 1.2 V needed"


def test_only_a_slope_above_zero_asks_for_temperatures() -> None:
    patch = "{{conditions: {{junction_temperature: null}}, references: {{ref_fast: {{works_from_slope: {}}}}}}}"
    assert one(patch.format("-1 mV/K"), UP, "uv").kind is PASS
    assert one(patch.format("1 mV/K"), UP, "uv").missing == ("conditions.junction_temperature",)


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


@pytest.mark.parametrize("gone", ["comparators.uv.bias", "biases.bias_start.domain", "comparators.uv.domain"])
def test_a_source_that_is_late_fails_whatever_else_is_missing(gone: str) -> None:
    """ref_fast works from 1.7 V, and uv must decide down to 1.6156 V, whatever its bias and its domain."""
    late = "references: {ref_fast: {works_from: {max: 1.7 V}}}"
    judgement = one(both(late, without(gone)), UP, "uv")
    assert (judgement.kind, judgement.missing) == (FAIL, (gone,))
    assert judgement.message.startswith("ref_fast, which it leans on, works from 1.7 V, at most 1.616 V needed")
    assert judgement.measure is not None
    assert judgement.measure.sure_margin == -math.inf


def test_a_source_of_unknown_kind_may_come_from_off_the_chip() -> None:
    judgement = one(without("references.ref_fast.kind"), UP, "uv")
    assert (judgement.kind, judgement.missing) == (OPEN, ("references.ref_fast.kind",))


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


def test_an_external_bias_of_a_power_on_detector_is_one_finding() -> None:
    judgement = one("biases: {bias_start: {kind: external}}", UP, "por")
    assert (judgement.kind, judgement.under) == (NONE, "self_bias/leans_on_nobody")
    assert judgement.message.startswith("rests on bias_start being there before avdd reaches its trip level")


@pytest.mark.parametrize(
    ("detector", "message"),
    [
        ("uv: {bias: bias_x, reference: ref_x}", "rests on bias_x being there before avdd reaches its trip level"),
        (
            "por: {bias: bias_x, reference: ref_x, crossover: null}",
            "rests on bias_x being there before avdd reaches its trip level (self_bias/leans_on_nobody says so)",
        ),
    ],
)
def test_the_first_of_several_sources_from_off_the_chip_is_told(detector: str, message: str) -> None:
    off_chip = "biases: {bias_x: {kind: external}}, references: {ref_x: {kind: external}}"
    judgement = one(f"{{{off_chip}, comparators: {{{detector}}}}}", UP, detector.partition(":")[0])
    assert judgement.message == message


def test_a_detector_that_needs_no_bias_waits_for_none() -> None:
    """Bias none: a crossover that carries its own current; every rule can judge it."""
    found = judged("comparators: {por: {bias: none}}", RULES)
    of_por = {rule: judgement for (rule, subject), judgement in found.items() if subject == "por"}
    assert of_por["self_bias/up_in_time"].message == "needs neither bias nor reference"
    assert of_por["self_bias/leans_on_nobody"].kind is Kind.PASS
    assert not [rule for rule, judgement in of_por.items() if judgement.kind in (Kind.OPEN, Kind.FAIL)]
