"""Numbers that cover less than what they are used for."""

from __future__ import annotations

import pytest

from tests.rules.sound import both, changed, judged
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.rule import Rule
from tidegate.rules.evidence import RULES

PASS, NONE, REVIEW = Kind.PASS, Kind.NOT_APPLICABLE, Kind.REVIEW


def said(section: str, of: str, *patches: str) -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[f"evidence/{section}", of]


def basis(**facts: str) -> str:
    text = ", ".join(f"{name}: {value}" for name, value in facts.items())
    return f"comparators: {{uv: {{delay: {{min: 0.3 us, max: 2 us, basis: {{{text}}}}}}}}}"


def test_sound_example_names_no_narrow_basis() -> None:
    assert {answer.kind for answer in judged("", RULES).values()} <= {PASS, NONE}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_is_one_question(rule: Rule) -> None:
    found = changed(rule.example.fails, RULES)
    assert {(name, kind) for (name, _), kind in found.items()} == {(rule.id, REVIEW)}
    held = changed(rule.example.holds, RULES)
    assert set(held.values()) <= {PASS} and {name for name, _ in held} <= {rule.id}
    assert rule.level is Level.NOTE


@pytest.mark.parametrize(
    ("fact", "value", "words"),
    [
        ("corners", "one", "at one corner"), ("temperatures", "one", "at one temperature"),
        ("ramps", "one", "at one ramp"), ("reference", "ideal", "with an ideal reference"),
    ],
)  # fmt: skip
def test_what_a_number_covers(fact: str, value: str, words: str) -> None:
    answer = said("comparators", "uv", basis(by="simulated", **{fact: value}))
    assert (answer.kind, answer.message) == (
        REVIEW, "one of its numbers rests on less than all corners, temperatures and ramps",
    )  # fmt: skip
    assert answer.why == f"obtained comparators.uv.delay {words}"
    assert answer.at == "comparators.uv.delay"


def test_all_of_an_element_are_asked_at_once() -> None:
    """One judgement for one element: a level, a code and an error contributor, each with its own basis."""
    patch = """
    comparators:
      uv:
        ships_with: a
        codes: {a: {rising: {typ: 1.677 V, basis: {corners: one}}, falling: 1.627 V}}
        errors: {offset: {amount: {typ: 0.4 mV, max: 0.4 mV, basis: {temperatures: one, ramps: one}}}}
    """
    answer = said("comparators", "uv", patch)
    assert answer.message == "2 of its numbers rest on less than all corners, temperatures and ramps"
    assert set(answer.why.split("; ")) == {
        "comparators.uv.errors.offset.amount at one temperature and at one ramp",
        "comparators.uv.codes.a.rising at one corner",
    }
    assert answer.why.startswith(f"{answer.at} at one ")


def test_a_number_that_says_where_it_comes_from_and_covers_all() -> None:
    answer = said("comparators", "uv", basis(by="measured", corners="all", temperatures="all", reference="real"))
    assert (answer.kind, answer.message) == (
        PASS, "every number that says where it comes from covers all that it is used for",
    )  # fmt: skip


def test_a_number_without_a_basis_is_not_judged() -> None:
    answer = said("comparators", "uv")
    assert (answer.kind, answer.message) == (NONE, "no number of it says where it comes from (basis)")


def test_a_number_inside_a_list_is_found() -> None:
    patch = "loads: {adc: {needs: {0: {works: {min: 1.6 V, max: 1.98 V, basis: {ramps: one}}}}}}"
    assert said("loads", "adc", patch).why == "obtained loads.adc.needs.0.works at one ramp"
