"""The margin ledger: order, filters, slack, histogram, layout."""

from __future__ import annotations

import msgspec
import pytest

from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.ledger import Entry, entries, histogram, ledger_lines

INF = float("inf")


def judgement(need: float, have: float, *, rule: str = "trip_window/guarantee", subject: str = "uv") -> Judgement:
    measure = Measure(need, have, Dimension.VOLTAGE, Relation.AT_LEAST)
    kind = Kind.PASS if measure.holds else Kind.FAIL
    return Judgement(
        rule=rule, subject=subject, kind=kind, level=Level.ERROR, message="", at="comparators.uv", measure=measure
    )


def test_least_slack_first_whatever_the_sizes() -> None:
    # 1 mV of 10 mV is more than 50 mV of 1 V; what misses its limit stands before all.
    given = [judgement(1.0, 1.05), judgement(0.010, 0.011), judgement(2.0, 1.999), judgement(1.0, 1.0)]
    found = entries(given, element=None, family=None)
    assert [entry.slack for entry in found] == pytest.approx([-0.0005, 0.0, 0.05, 0.1])


def test_what_is_unlimited_stands_at_the_ends() -> None:
    given = [judgement(1.0, INF), judgement(1.0, 2.0), judgement(INF, 1.0), judgement(1.0, -INF)]
    found = entries(given, element=None, family=None)
    assert [entry.slack for entry in found] == [-INF, -INF, 1.0, INF]
    lines = [line.strip().split("  ")[0] for line in ledger_lines(found, width=110)]
    assert lines[1:] == [
        "short of the limit:", "-no end", "-no end", "kept, by what is sure:", "+100 %", "no end",
    ]  # fmt: skip


def test_filters_and_judgements_without_a_number() -> None:
    bare = Judgement(
        rule="hysteresis/sense", subject="uv", kind=Kind.PASS, level=Level.ERROR, message="", at="comparators.uv"
    )
    given = [bare, judgement(1.0, 2.0), judgement(1.0, 2.0, subject="ov"), judgement(1.0, 2.0, rule="budget/current")]
    assert len(entries(given, element=None, family=None)) == 3
    assert [e.judgement.subject for e in entries(given, element="ov", family=None)] == ["ov"]
    assert [e.judgement.rule for e in entries(given, element=None, family="budget")] == ["budget/current"]
    assert entries(given, element="ov", family="budget") == []


def slacks(*values: float) -> list[Entry]:
    given = judgement(1.0, 2.0)
    assert given.measure is not None
    return [Entry(given, given.measure, slack) for slack in values]


def test_histogram_on_one_line() -> None:
    found = slacks(-0.2, 0.0, 0.005, 0.02, 0.1, 0.2, 0.2, 0.25, 5.0, INF)
    expected = "slack  <0 ▂1  <1% ▄2  <3% ▂1  <10% 0  <30% █4  <100% 0  more ▄2"
    assert histogram(found, unicode=True) == expected
    assert histogram(found, unicode=False) == "slack  <0 :1  <1% =2  <3% :1  <10% 0  <30% @4  <100% 0  more =2"


def test_lines_fit_and_say_need_have_and_margin() -> None:
    long = judgement(0.0380, 0.0376, rule="hysteresis/covers_the_disturbance_of_all", subject="uv_of_the_analog_rail")
    lines = list(ledger_lines(entries([judgement(1.6, 1.605), long], element=None, family=None), width=80))
    assert lines == [
        " slack   margin     have  need            of",
        "short of the limit:",
        "-1.1 %  -400 uV  37.6 mV  at least 38 mV  uv_of_the_analog_rail",
        "                                        hysteresis/covers_the_disturbance_of_all",
        "kept, by what is sure:",
        "+0.3 %    +5 mV  1.605 V  at least 1.6 V  uv trip_window/guarantee",
    ]


def test_what_is_waived_is_said() -> None:
    given = judgement(1.6, 1.5)
    waived = msgspec.structs.replace(given, waiver="agreed")
    _, line = ledger_lines(entries([waived], element=None, family=None), width=80)
    assert line.endswith("uv trip_window/guarantee (waived)")
    assert list(ledger_lines([], width=80)) == []


def test_what_is_open_stands_with_its_best_end_between_what_is_short_and_what_is_kept() -> None:
    def open_at(sure: float, best: float, subject: str) -> Judgement:
        given = judgement(1.0, 1.0 + best, subject=subject)
        assert given.measure is not None
        measure = msgspec.structs.replace(given.measure, sure=sure, best=best)
        return msgspec.structs.replace(given, kind=Kind.OPEN, measure=measure)

    under = msgspec.structs.replace(judgement(1.0, 0.98), kind=Kind.NOT_APPLICABLE, under="trip_window/nuisance")
    given = [judgement(1.0, 1.1), open_at(-INF, 0.3, "far"), open_at(-INF, 0.2, "near"), under]
    lines = [" ".join(line.split()) for line in ledger_lines(entries(given), width=110)]
    assert lines[1:] == [
        "short of the limit:",
        "-2.0 % -20 mV 980 mV at least 1 V uv trip_window/guarantee (under trip_window/nuisance)",
        "open, by what is known so far:",
        "+20.0 % +200 mV so far 1.2 V at least 1 V near trip_window/guarantee",
        "+30.0 % +300 mV so far 1.3 V at least 1 V far trip_window/guarantee",
        "kept, by what is sure:",
        "+10.0 % +100 mV 1.1 V at least 1 V uv trip_window/guarantee",
    ]
    assert histogram(entries(given), unicode=False) == ("slack  <0 @1  <1% 0  <3% 0  <10% 0  <30% @1  <100% 0  more 0")


def test_one_rule_alone() -> None:
    given = [judgement(1.0, 2.0), judgement(1.0, 2.0, rule="trip_window/nuisance")]
    assert [e.judgement.rule for e in entries(given, rule="trip_window/nuisance")] == ["trip_window/nuisance"]
