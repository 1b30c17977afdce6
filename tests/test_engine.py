from __future__ import annotations

import datetime
import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import msgspec
import pytest

from tidegate.lint.account import plus
from tidegate.lint.case import Case
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.description.model.description import Conditions
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.facts.reading import Better
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics.domain import require_positive
from tidegate.lint.quantity import Dimension
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.lint.settings import Settings

TODAY = datetime.date(2026, 1, 1)
DESCRIPTION = """
rails:
  avdd: {nominal: 1.8 V}
  vcore: {nominal: 1.2 V}
domains:
  aon: {rail: avdd}
waivers:
  - {rule: supply/high_enough, element: vcore, why: low on purpose, agreed_by: design review, until: "2026-12-31"}
"""


def made(id: str, judge: Callable[[Any, Case], object], applies_to: str = "rails") -> Rule:
    return rule(
        id, title="a rule", level=Level.ERROR, applies_to=applies_to, proves="", facts=(), mend="", sources=(),
        example=Example("", ""),
    )(judge)  # type: ignore[arg-type]  # fmt: skip


def high_enough(rail: Rail, case: Case) -> Judgement:
    have_v = case.of(rail).nominal.most()
    return case.at_least(need=1.5, have=have_v, dimension=Dimension.VOLTAGE, says="nominal", at="nominal")


HIGH = made("supply/high_enough", high_enough)


@pytest.fixture
def loaded(tmp_path: Path) -> Loaded:
    file = tmp_path / "chip.yaml"
    file.write_text(DESCRIPTION, "utf-8")
    return load(file, shown="chip.yaml")


def answers(loaded: Loaded, *rules: Rule, settings: Settings | None = None) -> dict[tuple[str, str], Judgement]:
    found = review(loaded, Catalogue([rules]), today=TODAY, settings=settings)
    assert found.faults == ()
    return {(judgement.rule, judgement.subject): judgement for judgement in found.judgements}


def test_every_rule_judges_every_element_of_its_section_in_order(loaded: Loaded) -> None:
    second = made("supply/second", lambda _, case: case.passes("well"))
    third = made("domain/third", lambda _, case: case.not_applicable("no"), "domains")
    found = review(loaded, Catalogue([(HIGH, second), (third,)]), today=TODAY)
    assert [(judgement.rule, judgement.subject) for judgement in found.judgements] == [
        ("supply/high_enough", "avdd"), ("supply/second", "avdd"), ("supply/high_enough", "vcore"),
        ("supply/second", "vcore"), ("domain/third", "aon"), ("waiver/still_right", "supply/high_enough on vcore"),
    ]  # fmt: skip
    assert found.counts == {Kind.PASS: 4, Kind.FAIL: 1, Kind.NOT_APPLICABLE: 1}


def test_a_catalogue_refuses_a_rule_twice_and_a_section_that_is_none() -> None:
    with pytest.raises(ValueError, match=r"^two rules are called supply/high_enough$"):
        Catalogue([(HIGH,), (HIGH,)])
    with pytest.raises(ValueError, match=r"^two rules are called waiver/still_right$"):
        Catalogue([(made("waiver/still_right", high_enough),)])
    with pytest.raises(ValueError, match=r"^supply/odd applies to scenarios, which is no section of elements$"):
        Catalogue([(made("supply/odd", high_enough, "scenarios"),)])


def test_missing_facts_make_a_judgement_open(loaded: Loaded) -> None:
    def needs_both(rail: Rail, case: Case) -> Judgement:
        facts = case.of(rail)
        return case.at_least(
            need=facts.rise.most(), have=facts.fall.least(), dimension=Dimension.DURATION, says="falls within"
        )

    found = answers(loaded, made("supply/both", needs_both))["supply/both", "avdd"]
    assert (found.kind, found.missing) == (Kind.OPEN, ("rails.avdd.rise", "rails.avdd.fall"))


def test_a_name_that_is_missing_makes_a_judgement_open(loaded: Loaded) -> None:
    def needs_both(rail: Rail, case: Case) -> Judgement:
        facts = case.of(rail)
        case.each([facts.after.must, facts.made_by.must])
        return case.passes("well")

    found = answers(loaded, made("supply/both", needs_both))["supply/both", "avdd"]
    assert (found.kind, found.missing) == (Kind.OPEN, ("rails.avdd.after", "rails.avdd.made_by"))


def test_what_holds_whatever_is_missing_is_said(loaded: Loaded) -> None:
    """A wait that can only add to what is too long already, or stay below what is allowed, opens nothing."""

    def short(rail: Rail, case: Case) -> Judgement:
        rise = case.sum(plus("rises", lambda: 2e-3), plus("waits", case.of(rail).delay.most, of=case.of(rail).delay))
        return case.at_most(need=1e-3, have=rise, dimension=Dimension.DURATION, says="up after", mend="sooner")

    def long_enough(rail: Rail, case: Case) -> Judgement:
        waits_s = case.of(rail).delay.least()
        return case.at_least(need=1e-3, have=2e-3 + waits_s, dimension=Dimension.DURATION, says="up after")

    found = answers(loaded, made("supply/short", short), made("supply/long", long_enough))
    failed, passed = found["supply/short", "avdd"], found["supply/long", "avdd"]
    assert (failed.kind, passed.kind) == (Kind.FAIL, Kind.PASS)
    assert failed.message == ("up after 2 ms, at most 1 ms needed: at least 1 ms short, whatever delay of avdd may be")
    assert failed.measure is not None and passed.measure is not None
    assert (failed.measure.sure_margin, failed.measure.best_margin) == (-math.inf, pytest.approx(-1e-3))
    assert (passed.measure.sure_margin, passed.measure.best_margin) == (pytest.approx(1e-3), math.inf)
    assert [line.waits for line in failed.account] == [(), ("rails.avdd.delay",)]


def test_a_missing_word_is_tried_with_every_value(loaded: Loaded) -> None:
    def asks(domain: Domain, case: Case) -> Judgement:
        if case.of(domain).kind.must() == "switched":
            return case.fails("is switched", mend="keep it on")
        return case.passes("stays on")

    found = answers(loaded, made("domain/stays", asks, "domains"))["domain/stays", "aon"]
    assert (found.kind, found.missing) == (Kind.OPEN, ("domains.aon.kind",))
    assert found.message == "cannot be judged without domains.aon.kind; it holds where kind of aon is always_on"


def test_a_failure_is_told_under_one_that_says_the_same(loaded: Loaded) -> None:
    """It keeps its number; nothing yields to what passes, is open or waived."""
    first = made("supply/first", lambda rail, case: case.fails("bad", mend="mend it"))
    below = msgspec.structs.replace(made("supply/below", high_enough), yields=(Yield("supply/first"),))
    found = answers(loaded, first, below)["supply/below", "vcore"]
    assert (found.kind, found.under) == (Kind.NOT_APPLICABLE, "supply/first")
    assert found.measure is not None and found.measure.margin == pytest.approx(-0.3)
    for kind in ("passes", "open"):
        other = made("supply/first", lambda rail, case, kind=kind: getattr(case, kind)("well"))
        assert answers(loaded, other, below)["supply/below", "vcore"].kind is Kind.FAIL
    waived = msgspec.structs.replace(first, id="supply/high_enough")
    below = msgspec.structs.replace(below, yields=(Yield("supply/high_enough"),))
    assert answers(loaded, waived, below)["supply/below", "vcore"].kind is Kind.FAIL


def test_a_number_outside_its_formula_makes_a_judgement_open(loaded: Loaded) -> None:
    def refused(_: object, case: Case) -> Judgement:
        require_positive(r_ohm=0.0)
        return case.passes("well")

    found = answers(loaded, made("supply/refused", refused))["supply/refused", "avdd"]
    assert (found.kind, found.missing, found.mend) == (Kind.OPEN, (), "")
    assert found.message == (
        "the numbers given lie outside the range of the formula: r_ohm must be greater than 0 (found 0.0)"
    )


def test_a_number_that_is_missing_is_told_before_what_the_formula_refused(loaded: Loaded) -> None:
    """Nobody needs to hear that not a number lies outside the range, and least of all without the name of the fact."""

    def refused(rail: Rail, case: Case) -> Judgement:
        rise_s = case.of(rail).rise.most()
        require_positive(rise_s=rise_s)
        return case.passes("well")

    def gathered(rail: Rail, case: Case) -> Judgement:
        case.each([lambda: require_positive(r_ohm=0.0), lambda: require_positive(t_s=case.of(rail).fall.most())])
        return case.passes("well")

    for name, judge, fact in (("supply/refused", refused, "rise"), ("supply/gathered", gathered, "fall")):
        found = answers(loaded, made(name, judge))[name, "avdd"]
        assert (found.kind, found.missing) == (Kind.OPEN, (f"rails.avdd.{fact}",))
        assert found.message == f"cannot be judged without rails.avdd.{fact}"


def test_a_rule_that_raises_is_at_fault_and_hides_no_finding(loaded: Loaded) -> None:
    def careless(element: object, case: Case) -> object:
        if case.subject.id == "avdd":
            raise ZeroDivisionError("division by zero")
        return "well"

    def hasty(rail: Rail, case: Case) -> Judgement:
        case.of(rail).lacks("rise")
        return case.passes("well")

    rules = (made("supply/careless", careless), made("supply/hasty", hasty), HIGH)
    found = review(loaded, Catalogue([rules]), today=TODAY)
    assert [(fault.rule, fault.subject, fault.error) for fault in found.faults] == [
        ("supply/careless", "avdd", "ZeroDivisionError: division by zero"),
        ("supply/hasty", "avdd", "UnsettledError: answered although facts are missing: rails.avdd.rise"),
        ("supply/careless", "vcore", "answered str, not a judgement"),
        ("supply/hasty", "vcore", "UnsettledError: answered although facts are missing: rails.vcore.rise"),
    ]
    judged = [(judgement.rule, judgement.subject, judgement.kind) for judgement in found.judgements]
    assert judged == [
        ("supply/high_enough", "avdd", Kind.PASS), ("supply/high_enough", "vcore", Kind.FAIL),
        ("waiver/still_right", "supply/high_enough on vcore", Kind.PASS),
    ]  # fmt: skip


def test_findings_are_what_counts_and_is_not_waived(loaded: Loaded) -> None:
    low = made("supply/low", lambda _, case: case.fails("low", mend="raise it"))
    asks = made("supply/asks", lambda _, case: case.asks("look", why="assumed", mend="say so"))
    opens = made("supply/opens", lambda _, case: case.open(["rails.avdd.rise"]))
    found = review(loaded, Catalogue([(HIGH, low, asks, opens)]), today=TODAY)

    def names(fail_at: Level, *also: str) -> list[str]:
        return sorted({judgement.rule for judgement in found.findings(fail_at, also)})

    # The failure of high_enough on vcore is waived.
    assert names(Level.ERROR) == ["supply/low"]
    assert names(Level.NOTE, "open", "review") == ["supply/asks", "supply/low", "supply/opens"]
    milder = Settings(levels={"supply/low": Level.NOTE})
    found = review(loaded, Catalogue([(HIGH, low, asks, opens)]), today=TODAY, settings=milder)
    assert names(Level.WARNING) == []
    assert names(Level.NOTE) == ["supply/low"]


def test_settings_are_in_force(loaded: Loaded) -> None:
    other = made("domain/other", lambda _, case: case.passes("well"), "domains")
    by_family = answers(loaded, HIGH, other, settings=Settings(levels={"supply": Level.NOTE, "domain": Level.WARNING}))
    assert by_family["supply/high_enough", "avdd"].level is Level.NOTE
    assert by_family["domain/other", "aon"].level is Level.WARNING
    left_out = answers(loaded, HIGH, other, settings=Settings(leave_out=("supply", "waiver/still_right")))
    assert list(left_out) == [("domain/other", "aon")]
    unjudged = answers(loaded, HIGH, settings=Settings(leave_out=("waiver",)))
    assert list(unjudged) == [("supply/high_enough", "avdd"), ("supply/high_enough", "vcore")]
    assert unjudged["supply/high_enough", "vcore"].waiver  # the waiver is in force, only not judged
    asked = Settings(least_margins={"supply/high_enough": "0.4 V"})
    short = answers(loaded, HIGH, settings=asked)["supply/high_enough", "avdd"]
    assert short.kind is Kind.FAIL
    assert short.message.endswith("the margin of +300 mV is less than the 0.4 V that the settings ask for")


def test_settings_fill_in_conditions_and_take_none_away(loaded: Loaded) -> None:
    def cycles(_: object, case: Case) -> Judgement:
        found = case.whole.conditions.power_cycles.number(Better.LESS)
        return case.at_most(need=100.0, have=found, dimension=Dimension.COUNT, says="power cycles")

    counts = made("supply/cycles", cycles)
    assert answers(loaded, counts)["supply/cycles", "avdd"].kind is Kind.OPEN
    offered = Settings(conditions=Conditions(power_cycles=20.0))
    found = answers(loaded, counts, settings=offered)["supply/cycles", "avdd"]
    assert (found.kind, found.message) == (Kind.PASS, "power cycles 20, at most 100 needed")


def test_settings_that_name_what_nobody_has(loaded: Loaded) -> None:
    with pytest.raises(DescriptionError) as refused:
        review(loaded, Catalogue([(HIGH,)]), today=TODAY, settings=Settings(file="s.yaml", leave_out=("suply",)))
    assert [(fault.path, fault.problem) for fault in refused.value.faults] == [
        ("leave_out", "no rule or family is called 'suply'")
    ]
    wrong = Settings(file="s.yaml", least_margins={"supply/high_enough": "4 ohm"})
    with pytest.raises(DescriptionError) as refused:
        review(loaded, Catalogue([(HIGH,)]), today=TODAY, settings=wrong)
    assert [str(fault) for fault in refused.value.faults] == [
        "s.yaml: least_margins.supply/high_enough: the margin of supply/high_enough is a voltage (found '4 ohm'); "
        "write a voltage, such as +300 mV, or a share of the need, such as 2 %"
    ]


def test_a_rule_answers_for_itself_alone(loaded: Loaded) -> None:
    def improper(_: object, case: Case) -> object:
        answer = case.passes("well")
        if case.subject.id == "avdd":
            return msgspec.structs.replace(answer, rule="supply/high_enough", subject="vcore")
        return msgspec.structs.replace(answer, waiver="agreed with myself")

    def no_number(_: object, case: Case) -> Judgement:
        return case.at_least(need=1.0, have=float("nan"), dimension=Dimension.VOLTAGE, says="level")

    def leaves(_: object, _case: Case) -> Judgement:
        raise SystemExit(0)

    rules = (made("a/improper", improper), made("a/no_number", no_number), made("a/leaves", leaves))
    found = review(loaded, Catalogue([rules]), today=TODAY)
    assert [(fault.rule, fault.error) for fault in found.faults if fault.subject == "avdd"] == [
        ("a/improper", "answered for supply/high_enough on vcore"),
        ("a/no_number", "answered with a number that is none"),
        ("a/leaves", "SystemExit: 0"),
    ]
    assert ("a/improper", "waived its own finding") in [(fault.rule, fault.error) for fault in found.faults]
    assert [judgement.rule for judgement in found.judgements] == ["waiver/still_right"]


def test_a_judgement_knows_its_place(loaded: Loaded) -> None:
    found = review(loaded, Catalogue([(HIGH,)]), today=TODAY)
    assert [str(found.place(judgement)) for judgement in found.judgements] == [
        "chip.yaml:3:19", "chip.yaml:4:20", "chip.yaml:8:5",
    ]  # fmt: skip
