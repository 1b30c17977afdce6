from __future__ import annotations

from collections.abc import Callable
from math import inf
from pathlib import Path

import pytest

from tidegate.lint.account import Line, less, plus
from tidegate.lint.case import Case, UnsettledError
from tidegate.lint.description.load import load
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.edge import Hop
from tidegate.lint.judgement import Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension

DESCRIPTION = """
conditions: {coverage: 3}
rails:
  avdd: {nominal: 1.8 V, delivered: {min: 1.7 V, max: 1.9 V}, ripple: {peak_to_peak: {typ: 8 mV}}}
domains:
  aon: {rail: avdd}
comparators:
  uv:
    role: under_voltage
    watches: avdd
    domain: aon
    tracked: false
    divider: {ratio: 0.4}
    hysteresis: {switches: [{turned_by: uv}, {closed_when: low}]}
    errors: {offset: {is: bound}}
"""


@pytest.fixture
def case(tmp_path: Path) -> Case:
    file = tmp_path / "chip.yaml"
    file.write_text(DESCRIPTION, "utf-8")
    description = load(file).description
    graph = build(description)
    return Case(
        subject=graph.elements["uv"], rule="family/rule", level=Level.ERROR, description=description, graph=graph
    )


def test_facts_that_are_given(case: Case) -> None:
    rail, uv = case.of(case.description.rails["avdd"]), case.of(case.description.comparators["uv"])
    assert (rail.delivered.least(), rail.delivered.most()) == (1.7, 1.9)
    assert (rail.nominal.least(), rail.nominal.most(), rail.nominal.typical()) == (1.8, 1.8, 1.8)
    assert rail.ripple.peak_to_peak.typical() == 0.008
    assert uv.divider.ratio.number() == 0.4
    assert uv.role.must() == "under_voltage"
    assert uv.tracked.must() is False  # given, although it is not true
    assert uv.errors["offset"].is_.must() == "bound"
    assert uv.hysteresis.switches[1].closed_when.must() == "low"
    assert uv.domain.element() is case.description.domains["aon"]
    assert case.whole.conditions.coverage.number() == 3.0
    assert case.reading.exact
    assert case.missing == []
    case.settle()


def in_corner(case: Case, corner: Corner) -> Case:
    return Case(
        subject=case.subject, rule=case.rule, level=case.level, description=case.description, graph=case.graph,
        reading=Reading(corner),
    )  # fmt: skip


def test_numbers_that_are_not_known_stand_at_the_corner_of_the_reading(case: Case) -> None:
    """The table of section 1 of the design: a lone end says nothing of the other, a typical value bounds both."""
    for corner, expected in ((Corner.SURE, (inf, 0.0, inf, -inf, 0.0)), (Corner.BEST, (0.0, 0.008, 0.008, inf, inf))):
        reads = in_corner(case, corner)
        rail, uv = reads.of(case.description.rails["avdd"]), reads.of(case.description.comparators["uv"])
        found = (
            rail.dip.depth.most(), rail.ripple.peak_to_peak.least(), rail.ripple.peak_to_peak.most(),
            uv.works_from.least(), rail.rise.least(),
        )  # fmt: skip
        assert found == expected
        assert tuple(reads.reading.waits) == (
            "rails.avdd.dip.depth", "rails.avdd.ripple.peak_to_peak.min", "rails.avdd.ripple.peak_to_peak.max",
            "comparators.uv.works_from", "rails.avdd.rise",
        )  # fmt: skip
        assert reads.missing == []


def test_an_ability_helps_the_other_way_round(case: Case) -> None:
    """A load that works over more is the better load: what is missing of its range is worst at the other end."""
    sure, best = (in_corner(case, corner).of(case.description.rails["avdd"]) for corner in Corner)
    assert (sure.guaranteed.least(), best.guaranteed.least()) == (inf, -inf)
    assert (sure.damage.least(), best.damage.least()) == (-inf, inf)


def test_a_word_that_is_missing_is_chosen(case: Case) -> None:
    uv = case.of(case.description.comparators["uv"])
    assert uv.output.must() == "level"
    assert case.reading.options == {"comparators.uv.output": ("level", "pulse")}
    other = Case(
        subject=case.subject, rule="", level=Level.NOTE, description=case.description, graph=case.graph,
        reading=Reading(chosen={"comparators.uv.output": "pulse"}),
    )  # fmt: skip
    assert other.of(case.description.comparators["uv"]).output.must() == "pulse"


def test_what_a_rule_cannot_go_on_without(case: Case) -> None:
    uv = case.of(case.description.comparators["uv"])
    uv.lacks("trip.rising")
    with pytest.raises(MissingFactsError) as missing:
        uv.reference.element()
    assert missing.value.missing == ("comparators.uv.trip.rising", "comparators.uv.reference")


def test_each_question_is_asked_before_the_case_gives_up(case: Case) -> None:
    uv = case.of(case.description.comparators["uv"])
    assert case.each([lambda: 1, lambda: 2]) == [1, 2]
    with pytest.raises(MissingFactsError) as missing:
        case.each([uv.bias.must, uv.delay.most, uv.reference.must])
    assert missing.value.missing == ("comparators.uv.bias", "comparators.uv.reference")


def test_what_only_helps_a_message_leaves_no_trace(case: Case) -> None:
    uv = case.of(case.description.comparators["uv"])
    assert case.if_known(lambda: 5) == 5
    assert case.if_known(uv.delay.most) is None
    assert case.if_known(uv.bias.must) is None
    assert case.if_known(uv.output.must) is None
    assert case.if_known(uv.divider.ratio.number) == 0.4
    assert case.reading.exact
    assert case.missing == []


def test_what_only_might_hold_does_where_it_harms(case: Case) -> None:
    sure, best = in_corner(case, Corner.SURE), in_corner(case, Corner.BEST)
    assert sure.perhaps(True, might=True) and best.perhaps(True, might=True)
    assert (sure.perhaps(False, might=True), best.perhaps(False, might=True)) == (True, False)
    assert (sure.perhaps(False, might=True, harms=False), best.perhaps(False, might=True, harms=False)) == (False, True)
    assert not sure.perhaps(False, might=False)


def test_a_sum_names_its_terms(case: Case) -> None:
    rail = case.of(case.description.rails["avdd"])
    found = case.sum(
        plus("delivered", rail.delivered.least, of=rail.delivered),
        less("half the ripple", lambda: rail.ripple.peak_to_peak.most() / 2, of=rail.ripple.peak_to_peak),
    )
    assert found.value == -inf  # at the sure corner a ripple of which no end is given has none
    assert found.lines == (
        Line("delivered", 1.7, "rails.avdd.delivered"),
        Line("half the ripple", -inf, "rails.avdd.ripple.peak_to_peak", ("rails.avdd.ripple.peak_to_peak.max",)),
    )


def test_a_term_that_cannot_be_computed_hides_no_other(case: Case) -> None:
    uv, rail = case.of(case.description.comparators["uv"]), case.of(case.description.rails["avdd"])
    with pytest.raises(MissingFactsError) as missing:
        case.sum(plus("a", lambda: float(len(uv.bias.must()))), plus("b", lambda: float(len(uv.reference.must()))))
    assert missing.value.missing == ("comparators.uv.bias", "comparators.uv.reference")
    for corner, expected in ((Corner.SURE, -inf), (Corner.BEST, 1.7)):
        reads = in_corner(case, corner)
        facts = reads.of(case.description.comparators["uv"])
        found = reads.sum(
            plus("delivered", rail.delivered.least),
            less("what it may add", lambda facts=facts: len(facts.bias.must()), floor=0.0),
        )
        assert (found.value, found.lines[1].waits) == (expected, ("comparators.uv.bias",))
        assert tuple(reads.reading.blocked) == ("comparators.uv.bias",)


def test_answers_with_a_number(case: Case) -> None:
    path = (Hop("avdd", ""), Hop("uv", "watched by"))
    passed = case.at_least(
        need=0.038, have=0.05, dimension=Dimension.VOLTAGE, says="hysteresis", why="10 mV ripple", mend="more",
        at="hysteresis.amount", path=path,
    )  # fmt: skip
    assert (passed.kind, passed.rule, passed.subject, passed.level) == (Kind.PASS, "family/rule", "uv", Level.ERROR)
    assert passed.message == "hysteresis 50 mV, at least 38 mV needed"
    assert (passed.why, passed.mend, passed.at) == ("10 mV ripple", "", "comparators.uv.hysteresis.amount")
    assert passed.path == path
    failed = case.at_least(need=0.038, have=0.025, dimension=Dimension.VOLTAGE, says="hysteresis", mend="more")
    assert (failed.kind, failed.mend, failed.at) == (Kind.FAIL, "more", "comparators.uv")
    assert failed.measure == Measure(0.038, 0.025, Dimension.VOLTAGE, Relation.AT_LEAST)
    asked = case.at_most(need=1.0, have=2.0, dimension=Dimension.COUNT, says="x", mend="y", otherwise=Kind.REVIEW)
    assert (asked.kind, asked.message) == (Kind.REVIEW, "x 2, at most 1 needed")
    assert case.at_most(need=1.0, have=1.0, dimension=Dimension.COUNT, says="x").kind is Kind.PASS


def test_answers_without_a_number(case: Case) -> None:
    assert (case.passes("well").kind, case.passes("well").message) == (Kind.PASS, "well")
    failed = case.fails("badly", mend="do better", at="trip")
    assert (failed.kind, failed.mend, failed.at) == (Kind.FAIL, "do better", "comparators.uv.trip")
    asked = case.asks("look", why="it is assumed", mend="say so")
    assert (asked.kind, asked.why, asked.mend) == (Kind.REVIEW, "it is assumed", "say so")
    none = case.not_applicable("no reference")
    assert (none.kind, none.message, none.mend) == (Kind.NOT_APPLICABLE, "no reference", "")
    lacking = case.open(["rails.avdd.rise", "rails.avdd.fall"])
    assert (lacking.kind, lacking.missing) == (Kind.OPEN, ("rails.avdd.rise", "rails.avdd.fall"))
    assert lacking.message == "cannot be judged without rails.avdd.rise, rails.avdd.fall"
    assert lacking.mend == "give rails.avdd.rise, rails.avdd.fall"
    assert case.open((), "out of range").mend == ""


def test_no_answer_but_open_goes_over_a_missing_name(case: Case) -> None:
    case.of(case.description.comparators["uv"]).lacks("bias")
    answers: tuple[Callable[[], object], ...] = (
        lambda: case.passes("well"),
        lambda: case.fails("badly", mend="do better"),
        lambda: case.not_applicable("no delay"),
        lambda: case.at_most(need=1.0, have=0.0, dimension=Dimension.COUNT, says="x"),
    )
    for answer in answers:
        with pytest.raises(UnsettledError, match=r"^answered although facts are missing: comparators\.uv\.bias$"):
            answer()
    assert case.open(case.missing).kind is Kind.OPEN


def test_what_rounding_leaves_of_terms_that_cancel_is_nothing(case: Case) -> None:
    # 0.1 + 0.2 - 0.3 is 5.6e-17 in binary floating point (IEEE 754); a part in a million is no dust.
    left = case.sum(plus("a", lambda: 0.1), plus("b", lambda: 0.2), less("c", lambda: 0.3))
    assert left.value == 0.0
    taken = case.sum(plus("a", lambda: 0.1), plus("b", lambda: 0.2)).less(case.sum(plus("c", lambda: 0.3)))
    assert taken.value == 0.0
    assert case.sum(plus("a", lambda: 0.3000003), less("c", lambda: 0.3)).value == pytest.approx(3e-7, rel=1e-6)
    assert case.sum().value == 0.0
