"""The start-up family on the sound example with one fault at a time; expected numbers are worked out by hand."""

from __future__ import annotations

import json
import math
from typing import Any

import pytest

from tests.rules.sound import both, changed, judged, patched, without
from tidegate.lint.graph.dependency import build
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.timing.timeline import timelines
from tidegate.rules import coverage, passive_default, reach, self_bias_start, trip_window
from tidegate.rules.start_up import RULES

RELEASE, UNKNOWN, ASSERTS = "start_up/release_after_ready", "start_up/no_unknown_interval", "start_up/asserts_in_time"
DIP, ORDER = "start_up/dip_is_caught", "start_up/rail_order"

FALL_V_PER_S = 2e3
"""avdd collapses at 2 V/ms at the most; how fast it is switched off, and what holds it up, does not count beside."""
UV_ERROR_V = 0.005 * 1.627 + 3 * 0.4e-3 / 0.367
"""0.5 % of the level, and three standard deviations of 0.4 mV at the input, by the divider ratio."""
UV_FALLS_V = 1.627 - UV_ERROR_V
ANSWER_S = 2e-6 + 1.5e-6 + 60e-9 + 60e-9 + 100e-9
"""Delay and filter of uv, and the delays of uv_out, gather and rst_out, each at its greatest."""


def found(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def patch(data: dict[str, Any]) -> str:
    return json.dumps(data)


def test_the_sound_example_keeps_every_rule() -> None:
    kinds = {key: judgement.kind for key, judgement in judged("", RULES).items()}
    assert set(kinds.values()) == {Kind.PASS, Kind.NOT_APPLICABLE}
    assert [key for key, kind in kinds.items() if kind is Kind.NOT_APPLICABLE] == [(ORDER, "avdd")]


@pytest.mark.parametrize("rule", RULES, ids=[rule.id for rule in RULES])
def test_each_example_fails_its_rule_and_its_counterpart_holds(rule: Any) -> None:
    fails = [key for key, kind in changed(rule.example.fails, RULES).items() if kind is Kind.FAIL]
    assert rule.id in [name for name, _ in fails]
    assert changed(rule.example.holds, RULES) == {}


# Release after ready


def test_release_waits_for_the_reference_after_the_deepest_dip() -> None:
    """After a dip to uv's least working supply less what keeps por silent, release runs from where uv lets go."""
    judgement = found("", RELEASE, "core_regulator")
    assert judgement.measure is not None
    # The supply comes back at 36 V/ms from 1.06 V, where ref_fast was down: up at 1.12 V, settled 60 us later,
    # ready 80 us after that; of the 1.12 V - 1.06 V nothing is left that could be told from 0.
    assert judgement.message.startswith("earliest release (avdd dips to 1.06 V for long) 203.6 us, at least 140 us")
    assert judgement.why == "avdd dips to 1.06 V for long; ready at the latest 140 us after the supply begins to rise"
    assert "at either end" not in found("", RELEASE, "adc").why  # each time at its own worst end is enough


def test_release_too_soon_says_by_how_much() -> None:
    judgement = found(
        patch({"output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}}}), RELEASE,
        "core_regulator",
    )  # fmt: skip
    assert judgement.kind is Kind.FAIL
    assert judgement.message == "earliest release (avdd dips to 1.06 V for long) 103.6 us, at least 140 us needed"
    assert judgement.mend == "release it 36.5 us later, or let it be ready that much sooner"
    assert judgement.at == "loads.core_regulator.ready"


def _with_release_delay(least_s: float) -> str:
    return patch({"output_stages": {"rst_out": {"release_delay": {"min": f"{least_s!r} s", "max": "400 us"}}}})


def test_release_passes_at_the_limit_and_fails_one_step_beyond() -> None:
    sound = found("", RELEASE, "core_regulator").measure
    assert sound is not None
    # The release delay adds to the release alone, so the limit lies where it is shorter by the whole margin.
    limit_s = 200e-6 - sound.margin
    assert found(_with_release_delay(limit_s), RELEASE, "core_regulator").kind is Kind.PASS
    assert found(_with_release_delay(limit_s + 1e-9), RELEASE, "core_regulator").kind is Kind.PASS
    assert found(_with_release_delay(limit_s - 1e-9), RELEASE, "core_regulator").kind is Kind.FAIL


def test_a_shared_reference_does_not_count_against_itself() -> None:
    """With uv in reset until ref_fast is up, a slow reference delays the release as much as the readiness."""
    slow = patch({
        "references": {"ref_fast": {"settling": {"min": "5 us", "max": "100 us"}}},
        "output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}},
        "comparators": {"uv": {"undecided": "asserts"}, "por": {"undecided": "asserts"}},
        "loads": {"core_regulator": {"ready": {"max": "40 us"}}},
    })  # fmt: skip
    judgement = found(slow, RELEASE, "core_regulator")
    assert judgement.kind is Kind.PASS
    assert "ref_fast at either end, for both times alike" in judgement.why


def test_a_load_on_a_rail_whose_order_is_open_is_released_without_it() -> None:
    late = patch({
        "rails": {"vio": {"nominal": "1.8 V", "rise": {"min": "50 us", "max": "20 ms"},
                          "fall": {"min": "1 ms", "max": "500 ms"}}},
        "loads": {"adc": {"needs": [{"rail": "avdd", "works": {"min": "1.6 V", "max": "1.98 V"}},
                                    {"rail": "vcore", "works": {"min": "1.08 V", "max": "1.32 V"}},
                                    {"rail": "vio", "works": {"min": "1.6 V", "max": "1.98 V"}}]}},
    })  # fmt: skip
    judgement = found(late, RELEASE, "adc")
    assert judgement.kind is Kind.FAIL
    assert judgement.message == "may be released before the last of its supplies rises (vio late)"
    assert judgement.mend == "let its reset wait for every rail that it needs"
    # How vio dips, what is left on it and how it collapses is not said, and would not save it.
    assert found(late, ASSERTS, "adc").missing == ("rails.vio.collapse",)
    falls = both(late, "rails: {vio: {collapse: 1 V/ms}}")
    never = judged(falls, (*RULES, *coverage.RULES))[ASSERTS, "adc"]
    assert (never.kind, never.under) == (Kind.NOT_APPLICABLE, "coverage/under_voltage")
    assert never.message.startswith("its reset may never be asserted when vio falls")


def test_a_rail_that_the_reset_itself_lets_come_is_late() -> None:
    """The core's logic on the reset that lets its regulator start: released before its supply is there."""
    guards = {"core_rst_n": {"guards": ["adc"]}, "por_n": {"guards": ["adc", "core_regulator", "core_logic"]}}
    judgement = found(
        patch({"resets": guards}),
        RELEASE, "core_logic",
    )  # fmt: skip
    assert judgement.kind is Kind.FAIL
    assert judgement.measure is not None
    # At either end of what both wait for: vcore begins 200 us late at the most, rises in 2 ms to 1.08 of 1.2 V,
    # and the logic takes 10 us more.
    assert -judgement.measure.margin == pytest.approx(200e-6 + 2e-3 * 1.08 / 1.2 + 10e-6, rel=1e-3)


@pytest.mark.parametrize(
    ("fact", "subject"),
    [
        ("loads.core_regulator.ready", "core_regulator"), ("references.ref_fast.settling", "core_regulator"),
        ("references.ref_fast.works_from", "core_regulator"), ("rails.avdd.rise", "core_regulator"),
        ("rails.avdd.nominal", "core_regulator"), ("output_stages.gather.combine", "core_regulator"),
        ("output_stages.rst_out.discharge", "core_regulator"), ("loads.core_regulator.domain", "core_regulator"),
        ("loads.core_regulator.needs.0.works.max", "core_regulator"), ("rails.avdd.dip.at", "core_regulator"),
        ("rails.avdd.residual", "core_regulator"), ("comparators.por.delay", "core_regulator"),
        ("comparators.por.filter", "core_regulator"),
        ("comparators.uv.domain", "core_regulator"), ("comparators.uv.output", "core_regulator"),
        ("domains.aon.kind", "core_regulator"), ("domains.aon.rail", "core_regulator"),
        ("rails.avdd.collapse", "core_regulator"),  # its hold-up bounds it, but a slower dip comes back otherwise
    ],
)  # fmt: skip
def test_release_cannot_be_judged_without(fact: str, subject: str) -> None:
    judgement = found(without(fact), RELEASE, subject)
    assert judgement.kind is Kind.OPEN
    assert fact in judgement.missing


@pytest.mark.parametrize(
    "fact",
    [
        "output_stages.rst_out.hold",  # it is dead only below 0.7 V of a supply of which the load needs 1.6 V
        "comparators.ov.sampling", "comparators.por.delay.min",
        "loads.adc.ready", "references.ref_main.settling",  # nothing that this load leans on
    ],
)  # fmt: skip
def test_release_is_certain_without(fact: str) -> None:
    """What is missing may be anything, and the release comes in time all the same."""
    sound = found("", RELEASE, "core_regulator")
    judgement = found(without(fact), RELEASE, "core_regulator")
    assert judgement.kind is Kind.PASS
    assert judgement.measure is not None
    assert sound.measure is not None
    assert judgement.measure.sure_margin <= sound.measure.margin <= judgement.measure.best_margin


@pytest.mark.parametrize("fact", ["comparators.por.output", "comparators.por.trip", "output_stages.gather.delay"])
def test_a_release_that_does_not_show_for_what_is_missing_is_not_held_to_come_in_time(fact: str) -> None:
    """In plug_in, uv's pulse is over too soon; where a reset may not have been asserted before, that does not show."""
    pulse = "comparators: {uv: {output: pulse, pulse: {min: 20 us, max: 30 us}}}"
    assert found(pulse, RELEASE, "core_regulator").kind is Kind.FAIL
    judgement = found(both(pulse, without(fact)), RELEASE, "core_regulator")
    assert judgement.kind is Kind.OPEN
    assert any(path.startswith(fact) for path in judgement.missing)


def test_an_element_of_unknown_width_is_no_certain_failure() -> None:
    """por alone starts vcore too soon for the adc; how wide uv is decides what release and readiness share."""
    early = next(rule.example.fails for rule in RULES if rule.id == ORDER)
    assert found(early, RELEASE, "adc").kind is Kind.PASS
    assert found(both(early, "comparators: {uv: {errors: {divider: {of: null}}}}"), RELEASE, "adc").kind is Kind.OPEN


def test_several_missing_facts_are_named_at_once() -> None:
    judgement = found(
        without("loads.core_regulator.ready", "references.ref_fast.settling", "rails.avdd.rise"),
        RELEASE,
        "core_regulator",
    )
    assert set(judgement.missing) == {
        "loads.core_regulator.ready", "references.ref_fast.settling", "rails.avdd.rise",
    }  # fmt: skip


def test_a_least_time_that_is_not_given_is_asked_for_where_it_could_help() -> None:
    """Without a least release delay the release may come at once; with one it might come in time."""
    judgement = found(
        patch({"output_stages": {"rst_out": {"release_delay": {"min": None, "max": "400 us"}}}}),
        RELEASE,
        "core_regulator",
    )
    assert judgement.kind is Kind.OPEN
    assert judgement.missing == ("output_stages.rst_out.release_delay.min",)  # of all least ends the one that tells
    assert judgement.measure is not None
    assert judgement.measure.best_margin > 0.0 > judgement.measure.sure_margin


def test_a_load_without_reset_is_not_judged() -> None:
    for rule in (RELEASE, ASSERTS, DIP):
        judgement = found(patch({"resets": {"por_n": {"guards": ["adc"]}}}), rule, "core_regulator")
        assert judgement.kind is Kind.NOT_APPLICABLE
        assert judgement.message == "no reset net guards it"


def test_a_least_time_that_could_not_help_is_not_asked_for() -> None:
    """With always 100 us it would come 37 us too soon all the same."""
    short = {"output_stages": {"rst_out": {"release_delay": {"min": None, "max": "100 us"}}}}
    judgement = found(patch(short), RELEASE, "core_regulator")
    always = found(patch({"output_stages": {"rst_out": {"release_delay": "100 us"}}}), RELEASE, "core_regulator")
    assert (judgement.kind, judgement.message) == (Kind.FAIL, always.message)
    assert judgement.measure is not None
    assert always.measure is not None
    assert judgement.measure.best_margin >= always.measure.margin >= judgement.measure.sure_margin


def test_a_greatest_time_that_is_not_given_is_asked_for_before_a_release_fails() -> None:
    short = {"output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}}}
    judgement = found(both(patch(short), without("comparators.por.delay")), RELEASE, "core_regulator")
    assert (judgement.kind, judgement.missing) == (Kind.OPEN, ("comparators.por.delay",))


def test_a_reset_that_is_never_released() -> None:
    """uv lets go above 1.9 V, and the rail rises to 1.8 V: nothing is released, and vcore never rises."""
    high = patch({"comparators": {"uv": {"undecided": "asserts", "trip": {"rising": "1.95 V", "falling": "1.9 V"}}}})
    judgement = found(high, RELEASE, "core_regulator")
    assert (judgement.kind, judgement.message) == (
        Kind.FAIL,
        "its reset is never released (fastest ramp, slowest ramp, ramp that goes back, residual charge, off and on "
        "again, plug_in)",
    )
    assert judgement.mend == "let every detector that resets it let go within the supply in service"
    judgement = found(high, ORDER, "vcore")
    assert (judgement.kind, judgement.message) == (Kind.FAIL, "never begins to rise")
    assert (judgement.mend, judgement.at) == ("let what makes it come on", "rails.vcore.after")
    judgement = found(high, ASSERTS, "core_regulator")
    assert (judgement.kind, judgement.message) == (Kind.PASS, "its reset is asserted before avdd falls")
    assert found(high, DIP, "core_regulator").message == "no dip can be missed"


def test_a_load_that_is_released_and_may_never_be_ready() -> None:
    """Its reference works from 1.85 V, and the rail rises to 1.8 V."""
    judgement = found(patch({"references": {"ref_main": {"works_from": {"max": "1.85 V"}}}}), RELEASE, "adc")
    assert judgement.kind is Kind.FAIL
    # 1.665 V, where uv lets go at the earliest, after 46.26 us of the fastest ramp; core_out releases 1 ms after
    # uv_core, which waits for por_n (0.2 ms), the rail's delay (20 us) and its rise to 1.117 V of 1.2 V in 20 us.
    lets_go_s = (1.677 * 0.995 - 3 * 0.4e-3 / 0.367) / 1.8 * 50e-6
    vcore_s = 20e-6 + (1.125 * 0.995 - 3 * 0.4e-3 / 0.542) / 1.2 * 20e-6
    assert lets_go_s + 0.2e-3 + vcore_s + 1e-3 == pytest.approx(1.285e-3, rel=2e-2)
    assert judgement.message.startswith("released from 1.27")
    assert judgement.message.endswith(" ms on, and may never be ready (fastest ramp)")
    assert judgement.why.startswith("every rail rises as fast as it may; ")
    assert judgement.mend == "release it by a net that waits for all that it needs"
    assert judgement.at == "loads.adc.ready"


def test_a_net_that_guards_the_domain_guards_the_load() -> None:
    """The same numbers as with the load itself guarded."""
    by_domain = patch({"resets": {"por_n": {"guards": ["adc", "aon"]}}})
    for rule in (RELEASE, ASSERTS, DIP):
        assert found(by_domain, rule, "core_regulator").measure == found("", rule, "core_regulator").measure


# Unknown intervals


def test_a_net_that_is_known_throughout_says_how_much_was_tried() -> None:
    """Every start, every fall of all rails and of each behind the net alone, and every dip of each."""
    loaded = patched("")
    lines = timelines(loaded.description, build(loaded.description))
    for net, rails in (("por_n", ("avdd",)), ("core_rst_n", ("avdd", "vcore"))):
        tried = len(lines.starts) + len(lines.falls) + len(rails) + sum(len(lines.dips(rail)) for rail in rails)
        judgement = found("", UNKNOWN, net)
        assert (judgement.kind, judgement.message) == (Kind.PASS, f"known in {tried} start-ups, falls and dips")


@pytest.mark.parametrize(
    "facts",
    [
        ["comparators.uv.delay"], ["rails.avdd.rise"],
        ["rails.avdd.fall.min"], ["rails.avdd.fall.max"], ["rails.avdd.collapse", "rails.avdd.hold_up"],
        ["rails.avdd.off_time"], ["rails.avdd.residual"], ["rails.avdd.dip.depth"], ["output_stages.gather.kind"],
        ["output_stages.rst_out.hold"], ["resets.por_n.driven_by"],
    ],
)  # fmt: skip
def test_unknown_cannot_be_judged_without(facts: list[str]) -> None:
    judgement = found(without(*facts), UNKNOWN, "por_n")
    assert judgement.kind is Kind.OPEN
    assert judgement.missing[0] == facts[0]


@pytest.mark.parametrize("fact", ["resets.por_n.domain", "resets.por_n.receivers"])
def test_who_reads_a_net_is_asked_only_where_it_may_be_unknown(fact: str) -> None:
    assert found(without(fact), UNKNOWN, "por_n").kind is Kind.PASS
    bare = both(patch({"output_stages": {"rst_out": {"hold": "none"}}}), without(fact))
    judgement = found(bare, UNKNOWN, "por_n")
    assert (judgement.kind, judgement.missing[0].startswith(fact)) == (Kind.OPEN, True)


def test_a_net_that_is_unknown_in_service_is_read_whatever_its_receivers_are() -> None:
    undefined = {name: {"undecided": "undefined"} for name in ("por", "uv", "ov")}
    judgement = found(both(patch({"comparators": undefined}), without("resets.por_n.receivers")), UNKNOWN, "por_n")
    assert (judgement.kind, judgement.message.startswith("its level may be unknown for good")) == (Kind.FAIL, True)


def test_an_unknown_level_on_the_way_down() -> None:
    """core_out is alive down to 0.7 V of avdd, 1.8 V in 1 ms; its receivers still read vcore then."""
    judgement = found(patch({"output_stages": {"core_out": {"hold": "none"}}}), UNKNOWN, "core_rst_n")
    assert pytest.approx(611.1e-6, rel=1e-4) == (1.8 - 0.7) / 1.8 * 1e-3
    assert judgement.message.endswith(
        " (off and on again, from 611.1 us on): core_out is not alive and nothing holds it"
    )


def test_an_unknown_level_for_good() -> None:
    undefined = {name: {"undecided": "undefined"} for name in ("por", "uv", "ov")}
    judgement = found(patch({"comparators": undefined}), UNKNOWN, "por_n")
    assert judgement.message.startswith("its level may be unknown for good (fastest ramp, from ")
    assert judgement.message.endswith(": ov cannot decide yet")
    assert judgement.why == "every rail rises as fast as it may; ov waits for its answer"
    assert judgement.mend == (
        "let something assert por_n until ov can decide; where its output surely does so by itself, say "
        "comparators.ov.undecided"
    )


def test_an_unknown_level_after_a_dip() -> None:
    """At 1.06 V ref_fast may be down, and por has let go: uv_core is known again 60 us after ref_fast is."""
    low = patch({"comparators": {"por": {"trip": {"falling": {"min": "0.9 V", "max": "1.43 V"}}}}})
    judgement = found(low, UNKNOWN, "core_rst_n")
    assert judgement.kind is Kind.FAIL
    assert judgement.message == (
        "its level may be unknown for 22.22 us (avdd dips to 1.06 V for long, from 40 us after the supply begins to "
        "rise again): uv_core cannot decide yet"
    )
    assert judgement.at == "resets.core_rst_n.driven_by"


def test_a_stage_without_hold_is_to_blame() -> None:
    judgement = found(patch({"output_stages": {"rst_out": {"hold": "none"}}}), UNKNOWN, "por_n")
    assert judgement.kind is Kind.FAIL
    # The slowest ramp passes 0.45 V, where the receivers begin to read, at 5 ms, and 0.7 V at 7.778 ms.
    assert judgement.message == (
        "its level may be unknown for 2.778 ms (slowest ramp, from 5 ms on): rst_out is not alive and nothing holds it"
    )
    assert judgement.why == "every rail rises as slowly as it may; rst_out waits for avdd at 0.7 V"
    assert judgement.mend == "hold the output of rst_out at the level at which por_n resets"
    assert [(hop.element, hop.by) for hop in judgement.path] == [("por_n", ""), ("rst_out", "driven by")]


def test_a_detector_that_cannot_decide_is_to_blame() -> None:
    judgement = found(patch({"comparators": {"por": {"undecided": None}}}), UNKNOWN, "por_n")
    assert judgement.kind is Kind.FAIL
    assert judgement.message.endswith("por cannot decide yet")
    assert [hop.element for hop in judgement.path] == ["por_n", "rst_out", "gather", "por_out", "por"]


def test_below_what_its_receivers_read_a_net_may_be_anything() -> None:
    """With receivers that read from 0.7 V on, the bare stage is alive as soon as anybody looks."""
    bare = {"output_stages": {"rst_out": {"hold": "none"}}}
    reads_late = {"resets": {"por_n": {"receivers": {"threshold": {"min": "0.7 V"}}}}}
    assert found(patch(bare | reads_late), UNKNOWN, "por_n").kind is Kind.PASS


def test_a_slow_reference_outlasts_the_release_delay() -> None:
    judgement = found(
        patch({"references": {"ref_fast": {"settling": {"min": "5 us", "max": "900 us"}}}}), UNKNOWN, "por_n"
    )
    assert judgement.kind is Kind.FAIL
    assert "uv cannot decide yet" in judgement.message
    assert judgement.why.endswith("uv waits for ref_fast")


# Assertion on the way down


def test_assertion_beats_the_collapse() -> None:
    judgement = found("", ASSERTS, "core_regulator")
    assert judgement.measure is not None
    leaves_s = (1.8 - 1.6) / FALL_V_PER_S
    asserted_s = (1.8 - UV_FALLS_V) / FALL_V_PER_S + ANSWER_S
    assert judgement.measure.have == pytest.approx(leaves_s)
    assert judgement.measure.need == pytest.approx(asserted_s)
    assert judgement.why.startswith("avdd falls at 2 V/ms, by its collapse; the load works down to 1.6 V")


def test_where_no_collapse_is_stated_hold_up_bounds_it() -> None:
    """10 uF under 29 mA: 2.9 V/ms at the most, and any slower; at that, uv decides 15.6 mV early, 5.379 us."""
    gone = without("rails.avdd.collapse")
    judgement = found(gone, ASSERTS, "core_regulator")
    assert (judgement.kind, judgement.missing) == (Kind.PASS, ("rails.avdd.collapse",))
    assert "avdd falls at 2.9 V/ms, by its hold-up" in judgement.why
    assert judgement.measure is not None
    assert judgement.measure.sure_margin == pytest.approx((UV_FALLS_V - 1.6) / 2.9e3 - ANSWER_S)
    slow = patch({"comparators": {"uv": {"delay": {"min": "0.3 us", "max": "5 us"}}}})
    judgement = found(both(slow, gone), ASSERTS, "core_regulator")
    assert (judgement.kind, judgement.missing) == (Kind.OPEN, ("rails.avdd.collapse",))
    for more in ("loads.adc.consumes", "rails.avdd.hold_up"):
        judgement = found(both(gone, without(more)), ASSERTS, "core_regulator")
        assert (judgement.kind, judgement.missing) == (Kind.OPEN, ("rails.avdd.collapse",))
    elsewhere = both(gone, "complete: [bypasses]")  # more loads may draw more
    assert found(elsewhere, ASSERTS, "core_regulator").kind is Kind.OPEN


def test_assertion_passes_at_the_limit_and_fails_one_step_beyond() -> None:
    spare_s = (UV_FALLS_V - 1.6) / FALL_V_PER_S - ANSWER_S
    for more_s, kind in ((spare_s - 1e-12, Kind.PASS), (spare_s + 1e-9, Kind.FAIL)):
        slower = patch({"output_stages": {"rst_out": {"delay": {"min": "10 ns", "max": f"{100e-9 + more_s!r} s"}}}})
        assert found(slower, ASSERTS, "core_regulator").kind is kind


def test_assertion_too_late_says_what_would_do() -> None:
    judgement = found(
        patch({"output_stages": {"rst_out": {"delay": {"min": "10 ns", "max": "20 us"}}}}), ASSERTS, "core_regulator"
    )
    assert judgement.message == (
        "avdd leaves the range of the load, falling from nominal, after 100 us, at least 115.8 us needed"
    )
    assert judgement.mend == "an answer that comes 15.9 us sooner, or a falling level that lies 31.7 mV higher"


@pytest.mark.parametrize(
    ("least", "dips"),
    [
        ("0 V", "the deepest dip of avdd that may be missed goes down to 1.615 V, at least 0 V needed"),
        ("1.85 V", "no dip can be missed"),
    ],
    ids=["works_down_to_nothing", "never_works"],
)
def test_a_load_whose_range_no_fall_leaves(least: str, dips: str) -> None:
    needs = {"0": {"works": {"min": least, "max": "1.98 V"}}}
    of_load = patch({"loads": {"core_regulator": {"needs": needs}}})
    judgement = found(of_load, ASSERTS, "core_regulator")
    assert (judgement.kind, judgement.message) == (Kind.PASS, "no rail that falls from nominal leaves its range")
    judgement = found(of_load, DIP, "core_regulator")
    assert (judgement.kind, judgement.message) == (Kind.PASS, dips)


def test_a_load_that_its_rails_detectors_do_not_reset() -> None:
    """Of two rails the one that nobody judges is told: uv_core does not reach a net that guards adc."""
    cut = patch({"output_stages": {"core_out": {"driven_by": ["gather"]}}})
    said = judged(cut, (*RULES, *reach.RULES))
    for rule, of in ((ASSERTS, "adc"), (ASSERTS, "core_logic"), (DIP, "core_logic")):
        assert (said[rule, of].kind, said[rule, of].under) == (Kind.NOT_APPLICABLE, "reach/every_rail")
    assert found(cut, ASSERTS, "core_logic").under == DIP
    assert found(cut, DIP, "core_logic").message == (
        "the deepest dip of vcore that may be missed goes down to 0 V, at least 1.08 V needed"
    )


def test_a_reset_that_may_never_be_asserted() -> None:
    """rst_out is alive down to 1.65 V and not held: gone before uv decides."""
    dead = patch({"output_stages": {"rst_out": {"hold": "none", "works_from": {"max": "1.65 V"}}}})
    judgement = found(dead, ASSERTS, "core_regulator")
    assert judgement.message.startswith("its reset may never be asserted when avdd falls")
    assert judgement.why == "avdd falls at 2 V/ms, by its collapse; the load works down to 1.6 V"
    assert judgement.mend == "let a detector of avdd that is alive down to 0 V, or held, reset it"
    assert judgement.at == "loads.core_regulator.needs"


def test_how_a_rail_comes_up_does_not_matter_when_it_falls() -> None:
    """vcore is there, however its regulator started."""
    for fact in ("loads.core_regulator.start", "rails.vcore.delay"):
        for rule in (ASSERTS, DIP):
            assert found(without(fact), rule, "adc").measure == found("", rule, "adc").measure
    alone = patch(
        {"output_stages": {"core_out": {"driven_by": ["uv_core"]}}}
    )  # por_n, that lets vcore come, hangs on uv
    for rule in (ASSERTS, DIP):
        assert found(both(alone, without("comparators.uv.delay")), rule, "core_logic").kind is Kind.PASS


def test_the_rail_with_the_least_room_is_told() -> None:
    """vcore keeps 86 mV above 1 V then, avdd 15 mV above 1.6 V."""
    needs = {"1": {"works": {"min": "1 V", "max": "1.32 V"}}}
    judgement = found(patch({"loads": {"adc": {"needs": needs}}}), DIP, "adc")
    assert judgement.message.startswith("the deepest dip of avdd that may be missed goes down to ")


def test_what_holds_a_rail_up_does_not_count_beside_a_stated_collapse() -> None:
    """7 us at 2 V/ms are too late, whatever the capacitance would make of the collapse."""
    slower = patch({"comparators": {"uv": {"delay": {"min": "0.3 us", "max": "7 us"}}}})
    for more in ("{}", "rails: {avdd: {hold_up: 100 uF}}", without("rails.avdd.hold_up", "rails.avdd.fall")):
        judgement = found(both(slower, more), ASSERTS, "core_regulator")
        assert judgement.kind is Kind.FAIL
        assert judgement.measure is not None
        assert judgement.measure.need == pytest.approx((1.8 - UV_FALLS_V) / FALL_V_PER_S + ANSWER_S + 5e-6)


def test_a_detector_that_decides_too_late_is_judged_by_itself() -> None:
    """Within 50 us avdd falls 100 mV below the falling level: the range of the load is left long before."""
    late = patch({"comparators": {"uv": {"delay": {"min": "0.3 us", "max": "50 us"}}}})
    said = judged(late, (*RULES, *trip_window.RULES))
    assert said["trip_window/guarantee", "uv"].kind is Kind.FAIL
    judgement = said[ASSERTS, "core_regulator"]
    assert (judgement.kind, judgement.under) == (Kind.NOT_APPLICABLE, "trip_window/guarantee")
    assert judgement.measure is not None
    assert judgement.measure.margin < 0.0  # told there, and kept with its number
    assert found(late, ASSERTS, "core_regulator").kind is Kind.FAIL


def test_a_dip_that_may_be_missed_altogether_is_told_once() -> None:
    cut = patch({"output_stages": {"gather": {"driven_by": ["por_out", "ov_latch"]}}})
    judgement = found(cut, ASSERTS, "core_regulator")
    assert (judgement.kind, judgement.under) == (Kind.NOT_APPLICABLE, DIP)
    judgement = found(cut, DIP, "core_regulator")
    assert judgement.message == "the deepest dip of avdd that may be missed goes down to 1.11 V, at least 1.6 V needed"
    assert judgement.why == "avdd dips to 1.11 V for long; the load works down to 1.6 V"
    assert judgement.at == "loads.core_regulator.needs"


@pytest.mark.parametrize(
    "fact",
    [
        "output_stages.rst_out.delay", "comparators.uv.delay", "comparators.uv.works_from", "rails.avdd.nominal",
        "comparators.uv.filter", "comparators.uv.sampling", "loads.core_regulator.needs.0.works",
        "loads.core_regulator.needs.0.works.min", "comparators.uv.errors", "output_stages.gather.driven_by",
    ],
)  # fmt: skip
def test_assertion_cannot_be_judged_without(fact: str) -> None:
    judgement = found(without(fact), ASSERTS, "core_regulator")
    assert judgement.kind is Kind.OPEN
    assert any(fact.startswith(path) or path.startswith(fact) for path in judgement.missing)


def test_a_stage_that_is_held_asserts_whether_it_is_alive_or_not() -> None:
    judgement = found(without("output_stages.gather.works_from"), ASSERTS, "core_regulator")
    assert judgement.kind is Kind.PASS


# Dips


def test_the_deepest_dip_that_may_be_missed_is_as_deep_as_the_filter_is_long() -> None:
    judgement = found("", DIP, "core_regulator")
    assert judgement.measure is not None
    # uv may take the dip for low from its falling level down to there, and back up to its rising level, for 1.5 us.
    up_v_per_s = 1.8 / 50e-6
    rises_v = 1.677 - 0.005 * 1.677 - 3 * 0.4e-3 / 0.367
    blind_s = 1.5e-6 - (rises_v - UV_FALLS_V) / up_v_per_s
    deepest_v = UV_FALLS_V - blind_s / (1 / FALL_V_PER_S + 1 / up_v_per_s)
    assert judgement.measure.have == pytest.approx(deepest_v, rel=1e-6)
    assert judgement.measure.need == 1.6


def test_a_pulse_misses_every_dip_that_does_not_rearm_it() -> None:
    """uv fires again only after 0.5 V; por, a level, asserts from 1.11 V on: a dip to there is missed."""
    judgement = found(
        patch({"comparators": {"uv": {"output": "pulse", "pulse": {"min": "20 us", "max": "30 us"}}}}),
        DIP,
        "core_regulator",
    )
    assert judgement.kind is Kind.FAIL
    assert judgement.message == "the deepest dip of avdd that may be missed goes down to 1.11 V, at least 1.6 V needed"
    assert judgement.mend == "see dips 490 mV sooner: a higher falling level, or a shorter filter"


# Rail order


def test_a_rail_waits_for_the_one_before_by_its_reset() -> None:
    judgement = found("", ORDER, "vcore")
    assert judgement.measure is not None
    # From 0.2 V on at 36 V/ms: avdd is up (1.6 V) after 1.4/1.8 of 50 us.
    assert judgement.measure.need == pytest.approx(50e-6 * 1.4 / 1.8)


def test_a_rail_whose_maker_starts_too_soon_is_out_of_order() -> None:
    judgement = found(
        patch({
            "resets": {"por_n": {"guards": ["adc"]}},
            "loads": {"core_regulator": {"needs": {"0": {"works": {"min": "1.2 V", "max": "1.98 V"}}}}},
        }),
        ORDER, "vcore",
    )  # fmt: skip
    assert judgement.kind is Kind.FAIL
    assert judgement.measure is not None
    # 20 us after 1.2 V on the slowest ramp (20 ms for 1.8 V), while avdd is up at 1.6 V; the ramp goes back by 15 mV
    # below 1.2 V, which makes both later by twice as long as 15 mV take.
    back_s = 2 * 15e-3 / 1.8 * 20e-3
    assert judgement.measure.have == pytest.approx(1.2 / 1.8 * 20e-3 + 20e-6 + back_s, rel=1e-3)
    assert judgement.measure.need == pytest.approx(1.6 / 1.8 * 20e-3 + back_s, rel=1e-3)
    assert judgement.mend == "let it begin 4.43 ms later"  # 0.4 V of the ramp are 4.444 ms, less 20 us of delay


def test_a_rail_that_waits_for_itself_never_comes() -> None:
    ring = patch({"loads": {"core_regulator": {"needs": [{"rail": "vcore", "works": {"min": "1 V"}}]}}})
    judgement = judged(ring, (*RULES, *self_bias_start.RULES))[ORDER, "vcore"]
    assert (judgement.kind, judgement.under) == (Kind.NOT_APPLICABLE, "self_bias/loop_starts")
    assert judgement.message.startswith("waits for itself: it comes after a rail, or is made by an element, that needs")


def test_what_waits_for_itself_is_told_once() -> None:
    """Two stages that enable each other: a net behind them is unknown, released too soon, asserted late or never."""
    gated = {"uv_out": {"gated_by": "core_out"}, "core_out": {"gated_by": "uv_out"}}
    said = judged(patch({"output_stages": gated}), (*RULES, *self_bias_start.RULES))
    for rule, of in (
        (UNKNOWN, "por_n"), (RELEASE, "core_regulator"), (DIP, "core_regulator"), (ASSERTS, "adc"),
    ):  # fmt: skip
        assert (said[rule, of].kind, said[rule, of].under) == (Kind.NOT_APPLICABLE, "self_bias/loop_starts")
    undefined = patch({"output_stages": {"ov_latch": {"power_up": "undefined"}}})
    latch = judged(undefined, (*RULES, *passive_default.RULES))[UNKNOWN, "por_n"]
    assert (latch.kind, latch.under) == (Kind.NOT_APPLICABLE, "passive_default/latch_state")
    assert found(undefined, UNKNOWN, "por_n").kind is Kind.FAIL


@pytest.mark.parametrize(
    ("rule", "of", "facts"),
    [
        (DIP, "core_regulator", ["comparators.uv.delay"]),
        (DIP, "core_regulator", ["rails.avdd.rise"]),
        (DIP, "core_regulator", ["rails.avdd.collapse", "rails.avdd.hold_up"]),
        (DIP, "core_regulator", ["comparators.uv.filter"]),
        (DIP, "core_regulator", ["loads.core_regulator.needs.0.works"]),
        (ORDER, "vcore", ["rails.avdd.rise"]),
    ],
)
def test_dips_and_order_cannot_be_judged_without(rule: str, of: str, facts: list[str]) -> None:
    judgement = found(without(*facts), rule, of)
    assert (judgement.kind, judgement.missing) == (Kind.OPEN, (facts[0],))


def test_words_of_a_rail_in_order_and_of_one_after_none() -> None:
    judgement = found("", ORDER, "vcore")
    assert judgement.why == "the fastest ramp, with avdd at 200 mV; avdd is up at the latest after 38.89 us"
    assert judgement.at == "rails.vcore.after"
    judgement = found("", ORDER, "avdd")
    assert (judgement.kind, judgement.message) == (Kind.NOT_APPLICABLE, "comes after no other rail")


# One fault, what changes


@pytest.mark.parametrize(
    ("fault", "changes"),
    [
        (
            {"output_stages": {"rst_out": {"delay": {"min": "10 ns", "max": "20 us"}}}},
            {(ASSERTS, "core_regulator"): Kind.FAIL},
        ),
        (
            {"output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}}},
            {(RELEASE, "core_regulator"): Kind.FAIL},
        ),
        ({"output_stages": {"rst_out": {"hold": "none"}}}, {(UNKNOWN, "por_n"): Kind.FAIL}),
    ],
    ids=["slow_stage", "short_release_delay", "no_hold"],
)
def test_one_fault_changes_what_hangs_on_it_alone(fault: dict[str, Any], changes: dict[tuple[str, str], Kind]) -> None:
    assert changed(patch(fault), RULES) == changes


@pytest.mark.parametrize("fact", ["rails.avdd.dip", "rails.avdd.off_time", "rails.avdd.residual"])
def test_what_cannot_be_tried_is_not_known_to_hold(fact: str) -> None:
    judgement = found(without(fact), RELEASE, "core_regulator")
    assert (judgement.kind, len(judgement.missing)) == (Kind.OPEN, 1)
    assert judgement.missing[0].startswith(fact)
    assert judgement.measure is not None
    assert judgement.measure.sure_margin == -math.inf
    assert judgement.measure.best_margin > 0.0


def test_what_cannot_be_tried_does_not_save_what_fails() -> None:
    short = patch({"output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}}})
    whole = found(short, RELEASE, "core_regulator")
    gone = found(both(short, without("rails.avdd.dip", "rails.avdd.off_time")), RELEASE, "core_regulator")
    assert gone.kind is Kind.FAIL
    assert gone.message == (
        f"{whole.message}: at least 36.43 us short, whatever depth of dips and off time of avdd may be"
    )
    assert gone.measure is not None
    assert whole.measure is not None
    assert gone.measure.best_margin == whole.measure.margin


def test_a_rail_that_the_load_does_not_lean_on_need_not_be_tried() -> None:
    other = "rails: {vio: {nominal: 3.3 V}}"
    for rule, of in ((RELEASE, "core_regulator"), (DIP, "core_regulator"), (UNKNOWN, "por_n"), (ORDER, "vcore")):
        assert found(other, rule, of).measure == found("", rule, of).measure
        assert found(other, rule, of).kind is Kind.PASS


def test_a_load_of_which_nothing_is_said_is_a_question() -> None:
    said = judged("loads: {extra: {needs: [{rail: avdd}]}}", RULES)
    assert said[RELEASE, "extra"].kind is Kind.NOT_APPLICABLE  # every net says what it guards, and none guards it
    bare = "{loads: {extra: {needs: [{rail: avdd}]}}, resets: {por_n: {guards: [adc, core_regulator, extra]}}}"
    for rule in (RELEASE, ASSERTS, DIP):
        assert judged(bare, RULES)[rule, "extra"].kind is Kind.OPEN
    unsaid = judged(both("loads: {extra: {needs: [{rail: avdd}]}}", without("resets.por_n.guards")), RULES)
    for rule in (RELEASE, ASSERTS, DIP):
        assert (unsaid[rule, "extra"].kind, unsaid[rule, "extra"].missing) == (Kind.OPEN, ("resets.por_n.guards",))


def test_a_load_that_does_not_say_what_it_needs_is_a_question() -> None:
    said = judged("loads: {core_regulator: {needs: null}}", RULES)
    for rule in (RELEASE, ASSERTS, DIP):
        judgement = said[rule, "core_regulator"]
        assert (judgement.kind, "loads.core_regulator.needs" in judgement.missing) == (Kind.OPEN, True)


def test_a_net_of_which_nothing_is_said_is_a_question() -> None:
    judgement = judged("resets: {extra: {guards: [adc]}}", RULES)[UNKNOWN, "extra"]
    assert judgement.kind is Kind.OPEN
    assert "resets.extra.driven_by" in judgement.missing


def test_where_nothing_can_be_tried_nothing_holds_and_nothing_fails() -> None:
    """Neither rail has a nominal level, and what leads from the net and the load to a rail is not given."""
    flat = without("rails.avdd.nominal", "rails.vcore.nominal")
    bare = "{resets: {extra: {guards: [bare]}}, loads: {bare: {needs: null}}}"
    said = judged(both(flat, bare), tuple(rule for rule in RULES if rule.id in (RELEASE, UNKNOWN)))
    assert {key: judgement.kind for key, judgement in said.items() if key[1] in {"bare", "extra"}} == {
        (RELEASE, "bare"): Kind.OPEN, (UNKNOWN, "extra"): Kind.OPEN,
    }  # fmt: skip
    assert "resets.extra.driven_by" in said[UNKNOWN, "extra"].missing


def test_a_net_that_does_not_say_what_it_guards_may_save_a_load() -> None:
    short = patch({"output_stages": {"rst_out": {"release_delay": {"min": "100 us", "max": "400 us"}}}})
    extra = "resets: {extra: {driven_by: [rst_out], active: low, domain: aon}}"
    judgement = found(both(short, extra), RELEASE, "core_regulator")
    assert (judgement.kind, judgement.missing) == (Kind.OPEN, ("resets.extra.guards",))
    assert found(both(short, extra.replace("aon}", "aon, guards: []}")), RELEASE, "core_regulator").kind is Kind.FAIL
