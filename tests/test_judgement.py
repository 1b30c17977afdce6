from __future__ import annotations

import math

import msgspec
import pytest

from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation, least_margin
from tidegate.lint.quantity import Dimension, QuantityError

LEAST, MOST = Relation.AT_LEAST, Relation.AT_MOST
V = Dimension.VOLTAGE


@pytest.mark.parametrize(
    ("need", "have", "relation", "margin", "holds"),
    [
        (0.038, 0.025, LEAST, -0.013, False),
        (0.038, 0.050, LEAST, 0.012, True),
        (0.038, 0.025, MOST, 0.013, True),
        (0.038, 0.050, MOST, -0.012, False),
        (1.0, 1.0, LEAST, 0.0, True),
        (1.0, 1.0, MOST, 0.0, True),
        (0.3, 0.1 + 0.2, MOST, 0.0, True),  # 0.30000000000000004: what rounding leaves of a tie
        (1.0, 1.0 + 1e-8, MOST, -1e-8, False),
        (0.0, 1e-15, MOST, -1e-15, False),
        (0.0, 0.0, LEAST, 0.0, True),
        (-1.0, -2.0, LEAST, -1.0, False),
        (1.0, math.inf, LEAST, math.inf, True),
        (1.0, math.inf, MOST, -math.inf, False),
        (1.0, -math.inf, LEAST, -math.inf, False),
        (math.inf, 1.0, MOST, math.inf, True),
    ],
)
def test_measure(need: float, have: float, relation: Relation, margin: float, holds: bool) -> None:
    measure = Measure(need, have, V, relation)
    assert measure.margin == pytest.approx(margin, rel=1e-7, abs=1e-30)
    assert measure.holds is holds


def test_what_is_no_number_never_holds() -> None:
    assert not Measure(math.nan, 1.0, V, LEAST).holds
    assert not Measure(1.0, math.nan, V, MOST).holds


def test_measure_in_words() -> None:
    measure = Measure(0.038, 0.025, V, LEAST)
    assert measure.text() == "25 mV, at least 38 mV needed"
    assert measure.margin_text() == "-13 mV"
    assert Measure(0.038, 0.025, V, MOST).text() == "25 mV, at most 38 mV needed"
    assert Measure(0.038, 0.025, V, MOST).margin_text() == "+13 mV"
    assert Measure(1.0, 1.0, V, MOST).margin_text() == "+0 V"
    # Two numbers that differ are never shown alike.
    assert Measure(1.62, 1.619999, V, LEAST).text() == "1.619999 V, at least 1.62 V needed"
    # A difference of temperatures has no zero of its own: 398.15 K less 378.15 K are not -253 degC.
    assert Measure(378.15, 398.15, Dimension.TEMPERATURE, LEAST).text() == "125 degC, at least 105 degC needed"
    assert Measure(378.15, 398.15, Dimension.TEMPERATURE, LEAST).margin_text() == "+20"


def test_slack_compares_margins_of_all_kinds() -> None:
    assert Measure(0.040, 0.050, V, LEAST).slack == pytest.approx(0.25)
    assert Measure(2e-6, 3e-6, Dimension.DURATION, MOST).slack == pytest.approx(-0.5)
    assert Measure(0.0, 0.050, V, LEAST).slack == 1.0
    assert Measure(0.0, 0.0, V, LEAST).slack == 0.0


def passing(need: float, have: float) -> Judgement:
    return Judgement(
        rule="family/rule", subject="uv", kind=Kind.PASS, level=Level.ERROR, message="hysteresis 50 mV",
        at="comparators.uv", measure=Measure(need, have, V, LEAST),
    )  # fmt: skip


@pytest.mark.parametrize(
    ("asked", "kind"), [("10 mV", Kind.PASS), ("11 mV", Kind.FAIL), ("25 %", Kind.PASS), ("26 %", Kind.FAIL)]
)
def test_a_least_margin_that_settings_ask_for(asked: str, kind: Kind) -> None:
    assert least_margin(passing(0.040, 0.050), asked).kind is kind


def test_a_least_margin_says_what_is_short() -> None:
    found = least_margin(passing(0.040, 0.050), "12 mV")
    assert found.message == ("hysteresis 50 mV; the margin of +10 mV is less than the 12 mV that the settings ask for")
    assert found.mend == "another 2 mV of margin"
    with pytest.raises(QuantityError):
        least_margin(passing(0.040, 0.050), "12 ohm")


def test_the_words_are_those_of_sarif() -> None:
    # OASIS SARIF 2.1.0, sections 3.27.9 (kind) and 3.27.10 (level).
    assert {kind.value for kind in Kind} == {"pass", "fail", "open", "review", "notApplicable"}
    assert {level.value for level in Level} == {"error", "warning", "note"}


def test_a_tie_but_for_rounding_is_told_as_one() -> None:
    measure = Measure(0.06, 0.1 - 0.04, Dimension.VOLTAGE, Relation.AT_MOST)
    assert measure.have != measure.need
    assert measure.text() == "60 mV, at most 60 mV needed"


def between(sure: float, best: float, *, have: float = 0.050, kind: Kind = Kind.PASS) -> Judgement:
    """A judgement of a number that is needed to be at least 40 mV, with both ends of its margin."""
    measure = Measure(0.040, have, V, LEAST, sure=sure, best=best)
    missing = ("rails.avdd.ripple.peak_to_peak",)
    return msgspec.structs.replace(passing(0.040, have), measure=measure, missing=missing, kind=kind)


@pytest.mark.parametrize(
    ("sure", "best", "kind", "asked", "expected"),
    [
        (0.010, 0.020, Kind.PASS, "10 mV", Kind.PASS),  # the sure end reaches it
        (0.010, 0.020, Kind.PASS, "11 mV", Kind.OPEN),  # the best end does
        (0.010, math.inf, Kind.PASS, "11 mV", Kind.OPEN),
        (0.010, 0.020, Kind.PASS, "21 mV", Kind.FAIL),  # neither does
        (-math.inf, 0.020, Kind.OPEN, "20 mV", Kind.OPEN),
        (-math.inf, 0.020, Kind.OPEN, "21 mV", Kind.FAIL),  # whatever the missing facts are
        (-math.inf, math.inf, Kind.OPEN, "1 V", Kind.OPEN),
    ],
)
def test_a_least_margin_is_judged_by_both_ends(
    sure: float, best: float, kind: Kind, asked: str, expected: Kind
) -> None:
    found = least_margin(between(sure, best, kind=kind), asked)
    assert found.kind is expected
    if kind is Kind.PASS and expected is Kind.OPEN:
        assert found.message.startswith("hysteresis 50 mV; the settings ask for 11 mV of margin: +10 mV for sure, ")
        assert found.mend == "give rails.avdd.ripple.peak_to_peak"
    if expected is Kind.FAIL:
        assert found.message.endswith(f"the margin of +20 mV is less than the {asked} that the settings ask for")
        assert found.mend == "another 1 mV of margin"


def test_where_nothing_is_missing_the_sure_end_decides_the_least_margin() -> None:
    """How extremes go together may not be said although every fact is given: worst case is judged all the same."""
    loose = msgspec.structs.replace(between(0.010, 0.020), missing=())
    assert least_margin(loose, "11 mV").kind is Kind.FAIL


INF = math.inf


@pytest.mark.parametrize(
    ("kind", "have", "sure", "best", "words"),
    [
        (Kind.PASS, 0.050, None, None, "+10 mV"),
        (Kind.PASS, 0.050, 0.010, 0.020, "+10 mV or more"),
        (Kind.PASS, 0.050, 0.010, INF, "+10 mV or more"),
        (Kind.FAIL, 0.030, None, None, "-10 mV"),
        (Kind.FAIL, 0.030, -INF, -0.010, "-10 mV or worse"),
        (Kind.FAIL, 0.030, -0.010, 0.020, "-10 mV"),  # worst case, of which it is not said that it is met
        (Kind.OPEN, 0.050, -INF, 0.010, "+10 mV so far"),
        (Kind.OPEN, 0.050, -0.005, 0.010, "-5 mV to +10 mV"),
        (Kind.OPEN, 0.050, -0.005, INF, "-5 mV or more"),
        (Kind.OPEN, 0.050, -INF, INF, "not known"),
        (Kind.NOT_APPLICABLE, 0.030, None, None, "-10 mV"),
    ],
)
def test_a_margin_is_told_as_far_as_it_is_known(
    kind: Kind, have: float, sure: float | None, best: float | None, words: str
) -> None:
    measure = Measure(0.040, have, V, LEAST, sure=sure, best=best)
    assert measure.margin_words(kind) == words
    assert measure.is_known is (words != "not known")


def test_no_size_is_told_that_is_none() -> None:
    """What has no end is not shown as a number, and a limit below 0 of a size is no fact."""
    assert Measure(0.040, INF, V, LEAST).text() == "without end, at least 40 mV needed"
    assert Measure(0.040, INF, V, MOST, sure=-INF, best=0.01).text() == "not known, at most 40 mV needed"
    assert Measure(INF, 0.040, V, MOST).text() == "40 mV, no limit known"
    assert Measure(-INF, 0.040, V, MOST).text() == "40 mV, no limit that would do"
    assert Measure(-0.012, 0.092, V, MOST).text() == "92 mV, no room for any: 12 mV too little without it"
    assert Measure(-0.012, 0.092, V, LEAST).text() == "92 mV, none needed"
    # Slopes over temperature have a sign.
    slope = Measure(-0.002, -0.001, Dimension.TEMPERATURE_SLOPE, MOST)
    assert slope.text() == "-1 mV/K, at most -2 mV/K needed"
