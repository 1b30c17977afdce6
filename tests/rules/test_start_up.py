"""The start-up family on the sound example with one fault at a time; expected numbers are worked out by hand."""

from __future__ import annotations

import json
from typing import Any

import pytest

from tests.rules.sound import changed, judged, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.start_up import RULES

RELEASE, UNKNOWN, ASSERTS = "start_up/release_after_ready", "start_up/no_unknown_interval", "start_up/asserts_in_time"
DIP, ORDER = "start_up/dip_is_caught", "start_up/rail_order"

FALL_V_PER_S = 29e-3 / 22e-6
"""avdd falls no faster than its loads (26 mA and 3 mA) discharge its 22 uF: slower than the 1.8 V in 1 ms stated."""
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
        "loads": {"adc": {"needs": [{"rail": "avdd", "works": {"min": "1.6 V"}},
                                    {"rail": "vcore", "works": {"min": "1.08 V"}},
                                    {"rail": "vio", "works": {"min": "1.6 V"}}]}},
    })  # fmt: skip
    judgement = found(late, RELEASE, "adc")
    assert judgement.kind is Kind.FAIL
    assert judgement.message == "may be released before the last of its supplies rises (vio late)"
    assert judgement.mend == "let its reset wait for every rail that it needs"
    never = found(late, ASSERTS, "adc")
    assert (never.kind, never.message) == (
        Kind.NOT_APPLICABLE, "no detector watches vio (coverage/under_voltage says so)",
    )  # fmt: skip


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
        ("output_stages.rst_out.hold", "core_regulator"), ("output_stages.rst_out.discharge", "core_regulator"),
        ("comparators.uv.domain", "core_regulator"), ("comparators.uv.output", "core_regulator"),
        ("domains.aon.kind", "core_regulator"), ("domains.aon.rail", "core_regulator"),
    ],
)  # fmt: skip
def test_release_cannot_be_judged_without(fact: str, subject: str) -> None:
    judgement = found(without(fact), RELEASE, subject)
    assert judgement.kind is Kind.OPEN
    assert fact in judgement.missing


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
    assert "output_stages.rst_out.release_delay.min" in judgement.missing


def test_a_load_without_reset_is_not_judged() -> None:
    for rule in (RELEASE, ASSERTS, DIP):
        judgement = found(patch({"resets": {"por_n": {"guards": ["adc"]}}}), rule, "core_regulator")
        assert judgement.kind is Kind.NOT_APPLICABLE
        assert judgement.message == "no reset net guards it"


# Unknown intervals


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


def test_assertion_beats_the_fall_by_what_hold_up_leaves() -> None:
    judgement = found("", ASSERTS, "core_regulator")
    assert judgement.measure is not None
    leaves_s = (1.8 - 1.6) / FALL_V_PER_S
    asserted_s = (1.8 - UV_FALLS_V) / FALL_V_PER_S + ANSWER_S
    assert judgement.measure.have == pytest.approx(leaves_s)
    assert judgement.measure.need == pytest.approx(asserted_s)
    assert judgement.why.startswith("avdd falls at 1.318 V/ms, by its hold-up; the load works down to 1.6 V")


def test_without_hold_up_the_stated_fall_counts() -> None:
    judgement = found(without("rails.avdd.hold_up"), ASSERTS, "core_regulator")
    assert judgement.measure is not None
    assert judgement.measure.have == pytest.approx(1e-3 * (1.8 - 1.6) / 1.8)
    assert "avdd falls at 1.8 V/ms, by its fastest fall" in judgement.why


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
        "avdd leaves the range of the load, falling from nominal, after 151.7 us, at least 163.5 us needed"
    )
    assert judgement.mend == "an answer that comes 11.8 us sooner, or a falling level that lies 15.6 mV higher"


@pytest.mark.parametrize(
    "fact",
    [
        "output_stages.rst_out.delay", "comparators.uv.delay", "comparators.uv.works_from",
        "output_stages.gather.works_from", "rails.avdd.nominal",
    ],
)  # fmt: skip
def test_assertion_cannot_be_judged_without(fact: str) -> None:
    judgement = found(without(fact), ASSERTS, "core_regulator")
    assert judgement.kind is Kind.OPEN
    assert fact in judgement.missing


def test_a_fall_that_is_not_stated_is_as_steep_as_a_collapse() -> None:
    assert found(without("rails.avdd.fall", "rails.avdd.hold_up"), ASSERTS, "core_regulator").why.startswith(
        "avdd falls at 2 V/ms, by its collapse"
    )
    judgement = found(
        without("rails.avdd.fall", "rails.avdd.hold_up", "rails.avdd.collapse"), ASSERTS, "core_regulator"
    )
    assert judgement.missing == ("rails.avdd.fall",)


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


def test_a_rail_that_waits_for_itself_never_comes() -> None:
    judgement = found(
        patch({"loads": {"core_regulator": {"needs": [{"rail": "vcore", "works": {"min": "1 V"}}]}}}), ORDER, "vcore"
    )
    assert judgement.kind in (Kind.FAIL, Kind.NOT_APPLICABLE)


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


def test_what_was_not_tried_for_want_of_facts_is_told() -> None:
    judgement = found(without("rails.avdd.dip", "rails.avdd.off_time"), RELEASE, "core_regulator")
    assert judgement.kind is Kind.PASS
    assert judgement.why.endswith(
        "; not tried: a ramp that goes back (no rails.avdd.dip.depth), off and on again (no rails.avdd.off_time)"
    )


def test_a_slow_fall_that_is_not_stated_leaves_the_unknown_open() -> None:
    judgement = found(without("rails.avdd.fall.max"), UNKNOWN, "por_n")
    assert judgement.missing == ("rails.avdd.fall.max",)
