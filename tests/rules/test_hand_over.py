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

INFINITE: Final = float("inf")
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


def test_a_level_that_tracks_passes_at_the_limit_between_the_extremes() -> None:
    said = judged("comparators: {por: {trip: {falling: {min: 1.06 V, max: 1.43 V}}}}", RULES)[HOLE, "avdd"]
    assert (said.kind, said.message) == (
        PASS, "falling, por surely holds reset up to 1.06 V, at least 1.06 V needed",
    )  # fmt: skip
    assert said.why == "uv decides from 1.06 V on (ref_fast does)"


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


@pytest.mark.parametrize(
    ("typical", "ends"),
    [("1 V", "; typically they overlap by 0 V"), ("1.001 V", "to pass")],
    ids=["at_the_limit", "beyond"],
)
def test_order_that_is_not_kept_typically_either(typical: str, ends: str) -> None:
    works_from = f"references: {{ref_fast: {{works_from: {{typ: {typical}, max: 1.06 V}}}}}}"
    said = one(both(por("{min: 0.96 V, typ: 1 V, max: 1.3 V}"), works_from))
    assert (said.kind, said.why.endswith(ends)) == (FAIL, True)


def test_detector_whose_own_supply_sets_where_it_decides() -> None:
    """140 mV at 1.8 V in 500 ms take 38.9 ms."""
    said = one(both(por("{min: 0.96 V, max: 1.3 V}"), "comparators: {uv: {works_from: {max: 1.1 V}}}"))
    assert said.message == "falling, por surely holds reset up to 960 mV, at least 1.1 V needed"
    assert said.why == (
        "uv decides from 1.1 V on; between 960 mV and 1.1 V no detector holds reset, and avdd may take 38.89 ms to pass"
    )
    assert said.mend == "a level of por 140 mV higher, or uv working from 960 mV or less"


def test_time_in_the_hole_of_a_rail_of_less_than_a_volt() -> None:
    """100 mV at 0.9 V in 500 ms take 55.56 ms."""
    said = one(both(por("{min: 0.96 V, max: 1.3 V}"), "rails: {avdd: {nominal: 0.9 V}}"))
    assert said.why.endswith("no detector holds reset, and avdd may take 55.56 ms to pass")


def test_no_time_in_the_hole_of_a_rail_that_is_said_to_be_off() -> None:
    said = one(both(por("{min: 0.96 V, max: 1.3 V}"), "rails: {avdd: {nominal: 0 V}}"))
    assert said.kind is FAIL
    assert said.why.endswith("between 960 mV and 1.06 V no detector holds reset")


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


@pytest.mark.parametrize("fact", ["comparators.por.works_from", "references.ref_main.works_from", "rails.avdd.rise"])
def test_no_hole_is_certain_without(fact: str) -> None:
    """por asserts while it cannot decide: from where on it works does not matter; nor does how the rail rises."""
    assert judged(without(fact), RULES)[HOLE, "avdd"].kind is PASS


def test_a_hole_that_is_certain_fails_whatever_is_missing() -> None:
    """The bias may need more than the 1.06 V of ref_fast, and no less than that leaves a hole of 100 mV."""
    gone = both(por("{min: 0.96 V, max: 1.3 V}"), without("biases.bias_start.works_from"))
    said = one(gone)
    assert (said.kind, said.missing) == (FAIL, ("biases.bias_start.works_from",))
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(-0.1)
    assert said.measure.sure_margin == -INFINITE


def test_a_detector_of_unknown_level_is_a_hole_at_the_worst_and_holds_at_the_best() -> None:
    said = one(both(por("{max: 1.3 V}"), "comparators: {por: {hysteresis: {amount: null}}}"))
    assert (said.kind, said.missing) == (OPEN, ("comparators.por.trip.falling.min",))
    assert said.measure is not None
    assert said.measure.sure_margin == -INFINITE
    assert said.measure.best_margin == pytest.approx(1.2 - 1.06)  # on the way up; down, 1.3 V - 1.06 V at best


def test_detectors_behind_a_stage_that_does_not_say_what_drives_it() -> None:
    apart = "output_stages: {gather: {driven_by: [uv_out, ov_latch]}, core_out: {driven_by: [uv_core, por_out]}}"
    assert one(apart).kind is NONE
    said = one(both(apart, without("output_stages.uv_out.driven_by")))
    assert (said.kind, said.missing) == (OPEN, ("output_stages.uv_out.driven_by",))


def _span(name: str, from_v: float, to_v: float, *, from_known: bool = True, to_known: bool = True) -> HeldSpan:
    return HeldSpan(name, from_v, "", to_v, None, None, from_known=from_known, to_known=to_known)


def _least_overlap_v(spans: list[HeldSpan], *, sure: bool = False) -> float:
    return min((step.overlap_v for step in steps(spans, "up", sure=sure)), default=INFINITE)


@pytest.mark.parametrize("seed", range(40))
def test_what_is_not_known_of_a_span_never_makes_a_hole_vanish(seed: int) -> None:
    """Some ends are not known: at the sure corner the overlap is no more than in any completion."""
    chance = random.Random(seed)
    real = [_span(f"d{n}", chance.uniform(0.0, 1.0), chance.uniform(0.2, 1.8)) for n in range(chance.randint(2, 4))]
    wide = []
    for span in real:
        from_known, to_known = chance.random() < 0.7, chance.random() < 0.7
        from_v, to_v = span.from_v if from_known else INFINITE, span.to_v if to_known else -INFINITE
        wide.append(_span(span.detector, from_v, to_v, from_known=from_known, to_known=to_known))
    assert _least_overlap_v(wide, sure=True) <= _least_overlap_v(real, sure=True)
    assert _least_overlap_v(real, sure=True) == _least_overlap_v(real)  # of what is known nothing changes


def test_a_span_that_is_known_to_be_empty_takes_over_nothing() -> None:
    holds, empty = _span("por", 0.0, 1.1), _span("uv", 1.7, 1.6)
    assert steps([holds, empty], "up") == steps([holds, empty], "up", sure=True) == []
    perhaps = _span("uv", INFINITE, 1.6, from_known=False)
    assert _least_overlap_v([holds, perhaps], sure=True) == -INFINITE
    # One that surely lets go below where the other does takes over nothing from it, wherever it decides.
    low = _span("low", INFINITE, 1.0, from_known=False)
    assert [(step.below.detector, step.above.detector) for step in steps([holds, low], "up", sure=True)] == [
        ("low", "por")
    ]


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
    assert said.at == "comparators.uv_core.armed_by"


VCORE_UP_S: Final = 18.763e-3 + 0.333e-3 + 0.4e-3 + 0.2e-3 + 1.888e-3
"""avdd at 1.6887 V of 1.8 V in 20 ms, where uv lets go at the latest, and 30 mV there and back; the release of por_n;
the delay of vcore, and 1.1328 V of 1.2 V in 2 ms. The delays of detector and stages are some microseconds more."""
LATE: Final = """
comparators: {uv_core: {armed_by: late}}
output_stages: {late: {driven_by: [por], domain: aon, kind: buffer, inverting: false, works_from: 0.7 V, delay: DELAY,
  hold: {to: low, through: resistor, resistance: 1 Mohm, coupling: 1 fF}, threshold: {min: 0.4 V, max: 1.25 V},
  input_edge: 60 ns, drive: 8 kohm, load: 40 fF}}
"""  # a stage that arms uv_core a while after por has let go, 13.0005 ms into the ramp


@pytest.mark.parametrize(("delay", "kind"), [("8.57 ms", FAIL), ("8.6 ms", PASS)])
def test_arming_by_a_stage_that_takes_its_time(delay: str, kind: Kind) -> None:
    said = one(LATE.replace("DELAY", f"{{min: {delay}, max: 20 ms}}"), ARMED, "uv_core")
    assert said.kind is kind
    assert said.measure is not None
    assert said.measure.need == pytest.approx(VCORE_UP_S, rel=3e-4)
    assert said.measure.have == pytest.approx(13.0005e-3 + float(delay.split(maxsplit=1)[0]) * 1e-3, rel=1e-6)
    assert said.why == (
        "the slowest ramp, with the dip that the rail may have on its way; vcore has passed 1.133 V at the latest "
        "after 21.59 ms"
    )
    assert said.mend == ("" if kind is PASS else "arm it 17.5 us later, or by a detector of vcore")


def test_least_delay_of_the_arming_is_asked_for_where_it_could_do() -> None:
    """With a delay of always 20 ms it would come late enough; with one of 8 ms it would not."""
    said = one(LATE.replace("DELAY", "{max: 20 ms}"), ARMED, "uv_core")
    assert (said.kind, said.missing) == (OPEN, ("output_stages.late.delay.min",))
    said = one(LATE.replace("DELAY", "{max: 8 ms}"), ARMED, "uv_core")
    assert (said.kind, " whatever " in said.message) == (FAIL, False)


def test_times_count_from_where_the_rail_begins_to_rise() -> None:
    """vio rises in 50 us, now or late: let go at half of it, armed 0.3 us and 5 ns later, and up at 1.45 V."""
    levels = {"low_io": "{min: 0.9 V, max: 1 V}", "uv_io": "{min: 1.4 V, max: 1.45 V}"}
    more = {"low_io": "role: power_on, undecided: asserts", "uv_io": "role: under_voltage, armed_by: late"}
    detectors = ", ".join(
        f"{name}: {{{more[name]}, watches: vio, domain: aon, bias: bias_start, reference: ref_fast, output: level, "
        f"trip: {{rising: {level}, falling: {{min: 0.7 V, max: 0.8 V}}}}, works_from: {{max: 1.05 V}}, "
        "delay: {min: 0.3 us, max: 2 us}, filter: none, sampling: none}"
        for name, level in levels.items()
    )
    rail = "rails: {vio: {nominal: 1.8 V, rise: 50 us, fall: {min: 1 ms, max: 500 ms}, dip: none, residual: 0 V}}"
    stage = LATE.replace("uv_core", "uv_io").replace("[por]", "[low_io]").replace("DELAY", "{min: 5 ns, max: 8 ns}")
    said = one(both(stage, f"{{{rail}, comparators: {{{detectors}}}}}"), ARMED, "uv_io")
    assert said.kind is FAIL
    assert said.measure is not None
    assert said.measure.have == pytest.approx(25e-6 + 0.3e-6 + 5e-9, rel=1e-6)
    assert said.measure.need == pytest.approx(1.45 / 1.8 * 50e-6, rel=1e-6)
    assert said.why.endswith("; vio has passed 1.45 V at the latest after 40.28 us")
    assert said.mend == "arm it 15 us later, or by a detector of vio"


def test_a_detector_may_be_armed_once_its_rail_has_passed_its_level_for_the_first_time() -> None:
    """avdd goes from 1.2 V back to 1.185 V: 1.195 V are passed after 13.28 ms and again after 13.61 ms."""
    detector = (
        "{role: under_voltage, watches: avdd, armed_by: late, domain: aon, bias: bias_start, reference: ref_fast, "
        "trip: {rising: {min: 1.19 V, max: 1.195 V}, falling: {min: 1.1 V, max: 1.11 V}}, works_from: {max: 1.05 V}, "
        "output: level, delay: {min: 0.3 us, max: 2 us}, filter: none, sampling: none}"
    )
    stage = LATE.replace("comparators: {uv_core: {armed_by: late}}", f"comparators: {{uv_low: {detector}}}")
    said = one(stage.replace("DELAY", "{min: 0.3 ms, max: 20 ms}"), ARMED, "uv_low")
    assert said.kind is PASS
    assert said.measure is not None
    assert said.measure.need == pytest.approx(1.195 / 1.8 * 20e-3, rel=1e-6)
    assert said.measure.have == pytest.approx(13.3005e-3, rel=1e-6)


def test_what_lets_go_twice_arms_when_it_does_so_first() -> None:
    """avdd goes from 1.2 V back to 1.185 V, and a detector that lets go at 1.19 V asserts again at 1.186 V."""
    twice = (
        "{role: power_on, watches: avdd, domain: aon, bias: bias_start, reference: ref_fast, undecided: asserts, "
        "trip: {rising: {min: 1.19 V, max: 1.19 V}, falling: {min: 1.186 V, max: 1.186 V}}, output: level, "
        "works_from: {max: 1.05 V}, delay: {min: 0.3 us, max: 2 us}, filter: none, sampling: none}"
    )
    said = one(f"comparators: {{uv_core: {{armed_by: twice}}, twice: {twice}}}", ARMED, "uv_core")
    assert (said.kind, said.message.startswith("twice arms it (ramp that goes back) after ")) == (FAIL, True)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(1.19 / 1.8 * 20e-3 + 0.3e-6, rel=1e-6)


def test_rail_that_may_never_pass_the_level_of_what_is_armed() -> None:
    """1.25 V, and vcore rises to 1.2 V: it may be armed while the rail is not up, however late."""
    high = "comparators: {uv_core: {trip: {rising: {min: 1.24 V, max: 1.25 V}, falling: {min: 1.2 V, max: 1.21 V}}}}"
    said = one(both(LATE.replace("DELAY", "{min: 9 ms, max: 20 ms}"), high), ARMED, "uv_core")
    assert (said.kind, said.message) == (FAIL, "late may arm it while vcore is not up (fastest ramp)")


@pytest.mark.parametrize("arming", ["por_out", "ov"])
def test_what_may_arm_it_at_any_time(arming: str) -> None:
    """por_out is not held before it is alive, and ov never asserts on the way up."""
    said = one(f"comparators: {{uv_core: {{armed_by: {arming}}}}}", ARMED, "uv_core")
    assert (said.kind, said.message) == (FAIL, f"{arming} may arm it while vcore is not up (fastest ramp)")
    assert said.why == "every rail rises as fast as it may"
    assert said.mend == "arm it by a detector of its own rail"


def test_what_never_lets_go_arms_nothing() -> None:
    """A detector that lets go at 1.95 V of a rail of 1.8 V."""
    never = (
        "{role: under_voltage, watches: avdd, domain: aon, bias: bias_start, reference: ref_fast, output: level, "
        "trip: {rising: {min: 1.95 V, max: 2 V}, falling: {min: 1.9 V, max: 1.95 V}}, works_from: {max: 1.05 V}, "
        "undecided: asserts, delay: {min: 0.3 us, max: 2 us}, filter: none, sampling: none}"
    )
    said = one(f"comparators: {{uv_core: {{armed_by: never}}, never: {never}}}", ARMED, "uv_core")
    assert (said.kind, said.message) == (NONE, "never asserts nothing that it lets go of in a start-up")
    said = one("comparators: {uv_core: {armed_by: ref_main}}", ARMED, "uv_core")
    assert (said.kind, said.message) == (NONE, "ref_main asserts nothing that it lets go of in a start-up")


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


@pytest.mark.parametrize(
    "fact",
    [
        "rails.vcore.nominal", "comparators.por.delay", "comparators.por.filter",
        "rails.avdd.rise", "comparators.por.output",
    ],
)  # fmt: skip
def test_armed_is_open_without(fact: str) -> None:
    said = one(both("comparators: {uv_core: {armed_by: por}}", without(fact)), ARMED, "uv_core")
    assert (said.kind, fact in said.missing) == (OPEN, True)


@pytest.mark.parametrize(
    "fact", ["references.ref_fast.settling", "output_stages.rst_out.delay", "rails.avdd.dip", "rails.vcore.delay"]
)
def test_too_early_an_arming_fails_whatever_would_only_make_the_rail_later(fact: str) -> None:
    said = one(both("comparators: {uv_core: {armed_by: por}}", without(fact)), ARMED, "uv_core")
    assert said.kind is FAIL


def test_a_level_without_a_reference_and_without_components_is_for_a_person() -> None:
    """With its components given, trip_window/crossover_tracks compares the two at equal temperature instead."""
    levels = "trip: {rising: {min: 0.95 V, max: 1.5 V}, falling: {min: 0.9 V, max: 1.4 V}}"
    known = f"comparators: {{por: {{{levels}}}}}"
    unknown = f"comparators: {{por: {{{levels}, crossover: {{device: null}}}}}}"
    assert judged(known, RULES)[HOLE, "avdd"].kind is Kind.NOT_APPLICABLE
    asked = judged(unknown, RULES)[HOLE, "avdd"]
    assert asked.kind is Kind.REVIEW
    assert asked.message == "falling, por surely holds reset up to 900 mV, at least 1.06 V needed"
    assert asked.measure is not None
    assert asked.measure.have == pytest.approx(0.9, abs=1e-12)
