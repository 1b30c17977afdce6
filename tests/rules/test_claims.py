"""Stated numbers against what their components make."""

from __future__ import annotations

import math

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.claims import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW


def said(rule: str, of: str, *patches: str) -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[f"claims/{rule}", of]


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_is_one_fault(rule: Rule) -> None:
    found = changed(rule.example.fails, RULES)
    kinds = {kind for (name, _), kind in found.items() if name == rule.id}
    assert kinds <= {FAIL, REVIEW} and kinds
    assert {name for name, _ in found} == {rule.id}
    after = [said.kind for (name, _), said in judged(rule.example.holds, RULES).items() if name == rule.id]
    assert PASS in after and not {FAIL, OPEN, REVIEW} & set(after)


# Hysteresis


def levels(rising: str, falling: str, amount: str) -> str:
    trip = f"trip: {{rising: {rising}, falling: {falling}}}"
    return f"comparators: {{uv: {{tracked: true, {trip}, hysteresis: {{amount: {amount}}}}}}}"


@pytest.mark.parametrize(
    ("rising", "falling", "amount", "kind"),
    [
        pytest.param("1.677 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="inside"),
        pytest.param("1.682 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="rounding_of_1_mV"),
        pytest.param("1.6821 V", "1.627 V", "{min: 46 mV, max: 54 mV}", FAIL, id="beyond_rounding"),
        pytest.param("1.672 V", "1.627 V", "{min: 46 mV, max: 54 mV}", PASS, id="rounding_below"),
        pytest.param("1.671 V", "1.627 V", "{min: 46 mV, max: 54 mV}", FAIL, id="below"),
        pytest.param("1.677 V", "1.627 V", "50 mV", PASS, id="single"),
        pytest.param("1.677 V", "1.627 V", "52 mV", FAIL, id="single_off"),
        # Two decimals: each level may be 5 mV off as printed, so that 45 mV is no contradiction to 40 mV.
        pytest.param("1.92 V", "1.88 V", "{typ: 45 mV}", PASS, id="two_decimals"),
        pytest.param("1.92 V", "1.88 V", "51 mV", FAIL, id="two_decimals_beyond"),
        # Typical values of one table need not be of one part.
        pytest.param("1.92 V", "1.88 V", "{typ: 51 mV}", OPEN, id="lone_typical_beyond"),
    ],
)
def test_difference_of_the_levels(rising: str, falling: str, amount: str, kind: Kind) -> None:
    assert said("hysteresis", "uv", levels(rising, falling, amount)).kind is kind


def test_tracked_ranges_are_not_held_extreme_against_extreme() -> None:
    """The trap: ranges that overlap, 1.6 V to 1.7 V and 1.56 V to 1.65 V, and 40 mV to 50 mV between them."""
    ranges = ("{min: 1.6 V, max: 1.7 V}", "{min: 1.56 V, max: 1.65 V}")
    assert said("hysteresis", "uv", levels(*ranges, "{min: 42 mV, max: 48 mV}")).kind is PASS
    answer = said("hysteresis", "uv", levels(*ranges, "{min: 70 mV, max: 90 mV}"))
    assert (answer.kind, answer.why) == (FAIL, "levels 40 mV to 50 mV apart; up to 10 mV is taken for rounding")
    untracked = "comparators: {uv: {tracked: false}}"  # -50 mV to 140 mV
    assert said("hysteresis", "uv", levels(*ranges, "{min: 70 mV, max: 90 mV}"), untracked).kind is PASS
    assert said("hysteresis", "uv", levels(*ranges, "{min: 160 mV, max: 180 mV}"), untracked).kind is FAIL


RANGES = ("{min: 1.6 V, max: 1.7 V}", "{min: 1.56 V, max: 1.65 V}")
"""40 mV and 50 mV apart, low with low and high with high; 10 mV are taken for rounding."""


@pytest.mark.parametrize(
    ("amount", "kind", "message"),
    [
        ("{min: 59.9 mV, max: 90 mV}", PASS, "hysteresis as stated, least 59.9 mV, at most 60 mV needed"),
        ("{min: 60.1 mV, max: 90 mV}", FAIL, "hysteresis as stated, least 60.1 mV, at most 60 mV needed"),
        ("{min: 10 mV, max: 30.1 mV}", PASS, "hysteresis as stated, greatest 30.1 mV, at least 30 mV needed"),
        ("{min: 10 mV, max: 29.9 mV}", FAIL, "hysteresis as stated, greatest 29.9 mV, at least 30 mV needed"),
        # The end with less room is told.
        ("{min: 46 mV, max: 46 mV}", PASS, "hysteresis as stated, least 46 mV, at most 60 mV needed"),
        ("{min: 44 mV, max: 44 mV}", PASS, "hysteresis as stated, greatest 44 mV, at least 30 mV needed"),
    ],
)
def test_ranges_at_their_limits(amount: str, kind: Kind, message: str) -> None:
    answer = said("hysteresis", "uv", levels(*RANGES, amount))
    assert (answer.kind, answer.message) == (kind, message)
    assert answer.mend == ("" if kind is PASS else "correct the hysteresis or a level")
    assert answer.at == "comparators.uv.hysteresis.amount"


def test_of_two_ends_with_as_much_room_the_least_is_told() -> None:
    """62.5 mV and 125 mV apart, and half way between them: numbers that a float holds exactly."""
    answer = said("hysteresis", "uv", levels("{min: 1.5 V, max: 1.75 V}", "{min: 1.4375 V, max: 1.625 V}", "0.09375 V"))
    assert answer.message == "hysteresis as stated, least 93.75 mV, at most 135 mV needed"


def test_ranges_that_come_closer_at_the_high_end() -> None:
    answer = said("hysteresis", "uv", levels(RANGES[0], "{min: 1.55 V, max: 1.66 V}", "{min: 42 mV, max: 48 mV}"))
    assert (answer.kind, answer.why) == (PASS, "levels 40 mV to 50 mV apart; up to 10 mV is taken for rounding")


@pytest.mark.parametrize(
    ("rising", "falling", "amount", "kind", "missing"),
    [
        # 40 mV apart at the least, and 50 mV at the most, as far as both ends are known.
        ("{min: 1.6 V}", RANGES[1], "{min: 42 mV, max: 48 mV}", PASS, ("trip.rising.max",)),
        ("{min: 1.6 V}", RANGES[1], "{min: 70 mV, max: 90 mV}", OPEN, ("trip.rising.max",)),
        ("{max: 1.7 V}", RANGES[1], "{min: 42 mV, max: 48 mV}", PASS, ("trip.rising.min",)),
        ("{max: 1.7 V}", RANGES[1], "{min: 10 mV, max: 20 mV}", OPEN, ("trip.rising.min",)),
        (RANGES[0], "{min: 1.56 V}", "{min: 42 mV, max: 48 mV}", PASS, ("trip.falling.max",)),
        (RANGES[0], "{max: 1.65 V}", "{min: 42 mV, max: 48 mV}", PASS, ("trip.falling.min",)),
        (*RANGES, "{min: 42 mV}", PASS, ("hysteresis.amount.max",)),
        (*RANGES, "{min: 61 mV}", FAIL, ()),
        (*RANGES, "{max: 48 mV}", PASS, ("hysteresis.amount.min",)),
        (*RANGES, "{max: 29 mV}", FAIL, ()),
        (*RANGES, "{typ: 70 mV}", OPEN, ("hysteresis.amount.min",)),
    ],
)
def test_ranges_of_which_an_end_is_missing(
    rising: str, falling: str, amount: str, kind: Kind, missing: tuple[str, ...]
) -> None:
    """What is certain although an end is missing is said; where that end could decide, it is asked for."""
    answer = said("hysteresis", "uv", levels(rising, falling, amount))
    assert answer.kind is kind
    assert set(answer.missing) >= {f"comparators.uv.{fact}" for fact in missing}


def test_whether_ranges_track_may_decide() -> None:
    """40 mV to 50 mV apart if they do, -50 mV to 140 mV if they do not."""
    unsaid = without("comparators.uv.tracked")
    wide = levels(*RANGES, "{min: 70 mV, max: 90 mV}")
    answer = said("hysteresis", "uv", wide, unsaid)
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.tracked",))
    assert said("hysteresis", "uv", levels(*RANGES, "{min: 42 mV, max: 48 mV}"), unsaid).kind is PASS
    assert said("hysteresis", "uv", levels(*RANGES, "{min: 160 mV, max: 180 mV}"), unsaid).kind is FAIL


@pytest.mark.parametrize(("typical", "kind"), [("51 mV", PASS), ("52 mV", FAIL)])
def test_a_typical_hysteresis_is_what_typically_lies_between_the_levels(typical: str, kind: Kind) -> None:
    """1.677 V less 1.627 V; each of the two may be half a millivolt off as printed."""
    amount = f"{{min: 40 mV, typ: {typical}, max: 60 mV}}"
    assert said("hysteresis", "uv", levels("1.677 V", "1.627 V", amount)).kind is kind


def test_one_typical_level_alone_leaves_the_ranges_to_judge() -> None:
    answer = said(
        "hysteresis", "uv", levels("{min: 1.6 V, typ: 1.69 V, max: 1.7 V}", RANGES[1], "{min: 42 mV, max: 48 mV}")
    )
    assert (answer.kind, answer.why) == (PASS, "levels 40 mV to 50 mV apart; up to 10 mV is taken for rounding")


@pytest.mark.parametrize(
    ("amount", "kind"), [("{min: 110 mV, max: 120 mV}", PASS), ("{min: 110.1 mV, max: 120 mV}", FAIL)]
)
def test_rounding_of_levels_with_few_digits_is_bounded(amount: str, kind: Kind) -> None:
    """2 V and 1.9 V may be 5 mV off each, not half a volt."""
    answer = said("hysteresis", "uv", levels("2 V", "1.9 V", amount))
    assert (answer.kind, answer.why) == (
        kind, "2 V rising less 1.9 V falling: 100 mV; up to 10 mV is taken for rounding",
    )  # fmt: skip


def test_levels_of_the_code_it_ships_with() -> None:
    codes = "comparators: {uv: {trip: null, codes: {a: {rising: 1.697 V, falling: 1.627 V}}}}"
    shipped = "comparators: {uv: {ships_with: a}}"
    assert said("hysteresis", "uv", codes, shipped).why == (
        "1.697 V rising less 1.627 V falling: 70 mV; up to 1 mV is taken for rounding"
    )
    assert said("hysteresis", "uv", codes).message == "does not state a hysteresis beside both levels"


def test_words_of_a_hysteresis_that_is_not_between_the_levels() -> None:
    answer = said("hysteresis", "uv", levels("1.697 V", "1.627 V", "{min: 46 mV, max: 54 mV}"))
    assert answer.message == "hysteresis that the components make, greatest 70 mV, at most 55 mV needed"
    assert answer.why == "1.697 V rising less 1.627 V falling: 70 mV; up to 1 mV is taken for rounding"
    assert answer.mend == "state 70 mV, or correct the components"


def test_a_hysteresis_or_a_level_alone_claims_nothing() -> None:
    for fact in ("hysteresis", "trip.rising", "trip"):
        answer = judged(without(f"comparators.uv.{fact}"), RULES)["claims/hysteresis", "uv"]
        assert (answer.kind, answer.message) == (NONE, "does not state a hysteresis beside both levels")


# Divider and reference


@pytest.mark.parametrize(
    ("ratio", "kind"), [("0.3667", PASS), ("0.3648", FAIL), ("0.3649", PASS), ("0.3685", PASS), ("0.3686", FAIL)]
)
def test_ratio_of_two_resistances(ratio: str, kind: Kind) -> None:
    """2.2 Mohm of 6 Mohm is 0.36667; half a per cent of 0.365 is 0.0018."""
    assert said("divider_ratio", "uv", f"comparators: {{uv: {{divider: {{ratio: {ratio}}}}}}}").kind is kind


def test_ratio_over_the_spans_of_both() -> None:
    """2 Mohm below 4.2 Mohm at one end, 2.4 Mohm below 3.6 Mohm at the other: 0.3226 to 0.4."""
    spans = "top: {min: 3.6 Mohm, max: 4.2 Mohm}, bottom: {min: 2 Mohm, max: 2.4 Mohm}"
    for ratio, kind in ((0.322, PASS), (0.32, FAIL), (0.401, PASS), (0.403, FAIL)):
        patch = f"comparators: {{uv: {{divider: {{ratio: {ratio}, {spans}}}}}}}"
        assert said("divider_ratio", "uv", patch).kind is kind
    assert said("divider_ratio", "uv", patch).why == (
        "2 Mohm to 2.4 Mohm below 3.6 Mohm to 4.2 Mohm: 0.3226 to 0.4; up to 0.002 is taken for rounding"
    )
    assert said("divider_ratio", "uv").why.startswith("2.2 Mohm below 3.8 Mohm: 0.3667; ")


def test_level_of_reference_and_divider() -> None:
    """0.6 V over 0.367 is 1.6349 V; uv decides from 1.627 V and 1.677 V with their errors on."""
    answer = said("level_from_reference", "uv")
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(0.6 / 0.367)
    lowest_v = 1.627 - 0.005 * 1.627 - 3 * 0.0004 / 0.367
    assert answer.measure.need == pytest.approx(lowest_v - 0.005 * 0.6 / 0.367)
    off = said("level_from_reference", "uv", "references: {ref_fast: {voltage: 0.65 V}}")
    assert (off.kind, off.message) == (FAIL, "level that reference and divider make 1.771 V, at most 1.698 V needed")
    for fact in ("comparators.uv.divider", "comparators.uv.reference"):
        answer = said("level_from_reference", "uv", without(fact))
        assert (answer.kind, answer.message) == (NONE, "does not name a reference beside a divider")
    for fact in ("references.ref_fast.voltage", "comparators.uv.divider.ratio"):
        answer = said("level_from_reference", "uv", without(fact))
        assert (answer.kind, answer.missing) == (OPEN, (fact,))


def test_a_level_whose_errors_are_not_described_is_where_they_may_put_it() -> None:
    """0.6 V over 0.367 is 1.6349 V: between 1.627 V and 1.677 V whatever the errors are; 1.69 V is not."""
    gone = without("comparators.uv.errors")
    assert said("level_from_reference", "uv", gone).kind is PASS
    high = said("level_from_reference", "uv", gone, "comparators: {uv: {divider: {ratio: 0.355}}}")
    assert (high.kind, high.missing) == (OPEN, ("comparators.uv.errors",))


def test_a_level_that_is_derived_contradicts_only_where_every_reading_of_it_does() -> None:
    """Rising 1.677 V less 46 mV to 54 mV: extreme with extreme need not meet, and the falling level is asked for."""
    gone = without("comparators.uv.trip.falling")
    sound = said("level_from_reference", "uv", gone)
    assert (sound.kind, sound.missing) == (PASS, ("comparators.uv.trip.falling",))
    far = said("level_from_reference", "uv", gone, "references: {ref_fast: {voltage: 0.65 V}}")
    assert far.kind is FAIL


LOWEST_V = 1.627 - 0.005 * 1.627 - 3 * 0.0004 / 0.367
HIGHEST_V = 1.677 + 0.005 * 1.677 + 3 * 0.0004 / 0.367


@pytest.mark.parametrize(
    ("level_v", "share", "kind"),
    [
        pytest.param(LOWEST_V / 1.005, 0.9999, FAIL, id="below"),
        pytest.param(LOWEST_V / 1.005, 1.0001, PASS, id="just_above_the_least"),
        pytest.param(HIGHEST_V / 0.995, 0.9999, PASS, id="just_below_the_most"),
        pytest.param(HIGHEST_V / 0.995, 1.0001, FAIL, id="above"),
    ],
)
def test_level_of_reference_at_its_limits(level_v: float, share: float, kind: Kind) -> None:
    """Half a per cent of the level itself is taken for rounding."""
    patch = f"references: {{ref_fast: {{voltage: {level_v * share * 0.367!r} V}}}}"
    answer = said("level_from_reference", "uv", patch)
    assert answer.kind is kind
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(level_v * share)
    assert answer.mend == ("" if kind is PASS else "correct the levels, the ratio or the reference")


def test_words_of_a_level_that_the_reference_does_not_make() -> None:
    """0.65 V over 0.367 is 1.7711 V, of which half a per cent is 8.856 mV."""
    answer = said("level_from_reference", "uv", "references: {ref_fast: {voltage: 0.65 V}}")
    assert answer.why == "650 mV of ref_fast over a ratio of 0.367; 8.856 mV taken for rounding"
    assert answer.at == "comparators.uv.trip"


def test_divider_that_does_not_state_both() -> None:
    for facts in (("ratio",), ("top", "bottom")):
        answer = said("divider_ratio", "uv", without(*(f"comparators.uv.divider.{fact}" for fact in facts)))
        assert (answer.kind, answer.message) == (NONE, "does not state a ratio beside its resistances")
    assert said("divider_ratio", "por").kind is NONE


@pytest.mark.parametrize("fact", ["top", "bottom"])
def test_a_ratio_beside_one_resistance_is_open(fact: str) -> None:
    answer = said("divider_ratio", "uv", without(f"comparators.uv.divider.{fact}"))
    assert (answer.kind, answer.missing) == (OPEN, (f"comparators.uv.divider.{fact}",))


# Times


def test_time_of_a_current_into_a_capacitance() -> None:
    """90 fF x 0.45 V / 60 nA and 110 fF x 0.53 V / 40 nA."""
    answer = said("filter", "uv")
    assert answer.measure is not None
    greatest_s = 110e-15 * 0.53 / 40e-9
    assert answer.measure.have == pytest.approx(greatest_s)
    assert answer.measure.need == pytest.approx(1.5e-6 + 0.005 * greatest_s)
    assert answer.why.startswith("a current into a capacitance: 675 ns to 1.458 us; ")


def stage(*facts: str) -> str:
    return f"output_stages: {{gather: {{{', '.join(facts)}}}}}"


def test_time_of_counted_periods() -> None:
    timing = "timing: {count: 100, period: {min: 9 us, max: 12 us}}"
    answer = said("stage_delay", "gather", stage("release_delay: {min: 0.9 ms, max: 1.2 ms}", timing))
    assert (answer.kind, answer.measure is not None and round(answer.measure.margin, 9)) == (PASS, 4.5e-6)
    answer = said("stage_delay", "gather", stage("release_delay: {min: 0.9 ms, max: 1.1 ms}", timing))
    assert answer.message == "release delay that the components make, greatest 1.2 ms, at most 1.106 ms needed"
    assert answer.mend == "state 900 us to 1.2 ms, or correct the components"
    assert said("stage_delay", "gather", stage("release_delay: {min: 1 ms, max: 1.3 ms}", timing)).kind is FAIL


def test_time_of_a_resistance_and_a_capacitance() -> None:
    """Charged from 1.71 V to 1.89 V; R C ln(V/(V - Vth)) at either end. The delay counts where no release delay is."""
    timing = (
        "timing: {resistance: {min: 0.8 Mohm, max: 1.2 Mohm}, capacitance: {min: 9 pF, max: 11 pF}, "
        "threshold: {min: 0.8 V, max: 1 V}}"
    )
    least_s = 0.8e6 * 9e-12 * math.log(1.89 / (1.89 - 0.8))
    most_s = 1.2e6 * 11e-12 * math.log(1.71 / (1.71 - 1.0))
    stated = f"delay: {{min: {least_s * 1e6:.6f} us, max: {most_s * 1e6:.6f} us}}"
    assert said("stage_delay", "gather", stage(stated, timing)).kind is PASS
    narrow = f"delay: {{min: {least_s * 1e6:.6f} us, max: {most_s * 0.99e6:.6f} us}}"
    answer = said("stage_delay", "gather", stage(narrow, timing))
    assert answer.kind is FAIL
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(most_s, rel=1e-6)
    assert answer.why.startswith("a resistance and a capacitance charged from avdd: 3.963 us to 11.6 us; ")
    late = f"delay: {{min: {least_s * 1.02e6:.6f} us, max: {most_s * 1e6:.6f} us}}"
    answer = said("stage_delay", "gather", stage(late, timing))
    assert answer.kind is FAIL
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(least_s, rel=1e-6)
    assert answer.at == "output_stages.gather.delay"


@pytest.mark.parametrize(
    ("timing", "missing"),
    [
        ("{count: 100}", ("timing.period",)),
        ("{period: 10 us}", ("timing.count",)),
        ("{current: 1 uA}", ("timing.capacitance", "timing.threshold")),
        ("{capacitance: 1 pF}", ("timing.resistance", "timing.threshold")),
        ("{current: 1 uA, capacitance: {min: 1 pF}, threshold: 1 V}", ("timing.capacitance.max",)),
    ],
)
def test_components_that_are_missing(timing: str, missing: tuple[str, ...]) -> None:
    answer = said("stage_delay", "gather", stage("delay: {min: 0 s, max: 1 s}", f"timing: {timing}"))
    assert (answer.kind, answer.missing) == (OPEN, tuple(f"output_stages.gather.{fact}" for fact in missing))


def test_a_time_that_known_components_exceed_fails_whatever_the_others_are() -> None:
    """1 pF at the least to 1 V with 1 uA at the most take 1 us at the least, and 0.5 us are stated at the most."""
    parts = "{current: {max: 1 uA}, capacitance: {min: 1 pF}, threshold: {min: 1 V}}"
    answer = said("stage_delay", "gather", stage("delay: {min: 0 s, max: 0.5 us}", f"timing: {parts}"))
    assert answer.kind is FAIL
    assert "whatever" in answer.message


def test_an_end_that_is_not_stated_is_not_known() -> None:
    """The components make 675 ns to 1.458 us; with 1.5 us at the most alone, the least that is meant is asked for."""
    answer = said("filter", "uv", "comparators: {uv: {filter: {max: 1.5 us}}}")
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.filter.min",))
    assert said("filter", "uv", "comparators: {uv: {filter: {max: 1.4 us}}}").kind is FAIL


def test_time_that_is_not_stated() -> None:
    answer = said("filter", "uv", without("comparators.uv.filter"))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.filter",))
    assert said("filter", "ov").message == "does not say what makes its filter (timing)"
    assert said("stage_delay", "rst_out").message == "does not say what makes its delay (timing)"


# Currents


@pytest.mark.parametrize(
    ("current", "kind"), [("{typ: 1.11 uA}", OPEN), ("{typ: 1.13 uA}", FAIL), ("0.9 uA", FAIL), ("1 uA", PASS)]
)
def test_bias_current_by_ohms_law(current: str, kind: Kind) -> None:
    """0.6 V over 540 kohm to 660 kohm: 0.909 uA to 1.111 uA, and half a per cent."""
    assert said("bias_current", "bias_main", f"biases: {{bias_main: {{current: {current}}}}}").kind is kind


@pytest.mark.parametrize(
    ("rule", "of", "patch"),
    [
        ("bias_current", "bias_main", "biases: {bias_main: {resistance: 0 ohm}}"),
        ("bias_current", "bias_main", "biases: {bias_main: {resistance: {min: 0 ohm, max: 1 ohm}}}"),
        ("reference_current", "ref_fast", "references: {ref_fast: {current: 1 uA, resistance: 0 ohm}}"),
    ],
)
def test_no_current_is_made_by_no_resistance(rule: str, of: str, patch: str) -> None:
    answer = said(rule, of, patch)
    assert answer.kind is OPEN
    assert answer.message.endswith("outside the range of the formula: r_ohm must be greater than 0 (found 0.0)")


def test_bias_takes_what_it_makes() -> None:
    answer = said("bias_consumption", "bias_start", "biases: {bias_start: {consumes: {max: 80 nA}}}")
    assert (answer.kind, answer.message) == (REVIEW, "consumption 80 nA, at least 89.55 nA needed")
    assert said("bias_consumption", "bias_start", "biases: {bias_start: {consumes: {max: 89.55 nA}}}").kind is PASS
    assert said("bias_consumption", "bias_main").message == "does not make its current by itself"
    assert answer.why == "makes up to 90 nA; 450 pA taken for rounding"
    assert answer.mend == "state a consumption of at least 90 nA, or that the current is a multiple of its own"
    for ends, fact in (("consumes: {min: 80 nA}", "consumes.max"), ("current: {min: 80 nA}", "current.max"),
                       ("current: null", "current"), ("consumes: null", "consumes")):  # fmt: skip
        answer = said("bias_consumption", "bias_start", f"biases: {{bias_start: {{{ends}}}}}")
        assert (answer.kind, answer.missing) == (OPEN, (f"biases.bias_start.{fact}",))
    own = "biases: {bias_start: {kind: self_biased, consumes: {max: 80 nA}}}"
    assert said("bias_consumption", "bias_start", own).kind is REVIEW


def test_reference_current_by_ohms_law() -> None:
    patch = "references: {ref_fast: {current: {min: 88 nA, max: 115 nA}, resistance: {min: 5.4 Mohm, max: 6.6 Mohm}}}"
    answer = said("reference_current", "ref_fast", patch)  # 90.9 nA to 111.1 nA
    assert answer.kind is PASS
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(0.6 / 6.6e6)
    assert (
        answer.why
        == "voltage of ref_fast over the resistance: 90.91 nA to 111.1 nA; up to 454.5 pA is taken for rounding"
    )
    for fact in ("current", "resistance"):
        answer = said("reference_current", "ref_fast", patch, without(f"references.ref_fast.{fact}"))
        assert (answer.kind, answer.message) == (NONE, "does not state a current beside a setting resistance")


def test_current_over_the_spans_of_both() -> None:
    """0.594 V over 660 kohm at the least, 0.606 V over 540 kohm at the most."""
    spread = "references: {ref_fast: {voltage: {min: 0.594 V, typ: 0.6 V, max: 0.606 V}}}"
    wide = "biases: {bias_main: {current: {min: 0.9 uA, max: 1.2 uA}}}"
    assert said("bias_current", "bias_main", spread, wide).why == (
        "voltage of ref_fast over the resistance: 900 nA to 1.122 uA; up to 4.5 nA is taken for rounding"
    )


@pytest.mark.parametrize("fact", ["current", "resistance", "source"])
def test_bias_that_does_not_state_all_three(fact: str) -> None:
    answer = said("bias_current", "bias_main", without(f"biases.bias_main.{fact}"))
    assert (answer.kind, answer.message) == (
        NONE, "does not state a current beside a setting resistance and the reference it copies",
    )  # fmt: skip
