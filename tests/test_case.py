from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path

import pytest

from tidegate.lint.case import Case, MissingFactsError, UnsettledError
from tidegate.lint.description.load import load
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
    rail = case.of(case.description.rails["avdd"])
    assert (rail.least("delivered"), rail.most("delivered")) == (1.7, 1.9)
    assert rail.middle("delivered") == pytest.approx(1.8)
    assert (rail.least("nominal"), rail.most("nominal"), rail.middle("nominal")) == (1.8, 1.8, 1.8)
    assert rail.middle("ripple.peak_to_peak") == 0.008
    assert case.own.number("divider.ratio") == 0.4
    assert case.own.must("role") == "under_voltage"
    assert case.own.must("tracked") is False  # given, although it is not true
    assert case.own.must("errors.offset.is") == "bound"
    assert case.own.must("hysteresis.switches.1.closed_when") == "low"
    assert case.own.element("domain") is case.description.domains["aon"]
    assert case.whole.number("conditions.coverage") == 3.0
    assert case.missing == []
    case.settle()


def test_facts_that_are_not_given_are_noted_with_their_paths(case: Case) -> None:
    rail = case.of(case.description.rails["avdd"])
    numbers = (
        rail.most("rise"), rail.least("ripple.peak_to_peak"), rail.most("dip.depth"), case.own.number("sampling"),
        case.own.most("errors.offset.amount"), case.whole.number("conditions.false_trips"),
        case.own.lacks("trip.rising"),
    )  # fmt: skip
    assert all(math.isnan(number) for number in numbers)
    with pytest.raises(MissingFactsError) as missing:
        case.settle()
    assert missing.value.missing == (
        "rails.avdd.rise", "rails.avdd.ripple.peak_to_peak.min", "rails.avdd.dip.depth", "comparators.uv.sampling",
        "comparators.uv.errors.offset.amount", "conditions.false_trips", "comparators.uv.trip.rising",
    )  # fmt: skip


def test_what_a_rule_cannot_go_on_without(case: Case) -> None:
    case.own.most("delay")
    with pytest.raises(MissingFactsError) as missing:
        case.own.element("reference")
    assert missing.value.missing == ("comparators.uv.delay", "comparators.uv.reference")


def test_missing_facts_are_named_once(case: Case) -> None:
    for _ in range(3):
        case.own.most("delay")
    with pytest.raises(MissingFactsError, match=r"^comparators\.uv\.delay$"):
        case.settle()


def test_gather_asks_everything_before_it_gives_up(case: Case) -> None:
    assert case.gather(lambda: 1, lambda: "two") == (1, "two")
    with pytest.raises(MissingFactsError) as missing:
        case.gather(
            lambda: case.own.must("bias"), lambda: case.own.most("delay"), lambda: 3.0, lambda: case.own.must("output")
        )
    assert missing.value.missing == ("comparators.uv.bias", "comparators.uv.delay", "comparators.uv.output")


def test_attempt_leaves_no_trace(case: Case) -> None:
    assert case.attempt(lambda: 5) == 5
    assert case.attempt(lambda: case.own.most("delay")) is None
    assert case.attempt(lambda: case.own.must("bias")) is None
    assert case.lacking(lambda: case.own.must("bias")) == ("comparators.uv.bias",)
    assert case.lacking(lambda: 5) == ()
    assert case.missing == []
    case.own.most("delay")
    assert case.attempt(lambda: case.own.number("divider.ratio")) == 0.4
    assert case.missing == ["comparators.uv.delay"]


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


def test_no_answer_but_open_goes_over_a_missing_fact(case: Case) -> None:
    case.own.most("delay")
    answers: tuple[Callable[[], object], ...] = (
        lambda: case.passes("well"),
        lambda: case.fails("badly", mend="do better"),
        lambda: case.not_applicable("no delay"),
        lambda: case.at_most(need=1.0, have=0.0, dimension=Dimension.COUNT, says="x"),
    )
    for answer in answers:
        with pytest.raises(UnsettledError, match=r"^answered although facts are missing: comparators\.uv\.delay$"):
            answer()
    assert case.open(case.missing).kind is Kind.OPEN
