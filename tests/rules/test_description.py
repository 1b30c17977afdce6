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
            "nominal: 1.7 V", "the lowest supply delivered (1.71 V) lies above nominal (1.7 V)", "delivered",
            id="nominal_low",
        ),
        pytest.param(
            "nominal: 1.9 V", "nominal (1.9 V) lies above the highest supply delivered (1.89 V)", "delivered",
            id="nominal_high",
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


def test_a_level_of_zero_is_told_as_such() -> None:
    answer = said("rails", "avdd", "rails: {avdd: {nominal: 0 V}}")
    assert answer.message == "the lowest supply delivered (1.71 V) lies above nominal (0 V)"


def test_one_fact_alone_contradicts_nothing() -> None:
    answer = said("rails", "vspare", "rails: {vspare: {nominal: 1.8 V}}")
    assert (answer.kind, answer.message) == (NONE, "nothing is given of its ranges that could contradict")
    answer = said("rails", "vspare", "rails: {vspare: {nominal: 1.8 V, damage: 2.5 V}}")
    assert (answer.kind, answer.message) == (PASS, "its ranges agree")


def test_what_is_not_given_contradicts_nothing() -> None:
    facts = ("nominal", "delivered", "guaranteed", "damage", "residual")
    answer = judged(without(*(f"rails.avdd.{fact}" for fact in facts)), RULES)["description/rails", "avdd"]
    assert (answer.kind, answer.message) == (NONE, "nothing is given of its ranges that could contradict")


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
