"""The life of a waiver: what it covers, and what is said about it when it is no longer right."""

from __future__ import annotations

import datetime
import math
from pathlib import Path

import msgspec
import pytest

from tidegate.lint.description.load import load
from tidegate.lint.description.model.description import Waiver
from tidegate.lint.description.place import DescriptionError, Place
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.lint.settings import Settings, load_settings
from tidegate.lint.waivers import PlacedWaiver, Surroundings, apply_waivers, margin_of
from tidegate.rules import bypass

DAY = datetime.date(2026, 6, 30)
ROOT = Path(__file__).resolve().parents[1]


def judgement(
    kind: Kind = Kind.FAIL, *, need: float = 0.038, have: float = 0.025, dimension: Dimension = Dimension.VOLTAGE
) -> Judgement:
    return Judgement(
        rule="hysteresis/covers_disturbance", subject="uv", kind=kind, level=Level.ERROR, message="too little",
        at="comparators.uv", measure=Measure(need, have, dimension, Relation.AT_LEAST),
    )  # fmt: skip


def placed(found: Judgement, number: int = 0, **changes: str | None) -> PlacedWaiver:
    words = {
        "rule": found.rule, "element": found.subject, "why": "clamped on the board", "agreed_by": "design review",
        "until": "2026-06-30", **changes,
    }  # fmt: skip
    return PlacedWaiver(Waiver(**words), f"waivers[{number}]", Place("chip.yaml", 7 + number, 5))  # type: ignore[arg-type]


def around(found: Judgement, *, today: datetime.date = DAY, **changes: object) -> Surroundings:
    words = {"rules": {found.rule}, "elements": {found.subject}, **changes}
    return Surroundings(today=today, **words)  # type: ignore[arg-type]


def waived(found: Judgement, *, today: datetime.date = DAY, **changes: str) -> tuple[Judgement, Judgement]:
    """The judgement, and what is said about the waiver on it."""
    (marked,), (on_waiver,) = apply_waivers(
        [found], [placed(found, **changes)], around(found, today=today), Level.WARNING
    )
    return marked, on_waiver


def test_a_waiver_covers_its_finding() -> None:
    marked, on_waiver = waived(judgement())
    assert marked.waiver == "clamped on the board (agreed by design review, until 2026-06-30)"
    assert marked.kind is Kind.FAIL
    assert (on_waiver.rule, on_waiver.kind) == ("waiver/still_right", Kind.PASS)
    assert on_waiver.subject == "hysteresis/covers_disturbance on uv"  # no index: it stays when others come and go
    assert on_waiver.message == "covers hysteresis/covers_disturbance on uv"
    assert (on_waiver.at, on_waiver.place) == ("waivers[0]", Place("chip.yaml", 7, 5))
    assert waived(judgement(Kind.REVIEW))[0].waiver != ""


def test_a_waiver_holds_until_its_last_day() -> None:
    assert waived(judgement(), today=DAY - datetime.timedelta(days=1))[0].waiver != ""
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
        ({"margin": "nan"}, "its margin nan is no voltage"),
        ({"margin": "--13 mV"}, "its margin --13 mV is no voltage"),
        ({"subsystem": "lamp"}, "meant for the subsystem lamp; this is one without a name"),
        (
            {"margin": "-12.9 mV"},
            "the margin of hysteresis/covers_disturbance on uv is -13 mV, worse than the -12.9 mV agreed",
        ),
    ],
    ids=lambda value: " ".join(f"{key} {text}" for key, text in value.items()) if isinstance(value, dict) else "",
)
def test_a_waiver_that_does_not_hold_covers_nothing(changes: dict[str, str], message: str) -> None:
    marked, on_waiver = waived(judgement(), **changes)
    assert marked.waiver == ""
    assert (on_waiver.kind, on_waiver.message) == (Kind.FAIL, message)


@pytest.mark.parametrize("margin", ["-13 mV", "-13.1 mV", "-1 V"])
def test_a_waiver_covers_the_margin_agreed_and_better_ones(margin: str) -> None:
    assert waived(judgement(), margin=margin)[1].kind is Kind.PASS


def test_a_margin_is_agreed_as_the_report_shows_it() -> None:
    # -2.77642 mV is shown as -2.776 mV, which is better by rounding alone.
    found = judgement(need=0.040, have=0.03722358)
    assert found.measure is not None
    assert found.measure.margin_text() == "-2.776 mV"
    assert waived(found, margin="-2.776 mV")[1].kind is Kind.PASS
    assert waived(found, margin="-2.775 mV")[1].kind is Kind.FAIL


def test_a_margin_of_temperatures_is_a_difference() -> None:
    found = judgement(need=398.15, have=393.15, dimension=Dimension.TEMPERATURE)
    assert found.measure is not None
    shown = found.measure.margin_text()
    assert waived(found, margin=shown)[1].kind is Kind.PASS
    assert waived(found, margin="-4")[1].message.endswith(f"is {shown}, worse than the -4 agreed")


def test_a_margin_that_was_agreed_covers_no_finding_without_a_number() -> None:
    marked, on_waiver = waived(msgspec.structs.replace(judgement(), measure=None), margin="-13 mV")
    assert marked.waiver == ""
    assert on_waiver.message == (
        "agreed at a margin of -13 mV, but hysteresis/covers_disturbance has no number on uv any more"
    )


@pytest.mark.parametrize("kind", [Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE])
def test_there_must_be_something_to_waive(kind: Kind) -> None:
    marked, on_waiver = waived(judgement(kind))
    assert marked.waiver == ""
    assert on_waiver.message == f"nothing is left to waive: hysteresis/covers_disturbance says {kind.value} on uv"
    assert on_waiver.mend == "remove the waiver"


def test_a_waiver_of_a_rule_that_does_not_judge_its_element() -> None:
    found = judgement()
    surroundings = around(found, rules={"coupling/bump"})
    _, (on_waiver,) = apply_waivers([found], [placed(found, rule="coupling/bump")], surroundings, Level.NOTE)
    assert on_waiver.message == "nothing is left to waive: coupling/bump does not judge it on uv"
    assert on_waiver.level is Level.NOTE


def test_a_waiver_of_a_rule_that_is_left_out_is_kept_for_later() -> None:
    found = judgement()
    surroundings = around(found, left_out={"coupling/bump"}, rules={"coupling/bump"})
    _, (on_waiver,) = apply_waivers([found], [placed(found, rule="coupling/bump")], surroundings, Level.WARNING)
    assert (on_waiver.kind, on_waiver.message) == (Kind.NOT_APPLICABLE, "the settings leave coupling/bump out")


def test_of_two_waivers_on_a_finding_the_first_that_holds_covers_it() -> None:
    found = judgement()
    ended = placed(found, 0, until="2026-06-01")
    renewed, spare = placed(found, 1, why="agreed again"), placed(found, 2)
    (marked,), said = apply_waivers([found], [ended, renewed, spare], around(found), Level.WARNING)
    assert marked.waiver.startswith("agreed again")
    assert [(each.subject, each.kind) for each in said] == [
        ("hysteresis/covers_disturbance on uv", Kind.FAIL),
        ("hysteresis/covers_disturbance on uv (2)", Kind.PASS),
        ("hysteresis/covers_disturbance on uv (3)", Kind.FAIL),
    ]
    assert said[2].message == (
        "nothing is left to waive: another waiver covers hysteresis/covers_disturbance on uv already"
    )


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("13 mV", Dimension.VOLTAGE, 0.013),
        ("+13 mV", Dimension.VOLTAGE, 0.013),
        ("-13 mV", Dimension.VOLTAGE, -0.013),
        ("+-13 mV", Dimension.VOLTAGE, None),
        ("-0.25", Dimension.COUNT, -0.25),
        ("-0.25", Dimension.VOLTAGE, None),
        ("13 mV", Dimension.CURRENT, None),
        ("nonsense", Dimension.COUNT, None),
        ("nan", Dimension.COUNT, None),
        ("-inf", Dimension.COUNT, None),
    ],
)
def test_margins_in_words(text: str, dimension: Dimension, value: float | None) -> None:
    assert margin_of(text, dimension) == value


# Waivers in descriptions, and in files for several

CHIP = """
subsystem: NAME
rails: {avdd: {nominal: 1.8 V}}
domains: {aon: {rail: avdd, kind: always_on}}
comparators: {uv: {role: under_voltage, watches: avdd, domain: aon}}
bypasses: {skip: {overrides: uv, default: inactive, readable: false}}
"""
READABLE = "{rule: bypass/readable, element: skip, why: seen at the pin, agreed_by: board, until: '2026-12-31'}"


def judged(tmp_path: Path, text: str, settings: Settings | None = None) -> Review:
    (tmp_path / "chip.yaml").write_text(text, "utf-8")
    loaded = load(tmp_path / "chip.yaml", shown="chip.yaml")
    return review(loaded, Catalogue([bypass.RULES]), today=DAY, settings=settings)


def said_of_waivers(found: Review) -> list[tuple[str, str, str]]:
    own = [judgement for judgement in found.judgements if judgement.rule == "waiver/still_right"]
    return [(judgement.kind.value, judgement.message, str(found.place(judgement))) for judgement in own]


@pytest.mark.parametrize(
    "entry",
    [READABLE, "{until: '2026-12-31', agreed_by: board, why: seen at the pin, element: skip, rule: bypass/readable}"],
    ids=["rule first", "rule last"],
)
def test_a_waiver_in_a_description_covers_a_finding_whatever_the_order_of_its_keys(tmp_path: Path, entry: str) -> None:
    found = judged(tmp_path, f"{CHIP}waivers:\n  - {entry}\n")
    assert said_of_waivers(found) == [("pass", "covers bypass/readable on skip", "chip.yaml:8:5")]
    finding = next(each for each in found.judgements if (each.rule, each.subject) == ("bypass/readable", "skip"))
    assert (finding.kind, finding.waiver) == (Kind.FAIL, "seen at the pin (agreed by board, until 2026-12-31)")
    assert finding not in list(found.findings(Level.NOTE, ()))


def test_an_element_that_is_gone_is_a_finding_and_no_fault_of_the_file(tmp_path: Path) -> None:
    found = judged(tmp_path, f"{CHIP}waivers:\n  - {READABLE.replace('skip', 'skip_old')}\n")
    assert said_of_waivers(found) == [("fail", "no element is called skip_old", "chip.yaml:8:5")]


def shared(tmp_path: Path, *entries: str) -> Settings:
    (tmp_path / "agreed").mkdir()
    lines = "".join(f"  - {entry}\n" for entry in entries)
    (tmp_path / "agreed" / "waivers.yaml").write_text(f"waivers:\n{lines}", "utf-8")
    (tmp_path / "tidegate.settings.yaml").write_text("waivers: [agreed/waivers.yaml]\n", "utf-8")
    return load_settings(tmp_path / "tidegate.settings.yaml", shown="chips/tidegate.settings.yaml")


def test_a_waiver_file_is_shared_by_descriptions(tmp_path: Path) -> None:
    def meant(subsystem: str, element: str = "skip") -> str:
        return READABLE.replace("{", f"{{subsystem: {subsystem}, ").replace("skip", element)

    settings = shared(
        tmp_path,
        READABLE.replace("skip", "elsewhere"),  # no such element here: left to the description that has it
        meant("tide gauge", "gone"),  # meant for this one, where the element is gone
        meant("another", "gone"),  # meant for another
        READABLE,
    )
    found = judged(tmp_path, CHIP.replace("NAME", "tide gauge"), settings)
    place = str(Path("chips/agreed/waivers.yaml"))
    assert said_of_waivers(found) == [
        ("fail", "no element is called gone", f"{place}:3:5"),
        ("pass", "covers bypass/readable on skip", f"{place}:5:5"),
    ]


def test_a_waiver_in_a_description_for_another_subsystem_is_a_finding(tmp_path: Path) -> None:
    entry = READABLE.replace("{", "{subsystem: tide gauge, ")
    found = judged(tmp_path, f"{CHIP.replace('NAME', 'lamp')}waivers: [{entry}]\n")
    assert [said[1] for said in said_of_waivers(found)] == ["meant for the subsystem tide gauge; this is lamp"]
    finding = next(each for each in found.judgements if each.rule == "bypass/readable")
    assert finding.waiver == ""


def test_waivers_in_the_description_come_before_those_of_the_settings(tmp_path: Path) -> None:
    found = judged(tmp_path, f"{CHIP}waivers: [{READABLE}]\n", shared(tmp_path, READABLE))
    assert [kind for kind, *_ in said_of_waivers(found)] == ["pass", "fail"]


@pytest.mark.parametrize(
    ("text", "fault"),
    [
        ("waivers: [{rule: a/b}]\n", "agreed/waivers.yaml:1:11: waivers[0]: no agreed_by; "),
        (
            "rails: {}\nwaivers: []\n",
            "agreed/waivers.yaml:1:1: rails: a file of waivers holds nothing else; keep the section waivers only",
        ),
    ],
)
def test_a_waiver_file_is_checked(tmp_path: Path, text: str, fault: str) -> None:
    shared(tmp_path)
    (tmp_path / "agreed" / "waivers.yaml").write_text(text, "utf-8")
    with pytest.raises(DescriptionError) as refused:
        load_settings(tmp_path / "tidegate.settings.yaml", shown="tidegate.settings.yaml")
    assert any(fault in str(each).replace("\\", "/") for each in refused.value.faults), refused.value.faults


def with_ends(sure: float, best: float) -> Judgement:
    """A failure of -13 mV as it is told, with both ends of its margin."""
    found = judgement()
    assert found.measure is not None
    measure = msgspec.structs.replace(found.measure, sure=sure, best=best)
    return msgspec.structs.replace(found, measure=measure, missing=("rails.avdd.ripple.peak_to_peak",))


def test_a_waiver_is_met_by_the_sure_end_and_never_by_the_best() -> None:
    unsure = with_ends(-math.inf, -0.013)
    marked, on_waiver = waived(unsure, margin="-13 mV")
    assert marked.waiver == ""
    assert on_waiver.message == "the margin of hysteresis/covers_disturbance on uv can be worse than the -13 mV agreed"
    assert on_waiver.mend == "give rails.avdd.ripple.peak_to_peak, or agree on it again without a margin"
    assert waived(unsure)[0].waiver != ""  # agreed on without a margin
    bounded = with_ends(-0.020, -0.013)
    assert waived(bounded, margin="-19 mV")[0].waiver == ""
    assert waived(bounded, margin="-20 mV")[0].waiver != ""


def test_what_is_worse_than_agreed_for_sure_is_told_with_its_margin() -> None:
    _, on_waiver = waived(with_ends(-math.inf, -0.013), margin="-12 mV")
    assert on_waiver.message == (
        "the margin of hysteresis/covers_disturbance on uv is -13 mV or worse, worse than the -12 mV agreed"
    )
