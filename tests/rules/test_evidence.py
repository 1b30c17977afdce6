"""Numbers that cover less than what they are used for."""

from __future__ import annotations

import pytest

from tests.rules.sound import TODAY, both, changed, judged, patched
from tidegate.lint.comparison import compare
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.rules.evidence import RULES

COVERS = "evidence/covers"
PASS, NONE, REVIEW = Kind.PASS, Kind.NOT_APPLICABLE, Kind.REVIEW


def said(of: str, *patches: str) -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[COVERS, of]


def basis(**facts: str) -> str:
    text = ", ".join(f"{name}: {value}" for name, value in facts.items())
    return f"comparators: {{uv: {{delay: {{min: 0.3 us, max: 2 us, basis: {{{text}}}}}}}}}"


def test_sound_example_names_no_narrow_basis() -> None:
    assert {answer.kind for answer in judged("", RULES).values()} <= {PASS, NONE}


NUMBERS = {
    "avdd": "rails: {avdd: {rise: {min: 50 us, max: 20 ms, basis: {by: measured, ramps: WHICH}}}}",
    "ref_fast": "references: {ref_fast: {works_from: {max: 1.06 V, basis: {by: simulated, temperatures: WHICH}}}}",
    "bias_start": "biases: {bias_start: {works_from: {max: 0.85 V, basis: {by: simulated, corners: WHICH}}}}",
    "uv": "comparators: {uv: {delay: {min: 0.3 us, max: 2 us, basis: {by: simulated, corners: WHICH}}}}",
    "gather": "output_stages: {gather: {leakage: {max: 10 nA, basis: {by: measured, temperatures: WHICH}}}}",
    "por_n": "resets: {por_n: {receivers: {leakage: {max: 2 nA, basis: {by: measured, temperatures: WHICH}}}}}",
    "adc": "loads: {adc: {ready: {max: 60 us, basis: {by: simulated, corners: WHICH}}}}",
    "skip_core": "bypasses: {skip_core: {hold: {resistance: {min: 80 kohm, max: 120 kohm, basis: {corners: WHICH}}}}}",
    "core_return": "neighbours: {core_return: {impedance: {max: 3 ohm, basis: {by: simulated, corners: WHICH}}}}",
}
"""Of each section whose elements have numbers: an element of the sound example, and a number of it."""


@pytest.mark.parametrize("element", NUMBERS)
def test_a_narrow_basis_is_one_question_in_each_section(element: str) -> None:
    assert changed(NUMBERS[element].replace("WHICH", "one"), RULES) == {(COVERS, element): REVIEW}
    assert changed(NUMBERS[element].replace("WHICH", "all"), RULES) == {}
    assert RULES[0].level is Level.NOTE


def test_every_section_with_numbers_is_judged() -> None:
    assert RULES[0].applies_to == tuple(patch.partition(":")[0] for patch in NUMBERS.values())


def test_the_example_is_one_question() -> None:
    (rule,) = RULES
    assert changed(rule.example.fails, RULES) == {(COVERS, "uv"): REVIEW}
    assert changed(rule.example.holds, RULES) == {}


@pytest.mark.parametrize(
    ("fact", "value", "words"),
    [
        ("corners", "one", "at one corner"), ("temperatures", "one", "at one temperature"),
        ("ramps", "one", "at one ramp"), ("reference", "ideal", "with an ideal reference"),
    ],
)  # fmt: skip
def test_what_a_number_covers(fact: str, value: str, words: str) -> None:
    answer = said("uv", basis(by="simulated", **{fact: value}))
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
    answer = said("uv", patch)
    assert answer.message == "2 of its numbers rest on less than all corners, temperatures and ramps"
    assert set(answer.why.split("; ")) == {
        "comparators.uv.errors.offset.amount at one temperature and at one ramp",
        "comparators.uv.codes.a.rising at one corner",
    }
    assert answer.why.startswith(f"{answer.at} at one ")


ALL = "corners: all, temperatures: all, ramps: all, reference: real"
BARE = "references: {board: {kind: external, voltage: {typ: 1.2 V, basis: {by: measured, WHICH}}}}"


def test_numbers_that_all_say_where_they_come_from_and_cover_all_pass() -> None:
    answer = said("board", BARE.replace("WHICH", ALL))
    assert (answer.kind, answer.message) == (
        PASS,
        "every number says what it covers, and covers all that it is used for",
    )


@pytest.mark.parametrize("word", ["corners", "temperatures", "ramps", "reference"])
def test_a_basis_that_does_not_say_what_it_covers_is_no_pass(word: str) -> None:
    rest = ", ".join(each for each in ALL.split(", ") if not each.startswith(word))
    answer = said("board", BARE.replace("WHICH", rest))
    assert (answer.kind, answer.message) == (NONE, "of its 1 numbers 1 do not say what they cover (basis)")


def test_evidence_that_is_not_given_is_no_pass() -> None:
    """One number with a basis that covers all does not speak for the others."""
    answer = said("board", BARE.replace("WHICH", ALL), "references: {board: {accuracy: 0.1 %}}")
    assert (answer.kind, answer.message) == (NONE, "of its 2 numbers 1 do not say what they cover (basis)")
    nothing = said("board", "references: {board: {kind: external}}")
    assert (nothing.kind, nothing.message) == (NONE, "states no number")


@pytest.mark.parametrize("which", ["corners: one", "corners: all", ALL])
def test_an_honest_basis_makes_no_comparison_worse(which: str) -> None:
    """Where nothing was said before, a basis that covers little is known now: no finding got worse by it."""
    without_basis = patched("references: {board: {kind: external, voltage: {typ: 1.2 V}}}")
    with_basis = patched(BARE.replace("WHICH", which))
    old, new = (review(loaded, Catalogue([RULES]), today=TODAY) for loaded in (without_basis, with_basis))
    assert not compare(old, new).got_worse


def test_evidence_that_got_narrower_makes_a_comparison_worse() -> None:
    old, new = (
        review(patched(BARE.replace("WHICH", which)), Catalogue([RULES]), today=TODAY)
        for which in (ALL, ALL.replace("corners: all", "corners: one"))
    )
    assert compare(old, new).got_worse


def test_a_number_inside_a_list_is_found() -> None:
    patch = "loads: {adc: {needs: {0: {works: {min: 1.6 V, max: 1.98 V, basis: {ramps: one}}}}}}"
    assert said("adc", patch).why == "obtained loads.adc.needs.0.works at one ramp"
