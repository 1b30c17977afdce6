"""What a rule on timelines says at both corners: what is named, what is certain, what is not known to hold."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tests.rules.sound import case_of, without
from tidegate.lint.case import Case
from tidegate.lint.corners import judged
from tidegate.lint.facts.reading import Corner, Reading
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.quantity import Dimension
from tidegate.lint.timing import judging
from tidegate.lint.timing.judging import judged_in_time
from tidegate.lint.timing.timeline import Gaps, Timelines, timelines

NONE = Gaps((), (), ())
INFINITE = float("inf")


def said(gaps: Gaps, have: Callable[[Timelines], float], patch: str = "") -> Judgement:
    """A rule that needs 1 V and has what is told of the timelines, as the engine reads it."""
    base = case_of(patch, "uv")

    def ask(reading: Reading) -> Judgement:
        case = Case(
            subject=base.subject, rule="", level=base.level, description=base.description, graph=base.graph,
            reading=reading,
        )  # fmt: skip

        def judge(lines: Timelines) -> Judgement:
            return case.at_least(need=1.0, have=have(lines), dimension=Dimension.VOLTAGE, says="it has")

        return judged_in_time(case, gaps, judge)

    return judged(ask, base.open)


def corner(lines: Timelines) -> str:
    """Which timelines were asked."""
    wide = timelines(lines.description, lines.graph)
    return "sure" if lines is wide else "best" if lines is wide.at_best else "spread"


def by_corner(sure_v: float, best_v: float, spread_v: float | None = None) -> Callable[[Timelines], float]:
    values = {"sure": sure_v, "best": best_v, "spread": best_v if spread_v is None else spread_v}
    return lambda lines: values[corner(lines)]


def test_where_nothing_is_missing_it_is_asked_once() -> None:
    found = said(NONE, by_corner(1.5, 9.0))
    assert (found.kind, found.missing) == (Kind.PASS, ())
    assert found.measure is not None
    assert found.measure.sure_margin == found.measure.best_margin == 0.5


@pytest.mark.parametrize(
    ("sure_v", "best_v", "kind"), [(1.5, 2.0, Kind.PASS), (0.5, 2.0, Kind.OPEN), (0.5, 0.9, Kind.FAIL)]
)
def test_facts_that_are_missing_are_taken_at_both_corners(sure_v: float, best_v: float, kind: Kind) -> None:
    found = said(Gaps(("comparators.uv.delay",), (), ()), by_corner(sure_v, best_v))
    assert (found.kind, found.missing) == (kind, ("comparators.uv.delay",))
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((sure_v - 1.0, best_v - 1.0))


@pytest.mark.parametrize(
    ("sure_v", "best_v", "kind"), [(1.5, 2.0, Kind.OPEN), (0.5, 2.0, Kind.OPEN), (0.5, 0.9, Kind.FAIL)]
)
def test_what_cannot_be_tried_is_not_known_to_hold_and_saves_nothing(sure_v: float, best_v: float, kind: Kind) -> None:
    found = said(Gaps((), (), ("rails.avdd.residual",)), by_corner(sure_v, best_v))
    assert (found.kind, found.missing) == (kind, ("rails.avdd.residual",))
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == (-INFINITE, pytest.approx(best_v - 1.0))


LONE = ("references.ref_fast.works_from.min", "biases.bias_start.settling.min")


@pytest.mark.parametrize(("sure_v", "best_v", "kind"), [(1.5, 2.0, Kind.PASS), (0.5, 0.9, Kind.FAIL)])
def test_least_ends_alone_are_no_question_where_all_is_certain(sure_v: float, best_v: float, kind: Kind) -> None:
    found = said(Gaps((), LONE, ()), by_corner(sure_v, best_v))
    assert (found.kind, "whatever" in found.message) == (kind, False)
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((sure_v - 1.0, best_v - 1.0))


def test_least_ends_are_named_where_it_is_open_for_want_of_them() -> None:
    def have(lines: Timelines) -> float:
        if corner(lines) != "spread":
            return {"sure": 0.5, "best": 2.0}[corner(lines)]
        ref, sure = lines.read.every["ref_fast"], timelines(lines.description, lines.graph).read.every["ref_fast"]
        return 1.9 if ref == sure else 2.0  # the reference makes a difference, the bias none

    found = said(Gaps((), LONE, ()), have)
    assert (found.kind, found.missing) == (Kind.OPEN, LONE[:1])


@pytest.mark.parametrize("limit", ["_MOST_TRIED", "_MOST_PARTS"])
def test_of_many_elements_none_is_tried_by_itself(limit: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(judging, limit, 1)
    found = said(Gaps((), LONE, ()), by_corner(0.5, 2.0, 1.5))
    assert (found.kind, found.missing) == (Kind.OPEN, LONE)


@pytest.mark.parametrize(("spread_v", "named"), [(1.5, False), (0.5, True)])
def test_beside_other_facts_least_ends_are_named_where_they_alone_would_fail_it(spread_v: float, named: bool) -> None:
    found = said(Gaps(("comparators.uv.delay",), LONE, ()), by_corner(-2.0, 2.0, spread_v))
    assert found.kind is Kind.OPEN
    assert ("comparators.uv.delay" in found.missing, LONE[0] in found.missing) == (True, named)


def test_a_certain_failure_names_no_least_ends() -> None:
    found = said(Gaps(("comparators.uv.delay",), LONE, ()), by_corner(-2.0, 0.5, -1.0))
    assert (found.kind, found.missing) == (Kind.FAIL, ("comparators.uv.delay",))


def test_the_reading_says_which_timelines_are_asked() -> None:
    case = case_of(without("comparators.uv.delay"), "uv")
    asked: list[str] = []

    def judge(lines: Timelines) -> Judgement:
        asked.append(corner(lines))
        return case.passes("asked")

    judged_in_time(case, Gaps(("x",), (), ()), judge)
    case.asked.reading = Reading(Corner.BEST)
    judged_in_time(case, Gaps(("x",), (), ()), judge)
    assert asked == ["sure", "best"]
