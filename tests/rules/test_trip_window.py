"""The margins of the levels: expected numbers are sums written out here."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind, Measure
from tidegate.rules import description, hand_over, hysteresis, modes
from tidegate.rules.trip_window import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW
BY_ID = {rule.id: rule for rule in RULES}

# Ranges with round numbers. uv: 1.6 V of the load and 2 V/ms for 2 us + 1.5 us = 7 mV; service from 1.71 V less half of
# 10 mV of ripple, and less 30 mA through 0.4 ohm = 12 mV. ov: 1.98 V of the load, 1 V/ms for 3.5 us = 3.5 mV; service
# up to 1.89 V and half of 10 mV.
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


def works(*ends: str) -> str:
    """The same working range for every load on avdd."""
    needs = f"{{needs: {{0: {{works: {{{', '.join(ends)}}}}}}}}}"
    return f"loads: {{core_regulator: {needs}, adc: {needs}}}"


def test_sound_example_keeps_every_rule() -> None:
    judgements = judged("", RULES)
    assert of_kind(judgements, FAIL, OPEN, REVIEW) == []
    assert {rule for rule, _ in judgements} == set(BY_ID)


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_fails_and_holds(rule: object) -> None:
    assert hasattr(rule, "id") and hasattr(rule, "example")
    kinds = {kind for (name, _), kind in changed(rule.example.fails, RULES).items() if name == rule.id}
    assert kinds & {FAIL, REVIEW}
    after = judged(rule.example.holds, RULES)
    assert {said.kind for (name, _), said in after.items() if name == rule.id} <= {PASS, NONE}
    assert PASS in {said.kind for (name, _), said in after.items() if name == rule.id}


ONE_FAULT = {
    "trip_window/guarantee": {("guarantee", "uv"): FAIL},
    "trip_window/nuisance": {("nuisance", "uv"): FAIL, ("release", "uv"): NONE},
    "trip_window/release": {("release", "uv"): FAIL},
    # The level that is placed the other way round protects nothing: one of the two says so, with the number.
    "trip_window/placement_sense": {("guarantee", "uv"): NONE, ("placement_sense", "uv"): FAIL},
    # 7 x the error of the reference: where the levels are, the load is not protected, and no other place would do.
    "trip_window/spread": {
        ("guarantee", "uv"): FAIL, ("release", "uv"): NONE, ("spread", "uv"): FAIL,
    },
    "trip_window/codes": {("codes", "uv"): REVIEW},
    "trip_window/order": {("order", "avdd"): FAIL},
    "trip_window/crossover_level": {("crossover_level", "por"): FAIL},
    "trip_window/crossover_tracks": {("guarantee", "por"): NONE, ("crossover_tracks", "por"): FAIL},
    "trip_window/second_crossing": {("second_crossing", "por"): FAIL},
}  # fmt: skip


@pytest.mark.parametrize("rule", ONE_FAULT)
def test_one_fault_changes_just_these_judgements(rule: str) -> None:
    expected = {(f"trip_window/{name}", subject): kind for (name, subject), kind in ONE_FAULT[rule].items()}
    assert changed(BY_ID[rule].example.fails, RULES) == expected


# Contributors: the numbers of the sound example


def test_errors_about_a_nominal_level_are_added_and_referred_to_the_rail() -> None:
    """0.4 % and 0.1 % of the level and three times 0.4 mV behind a divider of 0.367."""
    falling_v, rising_v = 1.627, 1.677
    error_v = (0.004 + 0.001) * falling_v + 3 * 0.0004 / 0.367
    answer = judged("", RULES)["trip_window/guarantee", "uv"]
    assert measure(answer).have == pytest.approx(falling_v - error_v, abs=1e-12)
    assert measure(answer).need == pytest.approx(1.6 + 2000 * 3.5e-6, abs=1e-12)
    error_v = (0.004 + 0.001) * rising_v + 3 * 0.0004 / 0.367
    answer = judged("", RULES)["trip_window/release", "uv"]
    assert measure(answer).have == pytest.approx(rising_v + error_v, abs=1e-12)


def test_errors_may_be_combined_by_root_sum_square() -> None:
    """A bound counts as three sigma at coverage 3: the square root of the sum of squares of the three."""
    falling_v = 1.627
    error_v = ((0.004 * falling_v) ** 2 + (0.001 * falling_v) ** 2 + (3 * 0.0004 / 0.367) ** 2) ** 0.5
    answer = judged("conditions: {combine: root_sum_square}", RULES)["trip_window/guarantee", "uv"]
    assert measure(answer).have == pytest.approx(falling_v - error_v, abs=1e-12)


# At the limit, one step inside, one step beyond


@pytest.mark.parametrize(
    ("rule", "of", "level", "at_limit", "beyond"),
    [
        pytest.param("guarantee", "uv", "falling", ("1.607 V", "1.65 V"), ("1.6069 V", "1.65 V"), id="protects"),
        pytest.param("nuisance", "uv", "falling", ("1.61 V", "1.693 V"), ("1.61 V", "1.6931 V"), id="quiet"),
        pytest.param("release", "uv", "rising", ("1.66 V", "1.705 V"), ("1.66 V", "1.7051 V"), id="lets_go"),
        pytest.param("guarantee", "ov", "rising", ("1.94 V", "1.9765 V"), ("1.94 V", "1.9766 V"), id="ov_protects"),
        pytest.param("nuisance", "ov", "rising", ("1.895 V", "1.97 V"), ("1.8949 V", "1.97 V"), id="ov_quiet"),
        pytest.param("release", "ov", "falling", ("1.895 V", "1.93 V"), ("1.8949 V", "1.93 V"), id="ov_lets_go"),
        pytest.param("guarantee", "por", "falling", ("1.06 V", "1.4 V"), ("1.0599 V", "1.4 V"), id="por_protects"),
        pytest.param("nuisance", "por", "falling", ("1.11 V", "1.693 V"), ("1.11 V", "1.6931 V"), id="por_quiet"),
        pytest.param("release", "por", "rising", ("1.17 V", "1.705 V"), ("1.17 V", "1.7051 V"), id="por_lets_go"),
    ],
)
def test_limit_belongs_to_the_good_side(
    rule: str, of: str, level: str, at_limit: tuple[str, str], beyond: tuple[str, str]
) -> None:
    no_crossover = "comparators: {por: {crossover: null, reference: ref_fast}}"
    there = said(rule, no_crossover, trip(level, *at_limit, of=of), of=of)
    assert (there.kind, measure(there).margin) == (PASS, 0.0)
    outside = said(rule, no_crossover, trip(level, *beyond, of=of), of=of)
    assert outside.kind is FAIL
    assert measure(outside).margin == pytest.approx(-0.0001, abs=1e-9)


def test_what_a_power_on_detector_lets_go_of_too_early_is_told_under_the_hole_it_leaves() -> None:
    """1.0599 V is 100 uV less than ref_fast works from; nobody else holds reset there."""
    patch = both(
        BENCH, "comparators: {por: {crossover: null, reference: ref_fast}}", trip("falling", "1.0599 V", "1.4 V", "por")
    )
    alone = judged(patch, RULES)["trip_window/guarantee", "por"]
    assert alone.kind is FAIL
    with_holes = judged(patch, (*RULES, *hand_over.RULES))
    assert with_holes["hand_over/no_hole", "avdd"].kind is FAIL
    answer = with_holes["trip_window/guarantee", "por"]
    assert (answer.kind, answer.under, answer.measure) == (NONE, "hand_over/no_hole", alone.measure)


def test_spread_at_its_limit() -> None:
    """Room from 1.6 V + 7 mV to 1.71 V - 5 mV: 98 mV."""
    at_limit = said("spread", trip("falling", "1.6 V", "1.698 V"), trip("rising", "1.69 V", "1.72 V"))
    assert (at_limit.kind, measure(at_limit).margin) == (PASS, 0.0)
    beyond = said("spread", trip("falling", "1.6 V", "1.6981 V"), trip("rising", "1.69 V", "1.72 V"))
    assert beyond.kind is FAIL
    assert beyond.message == "spread of its falling level 98.1 mV, at most 98 mV needed"
    assert beyond.why == (
        "adc works from 1.6 V; until the answer, 3.5 us later, avdd falls 7 mV; "
        "avdd is delivered down to 1.71 V, less 5 mV (half the ripple)"
    )
    assert beyond.mend == "an error 50 uV smaller either way, and room for hysteresis"
    over = said("spread", of="ov")
    assert measure(over).need == pytest.approx((1.98 - 0.0035) - (1.89 + 0.005), abs=1e-12)
    assert measure(over).have == pytest.approx(1.97 - 1.94, abs=1e-12)


def test_a_rail_that_leaves_no_room_at_all() -> None:
    """1.7 V and 7 mV until the answer lie above 1.71 V less 5 mV; then a load at the end of what is delivered."""
    mend = "a faster answer, or a load that works with more: as it is, no level keeps both limits"
    answer = said("spread", works("min: 1.7 V", "max: 1.98 V"))
    assert (answer.kind, answer.mend, answer.at) == (FAIL, mend, "comparators.uv.errors")
    assert measure(answer).need == pytest.approx(-0.002, abs=1e-12)
    still = "rails: {avdd: {delivered: {min: 1.75 V, max: 1.89 V}, ripple: {peak_to_peak: 0 V}, collapse: 0 V/s}}"
    answer = said("spread", works("min: 1.75 V", "max: 1.98 V"), still)
    assert (answer.mend, measure(answer).need) == (mend, 0.0)
    ranges = said("spread", works("min: 1.7 V", "max: 1.98 V"), without("comparators.uv.errors"))
    assert ranges.at == "comparators.uv.trip"


def test_the_room_is_judged_once() -> None:
    """Spread first, then the hysteresis in what it leaves, then the level that lets go where both would fit."""
    wide = trip("falling", "1.61 V", "1.72 V"), trip("rising", "1.66 V", "1.77 V")
    still = "rails: {avdd: {load_step: 0 A}}"
    assert said("nuisance", *wide, still).kind is FAIL
    answer = said("release", *wide, still)
    assert (answer.kind, answer.under, measure(answer).margin) == (
        NONE, "trip_window/nuisance", pytest.approx(1.705 - 1.77, abs=1e-12),
    )  # fmt: skip
    calm = "comparators: {uv: {trip: {falling: {min: 1.6 V, max: 1.705 V}, rising: {min: 1.66 V, max: 1.71 V}}}}"
    answer = said("release", calm, still)
    assert (answer.kind, answer.under) == (NONE, "trip_window/spread")
    apart = (
        trip("rising", "1.66 V", "1.78 V"),
        "comparators: {uv: {hysteresis: {amount: {min: 46 mV, max: 140 mV}}}}",
    )
    answer = judged(both(BENCH, *apart), (*RULES, *hysteresis.RULES))["trip_window/release", "uv"]
    assert (answer.kind, answer.under) == (NONE, "hysteresis/fits_window")
    high = trip("falling", "1.65 V", "1.69 V"), trip("rising", "1.7 V", "1.74 V")
    answer = said("release", *high)
    assert (answer.kind, answer.message) == (FAIL, "rising level at its highest 1.74 V, at most 1.705 V needed")
    low = trip("falling", "1.65 V", "1.7 V"), trip("rising", "1.7 V", "1.74 V")
    assert said("release", *low).under == "trip_window/nuisance"
    assert said("nuisance", *low).mend == (
        "levels 35 mV further down, or an error that much smaller (so that it lets go in service too)"
    )


def test_a_load_that_does_not_work_in_service_leaves_no_room_to_judge() -> None:
    patch = both(BENCH, works("min: 1.72 V", "max: 1.98 V"))
    answer = judged(patch, (*RULES, *description.RULES))["trip_window/spread", "uv"]
    assert (answer.kind, answer.under) == (NONE, "description/loads")
    assert measure(answer).need == pytest.approx(1.705 - 1.727, abs=1e-12)


def test_where_the_error_takes_more_than_the_room_to_move_the_levels_will_not_do() -> None:
    """118 mV of spread in 98 mV of room: 5 mV short of 1.607 V at one end, 65 mV beyond 1.705 V at the other."""
    wide = trip("falling", "1.602 V", "1.72 V"), trip("rising", "1.66 V", "1.77 V")
    assert said("guarantee", *wide).mend == (
        "an error 5 mV smaller; to move the levels will not do; or an answer within 1 us"
    )
    assert said("nuisance", *wide).mend == (
        "an error 65 mV smaller; to move the levels will not do (so that it lets go in service too)"
    )
    # Limits that the description itself puts the wrong way round leave no room to speak of.
    apart = said("guarantee", works("min: 1.72 V", "max: 1.98 V"))
    assert apart.mend == "levels 117 mV further up, or an error that much smaller"


def test_sampled_too_seldom_is_the_matter_of_another_rule() -> None:
    """10 us at 2 V/ms are 20 mV, of which the level leaves 10 mV; 4 us are 8 mV, and the answer takes 7 mV more."""
    sampled = "{modes: {nap: {sampled: [uv]}}, comparators: {uv: {sampling: PERIOD}}}"
    seldom = judged(both(BENCH, sampled.replace("PERIOD", "10 us")), (*RULES, *modes.RULES))
    answer = seldom["trip_window/guarantee", "uv"]
    assert (answer.kind, answer.under) == (NONE, "modes/sampling")
    assert measure(answer).need == pytest.approx(1.6 + 2000 * 13.5e-6, abs=1e-12)
    answer = said("guarantee", sampled.replace("PERIOD", "4 us"))
    assert (answer.kind, measure(answer).need) == (FAIL, pytest.approx(1.6 + 2000 * 7.5e-6, abs=1e-12))
    answer = said("guarantee", sampled.replace("PERIOD", "1 us"))
    assert (answer.kind, measure(answer).need) == (PASS, pytest.approx(1.6 + 2000 * 4.5e-6, abs=1e-12))


@pytest.mark.parametrize(
    ("fact", "need"), [("rails.avdd.collapse", 1.6), ("comparators.uv.delay", 1.6 + 2000 * 1.5e-6)]
)
def test_a_level_below_the_load_is_short_whatever_the_answer_takes(fact: str, need: float) -> None:
    low = trip("falling", "1.59 V", "1.65 V")
    answer = said("guarantee", low, without(fact))
    assert (answer.kind, answer.missing) == (FAIL, (fact,))
    assert answer.message.startswith("falling level at its lowest 1.59 V, at least 1.6")
    assert " short, whatever " in answer.message
    assert (measure(answer).best_margin, measure(answer).sure_margin) == (
        pytest.approx(1.59 - need, abs=1e-12), -math.inf,
    )  # fmt: skip
    assert answer.why == "adc works from 1.6 V; until the answer, avdd falls by what is not known yet"
    at_limit = said("guarantee", trip("falling", f"{need:.6f} V", "1.65 V"), without(fact))
    assert (at_limit.kind, measure(at_limit).best_margin) == (OPEN, 0.0)


def test_what_a_detector_protects_is_told_where_it_is_not_known_what_that_needs() -> None:
    answer = said("guarantee", without("loads.adc.needs.0.works", "loads.core_regulator.needs.0.works"))
    assert answer.kind is OPEN
    assert set(answer.missing) == {"loads.core_regulator.needs.0.works", "loads.adc.needs.0.works"}


# Words


def test_words_of_a_level_that_protects_too_little() -> None:
    answer = said("guarantee", trip("falling", "1.602 V", "1.65 V"))
    assert answer.message == "falling level at its lowest 1.602 V, at least 1.607 V needed"
    assert answer.why == "adc works from 1.6 V; until the answer, 3.5 us later, avdd falls 7 mV"
    assert answer.mend == "levels 5 mV further up, or an error that much smaller; or an answer within 1 us"
    assert answer.at == "comparators.uv.trip.falling"
    assert [hop.element for hop in answer.path] == ["uv", "uv_out", "gather", "rst_out", "por_n", "adc"]


def test_no_response_helps_a_level_below_the_load() -> None:
    answer = said("guarantee", trip("falling", "1.59 V", "1.65 V"))
    assert answer.mend == "levels 17 mV further up, or an error that much smaller"


def test_words_of_a_nuisance_and_of_a_release() -> None:
    answer = said("nuisance", trip("falling", "1.61 V", "1.7 V"))
    assert answer.message == "falling level at its highest 1.7 V, at most 1.693 V needed"
    assert (
        answer.why == "avdd is delivered down to 1.71 V, less 5 mV (half the ripple) and 12 mV (load step at release)"
    )
    assert answer.mend == "levels 7 mV further down, or an error that much smaller"
    answer = said("release", trip("rising", "1.66 V", "1.71 V"))
    assert answer.message == "rising level at its highest 1.71 V, at most 1.705 V needed"
    assert answer.why == "avdd is delivered down to 1.71 V, less 5 mV (half the ripple)"
    assert answer.mend == "levels 5 mV further down, or an error that much smaller, or less hysteresis"


def test_words_of_over_voltage() -> None:
    answer = said("guarantee", trip("rising", "1.94 V", "1.98 V", of="ov"), of="ov")
    assert answer.message == "rising level at its highest 1.98 V, at most 1.976 V needed"
    assert answer.why == "adc works up to 1.98 V; until the answer, 3.5 us later, avdd rises 3.5 mV"
    assert answer.mend == "levels 3.5 mV further down, or an error that much smaller"
    answer = said("release", trip("falling", "1.89 V", "1.93 V", of="ov"), of="ov")
    assert answer.why == "avdd is delivered up to 1.89 V, plus 5 mV (half the ripple)"
    assert answer.mend == "levels 5 mV further up, or an error that much smaller, or less hysteresis"


# Response


@pytest.mark.parametrize(
    ("patch", "droop_v"),
    [
        pytest.param("comparators: {uv: {filter: null}}", 2000 * 2e-6, id="no_filter"),
        pytest.param("comparators: {uv: {sampling: 10 us}}", 2000 * 13.5e-6, id="sampling_waits_a_period"),
        pytest.param("comparators: {uv: {delay: {max: 5 us}}}", 2000 * 6.5e-6, id="delay"),
        pytest.param("rails: {avdd: {collapse: 0 V/s}}", 0.0, id="no_collapse"),
    ],
)
def test_rail_falls_on_until_the_answer(patch: str, droop_v: float) -> None:
    assert measure(said("guarantee", patch)).need == pytest.approx(1.6 + droop_v, abs=1e-12)


# The load


def test_the_most_demanding_load_counts_and_not_the_range_of_the_rail() -> None:
    """The trap: a level chosen against the rail (1.6 V), and one of its loads needs more."""
    patch = "loads: {adc: {needs: {0: {works: {min: 1.62 V, max: 1.98 V}}}}}"
    answer = said("guarantee", patch)
    assert (answer.kind, measure(answer).need) == (FAIL, pytest.approx(1.627, abs=1e-12))
    assert said("guarantee", "rails: {avdd: {guaranteed: null}}").kind is PASS


def test_a_load_good_down_to_the_detectors_own_minimum_is_protected() -> None:
    """The trap: the load is declared good down to the lowest falling level, 1.61 V, and is kept."""
    answer = said("guarantee", works("min: 1.61 V", "max: 1.98 V"), "rails: {avdd: {collapse: 0 V/s}}")
    assert (answer.kind, measure(answer).margin) == (PASS, 0.0)


def test_a_slew_that_the_description_declares_is_kept() -> None:
    """The trap: 2 V/ms is what the rail does; no steeper fall is assumed, whatever its fall time would allow."""
    assert measure(said("guarantee", "rails: {avdd: {fall: {min: 1 us, max: 1 s}}}")).need == pytest.approx(1.607)


def test_a_load_without_a_range_is_open_and_never_assumed() -> None:
    answer = said("guarantee", without("loads.adc.needs.0.works"))
    assert (answer.kind, answer.missing) == (OPEN, ("loads.adc.needs.0.works",))
    answer = said("guarantee", works("max: 1.98 V"))
    assert answer.missing == ("loads.adc.needs.0.works.min", "loads.core_regulator.needs.0.works.min")


def test_a_detector_that_guards_nothing_on_its_rail() -> None:
    patch = "resets: {core_rst_n: {guards: [core_regulator]}}"
    for rule in ("guarantee", "placement_sense", "spread"):
        answer = said(rule, patch, of="uv_core")
        assert (answer.kind, answer.message) == (NONE, "guards no load that needs vcore")


def test_power_on_answers_for_loads_that_no_under_voltage_detector_looks_after() -> None:
    patch = "output_stages: {gather: {driven_by: [por_out, ov_latch]}}"  # uv no longer resets anything
    answer = said("guarantee", patch, of="por")
    # It is the only guard then: the rail falls 2 V/ms for the 5 us that it takes to answer.
    assert (answer.kind, measure(answer).need) == (FAIL, pytest.approx(1.61, abs=1e-12))
    assert answer.why == "adc works from 1.6 V; until the answer, 5 us later, avdd falls 10 mV"
    assert said("guarantee", of="por").why == "ref_fast works from 1.06 V"


def test_power_on_that_nothing_waits_for() -> None:
    patch = """
    output_stages: {gather: {driven_by: [uv_out, ov_latch]}}
    """
    answer = said("guarantee", patch, of="por")
    assert (answer.kind, answer.message) == (
        NONE, "nothing on avdd waits for it that no under-voltage detector looks after",
    )  # fmt: skip


def test_power_on_with_a_crossover_leaves_equal_temperature_to_tracking() -> None:
    answer = said("guarantee", "references: {ref_fast: {works_from: {max: 1.12 V}}}", of="por")
    assert answer.kind is NONE
    assert answer.message == (
        "extreme against extreme its falling level can lie 10 mV below what ref_fast works from; both move with "
        "temperature, and trip_window/crossover_tracks compares them at the same one"
    )


def test_a_detector_of_a_reference_is_not_placed() -> None:
    for rule in ("guarantee", "nuisance", "release", "spread", "codes"):
        answer = said(rule, "comparators: {uv: {role: reference_ready}}")
        assert (answer.kind, answer.message) == (
            NONE, "watches whether a reference is ready, not the range of a supply",
        )  # fmt: skip


# Open, with all that is missing


@pytest.mark.parametrize(
    ("rule", "of", "fact", "missing"),
    [
        ("guarantee", "uv", "comparators.uv.delay", None),
        ("guarantee", "uv", "rails.avdd.collapse", None),
        ("guarantee", "uv", "comparators.uv.errors", None),
        ("guarantee", "uv", "comparators.uv.divider.ratio", None),
        ("guarantee", "uv", "comparators.uv.trip", ("comparators.uv.trip.falling",)),
        ("guarantee", "ov", "rails.avdd.overshoot", None),
        ("guarantee", "por", "references.ref_fast.works_from", None),
        ("guarantee", "por", "comparators.por.trip", ("comparators.por.trip.falling", "comparators.por.trip.rising")),
        ("nuisance", "uv", "rails.avdd.delivered", None),
        ("nuisance", "uv", "rails.avdd.ripple", ("rails.avdd.ripple.peak_to_peak",)),
        ("nuisance", "uv", "rails.avdd.load_step", None),
        ("nuisance", "uv", "rails.avdd.source_impedance", None),
        ("release", "uv", "rails.avdd.delivered.min", None),
        ("release", "ov", "rails.avdd.delivered.max", None),
        ("release", "uv", "rails.avdd.ripple.peak_to_peak", None),
        ("placement_sense", "uv", "loads.adc.needs.0.works", None),
        ("spread", "uv", "rails.avdd.collapse", None),
        ("spread", "uv", "rails.avdd.ripple.peak_to_peak", None),
    ],
)
def test_open_names_the_fact_that_is_missing(rule: str, of: str, fact: str, missing: tuple[str, ...] | None) -> None:
    answer = judged(without(fact), RULES)[f"trip_window/{rule}", of]
    assert (answer.kind, set(answer.missing)) == (OPEN, set(missing or (fact,)))


def test_open_names_all_that_is_missing_at_once() -> None:
    answer = judged(
        without("comparators.uv.delay", "rails.avdd.collapse", "comparators.uv.errors", "loads.adc.needs.0.works"),
        RULES,
    )["trip_window/guarantee", "uv"]
    assert set(answer.missing) == {
        "comparators.uv.delay", "rails.avdd.collapse", "comparators.uv.errors", "loads.adc.needs.0.works",
    }  # fmt: skip


# Laws


@given(up_mv=st.integers(-49, 80))
@settings(max_examples=25, deadline=None)
def test_moving_both_levels_moves_the_margins_against_each_other(up_mv: int) -> None:
    """What the guarantee gains, nuisance and release lose: by as much, since the ranges keep their width."""
    moved = [
        trip("falling", f"{1610 + up_mv} mV", f"{1650 + up_mv} mV"), trip("rising", f"{1660 + up_mv} mV", "2 V"),
    ]  # fmt: skip
    protects, quiet = measure(said("guarantee", *moved)), measure(said("nuisance", *moved))
    assert protects.have - protects.need == pytest.approx(0.003 + up_mv / 1000, abs=1e-9)
    assert quiet.need - quiet.have == pytest.approx(0.043 - up_mv / 1000, abs=1e-9)
    assert (protects.holds, quiet.holds) == (up_mv >= -3, up_mv <= 43)
