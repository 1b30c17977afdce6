"""The report at a terminal: what fails comes first, what to find out next, what is known of what is open."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.commands.calling import ROOT, tidegate
from tests.reports.board import BOARD, TODAY, reviewed, said
from tests.rules.sound import SOUND, patched
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Kind
from tidegate.lint.reports.detector_margins import THREE, detector_margins, table_lines
from tidegate.lint.reports.gravity import TITLES, Gravity, has_number
from tidegate.lint.reports.order import explained_by
from tidegate.lint.reports.questions import MOST_QUESTIONS, questions
from tidegate.rules.catalogue import FAMILIES

FAULTY = ROOT / "examples" / "faulty.yaml"


@pytest.fixture(scope="module")
def board(tmp_path_factory: pytest.TempPathFactory) -> Path:
    file = tmp_path_factory.mktemp("board") / "board.yaml"
    file.write_text(BOARD, "utf-8")
    return file


def shown(file: Path, *options: str, columns: int = 80) -> str:
    return tidegate("review", *options, file.name, cwd=file.parent, columns=columns).stdout


def flat(text: str) -> str:
    return " ".join(text.split())


def test_failures_come_first_and_the_gravest_of_them_first(board: Path) -> None:
    text = shown(board)
    order = [
        TITLES[Gravity.DANGER], "trip_window/release,", "what to find out next", "and of the rest", "detectors",
        "open, with the margin so far", "\njudged ",
    ]  # fmt: skip
    at = [text.index(words) for words in order]
    assert at == sorted(at)
    classes = [shown(FAULTY).index(f"\n{title}\n") for title in TITLES.values()]
    assert classes == sorted(classes)
    failures = [one for one in reviewed().judgements if one.kind is Kind.FAIL]
    told = re.findall(r"^  (?:fail|warning|note) ", text, re.MULTILINE)
    assert len(told) == len(failures)


def test_an_open_number_looks_like_the_answer_it_is(board: Path) -> None:
    assert (
        "open sup: falling level at its highest 3.126 V, at most 3.135 V needed: +8.8 mV so far, before half the "
        "ripple and load step at release: together at most 8.8 mV; ripple alone up to 17.6 mV peak to peak "
        "trip_window/nuisance, "
    ) in flat(shown(board))


def test_a_failure_that_more_facts_can_only_add_to_says_so(board: Path) -> None:
    text = flat(shown(board))
    assert "at least 31.2 mV short, whatever ripple of vdd and hysteresis of sup may be" in text
    assert "margin -31.2 mV or worse, trip_window/release" in text


def test_five_questions_are_asked_and_the_rest_is_folded(board: Path) -> None:
    text = shown(board)
    asked = re.findall(r"^  (\d)  ", text, re.MULTILINE)
    assert asked == [str(number) for number in range(1, MOST_QUESTIONS + 1)]
    assert len(questions(reviewed())) > MOST_QUESTIONS
    sections = text.partition("  and of the rest\n")[2].partition("\n\n")[0].splitlines()
    assert all(re.fullmatch(r"  [a-z ]+: .*; \d+ judgements? waits?", line) for line in sections)
    assert "ripple alone at most 17.6 mV peak to peak, for trip_window/nuisance of sup" in flat(text)


def test_what_nothing_is_known_of_is_counted_and_listed_on_request(board: Path) -> None:
    waiting = [one for one in reviewed().judgements if one.kind is Kind.OPEN]
    nothing = [one for one in waiting if not has_number(one)]
    assert f"  {len(nothing)} more of which no number is known yet (--every lists them)" in shown(board)
    every = shown(board, "--every")
    assert f"  {len(nothing)} more of which no number is known yet (listed below)" in every
    told = re.findall(r"^  (?:open|pass|n/a|fail|warning|review) ", every, re.MULTILINE)
    assert len(told) == len(reviewed().judgements)


def test_the_three_margins_of_each_detector_stand_together(board: Path) -> None:
    lines = shown(board).splitlines()
    at = lines.index("detectors          protects     stays quiet         comes back")
    assert lines[at + 1] == "sup        +333.8 mV so far  +8.8 mV so far  -31.2 mV or worse"
    (row,) = detector_margins(reviewed())
    assert row.judgements == tuple(said(rule) for _, rule in THREE)
    assert table_lines([row], width=40) == [
        "sup", "  protects     +333.8 mV so far", "  stays quiet  +8.8 mV so far", "  comes back   -31.2 mV or worse",
    ]  # fmt: skip
    assert table_lines([], width=80) == []


def test_what_a_failure_explains_stands_with_it() -> None:
    text = flat(shown(FAULTY))
    assert "also explains trip_window/release (-48.06 mV) of ov" in text
    assert re.search(r"; \d+ more explained by these failures", text)


def test_every_judgement_under_another_is_told_under_one_failure() -> None:
    levels = "comparators: {uv: {trip: {rising: 1.752 V, falling: 1.702 V}}}"
    found = review(patched(levels), Catalogue(FAMILIES), today=TODAY)
    under = [one for one in found.judgements if one.under]
    assert under
    explained = explained_by(found.judgements)
    assert sorted(one.rule for group in explained.values() for one in group) == sorted(one.rule for one in under)
    by_id = {id(one): one for one in found.judgements}
    for key, group in explained.items():
        assert by_id[key].kind is Kind.FAIL
        assert {one.under for one in group} == {by_id[key].rule}


@pytest.mark.parametrize("columns", [40, 60, 80, 110])
@pytest.mark.parametrize("options", [(), ("--every",)])
def test_no_line_is_wider_than_the_terminal(board: Path, columns: int, options: tuple[str, ...]) -> None:
    lines = shown(board, *options, columns=columns).splitlines()
    table = re.compile(r"judged .*|[a-z ]+( +(\d+|\.)){5}")
    assert [x for x in lines if len(x) > columns and " " in x.strip() and not table.fullmatch(x)] == []


def test_no_report_prints_a_number_that_is_none(board: Path, tmp_path: Path) -> None:
    """What has no end because it is not known is said not to be known; nothing is shown to more digits than it has."""
    for file in (board, FAULTY, SOUND, ROOT / "examples" / "starter.yaml"):
        endings = ("txt", "md", "html", "json", "sarif")
        saves = [word for ending in endings for word in ("--save", str(tmp_path / f"r.{ending}"))]
        tidegate("review", "--every", *saves, str(file))
        text = (tmp_path / "r.txt").read_text("utf-8")
        text = re.sub(r"\S*\.yaml\S*", "", text)
        for words in ("unlimited", "without end", " inf ", "nan ", "-0 "):
            assert words not in text, (file, words)
        digits = [number.lstrip("0.").replace(".", "") for number in re.findall(r"\d+\.\d+", text)]
        assert max(map(len, digits), default=0) <= 7
        for ending in endings[1:]:
            assert "unlimited" not in (tmp_path / f"r.{ending}").read_text("utf-8")
