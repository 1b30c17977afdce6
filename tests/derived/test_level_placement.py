"""Placement from a description: worked numbers, and every interval tried out at its ends by the way the rules go."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator
from typing import Any

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from tests.derived.placing import falling_v, found, limited_by, margins_v, placed, windows
from tests.derived.small import description, detector, span, volts
from tests.rules.sound import SOUND, both, without
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement, detector_placement
from tidegate.lint.derived.levels.level_placement import place_levels
from tidegate.lint.derived.levels.placing import Place, Placing
from tidegate.lint.description.load import description_of, load
from tidegate.lint.description.model.description import Description
from tidegate.lint.facts.reading import Corner
from tidegate.lint.graph.dependency import build

ONE_ERROR = "reference: null, divider: null, offset: null, all: {of: total, amount: 10 mV, is: bound, at: rail}"
AT_ONCE = "delay: 0 s, filter: none"
SIGN_OFF = f"comparators: {{uv: {{trip: {{falling: 1.61 V, rising: 1.66 V}}, errors: {{{ONE_ERROR}}}, {AT_ONCE}}}}}"


def close(*values_v: float) -> Any:
    return pytest.approx(values_v, abs=1e-12)


# Worked numbers


def test_sign_off_example() -> None:
    # Common practice, no source: signed off from 1.60 V, error +-10 mV: the nominal falling level lies at 1.61 V or
    # above. Upper end: delivered from 1.71 V, less half of 10 mV ripple, 10 mV error and 50 mV hysteresis: 1.645 V.
    answer = found(SIGN_OFF, "uv")
    assert falling_v(answer) == close(1.61, 1.645)
    assert limited_by(answer) == ("protects", "comes back")
    assert placed(SIGN_OFF, "uv").largest_hysteresis_v == pytest.approx(0.085, abs=1e-9)
    assert margins_v(answer)["protects"] == pytest.approx(0.0, abs=1e-12)
    # Quiet: 1.71 V - 5 mV - 30 mA x 0.4 ohm - 1.62 V.
    assert margins_v(answer)["quiet"] == pytest.approx(0.073, abs=1e-12)
    assert answer.is_exact and answer.sure == answer.best


def test_response_moves_the_lower_end() -> None:
    # 2 V/ms over 2 us + 1.5 us is 7 mV.
    answer = found(SIGN_OFF.replace(AT_ONCE, "delay: {max: 2 us}, filter: {max: 1.5 us}"), "uv")
    assert falling_v(answer)[0] == pytest.approx(1.617, abs=1e-12)


def test_the_most_demanding_load_counts() -> None:
    patch = json.dumps({"loads": {"adc": {"needs": {"0": {"works": {"min": "1.62 V"}}}}}})
    below = found(patch, "uv").best.below
    assert below is not None and below.fact == "loads.adc.needs.0.works"
    more_v = falling_v(found(patch, "uv"))[0] - falling_v(found("", "uv"))[0]
    # The level rises by 20 mV and by the error's share of it: 0.5 % of the level, solved for the level.
    assert more_v == pytest.approx(0.020 / (1.0 - 0.005), abs=1e-9)


def test_over_voltage() -> None:
    patch = f"comparators: {{ov: {{errors: {{{ONE_ERROR}}}, {AT_ONCE}}}}}"
    answer = found(patch, "ov")
    # Service up to 1.89 V + 5 mV, error 10 mV; loads up to 1.98 V, less 10 mV error and 44 mV hysteresis.
    assert falling_v(answer) == close(1.905, 1.926)
    assert limited_by(answer) == ("comes back", "protects")


RANGES = "rising: {min: 1.24 V, max: 1.46 V}, falling: {min: 1.18 V, max: 1.4 V}"


def test_a_range_is_placed_without_changing_its_width() -> None:
    answer = found(f"comparators: {{por: {{trip: {{{RANGES}}}}}}}", "por")
    assert (answer.stated.ranged, answer.stated.words, answer.stated.falling_v) == (True, "mid-range", 1.29)
    # ref_fast works from 1.06 V; half the range is 110 mV.
    assert falling_v(answer)[0] == pytest.approx(1.06 + 0.11, abs=1e-12)
    assert falling_v(answer)[0] == pytest.approx(1.29 - margins_v(answer)["protects"], abs=1e-12)


def test_power_on_lets_go_before_the_under_voltage_detector() -> None:
    uv = f"uv: {{trip: {{falling: 1.63 V, rising: 1.68 V}}, errors: {{{ONE_ERROR}}}}}"
    answer = found(f"comparators: {{por: {{trip: {{{RANGES}}}}}, {uv}}}", "por")
    # The under-voltage detector releases from 1.68 V - 10 mV on; half the range is 110 mV, the hysteresis 60 mV.
    assert falling_v(answer)[1] == pytest.approx(1.67 - 0.11 - 0.06, abs=1e-12)
    assert limited_by(answer)[1] == "lets go in order"
    assert margins_v(answer)["lets go in order"] == pytest.approx(1.67 - 1.46, abs=1e-12)


def test_a_level_stated_as_the_other_and_the_hysteresis_takes_its_tolerance() -> None:
    patch = SIGN_OFF.replace("rising: 1.66 V", "rising: null")
    # The amount is 46 to 54 mV: the rising level is 4 mV less sure than the falling one.
    assert falling_v(found(patch, "uv")) == close(1.61, 1.645 - 0.004)
    assert placed(patch, "uv").largest_hysteresis_v == pytest.approx(0.081, abs=1e-9)


def test_a_sketch_without_levels_has_an_interval_already() -> None:
    answer = found(SIGN_OFF.replace("falling: 1.61 V, rising: 1.66 V", "falling: null, rising: null"), "uv")
    # The tolerance of the stated hysteresis, 4 mV, goes with the level that lets go.
    assert falling_v(answer) == close(1.61, 1.645 - 0.004)
    assert (answer.kept, answer.stands, answer.stated.placed) == ((), None, False)


def test_what_is_short_where_nothing_fits() -> None:
    answer = found(SIGN_OFF.replace("errors", "hysteresis: none, errors").replace("1.66 V", "1.705 V"), "uv")
    # Hysteresis 95 mV: upper end 1.71 - 0.005 - 0.01 - 0.095 = 1.6 V, 10 mV below the lower one.
    assert answer.best.is_empty
    assert answer.best.room_v == pytest.approx(-0.010, abs=1e-12)


def test_where_start_up_is_due_at_less_nothing_fits_and_the_shortage_is_told() -> None:
    # The sign-off example on a rail from 1.65 V, without ripple: the rising level must be at most 1.64 V, 20 mV below
    # the 1.66 V of the guarantee; 30 mV of hysteresis would fit.
    answer = small("under_voltage", (1.61, 1.66), works={"min": "1.6 V"}, delivered=(1.65, 1.9), amount="10 mV")
    assert answer.found.best.room_v == pytest.approx(-0.02, abs=1e-12)
    assert answer.largest_hysteresis_v == pytest.approx(0.03, abs=1e-9)
    for hysteresis_v, fits in ((0.03 - 1e-9, True), (0.03 + 1e-9, False)):
        levels = (1.61, 1.61 + hysteresis_v)
        tried = small("under_voltage", levels, works={"min": "1.6 V"}, delivered=(1.65, 1.9), amount="10 mV")
        assert tried.found.best.is_empty is not fits


def test_no_hysteresis_helps_a_level_whose_own_limits_contradict_each_other() -> None:
    answer = small("under_voltage", (1.61, 1.66), works={"min": "1.7 V"}, delivered=(1.65, 1.9), amount="10 mV")
    assert answer.largest_hysteresis_v is not None and answer.largest_hysteresis_v < 0.0


@pytest.mark.parametrize("of", ["uv", "ov", "por", "uv_core"])
def test_the_largest_hysteresis_just_fits(of: str) -> None:
    answer = placed("", of)
    now_v, largest_v = answer.found.stated.hysteresis_v, answer.largest_hysteresis_v
    assert now_v is not None and largest_v is not None
    for more_v, fits in ((-1e-8, True), (1e-8, False)):
        room_v = answer.placing.room_v(Corner.BEST, apart_v=largest_v - now_v + more_v)
        assert (room_v >= 0.0) is fits


@pytest.mark.parametrize("of", ["uv", "ov", "uv_core"])
def test_the_largest_errors_just_fit(of: str) -> None:
    """All errors so many times as large, written into the description."""
    answer = placed("", of)

    def larger(times: float) -> DetectorPlacement:
        errors = {
            "reference": {"share": f"{0.4 * times:.12f} %"}, "divider": {"share": f"{0.1 * times:.12f} %"},
            "offset": {"amount": f"{0.4 * times:.12f} mV"},
        }  # fmt: skip
        return placed(json.dumps({"comparators": {of: {"errors": errors}}}), of)

    here, anywhere = answer.errors_here, answer.errors_anywhere
    assert here is not None and anywhere is not None and here <= anywhere
    assert [larger(here + by).found.stands for by in (-1e-6, 1e-6)] == [True, False]
    assert [larger(anywhere + by).found.best.is_empty for by in (-1e-6, 1e-6)] == [False, True]


def test_a_load_that_nobody_guards_leaves_the_range_signed_off() -> None:
    patch = "resets: {por_n: {guards: [core_logic]}, core_rst_n: {guards: [core_logic]}}"
    below = found(patch, "uv").best.below
    assert below is not None
    assert (below.fact, below.limit_v) == ("rails.avdd.guaranteed", pytest.approx(1.607, abs=1e-12))
    assert below.why.startswith("avdd is signed off from 1.6 V; ")


def test_codes() -> None:
    codes = "low: {falling: 1.59 V, rising: 1.64 V}, mid: {falling: 1.63 V, rising: 1.68 V}"
    patch = f"comparators: {{uv: {{trip: null, codes: {{{codes}}}, ships_with: low}}}}"
    answer = placed(patch, "uv")
    assert answer.usable == {"low": False, "mid": True}
    assert answer.found.stands is False
    # Placed are the levels of the code that it ships with, and the same limits hold for them.
    assert falling_v(answer.found) == pytest.approx(falling_v(found("", "uv")), abs=1e-9)
    unsaid = placed(both(patch, without("comparators.uv.ships_with")), "uv")
    assert (unsaid.usable, unsaid.found.stands) == (answer.usable, None)
    assert unsaid.found.waits == ("comparators.uv.ships_with",)
    assert falling_v(unsaid.found) == pytest.approx(falling_v(answer.found), abs=1e-9)
    open_ = placed(both(patch, without("rails.avdd.collapse")), "uv")
    assert open_.usable == {"low": False, "mid": None}


# Everything against a root finder and against the rules


def small(
    role: str,
    levels: tuple[float, float | None],
    *,
    works: Any,
    delivered: tuple[float, float],
    amount: str,
    **more: Any,
) -> DetectorPlacement:
    """One detector with one error on a calm rail."""
    errors = {"all": {"of": "total", "amount": amount, "is": "bound", "at": "rail"}}
    own = detector(role, *levels, **{"errors": errors, **more})
    made = description({"det": own}, works=works, delivered=span(delivered))
    return detector_placement(made, build(made), made.comparators["det"])


@settings(max_examples=40, deadline=None)
@given(share=st.floats(0.0, 0.05), amount_v=st.floats(0.0, 0.05), end_v=st.floats(0.3, 5.0), squares=st.booleans())
def test_ends_against_a_root_finder(share: float, amount_v: float, end_v: float, squares: bool) -> None:
    """SciPy as the reference: V - E(V) at the load, V + E(V) at the supply; E in the worst case, or by squares."""
    errors = {
        "reference": {"of": "reference", "share": f"{share * 100:.12f} %", "is": "bound", "at": "rail"},
        "rest": {"of": "total", "amount": volts(amount_v), "is": "bound", "at": "rail"},
    }  # fmt: skip
    own = detector("under_voltage", end_v, None, errors=errors, hysteresis="none")
    made = description({"det": own}, works={"min": volts(end_v)}, delivered=span((end_v, 9.0)))
    if squares:
        made = _by_squares(made)
    share, amount_v, end_v = float(f"{share * 100:.12f}") / 100, float(f"{amount_v:.12g}"), float(f"{end_v:.12g}")

    def error_v(level_v: float) -> float:
        return math.hypot(share * level_v, amount_v) if squares else share * level_v + amount_v

    answer = place_levels(Placing(made, build(made), made.comparators["det"]))
    low_v = brentq(lambda v: v - error_v(v) - end_v, 0.0, 9.0, xtol=1e-14)
    assert falling_v(answer)[0] == pytest.approx(low_v, abs=1e-11)
    if end_v > error_v(0.0):
        high_v = brentq(lambda v: v + error_v(v) - end_v, 0.0, 9.0, xtol=1e-14)
        assert falling_v(answer)[1] == pytest.approx(high_v, abs=1e-11)


def _by_squares(made: Description) -> Description:
    import msgspec

    from tidegate.lint.description.model.description import Conditions

    return msgspec.structs.replace(made, conditions=Conditions(combine="root_sum_square", coverage=3.0))


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
    of = "ov" if over else "uv"

    def patch(falling: float) -> str:
        errors = {
            "reference": {"share": f"{share} %"},
            "divider": {"share": None, "amount": f"{amount} mV"},
            "offset": {"amount": f"{sigma / 10:.4f} mV"},
        }
        trip = {"falling": f"{falling:.9f} V", "rising": f"{falling + apart / 1000:.9f} V"}
        own = {"trip": trip, "errors": errors, "delay": {"max": f"{delay} us"}}
        return json.dumps({"conditions": {"combine": combine}, "comparators": {of: own}})

    def margins(falling: float) -> dict[str, float]:
        # The table of requirements written out, over the windows that the rules use.
        down, up = windows(patch(falling), of)
        answer_s = (delay + 1.5) * 1e-6
        if over:
            return {
                "protects": 1.98 - (up.most_v + 1e3 * answer_s),
                "quiet": up.least_v - (1.89 + 0.005),
                "comes back": down.least_v - (1.89 + 0.005),
            }
        return {
            "protects": down.least_v - 2e3 * answer_s - 1.6,
            "quiet": 1.71 - 0.005 - 0.03 * 0.4 - down.most_v,
            "comes back": 1.71 - 0.005 - up.most_v,
        }

    start_v = 1.9 if over else 1.62
    answer = found(patch(start_v), of)
    for end_v, named, outwards in zip(falling_v(answer), limited_by(answer), (-1.0, 1.0), strict=True):
        at_end = margins(end_v)
        assert at_end[named] == pytest.approx(0.0, abs=3e-9)
        assert margins(end_v + outwards * 1e-6)[named] < 0.0
    assume(not answer.best.is_empty)
    assert min(margins(start_v + answer.best.middle_v).values()) >= -3e-9
    # Reported as they are: the margins of the levels that stand in the description.
    stated = margins(start_v)
    assert {by: pytest.approx(m, abs=3e-9) for by, m in margins_v(answer).items()} == stated


@settings(max_examples=40, deadline=None)
@given(
    amount=millivolts, apart=st.integers(0, 50), ripple=millivolts, step=millivolts, least=st.integers(1500, 1800),
    under=st.none() | st.integers(1400, 1800),
)  # fmt: skip
def test_power_on_placement_is_exact(
    *, amount: float, apart: int, ripple: float, step: float, least: int, under: int | None
) -> None:
    """Nominal levels of a power-on detector, between what must work from 1.1 V and service, or who lets go next."""
    errors = {"all": {"of": "total", "amount": f"{amount} mV", "is": "bound", "at": "rail"}}
    detectors = {"por": detector("power_on", 1.3, 1.3 + apart / 1000, errors=errors)}
    if under is not None:
        detectors["uv"] = detector("under_voltage", (under / 1000 - 0.01, under / 1000), (under / 1000, 1.9))
        detectors["uv"] |= {"domain": "aon", "works_from": "1.1 V", "reference": "none", "bias": "none"}
    made = description(
        detectors, works={"min": "1.1 V"}, delivered=span((least / 1000, 2.0)), load_step="1 A",
        source_impedance=f"{step} mohm", ripple={"peak_to_peak": f"{ripple} mV"},
    )  # fmt: skip
    made = _in_a_domain(made)
    placing = Placing(made, build(made), made.comparators["por"])
    answer = place_levels(placing)
    error_v, apart_v, service_v = amount / 1000, apart / 1000, least / 1000 - ripple / 2000

    def margins(falling: float) -> dict[str, float]:
        rising_v = falling + apart_v
        kept = {
            "protects": falling - error_v - 1.1, "quiet": service_v - step / 1000 - falling - error_v,
            "comes back": service_v - rising_v - error_v,
        }  # fmt: skip
        return kept if under is None else {**kept, "lets go in order": under / 1000 - rising_v - error_v}

    assert margins_v(answer) == {name: pytest.approx(m, abs=1e-12) for name, m in margins(1.3).items()}
    for end_v, named, outwards in zip(falling_v(answer), limited_by(answer), (-1e-6, 1e-6), strict=True):
        assert margins(end_v)[named] == pytest.approx(0.0, abs=1e-12)
        assert margins(end_v + outwards)[named] < 0.0
        if not answer.best.is_empty:
            assert min(margins(end_v).values()) >= -1e-12
    for due in placing.dues:  # and as the requirements have it
        if due.name in margins(1.3):
            shifted = placing.margin(due, Corner.SURE, Place(0.123)).margin_v
            assert shifted == pytest.approx(margins(1.423)[due.name], abs=1e-12)


def _in_a_domain(made: Description) -> Description:
    import msgspec

    from tidegate.lint.description.model.supply import Domain

    return msgspec.structs.replace(made, domains={"aon": Domain(id="aon", rail="vdd")})


# What is missing


NEEDED = {
    "uv": (
        "rails.avdd.ripple", "rails.avdd.load_step", "rails.avdd.source_impedance", "rails.avdd.collapse",
        "rails.avdd.delivered", "loads.adc.needs.0.works", "loads.core_regulator.needs.0.works",
        "comparators.uv.delay", "comparators.uv.filter", "comparators.uv.sampling", "comparators.uv.errors.offset.is",
        "comparators.uv.errors.offset.at", "comparators.uv.errors.offset.of", "comparators.uv.divider.ratio",
        "comparators.uv.errors.reference.share", "comparators.uv.errors",
    ),
    "ov": ("rails.avdd.ripple", "rails.avdd.overshoot", "rails.avdd.delivered", "loads.adc.needs.0.works"),
    "por": (
        "references.ref_fast.works_from", "comparators.uv.works_from", "biases.bias_start.works_from",
        "rails.avdd.load_step", "comparators.ov.domain", "comparators.uv.errors",
    ),
}  # fmt: skip


@pytest.mark.parametrize(("of", "fact"), [(d, fact) for d, facts in NEEDED.items() for fact in facts])
def test_a_missing_fact_is_named_and_widens_what_is_known(of: str, fact: str) -> None:
    """What is known without it holds what is known with it: inclusion, IEEE 1788-2015."""
    less, more = found(without(fact), of), found("", of)
    # a list of errors of which one is of nothing that is said is not known to be whole
    assert less.waits and all(one.startswith((fact, "comparators.uv.errors")) for one in less.waits)
    assert not less.is_exact
    slack_v = 1e-12
    assert less.best.least_v <= more.best.least_v + slack_v
    assert less.best.most_v >= more.best.most_v - slack_v
    assert less.sure.least_v >= more.sure.least_v - slack_v
    assert less.sure.most_v <= more.sure.most_v + slack_v
    now = {each.name: each for each in less.kept}
    for each in more.kept:
        assert now[each.name].sure_v <= each.sure_v + slack_v
        assert now[each.name].best_v >= each.best_v - slack_v
    assert less.stands is not False  # the example stands


@pytest.mark.parametrize("fact", ["conditions.combine", "conditions.coverage"])
def test_policy_is_never_missing(fact: str) -> None:
    assert found(without(fact), "uv").is_exact


def test_one_end_that_is_known_is_told() -> None:
    """Without the ripple nothing surely comes back; from where on the load is protected is known all the same."""
    answer = found(without("rails.avdd.ripple"), "uv")
    assert answer.sure.is_empty
    assert answer.best.least_v == found("", "uv").best.least_v == answer.sure.least_v
    # 1.71 V less the 11.7 mV of error of the rising level and 50 mV of hysteresis: 5 mV more than with the ripple.
    assert falling_v(answer)[1] == pytest.approx(falling_v(found("", "uv"))[1] + 0.005 / 1.005, abs=1e-9)


def test_a_crossover_whose_level_is_not_stated_is_placed_as_far_as_is_known() -> None:
    answer = found("comparators: {por: {trip: null}}", "por")
    assert (answer.stated.placed, answer.stands) == (False, None)
    # What follows it works from 1.06 V; uv lets go from 1.677 V less 0.5 % and 3 x 0.4 mV / 0.367 on, 50 to 70 mV of
    # hysteresis below: no level of less than the first or more than the other can do. Its errors are not told.
    lets_go_v = 1.677 * 0.995 - 3 * 0.0004 / 0.367
    assert falling_v(answer) == close(1.06, lets_go_v - 0.070)
    assert answer.waits == ("comparators.por.errors",)
    assert answer.sure.is_empty


def test_a_hysteresis_that_is_not_given_is_none_or_more() -> None:
    """One nominal level: the other one lies at or above it, and what may be between them is told."""
    answer = small("under_voltage", (1.61, None), works={"min": "1.6 V"}, delivered=(1.71, 1.9), amount="10 mV")
    assert falling_v(answer.found) == close(1.61, 1.70)
    assert answer.found.waits == ("comparators.det.hysteresis.amount.max",)
    assert answer.largest_hysteresis_v == pytest.approx(0.09, abs=1e-9)
    none = small(
        "under_voltage",
        (1.61, None),
        works={"min": "1.6 V"},
        delivered=(1.71, 1.9),
        amount="10 mV",
        hysteresis="none",
    )
    assert falling_v(none.found) == close(1.61, 1.70)
    assert none.found.is_exact and none.largest_hysteresis_v == pytest.approx(0.09, abs=1e-9)


def test_leaving_a_fact_out_narrows_no_interval() -> None:
    """Inclusion (IEEE 1788-2015) over the keys of the sound example; the levels themselves are what is asked for."""
    data = load(SOUND).sources.data

    def intervals(given: Any) -> dict[str, tuple[float, float, float, float]] | None:
        made = description_of(given)
        if made is None:
            return None
        graph, found = build(made), {}
        for name, comparator in made.comparators.items():
            answer = place_levels(Placing(made, graph, comparator))
            point_v, sure, best = answer.stated.falling_v or 0.0, answer.sure, answer.best
            ends = (
                best.least_v,
                best.most_v,
                *((math.inf, -math.inf) if sure.is_empty else (sure.least_v, sure.most_v)),
            )
            found[name] = tuple(point_v + end_v for end_v in ends)
        return found  # type: ignore[return-value]

    known, tried, slack_v = intervals(data), 0, 1e-9
    assert known is not None
    for number, way in enumerate(_ways(data)):
        less = intervals(_left_out(data, way)) if number % 5 == 0 and "trip" not in way else None
        for name, ends in (less or {}).items():
            tried += 1
            assert ends[0] <= known[name][0] + slack_v and ends[1] >= known[name][1] - slack_v, (way, name)
            assert ends[2] >= known[name][2] - slack_v and ends[3] <= known[name][3] + slack_v, (way, name)
    assert tried > 100


def _ways(data: Any, way: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    """The way to every key of rails, references, detectors and loads, below the elements."""
    for key, value in data.items() if isinstance(data, dict) else ():
        here = (*way, key)
        if here[0] in ("rails", "references", "biases", "comparators", "loads", "domains"):
            if len(here) > 2:
                yield here
            yield from _ways(value, here)


def _left_out(data: Any, way: tuple[Any, ...]) -> Any:
    key, *rest = way
    if rest:
        return {**data, key: _left_out(data[key], tuple(rest))}
    return {name: value for name, value in data.items() if name != key}


# The supervisor of a board


def supervisor(**more: Any) -> DetectorPlacement:
    """Fifteen lines from two data sheets: the rail, the detector with its accuracy, the load."""
    data: dict[str, Any] = {
        "role": "under_voltage", "watches": "vdd", "trip": {"falling": "3.08 V"},
        "hysteresis": {"amount": {"typ": "40 mV"}},
        "errors": {"all": {"of": "total", "share": "1.5 %", "is": "bound", "at": "rail"}},
    }  # fmt: skip
    made = _rail_of_a_board({**data, **more})
    return detector_placement(made, build(made), made.comparators["sup"])


def _rail_of_a_board(own: dict[str, Any]) -> Description:
    made = description_of(
        {
            "rails": {"vdd": {"delivered": {"min": "3.135 V", "max": "3.465 V"}}},
            "comparators": {"sup": own},
            "output_stages": {"out": {"driven_by": ["sup"]}},
            "resets": {"rst": {"driven_by": ["out"], "active": "low", "guards": ["chip"]}},
            "loads": {"chip": {"needs": [{"rail": "vdd", "works": {"min": "2.7 V"}}]}},
        }
    )
    assert made is not None
    return made


def test_a_supervisor_of_a_board_gets_an_answer() -> None:
    answer = supervisor()
    found_ = answer.found
    # 2.7 V / (1 - 1.5 %), and (3.135 V - 40 mV) / (1 + 1.5 %): the hysteresis may be more, and ripple only lowers it.
    assert falling_v(found_) == close(2.7 / 0.985, 3.095 / 1.015)
    assert limited_by(found_) == ("protects", "comes back")
    kept = {each.name: each for each in found_.kept}
    assert kept["quiet"].best_v == pytest.approx(3.135 - 1.015 * 3.08, abs=1e-12)  # +8.8 mV
    assert kept["quiet"].terms == ("half the ripple", "load step at release")
    assert kept["protects"].best_v == pytest.approx(0.985 * 3.08 - 2.7, abs=1e-12)
    assert kept["comes back"].best_v == pytest.approx(3.135 - 1.015 * 3.08 - 0.04, abs=1e-12)  # 31.2 mV short
    assert (found_.stands, found_.sure.is_empty) == (False, True)
    assert {"rails.vdd.ripple.peak_to_peak", "rails.vdd.collapse", "comparators.sup.delay"} <= set(found_.waits)


def test_what_a_supervisor_still_bears() -> None:
    borne = {(each.requirement, each.term): each for each in supervisor().borne}
    ripple = borne["quiet", "half the ripple"]
    assert ripple.fact is not None and ripple.fact.at_most and not ripple.alone
    assert ripple.fact.value == pytest.approx(2 * (3.135 - 1.015 * 3.08), abs=1e-9)  # 17.6 mV peak to peak
    # A load step and an impedance are one term: neither is limited by itself.
    step = borne["quiet", "load step at release"]
    assert (step.fact, step.room_v) == (None, pytest.approx(0.0088, abs=1e-9))
    assert not any(requirement == "comes back" for requirement, _ in borne)


def test_which_tolerance_and_hysteresis_fit_a_supervisor() -> None:
    answer = supervisor()
    # Where it stands: 3.08 V (1 + e) + 40 mV <= 3.135 V. Anywhere: 2.7 V / (1 - e) = (3.135 V - 40 mV) / (1 + e).
    assert answer.errors_here is not None and answer.errors_anywhere is not None
    assert 0.015 * answer.errors_here == pytest.approx(3.095 / 3.08 - 1, abs=1e-9)
    assert 0.015 * answer.errors_anywhere == pytest.approx((3.095 - 2.7) / (3.095 + 2.7), abs=1e-9)
    # The rising level at its highest 3.135 V, the falling one at its lowest place 2.7 V / 0.985.
    assert answer.largest_hysteresis_v == pytest.approx(3.135 - 2.7 / 0.985 * 1.015, abs=1e-9)


def test_a_supervisor_placed_lower_stands_as_far_as_is_known() -> None:
    answer = supervisor(trip={"falling": "3 V"})
    assert (answer.found.stands, answer.found.best.is_empty) == (None, False)
    assert {each.requirement for each in answer.borne} == {"protects", "quiet", "comes back"}


def test_a_typical_level_is_moved_with_what_is_known_of_it() -> None:
    """A typical level has the errors of a nominal one at least: these are known."""
    answer = supervisor(trip={"falling": {"typ": "3 V"}}).found
    assert (answer.stated.words, answer.stated.ranged) == ("typical", True)
    assert falling_v(answer) == close(2.7 / 0.985, 3.095 / 1.015)
