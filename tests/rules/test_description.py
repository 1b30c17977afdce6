"""Facts that contradict each other."""

from __future__ import annotations

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.description import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW


def said(section: str, of: str, *patches: str) -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[f"description/{section}", of]


def test_sound_example_keeps_every_rule() -> None:
    judgements = judged("", RULES)
    assert {rule for rule, _ in judgements} == {rule.id for rule in RULES}
    assert {answer.kind for answer in judgements.values()} == {PASS}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_is_one_fault(rule: Rule) -> None:
    found = changed(rule.example.fails, RULES)
    assert [(name, kind) for (name, _), kind in found.items()] == [(rule.id, FAIL)]
    assert of_kind(judged(rule.example.holds, RULES), FAIL, OPEN, REVIEW) == []


@pytest.mark.parametrize(
    ("patch", "message", "at"),
    [
        pytest.param(
            "guaranteed: {min: 1.72 V, max: 1.98 V}",
            "the lowest supply signed off for (1.72 V) lies above the lowest delivered (1.71 V)", "guaranteed",
            id="signed_off_too_high",
        ),
        pytest.param(
            "guaranteed: {min: 1.6 V, max: 1.88 V}",
            "the highest supply delivered (1.89 V) lies above the highest signed off for (1.88 V)", "guaranteed",
            id="signed_off_too_low",
        ),
        pytest.param(
            "damage: 1.97 V", "the highest supply signed off for (1.98 V) lies above the damage level (1.97 V)",
            "damage", id="damage",
        ),
        pytest.param(
            "residual: 1.72 V", "the residual level (1.72 V) lies above the lowest supply delivered (1.71 V)",
            "residual", id="residual",
        ),
        pytest.param(
            "guaranteed: null, damage: 1.88 V",
            "the highest supply delivered (1.89 V) lies above the damage level (1.88 V)", "damage",
            id="damage_without_sign_off",
        ),
    ],
)  # fmt: skip
def test_ranges_of_a_rail(patch: str, message: str, at: str) -> None:
    answer = said("rails", "avdd", f"rails: {{avdd: {{{patch}}}}}")
    assert (answer.kind, answer.message, answer.at) == (FAIL, message, f"rails.avdd.{at}")


@pytest.mark.parametrize(
    ("nominal", "message"),
    [
        ("1.7 V", "the lowest supply delivered (1.71 V) lies above nominal (1.7 V)"),
        ("1.9 V", "nominal (1.9 V) lies above the highest supply delivered (1.89 V)"),
        ("0 V", "the lowest supply delivered (1.71 V) lies above nominal (0 V)"),
    ],
)
def test_a_nominal_level_outside_of_what_is_delivered_is_for_a_person(nominal: str, message: str) -> None:
    """A rail may be run above or below its nominal level: it is usual that it is not, and no contradiction."""
    answer = said("rails", "avdd", f"rails: {{avdd: {{nominal: {nominal}}}}}")
    assert (answer.kind, answer.message, answer.at) == (REVIEW, message, "rails.avdd.delivered")


@pytest.mark.parametrize(
    "patch",
    [
        "guaranteed: {min: 1.71 V, max: 1.89 V}", "damage: 1.98 V", "nominal: 1.71 V", "residual: 1.71 V",
        "residual: 0 V, delivered: {min: 0 V, max: 1.89 V}, guaranteed: {min: 0 V, max: 1.98 V}",
    ],
)  # fmt: skip
def test_equal_facts_agree(patch: str) -> None:
    assert said("rails", "avdd", f"rails: {{avdd: {{{patch}}}}}").kind is PASS


def test_every_contradiction_is_told() -> None:
    answer = said("rails", "avdd", "rails: {avdd: {nominal: 1.9 V, damage: 1.95 V}}")
    assert answer.message == (
        "nominal (1.9 V) lies above the highest supply delivered (1.89 V); "
        "the highest supply signed off for (1.98 V) lies above the damage level (1.95 V)"
    )
    assert answer.at == "rails.avdd.delivered"
    assert answer.mend == "correct one of the two"


RAIL = ("nominal", "delivered", "guaranteed", "damage", "residual")


@pytest.mark.parametrize("fact", RAIL)
def test_what_is_not_given_may_still_contradict(fact: str) -> None:
    answer = said("rails", "avdd", without(f"rails.avdd.{fact}"))
    assert (answer.kind, answer.missing) == (OPEN, (f"rails.avdd.{fact}",))


def test_nothing_given_contradicts_nothing_yet() -> None:
    answer = judged(without(*(f"rails.avdd.{fact}" for fact in RAIL)), RULES)["description/rails", "avdd"]
    assert (answer.kind, set(answer.missing)) == (OPEN, {f"rails.avdd.{fact}" for fact in RAIL})


@pytest.mark.parametrize(
    ("patch", "kind"),
    [
        # least <= typ: the lowest delivered lies at 1.8 V or below, and 1.81 V are signed off for at least.
        ("delivered: {typ: 1.8 V}, guaranteed: {min: 1.81 V, max: 1.98 V}", FAIL),
        ("delivered: {typ: 1.8 V}, guaranteed: {min: 1.79 V, max: 1.98 V}", OPEN),
        # the highest delivered lies at 1.9 V or above, and 1.88 V damage, whatever is signed off for.
        ("delivered: {typ: 1.9 V}, guaranteed: null, damage: 1.88 V", FAIL),
        ("delivered: {min: 1.9 V}, guaranteed: null, damage: 1.88 V", FAIL),
        ("delivered: {max: 1.9 V}, guaranteed: null, damage: 2.5 V", OPEN),
    ],
)
def test_only_a_certain_contradiction_fails(patch: str, kind: Kind) -> None:
    assert said("rails", "avdd", f"rails: {{avdd: {{{patch}}}}}").kind is kind


@pytest.mark.parametrize(
    ("facts", "of", "fact"),
    [
        ("loads.adc.needs.0.works", "adc", "loads.adc.needs.0.works"),
        ("rails.vcore.delivered", "core_logic", "rails.vcore.delivered"),
        ("references.ref_fast.works_from", "ref_fast", "references.ref_fast.works_from"),
        ("references.ref_fast.voltage", "ref_fast", "references.ref_fast.voltage"),
        ("comparators.uv.works_to", "uv", "comparators.uv.works_to"),
        ("comparators.uv.rearms_below", "uv", "comparators.uv.rearms_below"),
    ],
)
def test_other_pairs_of_which_one_is_missing_are_open(facts: str, of: str, fact: str) -> None:
    section = facts.partition(".")[0] if of != "core_logic" else "loads"
    answer = said(section, of, without(facts))
    assert (answer.kind, answer.missing) == (OPEN, (fact,))


def test_a_load_that_does_not_say_what_it_needs_is_open() -> None:
    assert said("loads", "adc", without("loads.adc.needs")).missing == ("loads.adc.needs",)


def test_a_reference_of_unknown_kind_may_come_from_off_the_chip() -> None:
    high = "references: {ref_fast: {voltage: 1.1 V}}"
    answer = said("references", "ref_fast", high, without("references.ref_fast.kind"))
    assert (answer.kind, answer.missing) == (OPEN, ("references.ref_fast.kind",))
    assert said("references", "ref_fast", without("references.ref_fast.kind")).kind is PASS


def test_ranges_of_a_code_that_overlap_those_of_trip_agree() -> None:
    codes = "comparators: {por: {ships_with: a, codes: {a: {rising: RISING, falling: {min: 1.11 V, max: 1.43 V}}}}}"
    assert said("comparators", "por", codes.replace("RISING", "{min: 1.4 V, max: 1.6 V}")).kind is PASS
    apart = said("comparators", "por", codes.replace("RISING", "{min: 1.5 V, max: 1.6 V}"))  # trip: up to 1.49 V
    assert (apart.kind, apart.at) == (FAIL, "comparators.por.codes.a.rising")
    answer = said("comparators", "por", codes.replace("rising: RISING, ", ""))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.por.codes.a.rising",))


def test_a_falling_level_that_is_not_stated_follows_from_the_rising_one() -> None:
    """1.17 V to 1.49 V less 50 mV to 70 mV: 1.44 V at the highest."""
    gone = without("comparators.por.trip.falling")
    for level, kind in (("1.44 V", PASS), ("1.45 V", FAIL)):
        assert said("comparators", "por", gone, f"comparators: {{por: {{rearms_below: {level}}}}}").kind is kind


def test_a_load_that_does_not_work_in_service() -> None:
    answer = said("loads", "adc", "loads: {adc: {needs: {0: {works: {min: 1.72 V, max: 1.88 V}}}}}")
    assert answer.message == (
        "its lowest supply (1.72 V) lies above the lowest of avdd (1.71 V); "
        "the highest of avdd (1.89 V) lies above its highest supply (1.88 V)"
    )
    assert said("loads", "adc", "loads: {adc: {needs: {0: {works: {min: 1.71 V, max: 1.89 V}}}}}").kind is PASS


def test_a_reference_above_its_supply() -> None:
    patch = "references: {ref_fast: {voltage: 1.1 V}}"
    answer = said("references", "ref_fast", patch)
    assert answer.message == "its voltage (1.1 V) lies above the supply it works from (1.06 V)"
    answer = said("references", "ref_fast", patch, "references: {ref_fast: {kind: external}}")
    assert (answer.kind, answer.message) == (NONE, "comes from outside the chip")


@pytest.mark.parametrize(
    ("patch", "message"),
    [
        ("works_from: 3 V", "works_from (3 V) lies above works_to (2.75 V)"),
        ("rearms_below: 1.7 V", "rearms_below (1.7 V) lies above the falling level (1.627 V)"),
        (
            "ships_with: a, codes: {a: {rising: 1.677 V, falling: 1.6 V}}",
            "the falling level of trip (1.627 V) lies above that of a, which it ships with (1.6 V)",
        ),
        (
            "ships_with: a, codes: {a: {rising: 1.7 V, falling: 1.627 V}}",
            "that of a, which it ships with (1.7 V) lies above the rising level of trip (1.677 V)",
        ),
    ],
)
def test_facts_of_a_detector(patch: str, message: str) -> None:
    answer = said("comparators", "uv", f"comparators: {{uv: {{{patch}}}}}")
    assert (answer.kind, answer.message) == (FAIL, message)


def test_an_over_voltage_detector_may_re_arm_anywhere_below() -> None:
    assert said("comparators", "ov", "comparators: {ov: {rearms_below: 1.95 V}}").kind is PASS
