from __future__ import annotations

import json
import math

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Rule
from tidegate.rules.description import RULES as DESCRIPTION
from tidegate.rules.hysteresis import RULES
from tidegate.rules.trip_window import RULES as TRIP_WINDOW

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
NAMES = ("present", "sense", "covers_disturbance", "false_trips", "fits_window", "switches_complementary")
ALL = (*NAMES, "feedback_in_time")

# One comparator with round numbers: what it must cover is 10 mV of ripple + 30 mA through 0.4 ohm = 12 mV of droop
# + 3 times 0.5 mV of noise.
BENCH = """
conditions: {coverage: 3, service_life: 10 yr, false_trips: 0.001, combine: worst_case}
rails:
  avdd:
    nominal: 1.8 V
    delivered: {min: 1.71 V, max: 1.89 V}
    rise: {min: 50 us, max: 20 ms}
    dip: {depth: 0 V, at: null}
    ripple: {peak_to_peak: 10 mV, frequency: 1 MHz}
    load_step: {max: 30 mA}
    source_impedance: {max: 0.4 ohm}
comparators:
  uv:
    trip: {rising: {min: 1.65 V, max: 1.7 V}, falling: {min: 1.6 V, max: 1.645 V}}
    tracked: true
    hysteresis: {amount: {min: 46 mV, max: 54 mV}, feedback_delay: 0.1 us}
    noise: {rms: 0.5 mV, bandwidth: 1 MHz}
    filter: none
    reference: none
  ov:
    trip: {rising: {min: 1.95 V, max: 1.97 V}, falling: {min: 1.9 V, max: 1.92 V}}
    hysteresis: {amount: {min: 40 mV, max: 48 mV}}
    noise: {rms: 0.5 mV, bandwidth: 1 MHz}
    filter: none
    reference: none
neighbours: {uv_beside_ov: null, core_return: null, switcher_on_ref: null}
"""
NEED_V = 0.010 + 0.030 * 0.4 + 3 * 0.0005


def said(rule: str, *patches: str, of: str = "uv") -> Judgement:
    return judged(both(BENCH, *patches), RULES)[f"hysteresis/{rule}", of]


def amount(least: str, most: str, of: str = "uv") -> str:
    return f"comparators: {{{of}: {{hysteresis: {{amount: {{min: {least}, max: {most}}}}}}}}}"


def test_sound_example_keeps_every_rule() -> None:
    judgements = judged("", RULES)
    assert of_kind(judgements, FAIL, OPEN, Kind.REVIEW) == []
    assert of_kind(judgements, NONE) == [  # por has no switches, and its level follows what leans on it
        ("hysteresis/fits_window", "por"), ("hysteresis/switches_complementary", "por"),
    ]  # fmt: skip
    assert len(judgements) == len(RULES) * 4


# What each example changes on the sound description, beside its own rule.
ALSO = {
    # What needs some is told under it; there is nothing that makes it, and none of it takes up room.
    "present": dict.fromkeys(set(ALL[1:]) - {"fits_window"}, NONE),
    "covers_disturbance": {"false_trips": NONE},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_examples(rule: Rule) -> None:
    name = rule.id.partition("/")[2]
    also = {(f"hysteresis/{other}", "uv"): kind for other, kind in ALSO.get(name, {}).items()}
    assert changed(rule.example.fails, RULES) == {(rule.id, "uv"): FAIL, **also}
    assert changed(rule.example.holds, RULES) == {}


# present


def test_absent_hysteresis_says_how_much_is_needed() -> None:
    found = said("present", "comparators: {uv: {hysteresis: none}}")
    assert (found.kind, found.message) == (FAIL, "has no hysteresis")
    # 10 mV + 12 mV, and sqrt(2 ln(nu0 T/N)) = 8.915 times 0.5 mV of noise, with nu0 = 1 MHz/sqrt(3), T = 10 yr,
    # N = 0.001 (Rice): more than the 3 times of the coverage.
    assert found.mend == "add hysteresis of at least 26.5 mV"
    assert found.at == "comparators.uv.hysteresis"
    # A dip counts wherever it is: there are no levels yet that it could fall between.
    deep = said(
        "present",
        "{comparators: {uv: {hysteresis: none, trip: null}}, rails: {avdd: {dip: {depth: 15 mV, at: 0.9 V}}}}",
    )
    assert deep.mend == "add hysteresis of at least 41.5 mV"
    # Of the two needs, the one that is known.
    lifeless = said("present", "comparators: {uv: {hysteresis: none}}", without("conditions.service_life"))
    assert lifeless.mend == "add hysteresis of at least 23.5 mV"


def test_absent_hysteresis_is_found_whatever_else_is_missing() -> None:
    bare = said(
        "present", "comparators: {uv: {hysteresis: none}}", without("rails.avdd.ripple", "comparators.uv.noise")
    )
    assert bare.kind is FAIL
    assert bare.mend == "add hysteresis that covers ripple, droop at release, neighbours and noise"


@pytest.mark.parametrize(
    "patch",
    [
        "comparators: {uv: {hysteresis: {amount: 0 V}}}",
        "comparators: {uv: {hysteresis: {amount: null}, trip: {rising: 1.62 V, falling: 1.62 V}}}",
        "comparators: {uv: {hysteresis: null, trip: {rising: 1.62 V, falling: 1.62 V}}}",
    ],
    ids=["amount_of_zero", "equal_levels", "equal_levels_alone"],
)
def test_hysteresis_of_zero_is_none(patch: str) -> None:
    kinds = {rule: said(rule, patch).kind for rule in ALL}
    assert kinds == {"present": FAIL, **dict.fromkeys(ALL[1:], NONE), "fits_window": PASS}
    assert said("sense", patch).message == "it has no hysteresis, and nothing that makes one"
    for rule, need_v in (("covers_disturbance", NEED_V), ("false_trips", NEED_V + (8.915 - 3) * 0.0005)):
        found = said(rule, patch)
        assert found.under == "hysteresis/present" and found.message.endswith("(hysteresis/present says so)")
        assert found.measure is not None
        assert (found.measure.have, found.measure.need) == (0.0, pytest.approx(need_v, rel=1e-4))
    window = said("fits_window", patch)
    assert window.measure is not None and window.measure.have == 0.0


@pytest.mark.parametrize(
    ("trip", "kind"),
    [
        # Two equal ranges do not say that the levels are one, nor do two typical values in ranges.
        ("{rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.6 V, max: 1.7 V}}", OPEN),
        ("{rising: {typ: 1.65 V, max: 1.7 V}, falling: {typ: 1.65 V, max: 1.7 V}}", OPEN),
        ("{rising: {min: 1.65 V, typ: 1.65 V, max: 1.65 V}, falling: {min: 1.65 V, typ: 1.65 V, max: 1.65 V}}", OPEN),
        ("{rising: 1.65 V, falling: 1.65 V}", FAIL),
        ("{rising: {typ: 1.65 V}, falling: {typ: 1.65 V}}", FAIL),  # as nominal as one value
        ("{rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.6 V, max: 1.69 V}}", PASS),
        ("{rising: {typ: 1.65 V, max: 1.7 V}, falling: {typ: 1.65 V, max: 1.69 V}}", PASS),
        ("{rising: {max: 1.7 V}, falling: {min: 1.6 V}}", OPEN),
        ("{rising: 1.65 V, falling: null}", OPEN),
        ("null", OPEN),
    ],
)
def test_levels_say_whether_there_is_hysteresis(trip: str, kind: Kind) -> None:
    bare = "comparators: {uv: {trip: null, hysteresis: {amount: null}}}"
    found = said("present", both(bare, f"comparators: {{uv: {{trip: {trip}}}}}"))
    assert found.kind is kind
    assert found.missing == (("comparators.uv.hysteresis.amount",) if kind is OPEN else ())


def test_small_hysteresis_is_not_missing() -> None:
    patch = amount("0 mV", "2 mV")
    assert said("present", patch).kind is PASS
    assert said("present", patch).message == "has hysteresis, 0 V to 2 mV"
    assert said("covers_disturbance", patch).kind is FAIL


def test_least_hysteresis_of_zero_is_of_no_sense() -> None:
    """The rising level cannot lie below the falling one: what is too small is told as such."""
    patch = amount("0 mV", "2 mV")
    assert said("sense", patch).kind is PASS
    assert said("false_trips", patch).under == "hysteresis/covers_disturbance"
    late = said("feedback_in_time", patch)
    assert (late.kind, late.message) == (
        FAIL, "until the level has moved, the supply travels 3.6 mV, at most 0 V needed",
    )  # fmt: skip
    level_with_it = "comparators: {uv: {trip: {rising: {min: 1.6 V, max: 1.645 V}}}}"
    assert said("fits_window", level_with_it).message == "greatest hysteresis 0 V, at most 56 mV needed"
    equal = "comparators: {uv: {trip: {rising: 1.62 V, falling: 1.62 V}}}"  # beside an amount that is stated
    assert said("sense", equal).kind is PASS


# sense


def test_negative_feedback_is_found_without_any_number() -> None:
    found = said(
        "sense", "comparators: {uv: {hysteresis: {feedback: negative}}}",
        without("comparators.uv.hysteresis.amount", "comparators.uv.trip"),
    )  # fmt: skip
    assert found.kind is FAIL
    assert found.message == "the feedback moves the level towards the supply: it oscillates at its level"
    assert found.mend == "make the feedback positive: swap the two switches, or the two ends of the feedback"
    assert found.at == "comparators.uv.hysteresis.feedback"


def test_swapped_levels() -> None:
    found = said("sense", "comparators: {uv: {trip: {rising: 1.61 V, falling: 1.66 V}}}")
    assert found.kind is FAIL
    assert found.message == "the rising level lies below the falling one (1.61 V rising, 1.66 V falling)"
    assert found.mend == "place the rising level above the falling one by the hysteresis"
    assert found.at == "comparators.uv.trip"


OVERLAP = """
comparators:
  uv: {hysteresis: {amount: null}, trip: {rising: {min: 1.6 V, max: 1.7 V}, falling: {min: 1.54 V, max: 1.66 V}}}
"""


def test_tracked_levels_may_overlap() -> None:
    # Low with low and high with high: 60 mV and 40 mV apart, although the ranges overlap by 60 mV.
    assert said("present", OVERLAP).message == "has hysteresis, 40 mV to 60 mV"
    assert said("sense", OVERLAP).kind is PASS
    assert said("covers_disturbance", OVERLAP).kind is PASS


def test_levels_that_move_apart_may_not_overlap() -> None:
    patch = both(OVERLAP, "comparators: {uv: {tracked: false}}")
    found = said("sense", patch)
    assert found.kind is FAIL
    assert found.message == "the rising level can lie below the falling one (60 mV below at the worst)"
    assert found.measure is not None and found.measure.margin == pytest.approx(-0.060)
    # One fault, one finding: all others that it explains keep their numbers and are told under it.
    for rule in ("covers_disturbance", "false_trips", "feedback_in_time"):
        other = said(rule, patch)
        assert (other.kind, other.under) == (NONE, "hysteresis/sense")
        assert other.measure is not None and other.measure.margin < 0.0
    assert said("feedback_in_time", patch).message == (
        "until the level has moved, the supply travels 3.6 mV, at most 0 V needed (hysteresis/sense says so)"
    )
    failed = of_kind(judged(both(BENCH, patch), RULES), FAIL)
    assert set(failed) - {("hysteresis/fits_window", "uv")} == {("hysteresis/sense", "uv")}  # 120 mV wide as they are


def test_overlap_cannot_be_judged_without_knowing_whether_levels_track() -> None:
    found = said("sense", OVERLAP, without("comparators.uv.tracked"))
    assert (found.kind, found.missing) == (OPEN, ("comparators.uv.hysteresis.amount", "comparators.uv.tracked"))
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((-0.060, 0.040))
    # It is a question for every other rule too, and a failure of none.
    after = judged(both(BENCH, OVERLAP, without("comparators.uv.tracked")), RULES)
    assert set(of_kind(after, FAIL)) <= {("hysteresis/fits_window", "uv")}


NOMINAL = """
comparators:
  uv:
    trip: {rising: 1.66 V, falling: 1.6 V}
    hysteresis: {amount: null}
    errors: {reference: {share: 2 %, tracks: null}, divider: {tracks: null}, offset: {tracks: null}}
"""


def test_errors_of_nominal_levels_are_a_question_until_it_is_said_that_they_do_not_track() -> None:
    # 60 mV apart; 2 % and 0.1 % of 1.66 V and of 1.6 V and twice 3.27 mV come to 75 mV where nothing tracks, and to
    # 2.1 % of 60 mV where all of it does.
    offset_v = 3 * 0.0004 / 0.367
    crossed_v = 0.06 - 0.021 * (1.66 + 1.6) - 2 * offset_v
    tracked, apart, unsaid = (
        said("sense", NOMINAL, f"comparators: {{uv: {{tracked: {word}}}}}") for word in ("true", "false", "null")
    )
    assert (tracked.kind, apart.kind, unsaid.kind) == (PASS, FAIL, OPEN)
    assert unsaid.missing == (
        "comparators.uv.hysteresis.amount",
        *(f"comparators.uv.errors.{name}.tracks" for name in ("reference", "divider", "offset")),
    )
    assert tracked.measure is not None and apart.measure is not None and unsaid.measure is not None
    # A detector that is said to move both levels together has them so far apart; that its errors track does not say
    # with which tolerance the hysteresis comes.
    assert tracked.measure.have == pytest.approx(0.06 * (1 - 0.021), rel=1e-9)
    assert apart.measure.have == pytest.approx(crossed_v, rel=1e-9)
    assert (unsaid.measure.sure_margin, unsaid.measure.best_margin) == pytest.approx(
        (apart.measure.margin, 0.06 * (1 - 0.021))
    )


def test_an_exact_tie_of_levels_and_errors_is_none_too_few() -> None:
    # 100 mV apart less twice 50 mV: in binary floating point 2.8e-17 V off.
    tie = """
    comparators:
      uv: {tracked: false, trip: {rising: 1.7 V, falling: 1.6 V}, hysteresis: {amount: null},
           errors: {reference: null, divider: null, offset: {of: total, amount: 50 mV, is: bound, at: rail}}}
    """
    found = said("sense", tie)
    assert found.measure is not None
    assert (found.kind, found.measure.have) == (PASS, 0.0)
    assert found.message == "the rising level lies above the falling one by 0 V, at least 0 V needed"


# covers_disturbance


@pytest.mark.parametrize(("least", "kind"), [("23.4 mV", FAIL), ("23.5 mV", PASS), ("23.6 mV", PASS)])
def test_covers_disturbance_at_its_limit(least: str, kind: Kind) -> None:
    found = said("covers_disturbance", amount(least, "54 mV"))
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.need == pytest.approx(NEED_V, rel=1e-12)
    assert found.measure.margin == pytest.approx(float(least[:4]) * 1e-3 - NEED_V, abs=1e-12)


def test_covers_disturbance_says_why_and_what_would_do() -> None:
    found = said("covers_disturbance", amount("20 mV", "28 mV"))
    assert found.message == "hysteresis 20 mV, at least 23.5 mV needed"
    assert found.why == "10 mV ripple + 12 mV droop at release + 1.5 mV noise"
    assert found.mend == "at least 23.5 mV of hysteresis; now 20 mV"
    assert found.at == "comparators.uv.hysteresis.amount"
    assert found.level == "error"


def test_droop_at_release_moves_away_from_an_over_voltage_level() -> None:
    assert said("covers_disturbance", of="ov").why == "10 mV ripple + 1.5 mV noise"


# The levels lie in 1.6 V to 1.7 V; a dip of 15 mV counts where it can touch that band.
@pytest.mark.parametrize(
    ("at", "counts"),
    [
        ("{min: 1.5 V, max: 1.599 V}", False),
        ("{min: 1.5 V, max: 1.6 V}", True),
        ("{min: 1.714 V, max: 1.8 V}", True),
        ("{min: 1.716 V, max: 1.8 V}", False),
        ("{min: 0.9 V, max: 1.9 V}", True),
        ("null", True),
    ],
)
def test_a_dip_counts_where_it_can_fall_between_the_levels(at: str, counts: bool) -> None:
    found = said("covers_disturbance", f"rails: {{avdd: {{dip: {{depth: 15 mV, at: {at}}}}}}}")
    assert found.measure is not None
    assert found.measure.need == pytest.approx(NEED_V + (0.015 if counts else 0.0), rel=1e-12)
    assert ("15 mV dip of the ramp" in found.why) is counts


def test_neighbours_count_all_at_once() -> None:
    # 1 mA through 3 ohm at the rail, and 0.5 mA through 2 ohm behind a divider of 0.4: 3 mV + 2.5 mV.
    pairs = """
    comparators: {uv: {divider: {ratio: 0.4}}}
    neighbours:
      one: {kind: supply_impedance, aggressor: ov, victim: uv, mutual: false, at: rail, impedance: 3 ohm,
            current_step: 1 mA}
      two: {kind: shared_return, aggressor: ov_out, victim: uv, at: input, impedance: 2 ohm, current_step: 0.5 mA}
    """
    found = said("covers_disturbance", pairs)
    assert found.measure is not None
    assert found.measure.need == pytest.approx(NEED_V + 0.003 + 0.0025, rel=1e-12)
    assert found.why == (
        "10 mV ripple + 12 mV droop at release + 3 mV ov through one + 2.5 mV ov_out through two + 1.5 mV noise"
    )


# false_trips


# nu0 T exp(-k^2/2) trips in the life T at the distance of k sigma, nu0 = B/sqrt(3) (Rice, BSTJ 23 and 24): with k = 8
# the noise needs 4 mV, beside 22 mV of ripple and droop.
EIGHT_SIGMA = 1e6 / math.sqrt(3.0) * 10 * 365.25 * 86400 * math.exp(-32.0)


@pytest.mark.parametrize(("least", "kind"), [("25.9 mV", FAIL), ("26 mV", PASS), ("26.1 mV", PASS)])
def test_false_trips_at_its_limit(least: str, kind: Kind) -> None:
    found = said("false_trips", json.dumps({"conditions": {"false_trips": EIGHT_SIGMA}}), amount(least, "54 mV"))
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.need == pytest.approx(0.022 + 0.004, rel=1e-9)
    assert found.measure.have == pytest.approx(float(least.split(maxsplit=1)[0]) * 1e-3, rel=1e-9)


def test_false_trips_says_why_and_what_would_do() -> None:
    found = said("false_trips", json.dumps({"conditions": {"false_trips": EIGHT_SIGMA}}), amount("25 mV", "54 mV"))
    assert found.message == "hysteresis 25 mV, at least 26 mV needed"
    assert found.why == "10 mV ripple + 12 mV droop at release + 4 mV distance from noise"
    assert found.mend == "at least 26 mV of hysteresis; now 25 mV"


def test_hysteresis_that_is_too_small_anyway_is_one_finding() -> None:
    found = said("false_trips", amount("23.4 mV", "54 mV"))
    assert (found.kind, found.under) == (NONE, "hysteresis/covers_disturbance")
    assert found.measure is not None and found.measure.need == pytest.approx(0.022 + 8.915 * 0.0005, rel=1e-4)
    # The other rule is open without the ripple, and this one fails by what is known all the same.
    few = amount("16 mV", "54 mV")
    assert said("covers_disturbance", few, without("rails.avdd.ripple")).kind is OPEN
    assert said("false_trips", few, without("rails.avdd.ripple")).kind is FAIL


def test_coverage_and_false_trips_are_policy_with_defaults() -> None:
    for rule in ("covers_disturbance", "false_trips"):
        told, left_out = said(rule), said(rule, without("conditions.coverage", "conditions.false_trips"))
        assert (left_out.kind, left_out.measure) == (told.kind, told.measure)
    more = said("covers_disturbance", "conditions: {coverage: 6}")
    assert more.measure is not None and more.measure.need == pytest.approx(NEED_V + 3 * 0.0005, rel=1e-12)


# fits_window: uv must let go by 1.71 V less half of 10 mV, and assert at 1.6 V of the load and 2 V/ms for 2 us: 101 mV,
# of which the falling level takes 45 mV. ov: 1.98 V less 1 V/ms for 2 us, down to 1.89 V and half of 10 mV: 83 mV, of
# which the rising level takes 20 mV.


NO_RISING = "comparators: {uv: {trip: {rising: null}}}"
NO_FALLING = "comparators: {ov: {trip: {falling: null}}}"


@pytest.mark.parametrize(("most", "kind"), [("55.9 mV", PASS), ("56 mV", PASS), ("56.1 mV", FAIL)])
def test_fits_window_at_its_limit(most: str, kind: Kind) -> None:
    found = said("fits_window", NO_RISING, amount("46 mV", most))
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.need == pytest.approx((1.71 - 0.005) - (1.6 + 2000 * 2e-6) - 0.045, abs=1e-12)
    assert found.measure.have == pytest.approx(float(most.split(maxsplit=1)[0]) * 1e-3, rel=1e-12)


@pytest.mark.parametrize(("most", "kind"), [("62.9 mV", PASS), ("63 mV", PASS), ("63.1 mV", FAIL)])
def test_fits_window_of_an_over_voltage_detector(most: str, kind: Kind) -> None:
    found = said("fits_window", NO_FALLING, amount("40 mV", most, of="ov"), of="ov")
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.need == pytest.approx((1.98 - 1000 * 2e-6) - (1.89 + 0.005) - 0.020, abs=1e-12)


def test_fits_window_says_why_and_what_would_do() -> None:
    found = said("fits_window", NO_RISING, amount("46 mV", "60 mV"))
    assert found.message == "greatest hysteresis 60 mV, at most 56 mV needed"
    assert found.why == (
        "room of 101 mV, of which the falling level takes 45 mV: adc works from 1.6 V; until the answer, 2 us later, "
        "avdd falls 4 mV; avdd is delivered down to 1.71 V, less 5 mV (half the ripple)"
    )
    assert found.mend == "at most 56 mV of hysteresis; now 60 mV"
    assert found.at == "comparators.uv.hysteresis.amount"


def test_a_bounded_release_level_is_not_trip_plus_hysteresis_again() -> None:
    # Released by 1.69 V at the latest, 45 mV above 1.645 V, whatever the hysteresis would make of it.
    found = said("fits_window", "comparators: {uv: {trip: {rising: {max: 1.69 V}}}}", amount("46 mV", "60 mV"))
    assert found.kind is PASS
    assert found.measure is not None and found.measure.have == pytest.approx(0.045, abs=1e-12)
    # An amount that is not stated at all is what lies between the levels.
    found = said("fits_window", "comparators: {uv: {hysteresis: {amount: null}}}")
    assert found.measure is not None and found.measure.have == pytest.approx(0.055, abs=1e-12)


def test_fits_window_where_there_is_no_such_room() -> None:
    unguarded = "resets: {por_n: {guards: [core_logic]}, core_rst_n: {guards: [core_logic]}}"
    found = said("fits_window", unguarded)
    assert (found.kind, found.message) == (
        NONE, "nothing that it guards sets it a limit (trip_window/release judges its levels)",
    )  # fmt: skip
    found = said("fits_window", "comparators: {uv: {role: reference_ready}}")
    assert (found.kind, found.message) == (NONE, "watches whether a reference is ready, not the range of a supply")


# The falling level takes 102 mV of 101 mV; the load works from 1.72 V, and what is delivered less ripple is 1.705 V.
TOO_WIDE = "comparators: {uv: {trip: {falling: {min: 1.6 V, max: 1.702 V}}}}"
UNWORKABLE = "loads: {adc: {needs: {0: {works: {min: 1.72 V, max: 1.98 V}}}}}"


@pytest.mark.parametrize(
    ("patch", "above", "left_v"),
    [
        (TOO_WIDE, "trip_window/spread", 0.101 - 0.102),
        (UNWORKABLE, "description/loads", 1.705 - 1.724 - 0.045),
    ],
)
def test_fits_window_is_told_under_what_leaves_no_room(patch: str, above: str, left_v: float) -> None:
    found = judged(both(BENCH, patch), (*RULES, *TRIP_WINDOW, *DESCRIPTION))["hysteresis/fits_window", "uv"]
    assert (found.kind, found.under) == (NONE, above)
    assert found.measure is not None and found.measure.need == pytest.approx(left_v, abs=1e-12)
    # No need below nothing is printed.
    assert found.message == f"greatest hysteresis {show_of(found)}, and no room is left for any ({above} says so)"
    alone = said("fits_window", patch)
    assert (alone.kind, alone.mend) == (FAIL, "a smaller error, or more room: as it is, there is none for hysteresis")


def show_of(found: Judgement) -> str:
    assert found.measure is not None
    return show(found.measure.have, Dimension.VOLTAGE)


def test_levels_that_cross_take_no_room_for_hysteresis() -> None:
    crossed = "comparators: {uv: {trip: {rising: {min: 1.6 V, max: 1.64 V}}}}"
    found = said("fits_window", crossed)
    assert (found.kind, found.message) == (PASS, "greatest hysteresis 0 V, at most 56 mV needed")


# Levels chosen by code


CODES = """
comparators:
  uv:
    trip: null
    ships_with: mid
    codes:
      low: {rising: {min: 1.5 V, max: 1.55 V}, falling: {min: 1.45 V, max: 1.5 V}}
      mid: {rising: {min: 1.65 V, max: 1.7 V}, falling: {min: 1.6 V, max: 1.645 V}}
"""


def test_levels_chosen_by_code_are_those_it_ships_with() -> None:
    for rule in ALL:
        plain, by_code = said(rule), said(rule, CODES)
        assert (by_code.kind, by_code.message) == (plain.kind, plain.message)
    other = said("covers_disturbance", CODES, "rails: {avdd: {dip: {depth: 15 mV, at: 1.5 V}}}")
    assert other.measure is not None and other.measure.need == pytest.approx(NEED_V, rel=1e-12)  # not at low's levels


def test_which_code_it_ships_with_is_asked_for() -> None:
    derived = both(CODES, "comparators: {uv: {ships_with: null, hysteresis: {amount: null}}}")
    assert said("present", derived).missing == ("comparators.uv.ships_with",)
    assert said("fits_window", derived).missing == ("comparators.uv.ships_with",)
    # With an amount stated, whether there is some does not hang on the code.
    assert said("present", CODES, "comparators: {uv: {ships_with: null}}").kind is PASS


@pytest.mark.parametrize(
    ("patch", "message"),
    [
        ("comparators: {uv: {hysteresis: {amount: {typ: 50 mV}}}}", "has hysteresis, typically 50 mV"),
        ("comparators: {uv: {hysteresis: {amount: {min: 20 mV}}}}", "has hysteresis, at least 20 mV"),
        ("comparators: {uv: {hysteresis: {amount: {max: 54 mV}}}}", "has hysteresis, at most 54 mV"),
        (
            "comparators: {uv: {hysteresis: {amount: {typ: 50 mV, max: 54 mV}}}}",
            "has hysteresis, typically 50 mV, at most 54 mV",
        ),
        (
            "comparators: {uv: {hysteresis: {amount: null}, tracked: null, "
            "trip: {rising: {typ: 1.68 V, max: 1.7 V}, falling: {typ: 1.63 V, min: 1.6 V}}}}",
            "has hysteresis, typically 50 mV",
        ),
    ],
)
def test_a_typical_hysteresis_is_some(patch: str, message: str) -> None:
    found = said("present", patch)
    assert (found.kind, found.message) == (PASS, message)


def test_a_typical_hysteresis_is_no_least_one() -> None:
    bare = "comparators: {uv: {trip: null}}"
    found = said("covers_disturbance", bare, "comparators: {uv: {hysteresis: {amount: {typ: 50 mV}}}}")
    assert (found.kind, found.missing) == (OPEN, ("comparators.uv.hysteresis.amount.min",))
    assert found.measure is not None  # between nothing and what is typical
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((-NEED_V, 0.050 - NEED_V))
    # Less than what it must be even if it were the typical one.
    assert said("covers_disturbance", bare, "comparators: {uv: {hysteresis: {amount: {typ: 20 mV}}}}").kind is FAIL
    # Levels that are at least 5 mV apart, and 50 mV or 55 mV at either end, leave less of it open.
    both_levels = said("covers_disturbance", "comparators: {uv: {tracked: null, hysteresis: {amount: {typ: 52 mV}}}}")
    assert both_levels.kind is OPEN and both_levels.measure is not None
    assert (both_levels.measure.sure_margin, both_levels.measure.best_margin) == pytest.approx(
        (0.005 - NEED_V, 0.050 - NEED_V)
    )
    # Where the detector moves both together, they tell it.
    assert said("covers_disturbance", "comparators: {uv: {hysteresis: {amount: {typ: 52 mV}}}}").kind is PASS
    assert said("present", bare, "comparators: {uv: {hysteresis: {amount: {typ: 0 V}}}}").kind is OPEN


# switches_complementary


def switches(*pairs: str) -> str:
    entries = ", ".join(f"{{turned_by: {by}, closed_when: {when}}}" for by, when in (pair.split() for pair in pairs))
    return f"comparators: {{ov: {{hysteresis: {{switches: [{entries}]}}}}}}"


MEND = "two switches turned by one output, one closed when it is high and one when it is low"


@pytest.mark.parametrize(
    ("pairs", "message"),
    [
        (("ov high", "ov high"), "both switches are closed when ov is high"),
        (("ov low", "ov low"), "both switches are closed when ov is low"),
        (("ov high", "uv low"), "its two switches are turned by ov and uv: both can be open, or closed"),
        (("ov high",), "has 1 switches for two levels"),
        (("ov high", "ov low", "ov high"), "has 3 switches for two levels"),
        # ov_out inverts ov: its low is the high of ov.
        (("ov high", "ov_out low"), "both switches are closed when ov is high"),
        (("ov_out high", "ov_out high"), "both switches are closed when ov is low"),
        # A latch remembers: it is not the signal that sets it.
        (("ov high", "ov_latch low"), "its two switches are turned by ov and ov_latch: both can be open, or closed"),
        # gather has several drivers.
        (("uv high", "gather low"), "its two switches are turned by uv and gather: both can be open, or closed"),
    ],
)
def test_switches_that_do_not_take_turns(pairs: tuple[str, ...], message: str) -> None:
    found = said("switches_complementary", switches(*pairs), of="ov")
    assert (found.kind, found.message, found.mend) == (FAIL, message, MEND)


@pytest.mark.parametrize(
    ("pairs", "message"),
    [
        (("ov low", "ov high"), "its switches take turns with ov"),
        (("ov high", "ov_out high"), "its switches take turns with ov and ov_out"),
        (("ov_out low", "ov low"), "its switches take turns with ov_out and ov"),
    ],
)
def test_switches_that_take_turns(pairs: tuple[str, ...], message: str) -> None:
    found = said("switches_complementary", switches(*pairs), of="ov")
    assert (found.kind, found.message) == (PASS, message)


def test_switches_are_not_asked_for_where_there_are_none() -> None:
    found = said("switches_complementary", "comparators: {uv: {hysteresis: {made_by: schmitt_stage}}}")
    assert (found.kind, found.message) == (NONE, "its hysteresis is made by schmitt_stage, without switches")


@pytest.mark.parametrize(
    ("patch", "missing"),
    [
        (
            both(switches("ov high", "ov high"), without("comparators.ov.hysteresis.made_by")),
            ("comparators.ov.hysteresis.made_by",),
        ),
        (without("comparators.ov.hysteresis.switches"), ("comparators.ov.hysteresis.switches",)),
        (
            without(
                "comparators.ov.hysteresis.switches.0.turned_by", "comparators.ov.hysteresis.switches.1.closed_when"
            ),
            ("comparators.ov.hysteresis.switches.0.turned_by",),
        ),
        (
            without("comparators.ov.hysteresis.switches.1.closed_when"),
            ("comparators.ov.hysteresis.switches.1.closed_when",),
        ),
        (
            both(switches("ov high", "ov_out high"), without("output_stages.ov_out.inverting")),
            ("output_stages.ov_out.inverting",),
        ),
        (
            both(switches("ov high", "ov_out high"), without("output_stages.ov_out.kind")),
            ("output_stages.ov_out.kind",),
        ),
        (
            both(switches("ov high", "ov_out high"), without("output_stages.ov_out.driven_by")),
            ("output_stages.ov_out.driven_by",),
        ),
    ],
)
def test_switches_open(patch: str, missing: tuple[str, ...]) -> None:
    found = said("switches_complementary", patch, of="ov")
    assert (found.kind, found.missing) == (OPEN, missing)


def test_switches_that_take_turns_do_so_whatever_they_switch() -> None:
    found = said("switches_complementary", without("comparators.ov.hysteresis.made_by"), of="ov")
    assert (found.kind, found.missing) == (PASS, ())


# feedback_in_time: 1.8 V in 50 us is 36 mV/us


@pytest.mark.parametrize(("delay", "kind"), [("0.99 us", PASS), ("1 us", PASS), ("1.01 us", FAIL)])
def test_feedback_in_time_at_its_limit(delay: str, kind: Kind) -> None:
    found = said(
        "feedback_in_time", amount("36 mV", "54 mV"),
        f"comparators: {{uv: {{hysteresis: {{feedback_delay: {delay}}}}}}}",
    )  # fmt: skip
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.have == pytest.approx(36e3 * float(delay[:-3]) * 1e-6, rel=1e-12)


def test_feedback_in_time_says_why_and_what_would_do() -> None:
    found = said("feedback_in_time", "comparators: {uv: {hysteresis: {feedback_delay: 2 us}}}")
    assert found.message == "until the level has moved, the supply travels 72 mV, at most 46 mV needed"
    assert found.why == "2 us at 36 V/ms, the fastest ramp"
    assert found.mend == "a feedback delay of at most 1.27 us; now 2 us"  # 46 mV at 36 mV/us, rounded down
    assert (found.level, found.at) == ("warning", "comparators.uv.hysteresis.feedback_delay")


def test_the_steepest_part_of_the_ripple_can_be_faster_than_the_ramp() -> None:
    # (Vpp/2) sin(2 pi f t) is steepest with pi f Vpp: 10 mV at 10 MHz give 314 mV/us.
    found = said("feedback_in_time", "rails: {avdd: {ripple: {frequency: 10 MHz}}}")
    assert found.measure is not None
    assert found.measure.have == pytest.approx(math.pi * 10e6 * 10e-3 * 0.1e-6, rel=1e-12)
    assert found.why.endswith("the fastest ripple")


def test_a_supply_that_never_moves_lets_the_feedback_take_its_time() -> None:
    still = "rails: {avdd: {nominal: 0 V, ripple: {peak_to_peak: 0 V}}}"
    found = said("feedback_in_time", still, "comparators: {uv: {hysteresis: {feedback_delay: 1 s}}}")
    assert (found.kind, found.message) == (
        PASS, "until the level has moved, the supply travels 0 V, at most 46 mV needed",
    )  # fmt: skip


def test_a_very_slow_supply_bounds_the_feedback_all_the_same() -> None:
    """1.8 V in 4 s are 450 mV/s: 46 mV take 102.2 ms."""
    slow = "rails: {avdd: {rise: {min: 4 s, max: 5 s}, ripple: {peak_to_peak: 0 V}}}"
    found = said("feedback_in_time", slow, "comparators: {uv: {hysteresis: {feedback_delay: 0.2 s}}}")
    assert found.message == "until the level has moved, the supply travels 90 mV, at most 46 mV needed"
    assert found.mend == "a feedback delay of at most 102 ms; now 200 ms"


def test_no_ripple_has_no_frequency() -> None:
    found = said(
        "feedback_in_time", "rails: {avdd: {ripple: {peak_to_peak: 0 V}}}", without("rails.avdd.ripple.frequency")
    )
    assert found.kind is PASS


# Missing facts: each removed alone, and which rules become open, naming it


H, N = "comparators.uv.hysteresis", "comparators.uv.noise"
R = "rails.avdd"
LIFE, FILTER, REFERENCE = "conditions.service_life", "comparators.uv.filter", "comparators.uv.reference"
RIPPLE = f"{R}.ripple.peak_to_peak"
# What each removed fact leaves between a sure and a best end, by rule, with all that the judgement then waits for; it
# is open where the sure end is not enough.
TOO_LITTLE: tuple[tuple[str, dict[str, tuple[str, ...]]], ...] = (
    (f"{R}.ripple", {
        "covers_disturbance": (RIPPLE,), "false_trips": (RIPPLE,), "fits_window": (RIPPLE,),
        "feedback_in_time": (f"{R}.ripple.peak_to_peak", f"{R}.ripple.frequency"),
    }),
    (f"{R}.ripple.frequency", {"feedback_in_time": (f"{R}.ripple.frequency",)}),
    (f"{R}.dip", {  # without a level at which it is, it may be anywhere
        "covers_disturbance": (f"{R}.dip.depth", f"{R}.dip.at"), "false_trips": (f"{R}.dip.depth", f"{R}.dip.at"),
    }),
    (f"{R}.load_step", {"covers_disturbance": (f"{R}.load_step",), "false_trips": (f"{R}.load_step",)}),
    (f"{R}.source_impedance", {
        "covers_disturbance": (f"{R}.source_impedance",), "false_trips": (f"{R}.source_impedance",),
    }),
    (f"{R}.delivered", {"fits_window": (f"{R}.delivered",)}),
    (f"{R}.nominal", {"feedback_in_time": (f"{R}.nominal",)}),
    (f"{R}.rise", {"feedback_in_time": (f"{R}.rise",)}),
    (N, {"covers_disturbance": (f"{N}.rms",), "false_trips": (f"{N}.rms", f"{N}.bandwidth")}),
    (f"{N}.bandwidth", {"false_trips": (f"{N}.bandwidth",)}),
    ("conditions.coverage", {}),  # policy
    (LIFE, {"false_trips": (LIFE,)}),
    ("conditions.false_trips", {}),
    (f"{H}.feedback", {"sense": (f"{H}.feedback",)}),
    (f"{H}.feedback_delay", {"feedback_in_time": (f"{H}.feedback_delay",)}),
    (f"{H}.made_by", {}),  # its switches take turns
    (f"{H}.amount", {}),  # both levels are given, and move together
    (f"{R}.collapse", {"fits_window": (f"{R}.collapse",)}),
    ("comparators.uv.delay", {"fits_window": ("comparators.uv.delay",)}),
    (FILTER, {"fits_window": (FILTER,)}),  # nobody disturbs it: there is nothing to ignore
    ("loads.adc.needs.0.works", {"fits_window": ("loads.adc.needs.0.works",)}),
    ("comparators.uv.trip", {"fits_window": ("comparators.uv.trip.falling", "comparators.uv.trip.rising")}),
    ("comparators.uv.trip.rising", {}),  # falling level and hysteresis are given
    ("comparators.uv.tracked", {}),  # the amount is given
    # Two that share a domain may share a reference, and kick it.
    (REFERENCE, {"covers_disturbance": (REFERENCE,), "false_trips": (REFERENCE,)}),
)  # fmt: skip


@pytest.mark.parametrize(("fact", "rules"), TOO_LITTLE, ids=[fact for fact, _ in TOO_LITTLE])
def test_each_missing_fact_is_named(fact: str, rules: dict[str, tuple[str, ...]]) -> None:
    before, after = judged(BENCH, RULES), judged(both(BENCH, without(fact)), RULES)
    opened = {
        key[0].partition("/")[2]: found.missing for key, found in after.items() if key[1] == "uv" and found.missing
    }
    assert opened == rules
    unmoved = [name for name in ALL if name not in rules and (f"hysteresis/{name}", "uv") in before]
    assert all(after[f"hysteresis/{name}", "uv"].kind is before[f"hysteresis/{name}", "uv"].kind for name in unmoved)


def test_all_that_is_missing_is_named_at_once() -> None:
    found = said(
        "covers_disturbance",
        """
        neighbours:
          one: {kind: supply_impedance, aggressor: ov, victim: uv}
          two: {kind: capacitance, aggressor: ov, victim: uv, at: input}
        """,
        without(
            "rails.avdd.ripple", "rails.avdd.dip", "rails.avdd.load_step", "conditions.coverage",
            "comparators.uv.noise", "comparators.uv.hysteresis.amount", "comparators.uv.trip", "comparators.uv.divider",
        ),
    )  # fmt: skip
    assert found.kind is OPEN
    assert found.missing == (
        "rails.avdd.ripple.peak_to_peak", "rails.avdd.dip.depth", "comparators.uv.trip.falling",
        "comparators.uv.trip.rising", "rails.avdd.dip.at", "rails.avdd.load_step",
        "neighbours.one.current_step", "neighbours.one.impedance", "comparators.uv.divider.ratio",
        "neighbours.two.node.capacitance", "neighbours.two.step", "neighbours.two.edge",
        "neighbours.two.node.resistance", "neighbours.two.capacitance",
        "comparators.uv.noise.rms", "comparators.uv.hysteresis.amount", "neighbours.one.at",
    )  # fmt: skip
    # Nothing is known of what there must be, nor of what there is.
    assert found.message.startswith("cannot be judged without rails.avdd.ripple.peak_to_peak, ")


def test_one_end_of_a_range_is_not_the_other() -> None:
    found = said("covers_disturbance", "comparators: {uv: {trip: null, hysteresis: {amount: {max: 54 mV}}}}")
    assert (found.kind, found.missing) == (OPEN, ("comparators.uv.hysteresis.amount.min",))
    found = said("covers_disturbance", "rails: {avdd: {load_step: {typ: 20 mA}}}")
    assert (found.kind, found.missing) == (OPEN, ("rails.avdd.load_step.max",))
