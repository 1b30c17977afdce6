"""Hand-over: detectors of one rail that take over from each other."""

from __future__ import annotations

import random
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.derived.levels.held_span import HeldSpan, steps
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.hand_over import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
HOLE: Final = "hand_over/no_hole"
ARMED: Final = "hand_over/armed_when_up"
EXAMPLES: Final = {HOLE: {(HOLE, "avdd")}, ARMED: {(ARMED, "uv_core")}}


# The power-on detector compares with a reference of its own: a level made by a crossover is judged as it tracks.
EARLY: Final = """
comparators: {por: {crossover: null, reference: ref_early}}
references: {ref_early: {kind: threshold, works_from: 0.7 V, settling: 5 us, decoupling: 10 pF, domain: aon,
  self_biased: false, bias: bias_start}}
"""


def one(patch: str, rule: str = HOLE, subject: str = "avdd") -> Judgement:
    return judged(both(EARLY, patch), RULES)[rule, subject]


def test_a_level_that_tracks_is_compared_at_the_same_temperature() -> None:
    said = judged("references: {ref_fast: {works_from: {max: 1.12 V}}}", RULES)[HOLE, "avdd"]
    assert (said.kind, said.message) == (
        NONE, "extreme against extreme por can let go 10 mV below where uv decides; both move with temperature, and "
        "trip_window/crossover_tracks compares them at the same one",
    )  # fmt: skip


def por(falling: str) -> str:
    """The power-on detector lets go of reset on the way down at a level; on the way up 60 mV higher."""
    return f"comparators: {{por: {{trip: {{rising: {{min: 1.2 V, max: 1.5 V}}, falling: {falling}}}}}}}"


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# hand_over/no_hole


def test_hole_between_two_detectors() -> None:
    """ref_fast works from 1.06 V; 100 mV at 1.8 V in 500 ms take 27.8 ms."""
    said = one(por("{min: 0.96 V, max: 1.3 V}"))
    assert said.kind is FAIL
    assert said.message == "falling, por surely holds reset up to 960 mV, at least 1.06 V needed"
    assert said.why == (
        "uv decides from 1.06 V on (ref_fast does); between 960 mV and 1.06 V no detector holds reset, and avdd may "
        "take 27.78 ms to pass"
    )
    assert said.mend == "a level of por 100 mV higher, or ref_fast working from 960 mV or less"
    assert path_text(said.path) == "avdd watched by por"


def test_hole_on_the_way_up() -> None:
    """The rising level is the lower one here: 60 mV at 1.8 V in 20 ms take 0.667 ms."""
    patch = "comparators: {por: {trip: {rising: {min: 1 V, max: 1.5 V}, falling: {min: 1.1 V, max: 1.4 V}}}}"
    said = one(patch)
    assert said.message == "rising, por surely holds reset up to 1 V, at least 1.06 V needed"
    assert said.why.endswith("between 1 V and 1.06 V no detector holds reset, and avdd may take 666.7 us to pass")


@pytest.mark.parametrize(("level", "kind"), [("1.0599 V", FAIL), ("1.06 V", PASS), ("1.0601 V", PASS)])
def test_hand_over_at_its_limit(level: str, kind: Kind) -> None:
    assert one(por(f"{{min: {level}, max: 1.4 V}}")).kind is kind


def test_order_that_is_kept_only_typically() -> None:
    """Typically 1.2 V meet 1.0 V, at the extremes 0.96 V and 1.06 V do not."""
    patch = both(
        por("{min: 0.96 V, typ: 1.2 V, max: 1.3 V}"), "references: {ref_fast: {works_from: {typ: 1 V, max: 1.06 V}}}"
    )
    said = one(patch)
    assert said.kind is FAIL
    assert said.why.endswith("; typically they overlap by 200 mV")


def test_detector_that_asserts_while_it_cannot_decide_leaves_no_hole() -> None:
    patch = both(por("{min: 0.96 V, max: 1.3 V}"), "comparators: {uv: {undecided: asserts}}")
    said = one(patch)
    assert (said.kind, said.message) == (PASS, "one detector alone holds reset up to the highest level")


def test_time_in_the_hole_needs_the_ramp_and_the_verdict_does_not() -> None:
    said = one(both(por("{min: 0.96 V, max: 1.3 V}"), without("rails.avdd.fall")))
    assert said.kind is FAIL
    assert said.why.endswith("between 960 mV and 1.06 V no detector holds reset")


def test_what_another_rail_feeds_is_taken_to_be_up() -> None:
    """A second detector of vcore that lives on avdd, as uv_core does, decides from 0 V of vcore on."""
    patch = """
    comparators:
      por_core:
        {role: power_on, watches: vcore, domain: aon, bias: bias_start, reference: ref_fast, works_from: {max: 1.05 V},
         trip: {rising: {min: 0.8 V, max: 0.9 V}, falling: {min: 0.7 V, max: 0.8 V}}}
    output_stages: {core_out: {driven_by: [uv_core, gather, por_core]}}
    """
    assert one(patch, HOLE, "vcore").kind is PASS


def test_detectors_of_different_nets_are_no_stack() -> None:
    patch = "output_stages: {gather: {driven_by: [uv_out, ov_latch]}, core_out: {driven_by: [uv_core, por_out]}}"
    assert one(patch).message == "no two detectors of it assert one reset net"


@pytest.mark.parametrize(
    "fact",
    [
        "comparators.uv.works_from", "references.ref_fast.works_from", "biases.bias_start.works_from",
        "comparators.uv.bias", "comparators.uv.reference", "comparators.uv.domain", "domains.aon.rail",
    ],
)  # fmt: skip
def test_no_hole_is_open_without(fact: str) -> None:
    said = one(without(fact))
    assert (said.kind, fact in said.missing) == (OPEN, True)


@pytest.mark.parametrize("seed", range(40))
def test_steps_against_brute_force(seed: int) -> None:
    """Random spans: there is a hole if, of many supplies up to the highest level, one lies in no span."""
    chance = random.Random(seed)
    spans = []
    for index in range(chance.randint(2, 5)):
        from_v = chance.choice((0.0, round(chance.uniform(0.0, 1.5), 2)))
        spans.append(HeldSpan(f"d{index}", from_v, "", round(from_v + chance.uniform(-0.2, 0.8), 2), None, None))
    real = [span for span in spans if span.to_v > span.from_v]
    found = steps(spans, "up")
    if real:
        low, high = min(span.from_v for span in real), max(span.to_v for span in real)
        uncovered = [
            level
            for level in (low + (high - low) * (number + 0.5) / 4000 for number in range(4000))
            if not any(span.from_v <= level < span.to_v for span in real)
        ]
        holes = [step for step in found if step.overlap_v < -2e-3]
        assert bool(holes) == (len(uncovered) > 8)
        for step in holes:
            assert any(step.below.to_v <= level < step.above.from_v for level in uncovered)
    else:
        assert found == []


# hand_over/armed_when_up


def test_detector_that_is_armed_before_its_rail_is_up() -> None:
    """por lets go at 1.17 V of avdd, 13 ms into the slowest ramp; vcore has then not begun to rise."""
    said = one("comparators: {uv_core: {armed_by: por}}", ARMED, "uv_core")
    assert said.kind is FAIL
    assert said.measure is not None
    assert said.measure.have == pytest.approx(1.17 / 1.8 * 20e-3 + 0.5e-6, rel=1e-3)
    assert said.message.startswith("por arms it (ramp that goes back) after 13 ms, at least ")
    assert path_text(said.path) == "uv_core gated by por"


def test_detectors_of_one_rail_that_arm_each_other() -> None:
    said = one("comparators: {uv: {armed_by: por}}", ARMED, "uv")
    assert (said.kind, said.message) == (NONE, "por watches the same rail (hand_over/no_hole judges the two)")
    assert one("", ARMED, "uv").message == "nothing arms it"


def test_detector_that_is_armed_late_enough() -> None:
    """uv_core arms a second detector of avdd: vcore is up only long after avdd is."""
    patch = """
    comparators:
      uv_core: {undecided: asserts}
      uv_late:
        {role: under_voltage, watches: avdd, domain: aon, bias: bias_start, reference: ref_fast, armed_by: uv_core,
         trip: {rising: {min: 1.4 V, max: 1.45 V}, falling: {min: 1.35 V, max: 1.4 V}}, works_from: {max: 1.05 V},
         delay: {min: 0.3 us, max: 2 us}, output: level}
    """
    assert one(patch, ARMED, "uv_late").kind is PASS


@pytest.mark.parametrize("fact", ["rails.avdd.rise", "comparators.por.output", "rails.vcore.nominal"])
def test_armed_is_open_without(fact: str) -> None:
    said = one(both("comparators: {uv_core: {armed_by: por}}", without(fact)), ARMED, "uv_core")
    assert (said.kind, fact in said.missing) == (OPEN, True)


def test_a_level_without_a_reference_and_without_components_is_for_a_person() -> None:
    """With its components given, trip_window/crossover_tracks compares the two at equal temperature instead."""
    levels = "trip: {rising: {min: 0.95 V, max: 1.5 V}, falling: {min: 0.9 V, max: 1.4 V}}"
    known = f"comparators: {{por: {{{levels}}}}}"
    unknown = f"comparators: {{por: {{{levels}, crossover: {{device: null}}}}}}"
    assert judged(known, RULES)[HOLE, "avdd"].kind is Kind.NOT_APPLICABLE
    asked = judged(unknown, RULES)[HOLE, "avdd"]
    assert asked.kind is Kind.REVIEW
    assert asked.measure is not None
    assert asked.measure.have == pytest.approx(0.9, abs=1e-12)
