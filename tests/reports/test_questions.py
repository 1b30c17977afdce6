"""What to find out next: what belongs together is one question, the facts are whole, and the answers settle."""

from __future__ import annotations

import pytest

from tests.reports.board import BOARD, ROOM_V, TODAY, reviewed, said, with_rail
from tests.rules.sound import patched, without
from tidegate.lint.description.model.description import Conditions
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Bypass, Load, Neighbour, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Kind
from tidegate.lint.reports.open_words import limits_text, paths_text, rest_text, settles_text
from tidegate.lint.reports.questions import TOPICS, Question, questions, rest
from tidegate.rules.catalogue import FAMILIES

RULES = Catalogue(FAMILIES)


def asked(text: str = BOARD) -> dict[str, Question]:
    return {question.what: question for question in questions(reviewed(text))}


def test_what_belongs_together_is_one_question() -> None:
    ripple = asked()["ripple, load step and source impedance of vdd"]
    assert set(ripple.facts) == {
        "rails.vdd.ripple.peak_to_peak", "rails.vdd.ripple.frequency", "rails.vdd.load_step",
        "rails.vdd.source_impedance",
    }  # fmt: skip
    assert said("trip_window/nuisance") in ripple.settles
    assert paths_text(ripple).startswith("rails.vdd: ripple.peak_to_peak, ")
    limit = next(each for each in ripple.limits if each.kept.fact == "rails.vdd.ripple.peak_to_peak")
    assert (limit.judgement.rule, limit.kept.value) == ("trip_window/nuisance", pytest.approx(2 * ROOM_V))
    text = limits_text(ripple.limits)
    assert text == "ripple alone at most 17.6 mV peak to peak, for trip_window/nuisance of sup"
    assert "trip_window/nuisance (+8.8 mV so far)" in settles_text(ripple)


def test_every_missing_fact_is_asked_for_once() -> None:
    lacking = review(patched(without("rails.avdd.ripple", "loads.adc.ready")), RULES, today=TODAY)
    for found in (reviewed(), lacking):
        facts = [fact for question in questions(found) for fact in question.facts]
        waiting = {fact for one in found.judgements if one.kind is Kind.OPEN for fact in one.missing}
        assert len(facts) == len(set(facts))
        assert set(facts) == waiting


def test_what_is_asked_first_weighs_most_and_what_is_left_is_counted() -> None:
    every = questions(reviewed())
    assert [question.weight for question in every] == sorted((q.weight for q in every), reverse=True)
    left = rest(every[1:])
    assert sum(one.facts for one in left) == sum(len(question.facts) for question in every[1:])
    assert all(rest_text(one).endswith(("judgement waits", "judgements wait")) for one in left)


def test_a_section_of_which_nothing_is_said_is_told_so() -> None:
    found = review(patched(without("bypasses", "waivers", "complete")), RULES, today=TODAY)
    (section,) = [one for one in rest(questions(found)) if one.section == "bypasses"]
    assert section.nothing_said
    assert rest_text(section).startswith("bypasses: nothing is said; ")


def test_the_answer_settles_what_it_is_said_to_settle() -> None:
    """The ripple and the load step given, nothing that the question settles is open any more."""
    question = asked()["ripple, load step and source impedance of vdd"]
    answered = with_rail("ripple: {peak_to_peak: 5 mV, frequency: 1 MHz}, load_step: 10 mA, source_impedance: 0.1 ohm")
    for judgement in question.settles:
        assert said(judgement.rule, judgement.subject, answered).kind is not Kind.OPEN


def test_elements_that_lack_the_same_are_asked_about_together() -> None:
    lacking = without("output_stages.por_out.works_from", "output_stages.uv_out.works_from")
    found = review(patched(lacking), RULES, today=TODAY)
    (question,) = [one for one in questions(found) if one.section == "output_stages"]
    assert question.what == "minimum supply of por_out and uv_out"
    assert paths_text(question) == "output_stages.por_out and output_stages.uv_out: works_from"


def test_the_topics_are_of_the_language() -> None:
    parts = {
        "conditions": Conditions, "rails": Rail, "domains": Domain, "references": Reference, "biases": Bias,
        "comparators": Comparator, "output_stages": OutputStage, "resets": Reset, "loads": Load, "bypasses": Bypass,
        "neighbours": Neighbour,
    }  # fmt: skip
    assert set(TOPICS) == set(parts)
    for section, topics in TOPICS.items():
        facts = [fact for topic in topics for fact in topic]
        assert len(facts) == len(set(facts)), section
        assert {fact.partition(".")[0] for fact in facts} <= set(parts[section].__struct_fields__), section


def test_a_description_that_is_whole_asks_nothing() -> None:
    found: Review = review(patched(""), RULES, today=TODAY)
    assert found.counts.get(Kind.OPEN, 0) == 0
    assert questions(found) == []
