from __future__ import annotations

import math
from collections.abc import Callable
from typing import Literal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from uncertainties import ufloat

from tests.derived.corners import Known, known
from tests.rules.sound import both, case_of, without
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_causes import between_levels, norm_v
from tidegate.lint.derived.levels.trip_levels import falling_window, has_no_hysteresis, hysteresis_window, rising_window
from tidegate.lint.description.model.detector import Comparator

# Levels of 2 V and 1.9 V: a bound of 0.5 % of the level, a bound of 1 mV at the rail, and an offset of 0.4 mV, one
# standard deviation, behind a divider of 0.4, that is 1 mV at the rail.
BENCH = """
conditions: {combine: worst_case, coverage: 3}
comparators:
  uv:
    trip: {rising: 2 V, falling: 1.9 V}
    tracked: true
    hysteresis: {amount: null}
    divider: {ratio: 0.4}
    errors:
      reference: {of: reference, share: 0.5 %, is: bound, at: null}
      divider: {of: divider, share: null, amount: 1 mV, is: bound, at: rail}
      offset: {of: offset, amount: 0.4 mV, is: sigma, at: input}
"""
RISING_E_V, FALLING_E_V = 0.010 + 0.001 + 3 * 0.001, 0.0095 + 0.001 + 3 * 0.001


def asked(*patches: str) -> tuple[Case, Comparator]:
    case = case_of(both(BENCH, *patches), "uv")
    assert isinstance(case.subject, Comparator)
    return case, case.subject


Level = Literal["rising", "falling", "hysteresis"]
_WINDOWS = {"rising": rising_window, "falling": falling_window, "hysteresis": hysteresis_window}


def least(level: Level) -> Callable[[Case, Comparator], float]:
    return lambda case, comparator: _WINDOWS[level](case, comparator).least_v


def most(level: Level) -> Callable[[Case, Comparator], float]:
    return lambda case, comparator: _WINDOWS[level](case, comparator).most_v


def lowest(level: Level, *patches: str) -> Known:
    """What is known of the least value of a level."""
    return known(both(BENCH, *patches), "uv", least(level))


def highest(level: Level, *patches: str) -> Known:
    """What is known of the greatest value of a level."""
    return known(both(BENCH, *patches), "uv", most(level))


def ends(level: Level, *patches: str) -> tuple[float, float]:
    """Both ends of a level, which are exactly known."""
    low, high = lowest(level, *patches), highest(level, *patches)
    assert low.waits == high.waits == ()
    assert (low.sure, high.sure) == (low.best, high.best)
    return low.sure, high.sure


def close(*values_v: float) -> object:
    return pytest.approx(values_v, rel=1e-12)


def waits(*patches: str, level: Level = "hysteresis") -> set[str]:
    """What both ends of a level wait for, below the detector."""
    both_ends = {*lowest(level, *patches).waits, *highest(level, *patches).waits}
    return {fact.removeprefix("comparators.uv.") for fact in both_ends}


def test_nominal_levels_carry_the_sum_of_their_errors() -> None:
    assert ends("rising") == close(2.0 - RISING_E_V, 2.0 + RISING_E_V)
    assert ends("falling") == close(1.9 - FALLING_E_V, 1.9 + FALLING_E_V)


def test_root_sum_square_agrees_with_uncertainties() -> None:
    # The library uncertainties: bounds as three standard deviations, at coverage 3.
    squares = "conditions: {combine: root_sum_square}"
    level = 2.0 + ufloat(0, 0.010 / 3) + ufloat(0, 0.001 / 3) + ufloat(0, 0.001)
    error_v = 3 * level.std_dev
    assert ends("rising", squares) == close(2.0 - error_v, 2.0 + error_v)


NONE_SAID = without(*(f"comparators.uv.errors.{name}.tracks" for name in ("reference", "divider", "offset")))
APART = "comparators: {uv: {tracked: null}}"
"""Each error tracks, and the detector does not say that nothing else moves the levels apart."""


def test_tracked_errors_shrink_the_hysteresis_with_the_level() -> None:
    # 0.5 % of 2 V and of 1.9 V are 0.5 mV apart; what does not scale moves both alike.
    assert ends("hysteresis") == close(0.1 - 0.0005, 0.1 + 0.0005)
    # Where the errors track alone, the hysteresis has a tolerance of its own, but the levels keep their errors.
    low, high = lowest("hysteresis", APART), highest("hysteresis", APART)
    assert (low.sure, low.best) == close(0.1 - RISING_E_V - FALLING_E_V, 0.1 - 0.0005)
    assert (high.best, high.sure) == close(0.1 + 0.0005, 0.1 + RISING_E_V + FALLING_E_V)
    assert low.waits == high.waits == ("comparators.uv.hysteresis.amount",)


def test_a_tracked_share_is_a_share_of_the_hysteresis() -> None:
    # 1.30 V and 1.20 V with 3 % that move both: 1.261 V and 1.164 V, 97 mV apart, or 1.339 V and 1.236 V, 103 mV.
    drifting = """
    comparators:
      uv: {trip: {rising: 1.30 V, falling: 1.20 V},
           errors: {reference: null, divider: null, offset: {of: total, share: 3 %, amount: null, is: bound}}}
    """
    assert ends("hysteresis", drifting) == close(1.261 - 1.164, 1.339 - 1.236)
    case, uv = asked(drifting)
    (cause,) = between_levels(case, uv, rising_v=1.3, falling_v=1.2)
    assert cause.size_v == pytest.approx(0.003, rel=1e-12)
    up, down = between_levels(case, uv, rising_v=1.3, falling_v=1.2, together=False)
    assert (up.size_v, down.size_v) == close(0.039, 0.036)


@settings(max_examples=60, deadline=None)
@given(
    rising_v=st.floats(1.0, 3.0), apart_v=st.floats(0.0, 0.3), share=st.floats(-0.005, 0.005),
    divider_v=st.floats(-0.001, 0.001), sigmas=st.floats(-3.0, 3.0),
)  # fmt: skip
def test_no_draw_of_what_tracks_moves_the_levels_further_apart(
    rising_v: float, apart_v: float, share: float, divider_v: float, sigmas: float
) -> None:
    # Each level is its nominal times one plus the share, plus what does not scale: by definition of the errors.
    case, uv = asked()
    moved_v = norm_v(case, between_levels(case, uv, rising_v=rising_v, falling_v=rising_v - apart_v))
    up_v, down_v = (level_v * (1 + share) + divider_v + sigmas * 0.001 for level_v in (rising_v, rising_v - apart_v))
    assert abs((up_v - down_v) - apart_v) <= moved_v * (1 + 1e-9) + 1e-12


def test_untracked_errors_add_in_the_hysteresis() -> None:
    # Where one does not track, that one counts on both levels.
    apart = "comparators: {uv: {errors: {reference: {tracks: false}}}}"
    assert lowest("hysteresis", apart).best == pytest.approx(0.1 - 0.010 - 0.0095, rel=1e-12)
    none_track = both(NONE_SAID, "comparators: {uv: {tracked: false}}")
    reach_v = RISING_E_V + FALLING_E_V
    assert ends("hysteresis", none_track) == close(0.1 - reach_v, 0.1 + reach_v)
    # Not said: from nothing that tracks to all of it.
    unsaid = lowest("hysteresis", NONE_SAID, APART)
    assert {f"comparators.uv.errors.{name}.tracks" for name in ("reference", "divider", "offset")} <= set(unsaid.waits)


def test_errors_that_are_not_described_are_not_nothing() -> None:
    bare = without("comparators.uv.errors.divider")
    low = lowest("falling", bare)
    assert (low.sure, low.best) == (-math.inf, pytest.approx(1.9 - 0.0095 - 0.003, rel=1e-12))
    assert low.waits == ("comparators.uv.errors",)
    gap = lowest("hysteresis", bare)  # levels that track do not cross, whatever else moves them
    assert (gap.sure, gap.best) == (0.0, pytest.approx(0.0995, rel=1e-12))
    assert set(gap.waits) == {"comparators.uv.errors", "comparators.uv.hysteresis.amount"}
    assert lowest("hysteresis", NONE_SAID, bare, "comparators: {uv: {tracked: false}}").sure == -math.inf


def test_untracked_root_sum_square_agrees_with_uncertainties() -> None:
    apart = both(NONE_SAID, "{conditions: {combine: root_sum_square}, comparators: {uv: {tracked: false}}}")

    def level(nominal_v: float) -> object:
        return nominal_v * (1 + ufloat(0, 0.005 / 3)) + ufloat(0, 0.001 / 3) + ufloat(0, 0.001)

    error_v = 3 * (level(2.0) - level(1.9)).std_dev  # type: ignore[operator]
    assert ends("hysteresis", apart) == close(0.1 - error_v, 0.1 + error_v)


def test_tracked_root_sum_square_is_one_vector_of_causes() -> None:
    # The library uncertainties, with the same causes in both levels: only what scales is left of their difference.
    squares = "conditions: {combine: root_sum_square}"
    reference, divider, offset = ufloat(0, 0.005 / 3), ufloat(0, 0.001 / 3), ufloat(0, 0.001)
    up, down = (level_v * (1 + reference) + divider + offset for level_v in (2.0, 1.9))
    assert lowest("hysteresis", squares).best == pytest.approx(0.1 - 3 * (up - down).std_dev, rel=1e-9)


def test_an_error_with_a_share_and_an_amount_has_both() -> None:
    more = "comparators: {uv: {errors: {reference: {amount: 2 mV, at: rail}}}}"
    assert ends("rising", more) == close(2.0 - RISING_E_V - 0.002, 2.0 + RISING_E_V + 0.002)


RANGES = """
comparators: {uv: {errors: null, trip: {rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.54 V, max: 1.66 V}}}}
"""


def test_ranges_stand_as_they_are() -> None:
    assert ends("rising", RANGES) == (1.6, 1.7)
    assert ends("falling", RANGES) == (1.54, 1.66)
    assert ends("hysteresis", RANGES) == close(0.04, 0.06)  # low with low, and high with high
    untracked = "comparators: {uv: {tracked: false}}"
    assert ends("hysteresis", RANGES, untracked) == close(-0.06, 0.16)
    low = lowest("hysteresis", RANGES, APART)  # as if it were said that they move together; else -60 mV
    assert (low.sure, low.best) == close(-0.06, 0.04)
    assert set(low.waits) == {"comparators.uv.hysteresis.amount", "comparators.uv.tracked"}


def test_a_stated_amount_is_taken_as_it_stands() -> None:
    amount = "comparators: {uv: {tracked: null, hysteresis: {amount: {min: 80 mV, max: 110 mV}}}}"
    assert ends("hysteresis", amount) == (0.08, 0.11)
    assert ends("hysteresis", RANGES, amount) == (0.08, 0.11)


def test_ranges_of_which_an_end_is_not_known() -> None:
    """No end less another one that has none either: each stands at its own worst and best."""
    half = "comparators: {uv: {errors: null, trip: {rising: {max: 1.7 V}, falling: {min: 1.54 V, max: 1.66 V}}}}"
    low, high = lowest("hysteresis", half), highest("hysteresis", half)
    assert (low.sure, low.best) == close(0.0, 0.04)
    assert (high.sure, high.best) == close(0.16, 0.04)
    bare = "comparators: {uv: {errors: null, trip: {rising: {max: 1.7 V}, falling: {max: 1.66 V}}}}"
    assert lowest("hysteresis", bare)[:2] == close(0.0, 0.04)


def test_no_hysteresis_makes_the_levels_one() -> None:
    none = "comparators: {uv: {hysteresis: none, trip: {rising: null}}}"
    assert ends("hysteresis", none) == (0.0, 0.0)
    assert ends("rising", none) == ends("falling", none) == close(1.9 - FALLING_E_V, 1.9 + FALLING_E_V)


AMOUNT = "comparators: {uv: {hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}"


@pytest.mark.parametrize(
    ("trip", "rising", "falling"),
    [
        ("falling: {min: 1.6 V, max: 1.62 V}, rising: null", (1.646, 1.674), (1.6, 1.62)),
        ("rising: {min: 1.65 V, max: 1.67 V}, falling: null", (1.65, 1.67), (1.596, 1.624)),
        # Stated at one end: that end stays, the other is reached through the hysteresis.
        ("falling: {min: 1.6 V, max: 1.62 V}, rising: {max: 1.66 V}", (1.646, 1.66), (1.6, 1.62)),
        ("falling: {min: 1.61 V}, rising: {min: 1.65 V, max: 1.67 V}", (1.65, 1.67), (1.61, 1.624)),
    ],
)
def test_what_is_not_stated_is_the_other_level_and_the_hysteresis(
    trip: str, rising: tuple[float, float], falling: tuple[float, float]
) -> None:
    patches = AMOUNT, f"comparators: {{uv: {{errors: null, trip: {{{trip}}}}}}}"
    assert ends("rising", *patches) == close(*rising)
    assert ends("falling", *patches) == close(*falling)


def test_a_nominal_level_carries_its_errors_over() -> None:
    assert ends("rising", AMOUNT, "comparators: {uv: {trip: {rising: null}}}") == close(
        1.9 - FALLING_E_V + 0.046, 1.9 + FALLING_E_V + 0.054
    )


@pytest.mark.parametrize(
    ("patch", "level", "facts"),
    [
        (without("comparators.uv.trip"), "rising", {"trip.rising"}),
        (without("comparators.uv.trip"), "falling", {"trip.falling"}),
        (without("comparators.uv.trip"), "hysteresis", {"hysteresis.amount"}),
        # One level and no amount: neither gives the other.
        (without("comparators.uv.trip.falling"), "falling", {"trip.falling"}),
        (without("comparators.uv.trip.falling"), "hysteresis", {"hysteresis.amount"}),
        (without("comparators.uv.trip.falling", "comparators.uv.hysteresis"), "hysteresis", {"hysteresis.amount"}),
        ("comparators: {uv: {trip: {rising: {max: 1.7 V}}}}", "rising", {"trip.rising.min"}),
        ("comparators: {uv: {trip: {rising: {typ: 1.6 V, max: 1.7 V}, falling: null}}}", "rising", {"trip.rising.min"}),
        ("comparators: {uv: {trip: {rising: {max: 1.7 V}, falling: {min: 1.6 V}}}}", "falling", {"trip.falling.max"}),
        (without("comparators.uv.errors"), "rising", {"errors"}),
        (
            "comparators: {uv: {hysteresis: {amount: {typ: 50 mV}}, trip: null}}", "hysteresis",
            {"hysteresis.amount.min", "hysteresis.amount.max"},
        ),
        ("comparators: {uv: {errors: {reference: {share: {min: 1 %}}}}}", "rising", {"errors.reference.share.max"}),
        (without("comparators.uv.divider.ratio"), "rising", {"divider.ratio"}),
        (without("comparators.uv.divider"), "rising", {"divider.ratio"}),
        (without("comparators.uv.errors.offset.at"), "rising", {"errors.offset.at"}),
        (without("comparators.uv.errors.offset.is"), "rising", {"errors.offset.is"}),
        (without("conditions.coverage", "conditions.combine"), "rising", set()),  # policy
    ],
)  # fmt: skip
def test_what_is_missing_is_named(patch: str, level: Level, facts: set[str]) -> None:
    assert waits(patch, level=level) == facts


def test_coverage_is_policy_with_a_default() -> None:
    assert ends("rising", without("conditions.coverage")) == ends("rising")
    one = "conditions: {coverage: 1}"
    assert ends("rising", one) == close(2.0 - 0.011 - 0.001, 2.0 + 0.011 + 0.001)


def test_nothing_stands_in_for_a_divider_that_is_not_described() -> None:
    # 1.2 mV at the input, behind it: at least so much at the rail.
    low = lowest("rising", without("comparators.uv.divider"))
    assert (low.sure, low.best) == (-math.inf, pytest.approx(2.0 - 0.011 - 3 * 0.0004, rel=1e-12))
    direct = "comparators: {uv: {divider: none}}"
    error_v = 0.010 + 0.001 + 3 * 0.0004
    assert ends("rising", direct) == close(2.0 - error_v, 2.0 + error_v)


def test_behind_a_crossover_the_share_must_be_stated() -> None:
    crossed = "comparators: {uv: {divider: null, crossover: {kind: divider_diode, ratio: 0.5}}}"
    assert "divider.ratio" in waits(crossed, level="rising")
    stated = lowest("rising", crossed, "comparators: {uv: {divider: {ratio: 0.4}}}")
    assert stated.best == pytest.approx(2.0 - RISING_E_V, rel=1e-12)


def test_which_code_matters_where_the_levels_make_the_hysteresis() -> None:
    codes = """
    comparators:
      uv: {trip: null, codes: {low: {rising: 1.9 V, falling: 1.8 V}, high: {rising: 2.1 V, falling: 1.95 V}}}
    """
    unknown = lowest("hysteresis", codes)
    assert math.isnan(unknown.sure) and unknown.waits == ("comparators.uv.ships_with",)
    assert lowest("hysteresis", codes, "comparators: {uv: {ships_with: high}}").best == pytest.approx(0.15 - 0.00075)
    assert ends("hysteresis", codes, AMOUNT) == (0.046, 0.054)


@pytest.mark.parametrize(
    ("patch", "none"),
    [
        ("comparators: {uv: {hysteresis: none}}", True),
        ("comparators: {uv: {hysteresis: {amount: 0 V}}}", True),
        ("comparators: {uv: {trip: {rising: 1.9 V}}}", True),
        # A range with equal ends is a range, and so are two that are equal.
        ("comparators: {uv: {trip: {rising: {min: 1.9 V, typ: 1.9 V, max: 1.9 V}}}}", False),
        (
            "comparators: {uv: {trip: {rising: {min: 1.8 V, max: 1.9 V}, falling: {min: 1.8 V, max: 1.9 V}}}}",
            False,
        ),
        ("comparators: {uv: {hysteresis: {amount: {min: 0 V, max: 1 mV}}}}", False),
        ("comparators: {uv: {trip: {rising: 1.9 V}, hysteresis: {amount: 50 mV}}}", False),
        ("comparators: {uv: {trip: null}}", False),
        ("", False),
    ],
)
def test_no_hysteresis_is_what_the_description_says(patch: str, none: bool) -> None:
    assert has_no_hysteresis(asked(patch)[1]) is none
