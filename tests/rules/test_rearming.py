"""Re-arming: pulses, residual levels, and release delays that begin anew."""

from __future__ import annotations

from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.rearming import RULES

FAIL, PASS, OPEN, NONE, REVIEW = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE, Kind.REVIEW
HELD: Final = "rearming/level_held"
RESIDUAL: Final = "rearming/residual"
DISCHARGE: Final = "rearming/discharge"
EXAMPLES: Final = {
    HELD: {(HELD, "por")},
    RESIDUAL: {(RESIDUAL, "por")},
    DISCHARGE: {(DISCHARGE, "rst_out")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# rearming/level_held


def pulse(of: str, rearms_below: str) -> str:
    return f"comparators: {{{of}: {{output: pulse, pulse: {{min: 1 ms, max: 3 ms}}, rearms_below: {rearms_below}}}}}"


def test_dip_that_ends_above_the_level_of_re_arming() -> None:
    said = one(pulse("por", "0.4 V"), HELD, "por")
    assert said.kind is FAIL
    assert said.message == (
        "resets by a pulse of 1 ms or more, and again only after avdd has been below 400 mV, at least 1.6 V needed"
    )
    assert said.why == "adc works from 1.6 V: a dip that ends between 400 mV and that resets nothing"
    assert said.mend == (
        "an output that is a level held for every supply below the threshold; or one that re-arms below 1.6 V at its "
        "lowest"
    )
    assert path_text(said.path).endswith("guards adc")


@pytest.mark.parametrize(("level", "kind"), [("1.599 V", FAIL), ("1.6 V", REVIEW), ("1.601 V", REVIEW)])
def test_level_of_re_arming_at_its_limit(level: str, kind: Kind) -> None:
    """The loads work from 1.6 V on; a pulse of a detector that is no power-on detector is for a person to look at."""
    assert one(pulse("uv", level), HELD, "uv").kind is kind


def test_pulse_of_a_power_on_detector_fails_whatever_it_re_arms_at() -> None:
    said = one(pulse("por", "1.65 V"), HELD, "por")
    assert (said.kind, said.message) == (
        FAIL,
        "resets by a pulse of 1 ms or more, which ends however low avdd still is",
    )
    assert said.why == "it re-arms below 1.65 V"


def test_pulse_of_another_detector_is_asked() -> None:
    said = one(pulse("uv", "1.62 V"), HELD, "uv")
    assert said.kind is REVIEW
    assert said.why == "rests on avdd coming back within the pulse; it re-arms below 1.62 V"
    over = one(pulse("ov", "1.62 V"), HELD, "ov")
    assert (over.kind, over.message) == (REVIEW, "reports by a pulse of 1 ms or more")


def test_pulse_of_a_detector_that_guards_no_load_is_held_against_none() -> None:
    """No dip takes a load out of its range; of a power-on detector the pulse fails all the same."""
    nothing = "resets: {por_n: {guards: [core_logic]}, core_rst_n: {guards: [core_logic]}}"
    said = one(both(pulse("uv", "0.5 V"), nothing), HELD, "uv")
    assert (said.kind, said.message) == (
        REVIEW, "resets by a pulse of 1 ms or more, which ends however low avdd still is",
    )  # fmt: skip
    assert one(both(pulse("por", "0.5 V"), nothing), HELD, "por").message == said.message


def test_pulse_of_unknown_length_and_where_it_is_told() -> None:
    said = one(both(pulse("uv", "1.62 V"), without("comparators.uv.pulse")), HELD, "uv")
    assert said.message == "resets by a pulse, which ends however low avdd still is"
    assert said.mend == "an output that is a level held for every supply below the threshold"
    for of in ("por", "uv", "ov"):
        assert one(pulse(of, "1.62 V"), HELD, of).at == f"comparators.{of}.output"
    assert one("", HELD, "por").message == "a level, held for every supply on its side of the threshold"


def test_level_output_needs_no_more() -> None:
    """The trap: a level that re-arms far below its threshold still asserts for every supply below it."""
    assert one("comparators: {por: {rearms_below: 0.1 V}, uv: {rearms_below: 0.1 V}}", HELD, "uv").kind is PASS


@pytest.mark.parametrize(
    ("patch", "of", "missing"),
    [
        (without("comparators.por.output"), "por", "comparators.por.output"),
        (both(pulse("uv", "0.4 V"), without("comparators.uv.rearms_below")), "uv", "comparators.uv.rearms_below"),
        (both(pulse("uv", "1.7 V"), without("loads.adc.needs.0.works")), "uv", "loads.adc.needs.0.works"),
        (
            both(pulse("uv", "1.7 V"), "resets: {por_n: {guards: null}, core_rst_n: {guards: [core_logic]}}"), "uv",
            "resets.por_n.guards",
        ),
    ],
)  # fmt: skip
def test_level_held_is_open_without(patch: str, of: str, missing: str) -> None:
    said = one(patch, HELD, of)
    assert (said.kind, said.missing) == (OPEN, (missing,))


@pytest.mark.parametrize("fact", ["comparators.por.rearms_below", "loads.adc.needs.0.works", "comparators.por.pulse"])
def test_pulse_of_a_power_on_detector_fails_whatever_is_missing(fact: str) -> None:
    said = one(both(pulse("por", "1.7 V"), without(fact)), HELD, "por")
    assert said.kind is FAIL
    assert said.message.endswith("which ends however low avdd still is")


def test_too_low_a_level_of_re_arming_fails_whatever_is_missing() -> None:
    said = one(both(pulse("uv", "{max: 1.5 V}"), "{}"), HELD, "uv")
    assert (said.kind, said.missing) == (FAIL, ("comparators.uv.rearms_below.min",))
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(-0.1)


# rearming/residual


@pytest.mark.parametrize(("level", "kind"), [("0.399 V", PASS), ("0.4 V", PASS), ("0.401 V", FAIL)])
def test_residual_at_its_limit(level: str, kind: Kind) -> None:
    assert one(f"rails: {{avdd: {{residual: {level}}}}}", RESIDUAL, "por").kind is kind


def test_residual_above_the_level_of_re_arming() -> None:
    said = one("rails: {avdd: {residual: 0.45 V}}", RESIDUAL, "por")
    assert said.message == "avdd may come up again from 450 mV, at most 400 mV needed"
    assert said.why == "ready to work again below 400 mV"
    assert said.mend == "a detector that re-arms below 450 mV at its lowest, or a residual level of 400 mV or less"


@pytest.mark.parametrize("fact", ["comparators.por.rearms_below", "rails.avdd.residual"])
def test_residual_is_open_without(fact: str) -> None:
    assert one(without(fact), RESIDUAL, "por").missing == (fact,)


def test_detector_that_states_no_level_of_re_arming() -> None:
    for patch in (without("comparators.uv.rearms_below"), pulse("uv", "null")):
        said = one(patch, RESIDUAL, "uv")
        assert (said.kind, said.missing) == (OPEN, ("comparators.uv.rearms_below",))
    certain = both("rails: {avdd: {residual: {min: 0.6 V}}, vcore: {residual: 0 V}}", "{}")
    said = one(certain, RESIDUAL, "uv")  # at least 0.6 V left, and ready again below 0.5 V
    assert (said.kind, said.missing) == (FAIL, ("rails.avdd.residual.max",))
    said = one("", RESIDUAL, "ov")
    assert (said.kind, said.message) == (NONE, "a rail that starts from below is nothing to it")


# rearming/discharge

SHORTEST_V: Final = tuple(level_v * 0.995 - 3 * 0.4e-3 / 0.367 - 1.6 for level_v in (1.627, 1.677))
SHORTEST_S: Final = SHORTEST_V[0] / 2e3 + SHORTEST_V[1] / 36e3
"""A dip to 1.6 V: down from the lowest falling level at 2 V/ms, up to the lowest rising one at 1.8 V in 50 us."""


@pytest.mark.parametrize(("share", "kind"), [(0.999, PASS), (1.0, PASS), (1.001, FAIL)])
def test_discharge_within_the_shortest_assertion(share: float, kind: Kind) -> None:
    patch = f"output_stages: {{rst_out: {{discharge: {{within: {share * SHORTEST_S * 1e6!r} us}}}}}}"
    assert one(patch, DISCHARGE, "rst_out").kind is kind


def test_discharge_that_is_too_slow_for_a_dip() -> None:
    said = one("output_stages: {rst_out: {discharge: {within: 1 ms}}}", DISCHARGE, "rst_out")
    assert said.message == "its release delay is set back within 1 ms, at most 9.613 us needed"
    assert said.why == "a dip that takes adc out of its range makes uv assert for 9.613 us or more"
    assert said.mend == "a discharge within 9.61 us"


def test_discharge_that_is_too_slow_for_the_time_off() -> None:
    patch = "{rails: {avdd: {off_time: 5 us}}, output_stages: {rst_out: {discharge: {within: 6 us}}}}"
    said = one(patch, DISCHARGE, "rst_out")
    assert said.message == "its release delay is set back within 6 us, at most 5 us needed"
    assert said.why == "avdd stays off for 5 us or more"


def test_nothing_discharges_the_capacitor() -> None:
    said = one("output_stages: {rst_out: {discharge: none}}", DISCHARGE, "rst_out")
    assert said.message == "nothing sets its release delay of up to 400 us back: the next one may be over at once"
    assert said.mend == "a transistor across the capacitor that the assertion turns on"


@pytest.mark.parametrize(
    "fact",
    [
        "output_stages.rst_out.discharge", "output_stages.rst_out.discharge.within", "rails.avdd.off_time",
        "loads.adc.needs.0.works", "comparators.uv.errors", "output_stages.gather.driven_by",
    ],
)  # fmt: skip
def test_discharge_is_open_without(fact: str) -> None:
    said = one(without(fact), DISCHARGE, "rst_out")
    assert (said.kind, set(said.missing)) == (OPEN, {fact})


@pytest.mark.parametrize("fact", ["rails.avdd.rise", "rails.avdd.nominal"])
def test_how_the_rail_comes_back_matters_where_the_way_down_does_not_last(fact: str) -> None:
    """7.8 us down and 1.82 us up again: it may come back at once."""
    assert one(without(fact), DISCHARGE, "rst_out").kind is PASS  # 0.2 us
    slow = both("output_stages: {rst_out: {discharge: {within: 9 us}}}", without(fact))
    said = one(slow, DISCHARGE, "rst_out")
    assert (said.kind, set(said.missing)) == (OPEN, {fact})


def test_hold_up_bounds_a_collapse_that_is_not_stated() -> None:
    """How fast the rail is switched off does not say how it collapses; 29 mA from 10 uF are 2.9 V/ms at the most."""
    assert one(without("rails.avdd.fall"), DISCHARGE, "rst_out").measure == one("", DISCHARGE, "rst_out").measure
    gone = one(without("rails.avdd.collapse"), DISCHARGE, "rst_out")
    assert (gone.kind, gone.missing) == (PASS, ("rails.avdd.collapse",))
    assert gone.measure is not None
    falls_s, rises_s = (SHORTEST_V[0]) / 2.9e3, SHORTEST_V[1] / 36e3
    assert gone.measure.sure_margin == pytest.approx(falls_s + rises_s - 0.2e-6)
    open_ = one(without("rails.avdd.collapse", "rails.avdd.hold_up"), DISCHARGE, "rst_out")
    assert (open_.kind, open_.missing) == (PASS, ("rails.avdd.collapse",))  # the way up alone takes 1.82 us
    slow = both("output_stages: {rst_out: {discharge: {within: 2 us}}}", without("rails.avdd.collapse",
                                                                                "rails.avdd.hold_up"))  # fmt: skip
    assert one(slow, DISCHARGE, "rst_out").kind is OPEN


def test_too_slow_a_discharge_fails_whatever_else_is_missing() -> None:
    slow = both("output_stages: {rst_out: {discharge: {within: 1 ms}}}", without("rails.avdd.off_time"))
    said = one(slow, DISCHARGE, "rst_out")
    assert (said.kind, said.missing) == (FAIL, ("rails.avdd.off_time",))


def test_nothing_discharges_a_delay_of_unknown_length() -> None:
    said = one("output_stages: {rst_out: {discharge: none, release_delay: {max: null}}}", DISCHARGE, "rst_out")
    assert said.message == "nothing sets its release delay back: the next one may be over at once"
    assert said.at == "output_stages.rst_out.discharge"


def test_the_shortest_of_all_times_behind_a_stage_counts() -> None:
    """core_out has detectors of both rails behind it: of their times off the shorter, of their dips the shortest."""
    slow = "output_stages: {core_out: {discharge: {within: 60 ms}}}"
    off = "rails: {avdd: {off_time: 50 ms}, vcore: {off_time: 40 ms}}"
    free = ", ".join(f"{name}: {{needs: {{0: {{works: {{min: 0 V}}}}}}}}" for name in ("core_regulator", "core_logic"))
    resting = f"loads: {{{free}, adc: {{needs: {{0: {{works: {{min: 1.7 V}}}}, 1: {{works: {{min: 1.2 V}}}}}}}}}}"
    said = one(both(slow, off, resting), DISCHARGE, "core_out")  # no level lies above what adc needs
    assert (said.kind, said.why) == (FAIL, "vcore stays off for 40 ms or more")
    assert said.mend == "a discharge within 40 ms"
    core_s = (1.095 * 0.995 - 3 * 0.4e-3 / 0.542 - 1.08) / 1e3 + (1.125 * 0.995 - 3 * 0.4e-3 / 0.542 - 1.08) / 60e3
    said = one(slow, DISCHARGE, "core_out")  # down at 1 V/ms, up 1.2 V in 20 us: less than the 9.613 us of uv
    assert said.measure is not None
    assert said.measure.need == pytest.approx(core_s, rel=1e-9)
    assert said.why == "a dip that takes core_logic out of its range makes uv_core assert for 7.93 us or more"


def test_stage_behind_which_no_detector_of_too_low_a_supply_stands() -> None:
    stage = "{driven_by: [ov], domain: aon, kind: buffer, hold: none, release_delay: 1 ms, discharge: {within: 1 ms}}"
    said = one(f"output_stages: {{alone: {stage}}}", DISCHARGE, "alone")
    assert (said.kind, said.message) == (NONE, "no under-voltage or power-on detector stands behind it")
    gone = both(f"output_stages: {{alone: {stage}}}", without("output_stages.alone.driven_by"))
    assert one(gone, DISCHARGE, "alone").missing == ("output_stages.alone.driven_by",)


def test_rail_that_never_moves_is_out_of_range() -> None:
    """A nominal level of 0 V rises in no time at all: nothing can be said of a dip."""
    said = one("rails: {avdd: {nominal: 0 V}}", DISCHARGE, "rst_out")
    assert said.kind is OPEN
    assert said.message.endswith("outside the range of the formula: nominal_v must be greater than 0 (found 0.0)")
    said = one("rails: {avdd: {collapse: 0 V/s}}", DISCHARGE, "rst_out")
    assert said.message.endswith("outside the range of the formula: down_v_per_s must be greater than 0 (found 0.0)")


def test_stage_without_a_release_delay() -> None:
    said = one("", DISCHARGE, "gather")
    assert (said.kind, said.message) == (NONE, "it has no release delay")
