"""The detectors of one rail among each other."""

from __future__ import annotations

import pytest

from tests.rules.sound import both, judged
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.trip_order import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW

BENCH = """
comparators:
  por: {trip: {rising: {min: 1.2 V, max: 1.5 V}, falling: {min: 1.1 V, max: 1.4 V}}}
  uv: {trip: {rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.55 V, max: 1.65 V}}}
  ov: {trip: {rising: {min: 1.95 V, max: 2 V}, falling: {min: 1.9 V, max: 1.95 V}}}
"""


def said(*patches: str, rail: str = "avdd") -> Judgement:
    return judged(both(BENCH, *patches), RULES)["trip_window/order", rail]


def levels(of: str, *, rising: str, falling: str) -> str:
    return f"comparators: {{{of}: {{trip: {{rising: {rising}, falling: {falling}}}}}}}"


def test_power_on_lets_go_before_under_voltage_decides() -> None:
    """1.6 V is the lowest level of uv on the way up, 1.5 V the highest of por; down: 1.55 V and 1.4 V."""
    answer = said()
    assert answer.kind is PASS
    assert answer.message == "rising level of uv above por, worst against worst: 1.6 V, at least 1.5 V needed"
    assert answer.why == "por 1.1 V to 1.5 V, uv 1.55 V to 1.7 V, ov 1.9 V to 2 V"


@pytest.mark.parametrize(
    ("highest", "kind"), [("1.5999 V", PASS), ("1.6 V", PASS), ("1.6001 V", FAIL)], ids=["inside", "limit", "beyond"]
)
def test_limit_belongs_to_the_good_side(highest: str, kind: Kind) -> None:
    patch = levels("por", rising=f"{{min: 1.2 V, max: {highest}}}", falling="{min: 1.1 V, max: 1.4 V}")
    assert said(patch).kind is kind


def test_under_voltage_asserts_first_on_the_way_down() -> None:
    answer = said(levels("por", rising="{min: 1.2 V, max: 1.5 V}", falling="{min: 1.1 V, max: 1.57 V}"))
    assert answer.kind is FAIL
    assert answer.message == "falling level of uv above por, worst against worst: 1.55 V, at least 1.57 V needed"
    assert answer.mend == "uv and por 20 mV further apart"


def test_over_voltage_stands_above_under_voltage() -> None:
    answer = said(
        levels("ov", rising="{min: 1.72 V, max: 1.77 V}", falling="{min: 1.68 V, max: 1.73 V}"),
        "comparators: {ov: {reference: ref_main}}",
    )
    assert answer.message == "falling level of ov above uv, worst against worst: 1.68 V, at least 1.7 V needed"


def test_extremes_that_share_a_reference_are_asked_and_not_called_overlapping() -> None:
    """uv and ov take their level from ref_fast: at the extremes 1.69 V meets 1.7 V, nominally 1.715 V and 1.65 V."""
    patch = levels("ov", rising="{min: 1.73 V, max: 1.78 V}", falling="{min: 1.69 V, max: 1.74 V}")
    answer = said(patch)
    assert (answer.kind, answer.message) == (REVIEW, "uv and ov overlap by 10 mV at the extremes, and not nominally")
    assert answer.why.startswith("both take their level from ref_fast, whose error moves both; ")
    assert answer.measure is not None and answer.measure.margin == pytest.approx(-0.01, abs=1e-12)
    assert said(patch, "comparators: {ov: {reference: ref_main}}").kind is FAIL


def test_nominal_levels_out_of_order_fail_whatever_they_share() -> None:
    patch = levels("ov", rising="{min: 1.6 V, max: 1.65 V}", falling="{min: 1.58 V, max: 1.63 V}")
    assert said(patch).kind is FAIL


def test_levels_that_share_a_reference_and_meet_at_the_extremes_are_in_order() -> None:
    answer = said(levels("ov", rising="{min: 1.73 V, max: 1.78 V}", falling="{min: 1.7 V, max: 1.75 V}"))
    assert (answer.kind, answer.message) == (
        PASS, "falling level of ov above uv, worst against worst: 1.7 V, at least 1.7 V needed",
    )  # fmt: skip


def test_levels_that_are_alike_nominally_are_in_no_order() -> None:
    """1.625 V in the middle of both, in numbers that a float holds exactly."""
    wide = "{min: 1.5 V, max: 1.75 V}"
    answer = said(
        levels("uv", rising=wide, falling="{min: 1.5 V, max: 1.625 V}"), levels("ov", rising=wide, falling=wide)
    )
    assert (answer.kind, answer.mend) == (FAIL, "ov and uv 250 mV further apart")


def test_levels_without_a_reference_share_none() -> None:
    """1.62 V of por, made by a crossover, against 1.6 V of uv, of which no reference is given."""
    high = levels("por", rising="{min: 1.2 V, max: 1.62 V}", falling="{min: 1.1 V, max: 1.4 V}")
    answer = said(high, "comparators: {uv: {reference: null}}")
    assert (answer.kind, answer.mend) == (FAIL, "uv and por 20 mV further apart")


def test_one_sort_of_two_is_enough_below_an_over_voltage_detector() -> None:
    """Without an under-voltage detector the power-on detector stands below ov; ov alone has nobody below it."""
    answer = said("comparators: {uv: {watches: vcore}}")
    assert answer.message == "falling level of ov above por, worst against worst: 1.9 V, at least 1.5 V needed"
    assert answer.why == "por 1.1 V to 1.5 V, ov 1.9 V to 2 V"
    answer = said("comparators: {ov: {watches: vcore}}")
    assert answer.why == "por 1.1 V to 1.5 V, uv 1.55 V to 1.7 V"


def test_rising_and_falling_of_one_detector_may_overlap() -> None:
    """The trap: 1.6 V to 1.7 V rising and 1.55 V to 1.65 V falling overlap, and are tracked."""
    assert said().kind is PASS


def test_a_rail_with_one_sort_of_detector_has_no_order() -> None:
    answer = said(rail="vcore")
    assert (answer.kind, answer.message) == (NONE, "fewer than two sorts of detector watch it")


def test_every_level_that_is_missing_is_named() -> None:
    answer = said("comparators: {por: {trip: null}, uv: {trip: {falling: null, rising: null}}}")
    assert answer.kind is OPEN
    assert set(answer.missing) == {
        "comparators.por.trip.falling", "comparators.por.trip.rising",
        "comparators.uv.trip.falling", "comparators.uv.trip.rising",
    }  # fmt: skip
