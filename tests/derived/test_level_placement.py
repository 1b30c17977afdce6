"""Placement from a description: worked numbers, and every interval tried out at its ends by the way the rules go."""

from __future__ import annotations

import json

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from msgspec.structs import replace
from scipy.optimize import brentq

from tests.derived.placing import found, placed, windows
from tests.rules.sound import without
from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.levels.level_placement import place_levels, with_hysteresis
from tidegate.lint.physics.placement import Requirement

ONE_ERROR = "reference: null, divider: null, offset: null, all: {amount: 10 mV, is: bound, at: rail}"
AT_ONCE = "delay: 0 s, filter: null"
SIGN_OFF = f"comparators: {{uv: {{trip: {{falling: 1.61 V, rising: 1.66 V}}, errors: {{{ONE_ERROR}}}, {AT_ONCE}}}}}"


def test_sign_off_example() -> None:
    # Common practice, no source: signed off from 1.60 V, error +-10 mV: the nominal falling level lies at 1.61 V or
    # above. Upper end: delivered from 1.71 V, less half of 10 mV ripple, 10 mV error and 50 mV hysteresis: 1.645 V.
    answer = found(SIGN_OFF, "uv")
    assert answer.falling.least_v == pytest.approx(1.61, abs=1e-12)
    assert answer.below.by is Requirement.GUARANTEE
    assert answer.falling.most_v == pytest.approx(1.645, abs=1e-12)
    assert answer.above.by is Requirement.COMES_BACK
    assert answer.largest_hysteresis_v == pytest.approx(0.085, abs=1e-12)
    assert answer.margins_v[Requirement.GUARANTEE] == pytest.approx(0.0, abs=1e-12)
    # Quiet: 1.71 V - 5 mV - 30 mA x 0.4 ohm - 1.62 V.
    assert answer.margins_v[Requirement.QUIET] == pytest.approx(0.073, abs=1e-12)


def test_response_moves_the_lower_end() -> None:
    # 2 V/ms over 2 us + 1.5 us is 7 mV.
    answer = found(SIGN_OFF.replace(AT_ONCE, "delay: {max: 2 us}, filter: {max: 1.5 us}"), "uv")
    assert answer.falling.least_v == pytest.approx(1.617, abs=1e-12)


def test_the_most_demanding_load_counts() -> None:
    patch = json.dumps({"loads": {"adc": {"needs": {"0": {"works": {"min": "1.62 V"}}}}}})
    assert found(patch, "uv").facts.bounds[0].element == "adc"
    more_v = found(patch, "uv").falling.least_v - found("", "uv").falling.least_v
    # The level rises by 20 mV and by the error's share of it: 0.5 % of the level, solved for the level.
    assert more_v == pytest.approx(0.020 / (1.0 - 0.005), abs=1e-9)


def test_over_voltage() -> None:
    patch = f"comparators: {{ov: {{errors: {{{ONE_ERROR}}}, {AT_ONCE}}}}}"
    answer = found(patch, "ov")
    # Service up to 1.89 V + 5 mV, error 10 mV; loads up to 1.98 V, less 10 mV error and 44 mV hysteresis.
    assert answer.falling.least_v == pytest.approx(1.905, abs=1e-12)
    assert answer.below.by is Requirement.COMES_BACK
    assert answer.falling.most_v == pytest.approx(1.926, abs=1e-12)
    assert answer.above.by is Requirement.GUARANTEE


def test_a_range_is_placed_without_changing_its_width() -> None:
    trip = "rising: {min: 1.24 V, max: 1.46 V}, falling: {min: 1.18 V, max: 1.4 V}"
    answer = found(f"comparators: {{por: {{trip: {{{trip}}}}}}}", "por")
    assert answer.facts.levels.ranged
    first = answer.facts.bounds[0]
    assert answer.falling.least_v == pytest.approx(first.level_v + 0.11, abs=1e-12)
    assert answer.falling.least_v == pytest.approx(1.29 - answer.margins_v[Requirement.GUARANTEE], abs=1e-12)


def test_power_on_lets_go_before_the_under_voltage_detector() -> None:
    trip = "rising: {min: 1.24 V, max: 1.46 V}, falling: {min: 1.18 V, max: 1.4 V}"
    uv = f"uv: {{trip: {{falling: 1.63 V, rising: 1.68 V}}, errors: {{{ONE_ERROR}}}}}"
    answer = found(f"comparators: {{por: {{trip: {{{trip}}}}}, {uv}}}", "por")
    # The under-voltage detector releases from 1.68 V - 10 mV on; half the range is 110 mV, the hysteresis 60 mV.
    assert answer.falling.most_v == pytest.approx(1.67 - 0.11 - 0.06, abs=1e-12)
    assert answer.above.by is Requirement.BEFORE_UNDER_VOLTAGE
    assert answer.margins_v[Requirement.BEFORE_UNDER_VOLTAGE] == pytest.approx(1.67 - 1.46, abs=1e-12)
    assert answer.margins_v[Requirement.RELEASE] == pytest.approx(1.71 - 1.46, abs=1e-12)


def test_a_crossover_that_does_not_say_where_its_level_lies() -> None:
    answer = placed("comparators: {por: {trip: null}}", "por").found
    assert isinstance(answer, Unknown)
    assert answer.text() == "its level is made by a crossover; state as trip where that puts it"


def test_a_level_stated_as_the_other_and_the_hysteresis_takes_its_tolerance() -> None:
    patch = SIGN_OFF.replace("rising: 1.66 V", "rising: null")
    answer = found(patch, "uv")
    # The amount is 46 to 54 mV: the rising level is 4 mV less sure than the falling one.
    assert answer.falling.most_v == pytest.approx(1.645 - 0.004, abs=1e-12)
    assert answer.falling.least_v == pytest.approx(1.61, abs=1e-12)
    assert answer.largest_hysteresis_v == pytest.approx(0.081, abs=1e-12)


def test_a_sketch_without_levels_has_an_interval_already() -> None:
    answer = found(SIGN_OFF.replace("falling: 1.61 V, rising: 1.66 V", "falling: null, rising: null"), "uv")
    assert (answer.falling.least_v, answer.falling.most_v) == pytest.approx((1.61, 1.645), abs=1e-12)
    assert answer.margins_v == {}


def test_what_is_short_where_nothing_fits() -> None:
    answer = found(SIGN_OFF.replace("errors", "hysteresis: none, errors").replace("1.66 V", "1.705 V"), "uv")
    # Hysteresis 95 mV: upper end 1.71 - 0.005 - 0.01 - 0.095 = 1.6 V, 10 mV below the lower one.
    assert answer.falling.short_v == pytest.approx(0.010, abs=1e-12)
    assert answer.room_v == pytest.approx(-0.010, abs=1e-12)


@pytest.mark.parametrize("detector", ["uv", "ov", "por", "uv_core"])
def test_the_largest_hysteresis_just_fits(detector: str) -> None:
    answer = found("", detector)
    for more_v, fits in ((-1e-9, True), (1e-9, False)):
        tried = place_levels(with_hysteresis(answer.facts, answer.largest_hysteresis_v + more_v))
        assert (tried.falling.short_v == 0.0) is fits


NEEDED = {
    "uv": (
        "rails.avdd.ripple", "rails.avdd.load_step", "rails.avdd.source_impedance", "rails.avdd.collapse",
        "rails.avdd.delivered", "loads.adc.needs.0.works", "loads.core_regulator.needs.0.works",
        "comparators.uv.delay", "comparators.uv.errors.offset.is", "comparators.uv.errors.offset.at",
        "comparators.uv.divider.ratio", "conditions.combine", "conditions.coverage",
    ),
    "ov": ("rails.avdd.ripple", "rails.avdd.overshoot", "rails.avdd.delivered", "loads.adc.needs.0.works"),
    "por": (
        "references.ref_fast.works_from", "comparators.uv.works_from", "biases.bias_start.works_from",
        "rails.avdd.load_step", "comparators.ov.domain", "comparators.uv.errors",
    ),
}  # fmt: skip


@pytest.mark.parametrize(("detector", "fact"), [(d, fact) for d, facts in NEEDED.items() for fact in facts])
def test_a_missing_fact_is_named(detector: str, fact: str) -> None:
    answer = placed(without(fact), detector).found
    assert isinstance(answer, Unknown)
    assert len(answer.missing) == 1
    assert answer.missing[0].startswith(fact)


def test_a_load_that_nobody_guards_leaves_the_range_signed_off() -> None:
    patch = "resets: {por_n: {guards: [core_logic]}, core_rst_n: {guards: [core_logic]}}"
    bound = found(patch, "uv").facts.bounds[0]
    assert (bound.element, bound.fact, bound.level_v) == ("avdd", "rails.avdd.guaranteed", 1.6)


def test_codes() -> None:
    codes = "low: {falling: 1.59 V, rising: 1.64 V}, mid: {falling: 1.63 V, rising: 1.68 V}"
    patch = f"comparators: {{uv: {{trip: null, codes: {{{codes}}}, ships_with: low}}}}"
    answer = placed(patch, "uv")
    assert answer.usable == {"low": False, "mid": True}
    assert answer.stands is False


percent = st.floats(0.0, 2.0).map(lambda value: round(value, 3))
millivolts = st.floats(0.0, 12.0).map(lambda value: round(value, 3))


@settings(max_examples=25, deadline=None)
@given(
    share=percent, amount=millivolts, sigma=millivolts, apart=st.integers(1, 60), delay=st.integers(0, 5),
    combine=st.sampled_from(["worst_case", "root_sum_square"]), over=st.booleans(),
)  # fmt: skip
def test_inside_every_limit_holds_and_outside_the_named_one_fails(
    *, share: float, amount: float, sigma: float, apart: int, delay: int, combine: str, over: bool
) -> None:
    detector = "ov" if over else "uv"

    def patch(falling_v: float) -> str:
        errors = {
            "reference": {"share": f"{share} %"},
            "divider": {"share": None, "amount": f"{amount} mV"},
            "offset": {"amount": f"{sigma / 10:.4f} mV"},
        }
        trip = {"falling": f"{falling_v:.9f} V", "rising": f"{falling_v + apart / 1000:.9f} V"}
        own = {"trip": trip, "errors": errors, "delay": {"max": f"{delay} us"}}
        return json.dumps({"conditions": {"combine": combine}, "comparators": {detector: own}})

    def margins(falling_v: float) -> dict[Requirement, float]:
        # The table of requirements written out, over the windows that the rules use.
        down, up = windows(patch(falling_v), detector)
        answer_s = (delay + 1.5) * 1e-6
        if over:
            return {
                Requirement.GUARANTEE: 1.98 - (up.most_v + 1e3 * answer_s),
                Requirement.QUIET: up.least_v - (1.89 + 0.005),
                Requirement.COMES_BACK: down.least_v - (1.89 + 0.005),
            }
        return {
            Requirement.GUARANTEE: down.least_v - 2e3 * answer_s - 1.6,
            Requirement.QUIET: 1.71 - 0.005 - 0.03 * 0.4 - down.most_v,
            Requirement.COMES_BACK: 1.71 - 0.005 - up.most_v,
        }

    start_v = 1.9 if over else 1.62
    answer = found(patch(start_v), detector)
    ends = ((answer.falling.least_v, answer.below.by, -1.0), (answer.falling.most_v, answer.above.by, 1.0))
    for end_v, named, outwards in ends:
        at_end = margins(end_v)
        assert at_end[named] == pytest.approx(0.0, abs=3e-9)
        assert margins(end_v + outwards * 1e-6)[named] < 0.0
    assume(answer.falling.short_v == 0.0)
    assert min(margins(answer.middle_v).values()) >= -3e-9
    # Reported as they are: the margins of the levels that stand in the description.
    stated = margins(start_v)
    assert {by: pytest.approx(m, abs=3e-9) for by, m in answer.margins_v.items()} == stated


@settings(max_examples=40, deadline=None)
@given(share=st.floats(0.0, 0.05), amount_v=st.floats(0.0, 0.05), end_v=st.floats(0.3, 5.0), both=st.booleans())
def test_nominal_level_against_a_root_finder(share: float, amount_v: float, end_v: float, both: bool) -> None:
    # SciPy as the reference; one contributor that has both a fixed and a scaling part, one that only scales.
    spread = found("conditions: {combine: root_sum_square}", "uv").facts.levels.falling
    first, second, third = spread.errors
    mixed = replace(first, share=share, at_zero=replace(first.at_zero, at_rail_v=amount_v if both else 0.0))
    spread = replace(spread, errors=(mixed, replace(second, share=share / 2), third))
    low = brentq(lambda v: v - spread.at_v(v) - end_v, 0.0, 9.0, xtol=1e-14)
    high = brentq(lambda v: v + spread.at_v(v) - end_v, -1.0, 9.0, xtol=1e-14)
    assert spread.lowest_nominal_v(end_v) == pytest.approx(low, abs=1e-12)
    assert spread.highest_nominal_v(end_v) == pytest.approx(high, abs=1e-12)
