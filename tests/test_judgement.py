from __future__ import annotations

import math

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
