"""The picture of an account: steps as long as their terms, one after the other, and the margin between both results."""

from __future__ import annotations

import math
import re

import pytest

from tests.reports.board import reviewed, said
from tidegate.lint.account import Line
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.drawing.templates import environment
from tidegate.lint.reports.drawing.waterfall import WaterfallDrawing, draw_waterfall

AT_LEAST = Relation.AT_LEAST


def judgement(have: list[Line], need: list[Line], relation: Relation = AT_LEAST, kind: Kind = Kind.PASS) -> Judgement:
    sums = [math.fsum(line.value for line in lines) for lines in (need, have)]
    return Judgement(
        rule="a/b", subject="uv", kind=kind, level=Level.ERROR, message="", at="x", limits=len(need),
        account=(*have, *need), measure=Measure(*sums, Dimension.VOLTAGE, relation),
    )  # fmt: skip


def drawn(one: Judgement) -> WaterfallDrawing:
    found = draw_waterfall(one)
    assert found is not None
    return found


LEVEL = [Line("level", 1.627, "a.b"), Line("reference", -0.0065), Line("offset", -0.0033)]
NEED = [Line("adc works from", 1.6), Line("while it answers", 0.007)]


def test_steps_are_to_scale_and_follow_each_other() -> None:
    found = drawn(judgement(LEVEL, NEED))
    level, reference, offset, there_is, works, answers, needed = found.rows
    assert [row.kind for row in found.rows] == ["first", "less", "less", "result", "first", "more", "result"]
    bars = [row.bar for row in found.rows]
    assert all(bars)
    a_volt = (reference.bar.width / 0.0065) if reference.bar else 0.0
    assert offset.bar is not None and answers.bar is not None and level.bar is not None and there_is.bar is not None
    assert offset.bar.width == pytest.approx(0.0033 * a_volt, abs=0.05)
    assert answers.bar.width == pytest.approx(0.007 * a_volt, abs=0.05)
    assert reference.bar is not None and works.bar is not None and needed.bar is not None
    assert reference.bar.x + reference.bar.width == pytest.approx(level.bar.x + level.bar.width, abs=0.05)
    assert offset.bar.x + offset.bar.width == pytest.approx(reference.bar.x, abs=0.05)
    assert answers.bar.x == pytest.approx(works.bar.x + works.bar.width, abs=0.05)
    assert there_is.bar.x + there_is.bar.width == pytest.approx(offset.bar.x, abs=0.05) == found.have
    assert found.gap == (found.need, found.have)
    assert found.have is not None and found.need is not None
    assert found.have - found.need == pytest.approx((1.6172 - 1.607) * a_volt, abs=0.05)
    assert (found.lost, found.margin) == (False, "+10.2 mV")


def test_what_is_not_known_leads_to_where_it_harms() -> None:
    """A longer answer asks for a higher level; a greater error takes the level down; the mirror image for at most."""
    unknown = Line("while it answers", 0.0, "", ("x.delay",), math.inf, 0.0)
    error = Line("reference", -0.0, "", ("x.error",), -math.inf, -0.0)
    found = drawn(judgement([LEVEL[0], error], [NEED[0], unknown], kind=Kind.OPEN))
    rows = {row.name: row for row in found.rows}
    wait, lost = rows["+ while it answers"].unknown, rows["- reference"].unknown
    assert wait is not None and lost is not None
    assert wait.x + wait.width == found.right
    assert lost.x == found.left
    upside_down = drawn(judgement([LEVEL[0], error], [NEED[0], unknown], Relation.AT_MOST, Kind.OPEN))
    rows = {row.name: row for row in upside_down.rows}
    wait, lost = rows["+ while it answers"].unknown, rows["- reference"].unknown
    assert wait is not None and lost is not None
    assert wait.x == upside_down.left
    assert lost.x + lost.width == upside_down.right
    assert {row.size for row in found.rows if row.unknown} == {"not known"}


def test_a_term_between_two_values_leads_from_one_to_the_other() -> None:
    hysteresis = Line("hysteresis", 0.04, "", ("x.h",), 0.06, 0.04)
    found = drawn(judgement([Line("level", 3.0), hysteresis], [Line("most", 3.2)], Relation.AT_MOST, Kind.OPEN))
    _, row, *_ = found.rows
    assert row.bar is not None and row.unknown is not None
    assert row.unknown.width == pytest.approx(row.bar.width / 2, abs=0.05)
    assert row.unknown.x == pytest.approx(row.bar.x + row.bar.width, abs=0.05)


def test_a_number_without_terms_has_no_picture() -> None:
    assert draw_waterfall(judgement([], [])) is None
    assert draw_waterfall(said("coverage/used", "vdd")) is None


def test_terms_without_end_are_not_drawn() -> None:
    found = drawn(judgement([Line("level", 1.0), Line("rest", -math.inf)], [Line("need", 0.9)]))
    assert [row.bar is None for row in found.rows] == [False, True, True, False, False]
    assert (found.have, found.gap) == (None, None)


def test_every_account_can_be_drawn_and_stays_in_its_picture() -> None:
    made = environment().get_template("waterfall.svg.j2").make_module().waterfall  # type: ignore[attr-defined]
    count = 0
    for one in reviewed().judgements:
        found = draw_waterfall(one)
        if found is None:
            continue
        count += 1
        svg = str(made(found))
        assert svg.count("<svg") == svg.count("</svg>") == 1
        for x, width in re.findall(r'<rect [^>]*x="([0-9.-]+)"[^>]*width="([0-9.-]+)"', svg):
            assert found.left - 2.0 <= float(x) <= float(x) + float(width) <= found.right + 2.0
        assert "nan" not in svg and "inf" not in svg
    assert count > 3
