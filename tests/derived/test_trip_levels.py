from __future__ import annotations

import pytest
from uncertainties import ufloat

from tests.rules.sound import both, case_of, without
from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.levels.trip_levels import falling_window, has_no_hysteresis, hysteresis_window, rising_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.trip_window import Window

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
      reference: {share: 0.5 %, is: bound, at: null}
      divider: {share: null, amount: 1 mV, is: bound, at: rail}
      offset: {amount: 0.4 mV, is: sigma, at: input}
"""
RISING_E_V, FALLING_E_V = 0.010 + 0.001 + 3 * 0.001, 0.0095 + 0.001 + 3 * 0.001


def asked(*patches: str) -> tuple[Case, Comparator]:
    case = case_of(both(BENCH, *patches), "uv")
    assert isinstance(case.subject, Comparator)
    return case, case.subject


def ends(window: Window) -> tuple[float, float]:
    return window.least_v, window.most_v


def close(least_v: float, most_v: float) -> object:
    return pytest.approx((least_v, most_v), rel=1e-12)


def missing(*patches: str, level: str = "hysteresis") -> tuple[str, ...]:
    ask = {"rising": rising_window, "falling": falling_window, "hysteresis": hysteresis_window}[level]
    with pytest.raises(MissingFactsError) as lacking:
        ask(*asked(*patches))
    return tuple(fact.removeprefix("comparators.uv.") for fact in lacking.value.missing)


def test_nominal_levels_carry_the_sum_of_their_errors() -> None:
    assert ends(rising_window(*asked())) == close(2.0 - RISING_E_V, 2.0 + RISING_E_V)
    assert ends(falling_window(*asked())) == close(1.9 - FALLING_E_V, 1.9 + FALLING_E_V)


def test_root_sum_square_agrees_with_uncertainties() -> None:
    # The library uncertainties: bounds as three standard deviations, at coverage 3.
    squares = "conditions: {combine: root_sum_square}"
    level = 2.0 + ufloat(0, 0.010 / 3) + ufloat(0, 0.001 / 3) + ufloat(0, 0.001)
    error_v = 3 * level.std_dev
    assert ends(rising_window(*asked(squares))) == close(2.0 - error_v, 2.0 + error_v)


def test_tracked_errors_cancel_in_the_hysteresis() -> None:
    assert ends(hysteresis_window(*asked())) == close(0.1, 0.1)
    # Of 0.5 % of either level, the larger counts.
    apart = "comparators: {uv: {errors: {reference: {tracks: false}}}}"
    assert ends(hysteresis_window(*asked(apart))) == close(0.1 - 2 * 0.010, 0.1 + 2 * 0.010)
    none_track = "comparators: {uv: {tracked: false}}"
    assert ends(hysteresis_window(*asked(none_track))) == close(0.1 - 2 * RISING_E_V, 0.1 + 2 * RISING_E_V)


def test_untracked_root_sum_square_agrees_with_uncertainties() -> None:
    apart = "{conditions: {combine: root_sum_square}, comparators: {uv: {tracked: false}}}"

    def level(nominal_v: float) -> object:
        return nominal_v + ufloat(0, 0.010 / 3) + ufloat(0, 0.001 / 3) + ufloat(0, 0.001)

    error_v = 3 * (level(2.0) - level(1.9)).std_dev  # type: ignore[operator]
    assert ends(hysteresis_window(*asked(apart))) == close(0.1 - error_v, 0.1 + error_v)


def test_an_error_with_a_share_and_an_amount_has_both() -> None:
    more = "comparators: {uv: {errors: {reference: {amount: 2 mV, at: rail}}}}"
    assert ends(rising_window(*asked(more))) == close(2.0 - RISING_E_V - 0.002, 2.0 + RISING_E_V + 0.002)


RANGES = """
comparators: {uv: {errors: null, trip: {rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.54 V, max: 1.66 V}}}}
"""


def test_ranges_stand_as_they_are() -> None:
    assert ends(rising_window(*asked(RANGES))) == (1.6, 1.7)
    assert ends(falling_window(*asked(RANGES))) == (1.54, 1.66)
    assert ends(hysteresis_window(*asked(RANGES))) == close(0.04, 0.06)
    untracked = "comparators: {uv: {tracked: false}}"
    assert ends(hysteresis_window(*asked(RANGES, untracked))) == close(-0.06, 0.16)
    assert missing(RANGES, without("comparators.uv.tracked")) == ("tracked",)


def test_a_stated_amount_is_taken_as_it_stands() -> None:
    amount = "comparators: {uv: {tracked: null, hysteresis: {amount: {min: 80 mV, max: 110 mV}}}}"
    assert ends(hysteresis_window(*asked(amount))) == (0.08, 0.11)
    assert ends(hysteresis_window(*asked(RANGES, amount))) == (0.08, 0.11)


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
    found = asked(AMOUNT, f"comparators: {{uv: {{errors: null, trip: {{{trip}}}}}}}")
    assert ends(rising_window(*found)) == close(*rising)
    assert ends(falling_window(*found)) == close(*falling)


def test_a_nominal_level_carries_its_errors_over() -> None:
    found = asked(AMOUNT, "comparators: {uv: {trip: {rising: null}}}")
    assert ends(rising_window(*found)) == close(1.9 - FALLING_E_V + 0.046, 1.9 + FALLING_E_V + 0.054)


@pytest.mark.parametrize(
    ("patch", "level", "facts"),
    [
        (without("comparators.uv.trip"), "rising", ("trip.rising",)),
        (without("comparators.uv.trip"), "falling", ("trip.falling",)),
        (without("comparators.uv.trip"), "hysteresis", ("hysteresis.amount",)),
        # One level and no amount: neither gives the other.
        (without("comparators.uv.trip.falling"), "falling", ("trip.falling",)),
        (without("comparators.uv.trip.falling"), "hysteresis", ("hysteresis.amount",)),
        (without("comparators.uv.trip.falling", "comparators.uv.hysteresis"), "hysteresis", ("hysteresis.amount",)),
        ("comparators: {uv: {trip: {rising: {max: 1.7 V}}}}", "rising", ("trip.rising.min",)),
        ("comparators: {uv: {trip: {rising: {typ: 1.6 V, max: 1.7 V}, falling: null}}}", "rising",
         ("trip.rising.min",)),
        ("comparators: {uv: {trip: {rising: {max: 1.7 V}, falling: {min: 1.6 V}}}}", "falling", ("trip.falling.max",)),
        (without("comparators.uv.errors"), "rising", ("errors",)),
        ("comparators: {uv: {hysteresis: {amount: {typ: 50 mV}}}}", "hysteresis",
         ("hysteresis.amount.min", "hysteresis.amount.max")),
        # All at once, whatever error they belong to; an error without a size lacks its amount.
        (
            without("conditions.combine", "conditions.coverage", "comparators.uv.divider.ratio",
                    "comparators.uv.errors.reference.share", "comparators.uv.errors.divider.is",
                    "comparators.uv.errors.divider.at", "comparators.uv.tracked"),
            "hysteresis",
            ("errors.reference.tracks", "errors.reference.amount", "errors.divider.tracks", "errors.divider.at",
             "errors.divider.is", "errors.offset.tracks", "divider.ratio", "conditions.combine",
             "conditions.coverage"),
        ),
        ("comparators: {uv: {errors: {reference: {share: {min: 1 %}}}}}", "rising", ("errors.reference.share.max",)),
    ],
)  # fmt: skip
def test_what_is_missing_is_named(patch: str, level: str, facts: tuple[str, ...]) -> None:
    assert missing(patch, level=level) == facts


def test_coverage_matters_for_random_errors_and_for_squares() -> None:
    bare = without("conditions.coverage")
    bounds = "comparators: {uv: {errors: {offset: null}}}"
    assert ends(rising_window(*asked(bare, bounds))) == close(2.0 - 0.011, 2.0 + 0.011)
    assert missing(bare, level="rising") == ("conditions.coverage",)
    assert missing(bare, bounds, "conditions: {combine: root_sum_square}", level="rising") == ("conditions.coverage",)


def test_where_an_error_stands_matters_behind_a_divider_alone() -> None:
    direct = without("comparators.uv.divider", "comparators.uv.errors.divider.at", "comparators.uv.errors.offset.at")
    error_v = 0.010 + 0.001 + 3 * 0.0004
    assert ends(rising_window(*asked(direct))) == close(2.0 - error_v, 2.0 + error_v)


def test_behind_a_crossover_the_share_must_be_stated() -> None:
    crossed = "comparators: {uv: {divider: null, crossover: {kind: divider_diode, ratio: 0.5}}}"
    assert missing(crossed, level="rising") == ("divider.ratio",)
    assert ends(rising_window(*asked(crossed, "comparators: {uv: {errors: {offset: {at: rail}}}}"))) == close(
        2.0 - 0.011 - 3 * 0.0004, 2.0 + 0.011 + 3 * 0.0004
    )


@pytest.mark.parametrize(
    ("patch", "none"),
    [
        ("comparators: {uv: {hysteresis: none}}", True),
        ("comparators: {uv: {hysteresis: {amount: 0 V}}}", True),
        ("comparators: {uv: {trip: {rising: 1.9 V}}}", True),
        ("comparators: {uv: {hysteresis: {amount: {min: 0 V, max: 1 mV}}}}", False),
        ("comparators: {uv: {trip: {rising: 1.9 V}, hysteresis: {amount: 50 mV}}}", False),
        ("comparators: {uv: {trip: null}}", False),
        ("", False),
    ],
)
def test_no_hysteresis_is_what_the_description_says(patch: str, none: bool) -> None:
    assert has_no_hysteresis(asked(patch)[1]) is none
