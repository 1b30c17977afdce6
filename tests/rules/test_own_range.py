"""Whether a detector is good where it decides, and stands what it reports."""

from __future__ import annotations

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import self_bias
from tidegate.rules.own_range import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE

# 1 V/ms for 2 us + 1.5 us carries avdd on by 3.5 mV, to 1.9735 V.
BENCH = """
comparators:
  por: {trip: {rising: {min: 1.2 V, max: 1.5 V}, falling: {min: 1.1 V, max: 1.4 V}}}
  ov: {trip: {rising: {min: 1.95 V, max: 1.97 V}, falling: {min: 1.9 V, max: 1.93 V}}}
"""


def said(rule: str, *patches: str, of: str = "por") -> Judgement:
    return judged(both(BENCH, *patches), RULES)[f"own_range/{rule}", of]


def test_sound_example_keeps_every_rule() -> None:
    judgements = judged("", RULES)
    assert of_kind(judgements, FAIL, OPEN, Kind.REVIEW) == []
    assert of_kind(judgements, NONE) == [
        ("own_range/survives", "por"), ("own_range/survives", "uv"), ("own_range/levels_inside", "uv_core"),
        ("own_range/survives", "uv_core"),
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("rule", "of", "also"),
    [(RULES[0], "ov", {("own_range/survives", "ov"): NONE}), (RULES[1], "ov", {})],
    ids=[rule.id for rule in RULES],
)
def test_example_is_one_fault(rule: object, of: str, also: dict[tuple[str, str], Kind]) -> None:
    assert hasattr(rule, "id") and hasattr(rule, "example")
    assert changed(rule.example.fails, RULES) == {(rule.id, of): FAIL, **also}
    assert judged(rule.example.holds, RULES)[rule.id, of].kind is PASS


@pytest.mark.parametrize(
    ("fact", "limit", "beyond", "kind"),
    [
        ("works_from", "{max: 1.1 V}", "{max: 1.1001 V}", FAIL),
        ("works_to", "{min: 1.5 V}", "{min: 1.4999 V}", FAIL),
    ],
)
def test_limit_belongs_to_the_good_side(fact: str, limit: str, beyond: str, kind: Kind) -> None:
    wide = "comparators: {por: {works_from: {max: 1 V}, works_to: {min: 3 V}}}"
    at_limit = said("levels_inside", wide, f"comparators: {{por: {{{fact}: {limit}}}}}")
    assert at_limit.kind is PASS
    assert at_limit.measure is not None and at_limit.measure.margin == 0.0
    assert said("levels_inside", wide, f"comparators: {{por: {{{fact}: {beyond}}}}}").kind is kind


def test_words() -> None:
    answer = said("levels_inside", "comparators: {por: {works_from: {max: 1.2 V}}}")
    assert answer.message == "its lowest level 1.1 V, at least 1.2 V needed"
    swapped = "comparators: {por: {trip: {rising: {min: 1.1 V, max: 1.4 V}, falling: {min: 1.2 V, max: 1.5 V}}}}"
    answer = said("levels_inside", swapped, "comparators: {por: {works_from: {max: 1.2 V}}}")
    assert answer.message == "its lowest level 1.1 V, at least 1.2 V needed"
    assert answer.why == "works from 1.2 V to 2.75 V; levels 1.1 V to 1.5 V"
    assert answer.mend == "a detector that works from 1.1 V or less; now 1.2 V"
    answer = said("levels_inside", "comparators: {por: {works_to: {min: 1.45 V}}}")
    assert answer.message == "its highest level 1.5 V, at most 1.45 V needed"
    assert answer.mend == "a detector that works to 1.5 V or more; now 1.45 V"


def test_the_end_with_less_room_is_told() -> None:
    """Levels from 1.1 V to 1.5 V: 0.1 V above works_from; 0.2 V, 0.1 V and 0.05 V below works_to."""
    from_1_v = "comparators: {por: {works_from: {max: 1 V}, works_to: {min: LIMIT}}}"
    for limit, message in (
        ("1.7 V", "its lowest level 1.1 V, at least 1 V needed"),
        ("1.55 V", "its highest level 1.5 V, at most 1.55 V needed"),
    ):
        answer = said("levels_inside", from_1_v.replace("LIMIT", limit))
        assert (answer.kind, answer.message) == (PASS, message)
    assert said("levels_inside", from_1_v.replace("LIMIT", "1.7 V")).at == "comparators.por.works_from"
    assert said("levels_inside", from_1_v.replace("LIMIT", "1.55 V")).at == "comparators.por.works_to"


def test_of_two_ends_with_as_much_room_the_lowest_is_told() -> None:
    """250 mV at either end, in numbers that a float holds exactly."""
    trip = "trip: {rising: {min: 1.375 V, max: 1.5 V}, falling: {min: 1.25 V, max: 1.375 V}}"
    answer = said("levels_inside", f"comparators: {{por: {{{trip}, works_from: 1 V, works_to: 1.75 V}}}}")
    assert answer.message == "its lowest level 1.25 V, at least 1 V needed"


def test_detector_without_levels_and_without_codes_is_open() -> None:
    answer = judged(without("comparators.por.trip", "comparators.por.hysteresis"), RULES)[
        "own_range/levels_inside", "por"
    ]
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.por.trip.falling", "comparators.por.trip.rising"))


def test_levels_that_are_stated_count_beside_the_codes() -> None:
    """The code alone reaches from 1.1 V to 1.5 V, the levels stated from 1 V to 1.6 V."""
    codes = "ships_with: a, codes: {a: {rising: {min: 1.2 V, max: 1.5 V}, falling: {min: 1.1 V, max: 1.4 V}}}"
    trip = "trip: {rising: {min: 1.15 V, max: 1.6 V}, falling: {min: 1 V, max: 1.4 V}}"
    answer = said("levels_inside", f"comparators: {{por: {{{codes}, {trip}, works_to: {{min: 1.9 V}}}}}}")
    assert answer.why == "works from 950 mV to 1.9 V; levels 1 V to 1.6 V, over 1 codes"


def test_every_code_counts() -> None:
    patch = """
    comparators:
      por:
        trip: null
        ships_with: high
        codes:
          low: {rising: {min: 0.95 V, max: 1.1 V}, falling: {min: 0.9 V, max: 1 V}}
          high: {rising: {min: 2.7 V, max: 2.8 V}, falling: {min: 2.6 V, max: 2.7 V}}
    """
    assert said("levels_inside", patch).message == "its lowest level 900 mV, at least 950 mV needed"
    answer = said("levels_inside", patch, "comparators: {por: {works_from: {max: 0.85 V}}}")
    assert (answer.kind, answer.message) == (FAIL, "its highest level 2.8 V, at most 2.75 V needed")
    assert answer.why == "works from 850 mV to 2.75 V; levels 900 mV to 2.8 V, over 2 codes"


def test_another_rail_feeds_it() -> None:
    answer = said("levels_inside", of="uv_core")
    assert (answer.kind, answer.message) == (NONE, "avdd feeds it, and not vcore")


@pytest.mark.parametrize(
    ("damage", "works_to", "kind"),
    [
        ("1.9735 V", "2.75 V", PASS),
        ("1.9734 V", "2.75 V", FAIL),
        ("2.5 V", "1.9735 V", PASS),
        ("2.5 V", "1.9734 V", FAIL),
    ],
)
def test_survives_at_its_limit(damage: str, works_to: str, kind: Kind) -> None:
    answer = said(
        "survives", f"rails: {{avdd: {{damage: {damage}}}}}", f"comparators: {{ov: {{works_to: {works_to}}}}}", of="ov"
    )
    assert answer.kind is kind
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(1.97 + 1000 * 3.5e-6, abs=1e-12)


def test_words_of_survival() -> None:
    answer = said("survives", "rails: {avdd: {damage: 1.95 V}}", of="ov")
    assert answer.message == "until the answer avdd reaches 1.974 V, at most 1.95 V needed"
    assert answer.why == "rising level up to 1.97 V, 3.5 mV more until the answer; avdd damages above 1.95 V"
    assert answer.mend == "a level 23.5 mV lower, or a faster answer"


def test_a_level_above_the_own_range_is_said_once() -> None:
    patch = "comparators: {ov: {works_to: 1.96 V}}"
    assert said("levels_inside", patch, of="ov").kind is FAIL
    answer = said("survives", patch, of="ov")
    assert (answer.kind, answer.under) == (NONE, "own_range/levels_inside")
    assert answer.message.startswith("until the answer avdd reaches 1.974 V, at most 1.96 V needed")


def test_a_falling_level_below_the_own_range_is_told_once() -> None:
    """The same two numbers: the detector must work where it decides."""
    found = judged(both(BENCH, "comparators: {por: {works_from: {max: 1.2 V}}}"), (*RULES, *self_bias.RULES))
    answer = found["own_range/levels_inside", "por"]
    assert (answer.kind, answer.under) == (NONE, "self_bias/works_at_own_trip")
    assert answer.measure is not None and answer.measure.margin == pytest.approx(-0.1)


def test_what_damages_is_told_beside_a_range_that_is_too_small() -> None:
    """works_from lies above the levels, and the rail is damaged before the answer: two faults."""
    patch = both("comparators: {ov: {works_from: {max: 1.95 V}}}", "rails: {avdd: {damage: 1.96 V}}")
    assert said("levels_inside", patch, of="ov").kind is FAIL
    assert said("survives", patch, of="ov").kind is FAIL


def test_a_level_at_the_end_of_the_own_range_is_judged_with_the_answer() -> None:
    answer = said("survives", "comparators: {ov: {works_to: 1.97 V}}", of="ov")
    assert (answer.kind, answer.message) == (FAIL, "until the answer avdd reaches 1.974 V, at most 1.97 V needed")
    assert answer.why == "rising level up to 1.97 V, 3.5 mV more until the answer; works to 1.97 V"
    assert answer.mend == "a level 3.5 mV lower, or a faster answer"
    assert answer.at == "comparators.ov.trip.rising"


def test_levels_of_a_code_that_do_not_survive() -> None:
    codes = "codes: {a: {rising: {min: 1.95 V, max: 1.97 V}, falling: {min: 1.9 V, max: 1.93 V}}}"
    patch = f"comparators: {{ov: {{trip: null, ships_with: a, {codes}}}}}"
    answer = said("survives", patch, "rails: {avdd: {damage: 1.95 V}}", of="ov")
    assert (answer.kind, answer.at) == (FAIL, "comparators.ov.codes")


def test_a_detector_fed_from_elsewhere_must_still_report_below_the_damage() -> None:
    patch = "comparators: {ov: {domain: core, works_to: null}}"
    answer = said("survives", patch, of="ov")
    assert (answer.kind, answer.measure is not None and answer.measure.need) == (PASS, 2.5)
    assert answer.why.endswith("; avdd damages above 2.5 V")
    high = said("survives", patch, "rails: {avdd: {damage: 1.96 V}}", of="ov")
    assert (high.kind, high.message) == (FAIL, "until the answer avdd reaches 1.974 V, at most 1.96 V needed")
    assert said("survives", of="uv").message == "reports no over-voltage"


@pytest.mark.parametrize(
    ("rule", "of", "fact"),
    [
        ("levels_inside", "por", "comparators.por.works_from"),
        ("levels_inside", "por", "comparators.por.works_to"),
        ("survives", "ov", "rails.avdd.damage"),
        ("survives", "ov", "rails.avdd.overshoot"),
        ("survives", "ov", "comparators.ov.delay"),
        ("survives", "ov", "comparators.ov.works_to"),
    ],
)
def test_open_names_the_fact_that_is_missing(rule: str, of: str, fact: str) -> None:
    answer = judged(without(fact), RULES)[f"own_range/{rule}", of]
    assert (answer.kind, answer.missing) == (OPEN, (fact,))


@pytest.mark.parametrize("fact", ["comparators.ov.domain", "domains.aon.rail"])
@pytest.mark.parametrize(("works_to", "kind"), [("2.75 V", PASS), ("1.96 V", OPEN)])
def test_its_own_range_counts_where_another_rail_may_feed_it(fact: str, works_to: str, kind: Kind) -> None:
    """1.97 V and 1.9735 V: 2.75 V is enough whatever feeds it, 1.96 V only where its own range does not count."""
    own = f"comparators: {{ov: {{works_to: {works_to}}}}}"
    for rule in ("levels_inside", "survives"):
        answer = said(rule, own, without(fact), of="ov")
        assert answer.kind is kind
        if kind is OPEN:
            assert answer.missing == (fact,)
            assert answer.measure is not None
            assert answer.measure.sure_margin < 0.0 < answer.measure.best_margin


def test_a_level_that_fails_at_the_damage_level_does_so_whatever_feeds_it() -> None:
    answer = said("survives", without("comparators.ov.domain"), "rails: {avdd: {damage: 1.96 V}}", of="ov")
    assert answer.kind is FAIL


def test_errors_that_are_not_described_leave_the_ends_open() -> None:
    """uv falls at 1.627 V and rises at 1.677 V, and by how much less or more is not said."""
    answer = said("levels_inside", without("comparators.uv.errors"), of="uv")
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.uv.errors",))
    high = said("levels_inside", without("comparators.uv.errors"), "comparators: {uv: {works_from: 1.63 V}}", of="uv")
    assert high.kind is FAIL


def test_open_names_all_at_once() -> None:
    facts = ("comparators.por.domain", "comparators.por.works_from", "comparators.por.works_to")
    answer = judged(without(*facts), RULES)["own_range/levels_inside", "por"]
    assert set(answer.missing) == set(facts)
