from __future__ import annotations

import datetime
from collections.abc import Mapping

import pytest

from tidegate.lint.description.model.description import Waiver
from tidegate.lint.description.place import Place
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.lint.waivers import PlacedWaiver, apply_waivers, margin_of

DAY = datetime.date(2026, 6, 30)


def judgement(kind: Kind = Kind.FAIL, *, need: float = 0.038, have: float = 0.025) -> Judgement:
    measure = Measure(need, have, Dimension.VOLTAGE, Relation.AT_LEAST)
    return Judgement(
        rule="hysteresis/covers_disturbance", subject="uv", kind=kind, level=Level.ERROR, message="too little",
        at="comparators.uv", measure=measure,
    )  # fmt: skip


def waived(
    found: Judgement, changes: Mapping[str, str] | None = None, *, today: datetime.date = DAY
) -> tuple[Judgement, Judgement]:
    """The judgement, and what is said about the waiver on it."""
    words = {
        "rule": found.rule, "element": found.subject, "why": "clamped on the board", "agreed_by": "design review",
        "until": "2026-06-30", **(changes or {}),
    }  # fmt: skip
    placed = PlacedWaiver(Waiver(**words), "waivers[0]", Place("chip.yaml", 7, 5))
    marked, on_waiver = apply_waivers(
        [found], [placed], today=today, rules={found.rule}, elements={found.subject}, level=Level.WARNING
    )
    return marked, on_waiver


def test_a_waiver_covers_its_finding() -> None:
    marked, on_waiver = waived(judgement())
    assert marked.waiver == "clamped on the board (agreed by design review, until 2026-06-30)"
    assert marked.kind is Kind.FAIL
    assert (on_waiver.rule, on_waiver.subject, on_waiver.kind) == ("waiver/still_right", "waivers[0]", Kind.PASS)
    assert on_waiver.message == "covers hysteresis/covers_disturbance on uv"
    assert on_waiver.place == Place("chip.yaml", 7, 5)
    assert waived(judgement(Kind.REVIEW))[0].waiver != ""


def test_a_waiver_holds_until_its_last_day() -> None:
    assert waived(judgement(), today=DAY)[0].waiver != ""
    marked, on_waiver = waived(judgement(), today=DAY + datetime.timedelta(days=1))
    assert marked.waiver == ""
    assert (on_waiver.kind, on_waiver.level) == (Kind.FAIL, Level.WARNING)
    assert on_waiver.message == "the waiver of hysteresis/covers_disturbance on uv ended on 2026-06-30"
    assert on_waiver.mend == "mend the finding, or agree on it again"


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"rule": "hysteresis/covers"}, "no rule is called hysteresis/covers"),
        ({"element": "uvv"}, "no element is called uvv"),
        ({"until": "2026-02-30"}, "2026-02-30 is no day of the calendar"),
        ({"until": "someday"}, "someday is no day of the calendar"),
        ({"margin": "-13 ohm"}, "its margin -13 ohm is no voltage"),
        (
            {"margin": "-12.9 mV"},
            "the margin of hysteresis/covers_disturbance on uv is -13 mV, worse than the -12.9 mV agreed",
        ),
    ],
)
def test_a_waiver_that_does_not_hold_covers_nothing(changes: dict[str, str], message: str) -> None:
    marked, on_waiver = waived(judgement(), changes)
    assert marked.waiver == ""
    assert (on_waiver.kind, on_waiver.message) == (Kind.FAIL, message)


@pytest.mark.parametrize("margin", ["-13 mV", "-13.1 mV", "-1 V"])
def test_a_waiver_covers_the_margin_agreed_and_better_ones(margin: str) -> None:
    assert waived(judgement(), {"margin": margin})[1].kind is Kind.PASS


def test_a_margin_is_agreed_as_the_report_shows_it() -> None:
    # -2.77642 mV is shown as -2.776 mV, which is better by rounding alone.
    found = judgement(need=0.040, have=0.03722358)
    assert found.measure is not None
    assert found.measure.margin_text() == "-2.776 mV"
    assert waived(found, {"margin": "-2.776 mV"})[1].kind is Kind.PASS
    assert waived(found, {"margin": "-2.775 mV"})[1].kind is Kind.FAIL


@pytest.mark.parametrize("kind", [Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE])
def test_there_must_be_something_to_waive(kind: Kind) -> None:
    marked, on_waiver = waived(judgement(kind))
    assert marked.waiver == ""
    assert on_waiver.message == f"nothing is left to waive: hysteresis/covers_disturbance says {kind.value} on uv"
    assert on_waiver.mend == "remove the waiver"


def test_a_waiver_of_a_rule_that_does_not_judge_its_element() -> None:
    placed = PlacedWaiver(
        Waiver(rule="coupling/bump", element="uv", why="?", agreed_by="?", until="2026-06-30"), "w", Place("chip.yaml")
    )
    *_, on_waiver = apply_waivers(
        [judgement()], [placed], today=DAY, rules={"coupling/bump"}, elements={"uv"}, level=Level.NOTE
    )
    assert on_waiver.message == "nothing is left to waive: coupling/bump does not judge it on uv"
    assert on_waiver.level is Level.NOTE


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("13 mV", Dimension.VOLTAGE, 0.013),
        ("+13 mV", Dimension.VOLTAGE, 0.013),
        ("-13 mV", Dimension.VOLTAGE, -0.013),
        ("-0.25", Dimension.COUNT, -0.25),
        ("-0.25", Dimension.VOLTAGE, None),
        ("13 mV", Dimension.CURRENT, None),
        ("nonsense", Dimension.COUNT, None),
    ],
)
def test_margins_in_words(text: str, dimension: Dimension, value: float | None) -> None:
    assert margin_of(text, dimension) == value
