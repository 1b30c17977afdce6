"""Levels placed the wrong way round, levels chosen by code, and the placement that keeps every margin."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.derived.placing import falling_v, found
from tests.rules.sound import both, judged, without
from tidegate.lint.judgement import Judgement, Kind, Measure
from tidegate.rules.trip_window import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW
BENCH = """
comparators:
  uv:
    trip: {rising: {min: 1.66 V, max: 1.7 V}, falling: {min: 1.61 V, max: 1.65 V}}
    hysteresis: {amount: {min: 46 mV, max: 54 mV}}
  ov:
    trip: {rising: {min: 1.94 V, max: 1.97 V}, falling: {min: 1.9 V, max: 1.93 V}}
"""


def said(rule: str, *patches: str, of: str = "uv") -> Judgement:
    return judged(both(BENCH, *patches), RULES)[f"trip_window/{rule}", of]


def measure(answer: Judgement) -> Measure:
    assert answer.measure is not None
    return answer.measure


def trip(level: str, least: str, most: str, of: str = "uv") -> str:
    return f"comparators: {{{of}: {{trip: {{{level}: {{min: {least}, max: {most}}}}}}}}}"


# The other way round


def test_placed_by_its_release_the_detector_is_silent_down_to_1_53_v() -> None:
    """Common practice (no source): signed off from 1.60 V, +-10 mV, 50 mV of hysteresis, surely released at 1.60 V."""
    patch = both(
        trip("falling", "1.53 V", "1.55 V"), trip("rising", "1.58 V", "1.6 V"), "rails: {avdd: {collapse: 0 V/s}}"
    )
    answer = said("placement_sense", patch)
    assert (answer.kind, answer.message) == (
        FAIL,
        "is placed by the level that lets go: until the answer avdd may come down to 1.53 V, at least 1.6 V needed",
    )
    assert answer.why == "adc works from 1.6 V; asserts at 1.53 V to 1.55 V"
    assert answer.mend == "both levels 70 mV further up"
    assert measure(answer).margin == pytest.approx(-0.07, abs=1e-12)
    other = said("guarantee", patch)
    assert (other.kind, other.under) == (NONE, "trip_window/placement_sense")
    assert measure(other).margin == pytest.approx(-0.07, abs=1e-12)  # told under it, with its number


def test_placed_to_guarantee_the_same_detector_keeps_both() -> None:
    """Falling 1.60 V to 1.62 V, rising 1.65 V to 1.67 V."""
    patch = both(
        trip("falling", "1.6 V", "1.62 V"), trip("rising", "1.65 V", "1.67 V"), "rails: {avdd: {collapse: 0 V/s}}"
    )
    answer = said("placement_sense", patch)
    assert (answer.kind, answer.message) == (PASS, "is placed by the level that asserts, against adc at 1.6 V")
    assert (said("guarantee", patch).kind, measure(said("guarantee", patch)).margin) == (PASS, 0.0)


def test_levels_below_the_load_altogether_are_not_called_the_wrong_way_round() -> None:
    answer = said("placement_sense", trip("falling", "1.4 V", "1.45 V"), trip("rising", "1.46 V", "1.5 V"))
    assert (answer.kind, answer.message) == (
        PASS, "is not placed by the level that lets go, which adc does not reach either",
    )  # fmt: skip


def test_over_voltage_the_wrong_way_round() -> None:
    patch = both(trip("falling", "1.97 V", "1.98 V", of="ov"), trip("rising", "2 V", "2.0205 V", of="ov"))
    answer = said("placement_sense", patch, of="ov")
    assert answer.message == (
        "is placed by the level that lets go: until the answer avdd may come up to 2.024 V, at most 1.98 V needed"
    )
    assert answer.mend == "both levels 44 mV further down"


@pytest.mark.parametrize(
    ("falling", "rising", "kind"),
    [
        pytest.param(("1.55 V", "1.6 V"), ("1.61 V", "1.65 V"), PASS, id="asserts_at_the_load_at_the_latest"),
        pytest.param(("1.55 V", "1.5999 V"), ("1.61 V", "1.65 V"), FAIL, id="asserts_just_below"),
        pytest.param(("1.55 V", "1.58 V"), ("1.58 V", "1.6 V"), FAIL, id="lets_go_at_the_load_at_the_latest"),
        pytest.param(("1.55 V", "1.58 V"), ("1.58 V", "1.5999 V"), PASS, id="lets_go_just_below"),
        pytest.param(("1.55 V", "1.6 V"), ("1.58 V", "1.6 V"), PASS, id="both_at_the_load"),
    ],
)
def test_placement_at_its_limits(falling: tuple[str, str], rising: tuple[str, str], kind: Kind) -> None:
    """adc works from 1.6 V."""
    assert said("placement_sense", trip("falling", *falling), trip("rising", *rising)).kind is kind


@pytest.mark.parametrize(
    ("falling", "rising", "kind"),
    [
        pytest.param(("1.9 V", "1.95 V"), ("1.98 V", "2 V"), PASS, id="asserts_at_the_load_at_the_earliest"),
        pytest.param(("1.9 V", "1.95 V"), ("1.9801 V", "2 V"), FAIL, id="asserts_just_above"),
        pytest.param(("1.98 V", "1.99 V"), ("1.99 V", "2 V"), FAIL, id="lets_go_at_the_load_at_the_earliest"),
        pytest.param(("1.9801 V", "1.99 V"), ("1.99 V", "2 V"), PASS, id="lets_go_just_above"),
        pytest.param(("1.98 V", "1.99 V"), ("1.98 V", "2 V"), PASS, id="both_at_the_load"),
    ],
)
def test_placement_of_over_voltage_at_its_limits(falling: tuple[str, str], rising: tuple[str, str], kind: Kind) -> None:
    """adc works up to 1.98 V."""
    answer = said("placement_sense", trip("falling", *falling, of="ov"), trip("rising", *rising, of="ov"), of="ov")
    assert answer.kind is kind
    if falling[0] <= "1.98 V" and kind is PASS:
        assert answer.message == "is placed by the level that asserts, against adc at 1.98 V"
        assert answer.at == "comparators.ov.trip.rising"


def test_placement_is_judged_against_the_most_demanding_load() -> None:
    """core_regulator bears 1.5 V to 2.1 V, adc 1.6 V to 1.98 V: as without it."""
    wide = "loads: {core_regulator: {needs: {0: {works: {min: 1.5 V, max: 2.1 V}}}}}"
    for of, level in (("uv", "1.6 V"), ("ov", "1.98 V")):
        answer = said("placement_sense", wide, of=of)
        assert answer.message == f"is placed by the level that asserts, against adc at {level}"
    wrong = trip("falling", "1.53 V", "1.55 V"), trip("rising", "1.58 V", "1.6 V")
    assert said("placement_sense", wide, *wrong).measure == said("placement_sense", *wrong).measure


def test_placement_is_told_without_what_the_answer_takes() -> None:
    """Without the collapse only the level itself counts: 1.53 V, not the 7 mV less of the answer."""
    patch = both(trip("falling", "1.53 V", "1.55 V"), trip("rising", "1.58 V", "1.6 V"))
    assert measure(said("placement_sense", patch)).have == pytest.approx(1.53 - 2000 * 3.5e-6, abs=1e-12)
    unknown = said("placement_sense", patch, without("rails.avdd.collapse"))
    assert (unknown.kind, measure(unknown).have) == (FAIL, pytest.approx(1.53, abs=1e-12))
    assert unknown.at == "comparators.uv.trip.falling"
    single = both(trip("falling", "1.55 V", "1.55 V"), trip("rising", "1.6 V", "1.6 V"))
    assert said("placement_sense", single).why == "adc works from 1.6 V; asserts at 1.55 V"


# Codes

CODES = """
comparators:
  uv:
    trip: null
    ships_with: mid
    codes:
      low: {rising: 1.6 V, falling: 1.55 V}
      mid: {rising: 1.677 V, falling: 1.627 V}
      high: {rising: 1.72 V, falling: 1.67 V}
"""


def test_levels_are_those_of_the_code_the_part_ships_with() -> None:
    as_stated, by_code = judged("", RULES), judged(CODES, RULES)
    for rule in ("guarantee", "nuisance", "release", "spread"):
        assert by_code[f"trip_window/{rule}", "uv"].measure == as_stated[f"trip_window/{rule}", "uv"].measure
    assert by_code["trip_window/guarantee", "uv"].at == "comparators.uv.codes.mid.falling"


def test_every_code_is_judged_and_the_usable_ones_are_named() -> None:
    """low: 1.55 V less its error and 1.6 V + 7 mV; high: 1.72 V with its error and 1.71 V - 5 mV."""
    answer = judged(CODES, RULES)["trip_window/codes", "uv"]
    assert (answer.kind, answer.message) == (
        REVIEW, "these codes suit avdd: mid; these do not: low, high (mid, which it ships with, does)",
    )  # fmt: skip
    low_v = 1.607 - (1.55 - 0.005 * 1.55 - 3 * 0.0004 / 0.367)
    high_v = 1.72 + 0.005 * 1.72 + 3 * 0.0004 / 0.367 - 1.705
    assert answer.why == (
        f"low: {low_v * 1000:.2f} mV short of trip_window/guarantee; "
        f"high: {high_v * 1000:.2f} mV short of trip_window/release"
    )
    assert answer.mend == "lock out low, high"


def test_a_part_that_ships_with_a_code_that_does_not_suit() -> None:
    answer = judged(both(CODES, "comparators: {uv: {ships_with: low}}"), RULES)["trip_window/codes", "uv"]
    assert answer.message.endswith("(low, which it ships with, does not)")
    assert answer.mend == "ship with mid"
    answers = judged(both(CODES, "comparators: {uv: {ships_with: low}}"), RULES)
    assert answers["trip_window/placement_sense", "uv"].kind is FAIL


def test_no_code_suits() -> None:
    patch = "comparators: {uv: {codes: {mid: {rising: 1.8 V, falling: 1.75 V}}}}"
    answer = judged(both(CODES, patch), RULES)["trip_window/codes", "uv"]
    assert (answer.kind, answer.mend) == (FAIL, "a code between the limits")
    assert answer.message == (
        "no code suits avdd; narrowest at mid: rising level at its highest 1.812 V, at most 1.705 V needed"
    )
    assert answer.why.count("short of trip_window/") == 4  # mid and high trip in service, and do not let go


def test_every_code_suits_by_its_narrowest_margin() -> None:
    """mid lets go 16.3 mV below what is delivered, at 1.677 V; a code 5 mV further down 21.4 mV."""
    patch = "comparators: {uv: {codes: {low: {rising: 1.672 V, falling: 1.622 V}, high: null}}}"
    answer = judged(both(CODES, patch), RULES)["trip_window/codes", "uv"]
    assert (answer.kind, answer.message) == (
        PASS,
        "every code suits avdd: low, mid; narrowest at low: falling level at its lowest 1.611 V, "
        "at least 1.607 V needed",
    )
    assert measure(answer).margin == pytest.approx(1.622 - 0.005 * 1.622 - 3 * 0.0004 / 0.367 - 1.607, abs=1e-12)


def test_a_code_that_is_not_named_leaves_its_levels_open_and_not_which_codes_suit() -> None:
    answers = judged(both(CODES, "comparators: {uv: {ships_with: null}}"), RULES)
    for rule in ("guarantee", "nuisance", "release", "spread"):
        answer = answers[f"trip_window/{rule}", "uv"]
        assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.ships_with",))
    codes = answers["trip_window/codes", "uv"]
    assert (codes.kind, codes.message) == (REVIEW, "these codes suit avdd: mid; these do not: low, high")


def test_a_code_whose_number_is_open_leaves_open_what_it_decides() -> None:
    """Without the ripple mid may or may not let go; low protects too little, and high lets go too high, whatever."""
    ripple = without("rails.avdd.ripple")
    answer = judged(both(CODES, ripple), RULES)["trip_window/codes", "uv"]
    assert answer.kind is OPEN
    assert answer.missing == ("rails.avdd.ripple.peak_to_peak",)
    assert answer.message.startswith("no code surely suits avdd; these do not: low, high; not known yet of mid")
    # Without high and low, the margin so far is that of mid with no ripple at all.
    alone = judged(both(CODES, ripple, "comparators: {uv: {codes: {low: null, high: null}}}"), RULES)
    codes = alone["trip_window/codes", "uv"]
    assert codes.kind is OPEN
    best_v = 1.71 - (1.677 * 1.005 + 3 * 0.0004 / 0.367)
    guarantee_v = 1.627 * 0.995 - 3 * 0.0004 / 0.367 - 1.607
    assert measure(codes).best_margin == pytest.approx(min(best_v, guarantee_v), abs=1e-9)
    assert measure(codes).sure_margin == -math.inf
    # What one code surely lacks does not wait for another code.
    some = judged(both(CODES, without("rails.avdd.collapse")), RULES)["trip_window/codes", "uv"]
    assert some.kind is OPEN and "high: " in some.why


def test_of_codes_that_are_known_the_open_one_is_told_apart() -> None:
    """low protects too little, mid suits; of high nothing is said but its falling level."""
    patch = "comparators: {uv: {hysteresis: {amount: null}, codes: {high: {rising: {min: 1.67 V}, falling: 1.63 V}}}}"
    answer = judged(both(CODES, patch), RULES)["trip_window/codes", "uv"]
    assert (answer.kind, answer.message) == (
        REVIEW,
        "these codes suit avdd: mid; these do not: low; not known yet of high (mid, which it ships with, does)",
    )  # fmt: skip
    assert answer.mend == "lock out low"


# The placement

PLACED = {"uv": ("guarantee", "release", 50e-3), "ov": ("release", "guarantee", 44e-3)}
"""What limits each detector of the sound example from below and from above, and its hysteresis."""


@pytest.mark.parametrize("of", PLACED)
@given(share=st.floats(0.0, 1.0))
@settings(max_examples=15, deadline=None)
def test_a_level_inside_the_placement_keeps_every_margin_and_one_step_outside_fails_what_it_names(
    of: str, share: float
) -> None:
    below, above, apart_v = PLACED[of]
    least_v, most_v = falling_v(found("", of))
    step_v = 1e-6

    def kinds(level_v: float) -> dict[str, Kind]:
        patch = f"comparators: {{{of}: {{trip: {{rising: {level_v + apart_v:.9f} V, falling: {level_v:.9f} V}}}}}}"
        answers = judged(patch, RULES)
        return {rule: answers[f"trip_window/{rule}", of].kind for rule in ("guarantee", "nuisance", "release")}

    kept = {"guarantee": PASS, "nuisance": PASS, "release": PASS}
    inside_v = least_v + step_v + share * (most_v - least_v - 2 * step_v)
    assert kinds(inside_v) == kept
    assert kinds(least_v - step_v) == {**kept, below: FAIL}
    assert kinds(most_v + step_v) == {**kept, above: FAIL}
