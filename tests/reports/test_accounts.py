"""The account of a number: its lines add up to what is compared, and what is not known is told so."""

from __future__ import annotations

import json
import math
import re
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from tests.commands.calling import tidegate
from tests.reports.board import BOARD, said
from tidegate.lint.account import Line
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.accounts import line_text, sides, sign, source

ROOT = Path(__file__).resolve().parents[2]
FILES = ("examples/sound.yaml", "examples/faulty.yaml", "examples/starter.yaml")
V = Dimension.VOLTAGE


@cache
def report(file: str) -> list[dict[str, Any]]:
    judgements: list[dict[str, Any]] = json.loads(tidegate("review", "--as", "json", file).stdout)["files"][0][
        "judgements"
    ]
    return judgements


@pytest.mark.parametrize("file", FILES)
def test_the_lines_of_a_side_add_up_to_it(file: str) -> None:
    """By plain addition: the terms of what there is are what is held against the sum of those of what is needed."""
    sums = 0
    for judgement in report(file):
        for side in ("have", "need"):
            lines = [line for line in judgement["account"] if line["side"] == side]
            values = [line["value"] for line in lines]
            if not values or None in values or judgement[side]["value"] is None:
                continue
            sums += 1
            size = max(abs(value) for value in values)
            where = (judgement["rule"], judgement["subject"], side)
            assert math.isclose(math.fsum(values), judgement[side]["value"], rel_tol=1e-9, abs_tol=1e-10 * size), where
    assert sums > (0 if "starter" in file else 60)


@pytest.mark.parametrize("file", FILES)
def test_what_the_report_says_of_a_margin_holds_together(file: str) -> None:
    for judgement in report(file):
        margin, kind = judgement["margin"], judgement["kind"]
        assert (judgement["must_keep"] is not None) == (kind == "open")
        assert (judgement["under"] is not None) <= (kind == "notApplicable")
        if margin is None:
            assert judgement["account"] == []
            continue
        sure = -math.inf if margin["sure"] is None else margin["sure"]
        best = math.inf if margin["best"] is None else margin["best"]
        assert sure <= best
        assert margin["exact"] == (sure == best)
        if kind == "open" and judgement["missing"]:
            assert not margin["exact"]
        for line in judgement["account"]:
            assert bool(line["waits"]) or line["sure"] == line["best"] == line["value"]
            assert set(line["waits"]) <= set(judgement["missing"])


def test_numbers_carry_no_dust() -> None:
    """A number is told to twelve digits; what rounding leaves behind them, or where terms cancel, is not there."""
    texts = [tidegate("review", "--as", "json", file).stdout for file in FILES]
    numbers = re.findall(r'"(?:value|sure|best)": (-?[0-9.e+-]+)', "".join(texts))
    assert len(numbers) > 1000
    for number in numbers:
        assert len(re.sub(r"e.*|[-.]", "", number).strip("0")) <= 12, number
        assert number == "0.0" or abs(float(number)) > 1e-24, number


def test_a_term_is_told_as_far_as_it_is_known() -> None:
    def line(value: float, sure: float | None = None, best: float | None = None, *waits: str) -> Line:
        return Line("a term", value, "a.fact", waits, sure, best)

    assert line_text(line(-0.0065), V) == "6.5 mV"
    assert line_text(line(-0.0, -math.inf, -0.0, "x.y"), V) == "not known"
    assert line_text(line(0.04, math.inf, 0.04, "x.y"), V) == "40 mV or more"
    assert line_text(line(0.04, 0.05, 0.04, "x.y"), V) == "40 mV to 50 mV"
    assert line_text(line(0.04, None, None, "x.y"), V) == "not known"
    assert [sign(each) for each in (line(0.0), line(-0.0), line(1.0), line(-1.0))] == ["+", "-", "+", "-"]
    assert (source(line(1.0)), source(line(1.0, None, None, "x.y", "x.z"))) == ("a.fact", "x.y, x.z")


def test_the_sides_are_what_is_compared() -> None:
    have, need = sides(said("trip_window/nuisance"))
    assert [line.name for line in have.lines] == ["falling level", "accuracy"]
    assert [line.name for line in need.lines] == ["vdd delivered, least", "half the ripple", "load step at release"]
    assert (have.text, need.text, need.word) == ("3.126 V", "3.135 V", "at most allowed")


ACCOUNT = """\
board supervisor
NOT KEPT: 1 number of JUDGEMENTS

sup, trip_window/nuisance, open: the detector stays quiet in service
    falling level            3.08 V  comparators.sup.trip.falling
  + accuracy                46.2 mV  comparators.sup.errors.accuracy
  = there is                3.126 V
    vdd delivered, least    3.135 V  rails.vdd.delivered
  - half the ripple       not known  rails.vdd.ripple.peak_to_peak
  - load step at release  not known
      rails.vdd.load_step, rails.vdd.source_impedance
  = at most allowed         3.135 V
  margin +8.8 mV so far
  half the ripple and load step at release together at most 8.8 mV; ripple alone
  up to 17.6 mV peak to peak
  vdd is delivered down to 3.135 V, less half the ripple (not given) and load
  step at release (not given)
"""


def test_an_account_as_it_is_shown(tmp_path: Path) -> None:
    (tmp_path / "board.yaml").write_text(BOARD, "utf-8")
    arguments = ("margins", "--account", "--rule", "trip_window/nuisance", "board.yaml")
    done = tidegate(*arguments, cwd=tmp_path, columns=80)
    assert re.sub(r"of \d+ judgements, \d+ open", "of JUDGEMENTS", done.stdout) == ACCOUNT
    narrow = tidegate(*arguments, cwd=tmp_path, columns=40).stdout.splitlines()
    assert [line for line in narrow if len(line) > 40 and " " in line.strip()] == []
    assert done.returncode == 0
