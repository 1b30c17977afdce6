"""The detectors of one rail among each other."""

from __future__ import annotations

import math

import pytest
from uncertainties import ufloat

from tests.rules.sound import both, judged, without
from tidegate.lint.judgement import Judgement, Kind, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.rules.trip_order import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE

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
    assert answer.why == (
        "por 1.1 V to 1.5 V, uv 1.55 V to 1.7 V, ov 1.9 V to 2 V; "
        "apart: por to uv rising 100 mV and falling 150 mV, por to ov 400 mV, uv to ov 200 mV"
    )


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


def test_ranges_that_share_a_reference_fail_worst_against_worst_and_may_hold() -> None:
    """uv and ov take their level from ref_fast: at the extremes 1.69 V meets 1.7 V; both low or both high, 40 mV."""
    patch = levels("ov", rising="{min: 1.73 V, max: 1.78 V}", falling="{min: 1.69 V, max: 1.74 V}")
    answer = said(patch)
    assert (answer.kind, answer.message) == (
        FAIL, "falling level of ov above uv, worst against worst: 1.69 V, at least 1.7 V needed",
    )  # fmt: skip
    assert answer.measure is not None
    assert (answer.measure.sure_margin, answer.measure.best_margin) == pytest.approx((-0.01, 0.04), abs=1e-12)
    apart = said(patch, "comparators: {ov: {reference: ref_main}}")
    assert (apart.kind, apart.measure) == (FAIL, Measure(1.7, 1.69, Dimension.VOLTAGE, Relation.AT_LEAST))


NOMINAL = """
comparators:
  por: {trip: {rising: {min: 1.2 V, max: 1.4 V}, falling: {min: 1.1 V, max: 1.3 V}}}
  uv: {trip: {rising: 1.8 V, falling: 1.7 V}, divider: {ratio: 0.4}}
  ov: {trip: {rising: 2 V, falling: 1.9 V}, divider: {ratio: 0.4}}
"""
# Of either: 0.1 % of its divider, and three times 0.4 mV behind a divider of 0.4; of the reference both have 5 %.
OWN_V = (1.8 + 1.9) * 0.001 + 2 * 3 * 0.0004 / 0.4
SHARES = "comparators: {uv: {errors: {reference: {share: 5 %}}}, ov: {errors: {reference: {share: 5 %}}}}"


def test_what_moves_both_parts_them_by_the_difference_of_its_sizes() -> None:
    """5 % of 1.8 V and of 1.9 V come from one reference: 5 % of the 0.1 V between them, not of their sum."""
    answer = said(NOMINAL, SHARES)
    assert answer.kind is PASS
    assert answer.measure is not None and answer.measure.is_exact
    assert answer.measure.margin == pytest.approx(0.1 - 0.05 * 0.1 - OWN_V, abs=1e-12)
    assert answer.message.startswith("falling level of ov above uv, as ref_fast moves both: 1.9 V, at least ")
    by_name = {line.name: line.value for line in answer.account}
    assert by_name["ref_fast, which moves both"] == pytest.approx(0.005, abs=1e-12)
    assert math.fsum(line.value for line in answer.account[:1]) == 1.9


def test_detectors_of_two_references_are_parted_by_the_errors_of_both() -> None:
    answer = said(NOMINAL, SHARES, "comparators: {ov: {reference: ref_main}}")
    assert answer.kind is FAIL
    assert answer.measure is not None
    assert answer.measure.margin == pytest.approx(0.1 - 0.05 * (1.8 + 1.9) - OWN_V, abs=1e-12)
    assert answer.message.startswith("falling level of ov above uv, worst against worst: ")


def test_as_root_sum_square_the_difference_is_one_of_the_squares() -> None:
    """A bound counts as three standard deviations at coverage 3; the library uncertainties for what is common."""
    common = ufloat(0, 0.05 / 3)
    up = 1.9 * (1 + common) + ufloat(0, 0.0019 / 3) + ufloat(0, 0.001)
    down = 1.8 * (1 + common) + ufloat(0, 0.0018 / 3) + ufloat(0, 0.001)
    answer = said(NOMINAL, SHARES, "conditions: {combine: root_sum_square}")
    assert answer.measure is not None
    assert answer.measure.margin == pytest.approx(0.1 - 3 * (up - down).std_dev, abs=1e-12)


def test_several_errors_of_one_reference_are_one_error() -> None:
    """5 % as 3 % and 2 % with one detector, as 5 % with the other: of the same reference."""
    parts = """
    comparators: {uv: {errors: {reference: {share: 3 %}, drift: {of: reference, share: 2 %, is: bound, at: rail}}}}
    """
    one, two = said(NOMINAL, SHARES).measure, said(NOMINAL, both(SHARES, parts)).measure
    assert one is not None and two is not None
    assert two.margin == pytest.approx(one.margin, abs=1e-12)


@pytest.mark.parametrize(
    ("facts", "best_v"),
    [
        # Which reference, or what an error is of, is not said: then it may move both, and part them by nothing.
        (("comparators.ov.reference",), 0.1 - OWN_V),
        (("comparators.ov.errors.reference.of",), 0.1 - OWN_V),
        (("comparators.ov.errors.reference.share",), 0.1 - OWN_V),
        # An error that is not described may be there.
        (("comparators.ov.errors.offset",), 0.1 - 0.005 - OWN_V + 3 * 0.0004 / 0.4),
    ],
)
def test_what_is_not_said_of_two_levels_leaves_their_distance_open(facts: tuple[str, ...], best_v: float) -> None:
    answer = said(both(NOMINAL, SHARES), without(*facts))
    assert answer.kind is OPEN
    assert answer.measure is not None
    assert answer.measure.best_margin == pytest.approx(best_v, abs=1e-9)
    known = said(NOMINAL, SHARES).measure
    assert known is not None
    assert answer.measure.sure_margin <= known.margin <= answer.measure.best_margin + 1e-9
    assert all(fact.startswith("comparators.ov.") for fact in answer.missing)


def test_one_pair_of_which_nothing_is_known_does_not_hide_another() -> None:
    """At which code por ships is not said; uv and ov overlap whatever it is."""
    codes = "comparators: {por: {trip: null, codes: {a: {rising: 1.2 V, falling: 1.1 V}, b: {rising: 1.3 V}}}}"
    wide = levels("uv", rising="{min: 1.6 V, max: 1.95 V}", falling="{min: 1.55 V, max: 1.65 V}")
    answer = said(both(wide, codes))
    assert (answer.kind, answer.mend) == (FAIL, "ov and uv 50 mV further apart")
    assert "por to uv rising not known and falling not known" in answer.why
    assert said(codes).kind is OPEN
    assert said(codes).missing == ("comparators.por.ships_with",)


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
    assert answer.why == "por 1.1 V to 1.5 V, ov 1.9 V to 2 V; apart: por to ov 400 mV"
    answer = said("comparators: {ov: {watches: vcore}}")
    assert answer.why.startswith("por 1.1 V to 1.5 V, uv 1.55 V to 1.7 V; apart: por to uv ")


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
