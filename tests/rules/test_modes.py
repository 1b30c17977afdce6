"""Modes: what is awake and what watches over it."""

from __future__ import annotations

import random
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import trip_window
from tidegate.rules.modes import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
LIVE: Final = "modes/live_detector"
OVER: Final = "modes/over_voltage"
SAMPLING: Final = "modes/sampling"
EXAMPLES: Final = {
    LIVE: {(LIVE, "core_regulator")},  # the converter is off in that mode
    OVER: {(OVER, "avdd")},
    SAMPLING: {(SAMPLING, "uv")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def mode(facts: str) -> str:
    return f"modes: {{drift: null, self_test: null, nap: {{{facts}}}}}"


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []
    assert one("", LIVE, "adc").message == "watched in self_test"
    assert one(mode("off: [adc]"), LIVE, "adc").message == "is off in nap"


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# modes/live_detector


NO_POR: Final = "output_stages: {gather: {driven_by: [uv_out, ov_latch]}}"
"""No other detector of avdd that could stand in for uv."""


@pytest.mark.parametrize(
    ("facts", "why"),
    [
        ("off: [uv]", "uv is off"),
        ("masked: [uv]", "uv is masked"),
        ("off: [ref_fast]", "uv leans on ref_fast, which is off"),
        ("off: [bias_start]", "uv leans on bias_start, which is off"),
        ("off: [gather]", "no stage that is awake carries the decision of uv to it"),
    ],
)
def test_detector_that_does_not_watch_in_a_mode(facts: str, why: str) -> None:
    said = one(both(NO_POR, mode(facts)), LIVE, "core_regulator")
    assert said.kind is FAIL
    assert said.message == f"in nap it is not off, and no detector of avdd watches over it: {why}"
    assert said.mend == "keep a detector of avdd awake in nap, or name core_regulator among what is off"


@pytest.mark.parametrize(
    ("facts", "why"),
    [
        ("off: [uv]", "uv is off"),
        ("masked: [uv]", "uv is masked"),
        ("off: [ref_fast]", "uv leans on ref_fast, which is off"),
    ],
)
def test_a_live_detector_counts_by_its_level(facts: str, why: str) -> None:
    """por is live, and falls at 1.11 V: the load needs 1.6 V."""
    said = one(mode(facts), LIVE, "core_regulator")
    assert said.kind is FAIL
    assert said.message == "in nap por stands in for uv, and falls at the lowest at 1.11 V, at least 1.6 V needed"
    assert said.why == f"{why}; core_regulator works from 1.6 V of avdd"
    assert said.mend == "keep uv awake in nap, or name core_regulator among what is off"


def test_way_to_what_is_off_is_shown() -> None:
    for patch in (mode("off: [ref_fast]"), both(NO_POR, mode("off: [ref_fast]"))):
        assert path_text(one(patch, LIVE, "core_regulator").path) == "uv takes its reference from ref_fast"


def twin(level: str) -> str:
    """A second under-voltage detector of avdd, on a reference of its own."""
    return f"""
    references: {{ref_twin: {{kind: band_gap, domain: aon, self_biased: false, bias: bias_start}}}}
    comparators: {{uv_twin: {{role: under_voltage, watches: avdd, domain: aon, bias: bias_start, reference: ref_twin,
      trip: {{falling: {level}}}}}}}
    output_stages: {{gather: {{driven_by: [por_out, uv_out, ov_latch, uv_twin]}}}}
    """


TWIN: Final = twin("{min: 1.62 V, max: 1.64 V}")


def test_without_a_way_to_what_is_off_the_rail_is_shown() -> None:
    """What is masked or off itself leans on nothing that is off; of two detectors the first that does shows its way."""
    for facts in ("off: [uv]", "masked: [uv]", "off: [gather]"):
        assert path_text(one(mode(facts), LIVE, "core_regulator").path) == "core_regulator supplied by avdd"
    said = one(both(TWIN, mode("off: [uv_twin, ref_fast]")), LIVE, "core_regulator")
    assert said.why.startswith("uv leans on ref_fast, which is off; uv_twin is off")
    assert path_text(said.path) == "uv takes its reference from ref_fast"
    said = one(both(TWIN, mode("off: [ref_twin, ref_fast]")), LIVE, "core_regulator")
    assert said.why.startswith("uv leans on ref_fast, which is off; uv_twin leans on ref_twin, which is off")
    assert path_text(said.path) == "uv takes its reference from ref_fast"
    said = one(both(TWIN, mode("off: [uv, ref_twin]")), LIVE, "core_regulator")
    assert path_text(said.path) == "uv_twin takes its reference from ref_twin"


def test_load_that_nothing_resets_or_no_detector_of_its_rails() -> None:
    said = one("resets: {core_rst_n: {guards: [adc]}}", LIVE, "core_logic")
    assert (said.kind, said.message) == (NONE, "no reset net guards it")
    said = one("output_stages: {core_out: {driven_by: [gather]}}", LIVE, "core_logic")
    assert (said.kind, said.message) == (NONE, "no detector of its rails resets it")


@pytest.mark.parametrize(
    ("patch", "missing"),
    [
        (without("resets.core_rst_n.guards"), "resets.core_rst_n.guards"),
        ("output_stages: {core_out: {driven_by: null}}", "output_stages.core_out.driven_by"),
        ("{resets: null, domains: {analog: {kind: always_on, switched_by: null}}, complete: [loads]}", "resets"),
        ("{modes: null, complete: [loads]}", "modes"),
        ("loads: {core_logic: {needs: null}}", "loads.core_logic.needs"),
    ],
)
def test_what_is_not_described_is_a_question(patch: str, missing: str) -> None:
    said = one(patch, LIVE, "core_logic")
    assert (said.kind, missing in said.missing) == (OPEN, True)


def test_power_on_detector_does_not_stand_in_for_the_under_voltage_detector() -> None:
    assert one(mode("off: [uv]"), LIVE, "core_regulator").kind is FAIL
    alone = both("output_stages: {gather: {driven_by: [por_out, ov_latch]}}", mode("off: [uv]"))
    assert one(alone, LIVE, "core_regulator").kind is PASS  # por is all it has in service


@pytest.mark.parametrize("off", ["[adc]", "[analog]", "[core_regulator]"])
def test_load_that_is_off_needs_no_detector(off: str) -> None:
    patch = mode(f"off: {off}, masked: [uv]")
    assert one(patch, LIVE, "adc").message == "is off in nap"


def test_one_of_two_detectors_is_enough() -> None:
    said = one(both(TWIN, mode("off: [uv]")), LIVE, "core_regulator")
    assert (said.kind, said.message) == (
        PASS, "in nap uv_twin stands in for uv, and falls at the lowest at 1.62 V, at least 1.6 V needed",
    )  # fmt: skip
    assert one(both(TWIN, mode("off: [uv, uv_twin]")), LIVE, "core_regulator").why.startswith(
        "uv is off; uv_twin is off"
    )


@pytest.mark.parametrize(
    ("level", "kind"),
    [
        ("{min: 1.5999 V, max: 1.64 V}", FAIL), ("{min: 1.6 V, max: 1.64 V}", PASS), ("{min: 1.3 V, max: 1.4 V}", FAIL),
        # Nothing, or too little, is known of its level, and enough that it is too low.
        ("{max: 1.64 V}", OPEN), ("{typ: 1.62 V}", OPEN), ("{min: 1.3 V, max: 1.64 V}", FAIL), ("{max: 1.59 V}", FAIL),
    ],
)  # fmt: skip
def test_the_level_of_what_stands_in_at_its_limit(level: str, kind: Kind) -> None:
    patch = both(twin(level), "comparators: {uv_twin: {hysteresis: none}}", mode("off: [uv]"))
    assert one(patch, LIVE, "core_regulator").kind is kind


def test_what_is_missing_of_what_the_load_needs() -> None:
    gone = without("loads.core_regulator.needs.0.works")
    said = one(both(TWIN, mode("off: [uv]"), gone), LIVE, "core_regulator")
    assert (said.kind, said.missing) == (OPEN, ("loads.core_regulator.needs.0.works",))


def test_whatever_the_level_of_what_is_not_live_the_load_is_not_guarded() -> None:
    unknown = both(mode("off: [uv]"), without("comparators.uv.trip", "comparators.uv.hysteresis"))
    said = one(unknown, LIVE, "core_regulator")
    assert (said.kind, said.missing) == (FAIL, ())


def test_a_detector_falls_no_higher_than_it_rises() -> None:
    """Nothing is said of its falling level; it rises at 1.5 V."""
    rising = twin("null").replace("{falling: null}", "{rising: {min: 1.5 V, max: 1.8 V}}")
    said = one(both(rising, mode("off: [uv]")), LIVE, "core_regulator")
    assert said.kind is FAIL
    assert said.measure is not None
    # At the worst it falls at nothing, and por stands in at 1.11 V.
    assert (said.measure.sure_margin, said.measure.best_margin) == pytest.approx((1.11 - 1.6, 1.5 - 1.6))
    high = rising.replace("1.5 V", "1.6 V")
    assert one(both(high, mode("off: [uv]")), LIVE, "core_regulator").kind is OPEN


def test_where_no_detector_protects_the_load_at_all_that_is_told() -> None:
    """Neither protects the load, in service as in the mode: trip_window/guarantee tells that."""
    low = both(twin("{min: 1.5 V, max: 1.52 V}"), "comparators: {uv: {trip: {falling: {min: 1.5 V, max: 1.52 V}}}}")
    said = judged(both(low, mode("off: [uv]")), (*RULES, *trip_window.RULES))[LIVE, "core_regulator"]
    assert (said.kind, said.under.partition("/")[0]) == (NONE, "trip_window")
    assert said.measure is not None
    assert said.measure.margin == pytest.approx(-0.1)


def test_a_load_that_may_be_off_with_a_domain_it_does_not_name() -> None:
    gone = both(mode("off: [analog], masked: [uv]"), "loads: {adc: {domain: null}}", NO_POR)
    said = one(gone, LIVE, "adc")
    assert (said.kind, said.missing) == (OPEN, ("loads.adc.domain",))


@pytest.mark.parametrize("fact", ["comparators.uv.bias", "comparators.uv.reference", "comparators.uv.domain"])
def test_live_detector_is_open_where_it_is_not_said_what_it_leans_on(fact: str) -> None:
    said = one(both(mode("off: [ref_main]"), without(fact)), LIVE, "core_regulator")
    assert (said.kind, said.missing) == (OPEN, (fact,))
    assert one(both(mode("masked: [ov]"), without(fact)), LIVE, "core_regulator").kind is PASS  # nothing is off


def test_description_without_modes() -> None:
    said = one("modes: null", LIVE, "adc")
    assert (said.kind, said.message) == (NONE, "no mode is described")


@pytest.mark.parametrize("seed", range(10))
def test_live_detectors_against_brute_force(seed: int) -> None:
    """Random things off and masked; brute force asks for each detector, by recursion, whether all it needs is on."""
    chance = random.Random(seed)
    off = set(chance.sample(["ref_fast", "bias_start", "uv", "uv_core", "uv_out", "gather", "core_out", "aon"], k=2))
    masked = set(chance.sample(["uv", "uv_core", "por"], k=1))
    needs = {
        "uv": ["aon", "bias_start", "ref_fast"], "uv_core": ["aon", "bias_start", "ref_fast"], "ref_fast": ["aon"],
        "bias_start": ["aon"], "uv_out": ["aon"], "gather": ["aon"], "core_out": ["aon"], "rst_out": ["aon"],
    }  # fmt: skip

    def is_on(name: str) -> bool:
        return name not in off and all(is_on(other) for other in needs.get(name, ()))

    ways = {
        "core_regulator": {"avdd": [("uv", ["uv_out", "gather", "rst_out"])]},
        "core_logic": {"vcore": [("uv_core", ["core_out"])]},
    }
    said = judged(mode(f"off: {sorted(off)}, masked: {sorted(masked)}"), RULES)
    for load, rails in ways.items():
        watched = all(
            any(d not in masked and is_on(d) and all(map(is_on, stages)) for d, stages in found)
            for found in rails.values()
        )
        assert said[LIVE, load].kind is (PASS if watched or "aon" in off else FAIL)  # aon feeds the maker of vcore too


# modes/over_voltage


def test_rail_without_its_over_voltage_detector_in_a_mode() -> None:
    said = one(mode("masked: [ov]"), OVER, "avdd")
    assert said.message == "in nap no over-voltage detector watches it: ov is masked"
    assert said.mend == "keep an over-voltage detector of avdd awake in nap"
    assert one("", OVER, "vcore").message == "no over-voltage detector watches it"
    moved = "comparators: {ov: {watches: vcore}}"
    assert one(both(moved, mode("masked: [ov]")), OVER, "vcore").kind is FAIL
    assert one(both(moved, mode("off: [core_regulator], masked: [ov]")), OVER, "vcore").kind is PASS


def test_one_of_two_over_voltage_detectors_is_enough() -> None:
    twin = "comparators: {ov_twin: {role: over_voltage, watches: avdd, domain: aon, bias: bias_start}}"
    assert one(both(twin, mode("masked: [ov]")), OVER, "avdd").message == "watched in nap"
    said = one(both(twin, mode("masked: [ov], off: [ov_twin]")), OVER, "avdd")
    assert said.message == "in nap no over-voltage detector watches it: ov is masked; ov_twin is off"
    assert one("modes: null", OVER, "avdd").message == "no mode is described"


def test_a_rail_that_is_off_in_one_mode_is_watched_in_the_next() -> None:
    moved = "comparators: {ov: {watches: vcore}}"
    modes = "modes: {drift: null, self_test: null, a: {off: [core_regulator]}, b: {masked: [ov]}}"
    said = one(both(moved, modes), OVER, "vcore")
    assert (said.kind, said.message) == (FAIL, "in b no over-voltage detector watches it: ov is masked")


@pytest.mark.parametrize("fact", ["comparators.ov.bias", "comparators.ov.domain"])
def test_over_voltage_is_open_where_it_is_not_said_what_the_detector_leans_on(fact: str) -> None:
    said = one(both(mode("off: [ref_main]"), without(fact)), OVER, "avdd")
    assert (said.kind, said.missing) == (OPEN, (fact,))


# modes/sampling


def sampled(period: str) -> str:
    return both(mode("sampled: [uv]"), f"comparators: {{uv: {{sampling: {period}}}}}")


def test_sampling_against_the_collapse() -> None:
    """Lowest falling level: 1.627 V less 0.4 %, 0.1 % and 3 times 0.4 mV over 0.367; 2 V/ms for 20 us are 40 mV."""
    falling_v = 1.627 * (1 - 0.004 - 0.001) - 3 * 0.4e-3 / 0.367
    said = one(sampled("20 us"), SAMPLING, "uv")
    assert said.measure is not None
    assert said.measure.need == pytest.approx(falling_v - 1.6, rel=1e-9)
    assert said.measure.have == pytest.approx(40e-3, rel=1e-9)
    assert said.message == "sampled in nap: between two samples avdd moves 40 mV, at most 15.6 mV needed"
    assert said.why == "2 V/ms for 20 us; adc works from 1.6 V, the level lies at 1.616 V at its worst"
    assert said.mend == "a period of 7.79 us or less"


@pytest.mark.parametrize(("share", "kind"), [(0.999, PASS), (1.0, PASS), (1.001, FAIL)])
def test_sampling_at_its_limit(share: float, kind: Kind) -> None:
    period_us = share * (1.627 * 0.995 - 3 * 0.4e-3 / 0.367 - 1.6) / 2e3 * 1e6
    assert one(sampled(f"{period_us!r} us"), SAMPLING, "uv").kind is kind


OVER_ROOM_V: Final = 1.98 - (1.958 * (1 + 0.004 + 0.001) + 3 * 0.4e-3 / 0.31)
"""Up to 1.98 V adc works; the highest rising level of ov, its errors added."""


def over(period: str) -> str:
    return both(mode("sampled: [ov]"), f"comparators: {{ov: {{sampling: {period}}}}}")


@pytest.mark.parametrize(("share", "kind"), [(0.999, PASS), (1.0, PASS), (1.001, FAIL)])
def test_sampling_against_the_overshoot_at_its_limit(share: float, kind: Kind) -> None:
    said = one(over(f"{share * OVER_ROOM_V / 1e3 * 1e6!r} us"), SAMPLING, "ov")
    assert said.kind is kind
    assert said.measure is not None
    assert said.measure.need == pytest.approx(OVER_ROOM_V, rel=1e-9)


def test_sampling_against_the_overshoot() -> None:
    """1.98 V less 1.97166 V are 8.339 mV, at 1 V/ms."""
    said = one(over("9 us"), SAMPLING, "ov")
    assert said.message == "sampled in nap: between two samples avdd moves 9 mV, at most 8.339 mV needed"
    assert said.why == "1 V/ms for 9 us; adc works up to 1.98 V, the level lies at 1.972 V at its worst"
    assert said.mend == "a period of 8.33 us or less"
    assert said.at == "comparators.ov.sampling"


def test_the_most_demanding_load_sets_the_room() -> None:
    """core_regulator bears 1.5 V to 2.1 V, adc 1.6 V to 1.98 V: as before, whichever comes first."""
    wide = "loads: {core_regulator: {needs: {0: {works: {min: 1.5 V, max: 2.1 V}}}}}"
    for patch, of, rail_end in ((sampled("20 us"), "uv", "from 1.6 V"), (over("9 us"), "ov", "up to 1.98 V")):
        alone, said = one(patch, SAMPLING, of), one(both(patch, wide), SAMPLING, of)
        assert said.measure == alone.measure
        assert f"; adc works {rail_end}, " in said.why
        assert said.path[-1].element == "adc"


def test_sampling_of_a_rail_that_never_moves() -> None:
    said = one(both(sampled("20 us"), "rails: {avdd: {collapse: 0 V/s}}"), SAMPLING, "uv")
    assert (said.kind, said.message) == (
        PASS, "sampled in nap: between two samples avdd moves 0 V, at most 15.6 mV needed",
    )  # fmt: skip


@pytest.mark.parametrize(("least", "kind"), [("1.6 V", PASS), ("1.6001 V", FAIL)])
def test_level_that_does_not_protect_at_all_is_sampled_too_seldom(least: str, kind: Kind) -> None:
    """The lowest falling level is 1.6 V: a detector that a rail at rest lets sample as seldom as it will."""
    levels = "trip: {rising: {min: 1.65 V, max: 1.7 V}, falling: {min: 1.6 V, max: 1.64 V}}"
    loads = ", ".join(f"{name}: {{needs: {{0: {{works: {{min: {least}}}}}}}}}" for name in ("adc", "core_regulator"))
    patch = f"{{comparators: {{uv: {{{levels}}}}}, loads: {{{loads}}}, rails: {{avdd: {{collapse: 0 V/s}}}}}}"
    said = one(both(sampled("4 us"), patch), SAMPLING, "uv")
    assert said.kind is kind
    if kind is FAIL:
        assert said.mend == "a level further from what the loads need"


def test_sampled_detector_that_guards_no_load_of_its_rail() -> None:
    patch = "{resets: {por_n: {guards: [core_logic]}, core_rst_n: {guards: [core_logic]}}}"
    assert one(both(sampled("4 us"), patch), SAMPLING, "uv").message == "it guards no load of its rail"


@pytest.mark.parametrize(
    "fact", ["comparators.uv.sampling", "rails.avdd.collapse", "comparators.uv.trip.falling", "loads.adc.needs.0.works"]
)
def test_sampling_is_open_without(fact: str) -> None:
    gone = both(sampled("4 us"), "comparators: {uv: {hysteresis: {amount: null}}}", without(fact))
    assert fact in one(gone, SAMPLING, "uv").missing


def test_detector_that_no_mode_samples() -> None:
    assert one("comparators: {uv: {sampling: 20 us}}", SAMPLING, "uv").message == "no mode names it as sampled"
