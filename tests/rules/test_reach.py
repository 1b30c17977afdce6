"""Reach: loads and the nets that reset them, edges, clocks, and joined sources."""

from __future__ import annotations

import math
import random
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.reach import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
HAS: Final = "reach/has_reset"
EVERY: Final = "reach/every_rail"
EDGE: Final = "reach/edge"
CLOCK: Final = "reach/synchronised"
STAGE: Final = "reach/stage_combined_safely"
NET: Final = "reach/reset_net_combined_safely"
EXAMPLES: Final = {
    HAS: {(HAS, "core_logic")},
    EVERY: {(EVERY, "core_logic")},
    EDGE: {(EDGE, "por_n")},
    CLOCK: {(CLOCK, "core_logic")},
    STAGE: {(STAGE, "gather")},
    NET: {(NET, "por_n")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# reach/has_reset


def test_load_without_a_net() -> None:
    said = one("resets: {core_rst_n: {guards: [adc]}}", HAS, "core_logic")
    assert (said.message, said.mend) == (
        "no reset net guards it", "let a reset net guard core_logic, or its domain",
    )  # fmt: skip
    assert one("resets: {core_rst_n: {guards: [core, adc]}}", HAS, "core_logic").message == "guarded by core_rst_n"


def test_maker_of_a_rail_may_run_without_a_reset() -> None:
    said = one("resets: {por_n: {guards: [adc]}}", HAS, "core_regulator")
    assert (said.kind, said.message) == (NONE, "it makes vcore, and may run without a reset")


def test_has_reset_is_open_where_a_net_does_not_say_what_it_guards() -> None:
    assert one(without("resets.core_rst_n.guards"), HAS, "core_logic").missing == ("resets.core_rst_n.guards",)
    patch = both("resets: {core_rst_n: {guards: [core]}}", without("loads.core_logic.domain"))
    assert one(patch, HAS, "core_logic").missing == ("loads.core_logic.domain",)


def test_domain_of_a_load_counts_only_where_a_net_guards_a_domain() -> None:
    """Without a net that guards a domain, to know that of core_logic would change nothing."""
    patch = both("resets: {core_rst_n: {guards: [adc]}}", without("loads.core_logic.domain"))
    said = one(patch, HAS, "core_logic")
    assert (said.kind, said.missing) == (FAIL, ())
    elsewhere = both(patch, "resets: {core_rst_n: {guards: [adc, analog]}}")
    assert one(elsewhere, HAS, "core_logic").missing == ("loads.core_logic.domain",)
    lives_there = both(elsewhere, "loads: {core_logic: {domain: core}}")
    assert (one(lives_there, HAS, "core_logic").kind, one(lives_there, HAS, "core_logic").missing) == (FAIL, ())


def test_what_no_net_guards_is_judged_once() -> None:
    for rule in (EVERY, CLOCK):
        said = one("resets: {core_rst_n: {guards: [adc]}}", rule, "core_logic")
        assert (said.kind, said.message) == (NONE, "no reset net guards it")


def test_load_that_no_described_net_guards_waits_for_the_rest_of_the_nets() -> None:
    partly = "{resets: {core_rst_n: {guards: [adc]}}, complete: [rails]}"
    said = one(partly, HAS, "core_logic")
    assert (said.kind, said.missing, said.message) == (OPEN, ("resets",), "no net that is described guards it")
    assert one("{resets: {core_rst_n: {guards: [adc]}}, complete: [resets]}", HAS, "core_logic").kind is FAIL


NO_NETS: Final = (
    "{resets: null, bypasses: null, neighbours: null, waivers: null, domains: {analog: {switched_by: ov_latch}}, "
)


def test_nets_that_are_not_described_are_one_question() -> None:
    for rule in (HAS, EVERY, CLOCK):
        assert one(NO_NETS + "complete: [comparators, rails]}", rule, "core_logic").missing == ("resets",)
    none = judged(NO_NETS + "complete: [comparators, rails, resets]}", RULES)
    assert [none[rule, "core_logic"].kind for rule in (HAS, EVERY, CLOCK)] == [FAIL, NONE, NONE]


# reach/every_rail


def test_several_detectors_that_do_not_reach_several_nets() -> None:
    said = one("output_stages: {gather: {driven_by: [ov_latch]}}", EVERY, "adc")
    assert said.message == "it needs avdd, and no detector of avdd resets it"
    assert said.why == "por and uv watch avdd, and do not reach por_n and core_rst_n"
    assert said.mend == "lead the decision of por or uv to por_n or core_rst_n"
    assert said.at == "loads.adc.needs"


def test_the_first_of_two_rails_that_are_lost_is_told() -> None:
    said = one("output_stages: {gather: {driven_by: [ov_latch]}, core_out: {driven_by: [gather]}}", EVERY, "adc")
    assert said.message == "it needs avdd, and no detector of avdd resets it"
    assert path_text(said.path) == "adc supplied by avdd"


def test_every_rail_is_open_without_the_rails_needed() -> None:
    assert one(without("loads.core_logic.needs"), EVERY, "core_logic").missing == ("loads.core_logic.needs",)


def test_load_that_no_detector_of_its_rail_resets() -> None:
    said = one("resets: {por_n: {guards: [adc, core_regulator]}, core_rst_n: {guards: [core_logic]}}", EVERY, "adc")
    assert said.message == "it needs vcore, and no detector of vcore resets it"
    assert said.why == "uv_core watches vcore, and does not reach por_n"
    assert said.mend == "lead the decision of uv_core to por_n"
    assert path_text(said.path) == "adc supplied by vcore"


def test_rail_that_nobody_watches_is_the_matter_of_another_rule() -> None:
    patch = "comparators: {uv_core: {watches: avdd}}"
    assert one(patch, EVERY, "core_logic").message == "nobody watches vcore"
    assert one(patch, EVERY, "adc").message == "reset for avdd"


def test_over_voltage_detector_does_not_judge_for_too_low() -> None:
    cut = "{comparators: {uv: {role: over_voltage}}, output_stages: {gather: {driven_by: [uv_out, ov_latch]}}}"
    assert one(cut, EVERY, "core_regulator").kind is FAIL  # por watches avdd, and reaches no net


def test_every_rail_is_open_where_another_net_may_guard_the_load() -> None:
    patch = "resets: {por_n: {guards: [adc, core_regulator, core_logic]}, core_rst_n: {guards: null}}"
    assert one(patch, EVERY, "core_logic").missing == ("resets.core_rst_n.guards",)
    assert one(patch, EVERY, "core_regulator").kind is PASS


def test_every_rail_is_open_where_a_way_is_not_known() -> None:
    patch = both("resets: {core_rst_n: {guards: [adc]}}", without("output_stages.uv_out.driven_by"))
    cut = both(patch, "{resets: {por_n: {guards: [adc, core_regulator, core_logic]}}}")
    assert one(cut, EVERY, "core_logic").missing == ("output_stages.uv_out.driven_by",)
    assert one(without("output_stages.uv_out.driven_by"), EVERY, "adc").kind is PASS  # it is reset all the same


@pytest.mark.parametrize("seed", range(10))
def test_every_rail_against_brute_force(seed: int) -> None:
    """Random stages between detectors and nets: brute force follows every driver back by recursion."""
    chance = random.Random(seed)
    sources = ["por", "uv", "uv_core"]
    drivers: dict[str, list[str]] = {}
    for name in ("por_out", "uv_out", "gather", "rst_out", "core_out"):
        earlier = sources + list(drivers)
        drivers[name] = sorted(chance.sample(earlier, k=chance.choice((1, 2))))
    nets = {"por_n": ["rst_out"], "core_rst_n": ["core_out"]}
    stages = ", ".join(f"{name}: {{driven_by: [{', '.join(found)}]}}" for name, found in drivers.items())

    def judges(name: str) -> set[str]:
        if name in sources:
            return {"vcore" if name == "uv_core" else "avdd"}
        return set().union(*(judges(driver) for driver in drivers.get(name, nets.get(name, ()))))

    said = judged(f"output_stages: {{{stages}}}", RULES)
    for load, needs, guards in (
        ("adc", {"avdd", "vcore"}, ("por_n", "core_rst_n")),
        ("core_logic", {"vcore"}, ("core_rst_n",)),
        ("core_regulator", {"avdd"}, ("por_n",)),
    ):
        found: set[str] = set().union(*(judges(net) for net in guards))
        assert said[EVERY, load].kind is (PASS if needs <= found else FAIL)


# reach/edge


@pytest.mark.parametrize(("share", "kind"), [(0.999, PASS), (1.0, PASS), (1.001, FAIL)])
def test_edge_at_its_limit(share: float, kind: Kind) -> None:
    """ln 9 times 8 kohm times C is 100 ns, the slowest edge of plain inputs."""
    load_f = share * 100e-9 / (math.log(9) * 8e3)
    assert one(f"output_stages: {{rst_out: {{load: {load_f * 1e12!r} pF}}}}", EDGE, "por_n").kind is kind


def test_net_that_is_too_slow() -> None:
    """2.1972 times 8 kohm times 8 pF."""
    said = one("output_stages: {rst_out: {load: 8 pF}}", EDGE, "por_n")
    assert said.message == "rst_out moves it within 140.6 ns, at most 100 ns needed"
    assert said.why == "8 kohm of drive on 8 pF, 40 receivers among it"
    assert said.mend == "a drive of 5.68 kohm or less, or a load of 5.68 pF or less"
    assert path_text(said.path) == "rst_out drives por_n"


def test_the_slowest_of_several_stages_is_told() -> None:
    """ln 9 times 8 kohm times 400 fF are 7.03 ns, times 30 kohm times 4 pF 263.7 ns; no count of receivers is given."""
    patch = "{resets: {por_n: {driven_by: [rst_out, core_out], receivers: {count: null}}}, output_stages: {core_out: "
    said = one(patch + "{drive: {max: 30 kohm}, load: 4 pF}}}", EDGE, "por_n")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(math.log(9) * 30e3 * 4e-12, rel=1e-12)
    assert said.message == "core_out moves it within 263.7 ns, at most 100 ns needed"
    assert said.why == "30 kohm of drive on 4 pF"
    assert said.mend == "a drive of 11.3 kohm or less, or a load of 1.51 pF or less"


@pytest.mark.parametrize("nothing", ["drive: 0 ohm", "load: 0 fF"])
def test_edge_without_drive_resistance_or_without_load(nothing: str) -> None:
    said = one(f"output_stages: {{rst_out: {{{nothing}}}}}", EDGE, "por_n")
    assert (said.kind, said.message) == (PASS, "rst_out moves it within 0 s, at most 100 ns needed")


def test_net_that_no_stage_drives_has_no_edge_to_judge() -> None:
    said = one("resets: {por_n: {driven_by: [por]}}", EDGE, "por_n")
    assert (said.kind, said.message) == (NONE, "no stage drives it")


def test_edge_that_is_too_slow_for_any_drive_is_known_by_what_is_given() -> None:
    """ln 9 times 4 kohm times 8 pF are 70.3 ns of 100 ns with the least drive that is known."""
    said = one("output_stages: {rst_out: {load: 8 pF, drive: {min: 4 kohm}}}", EDGE, "por_n")
    assert (said.kind, said.missing) == (OPEN, ("output_stages.rst_out.drive.max",))
    assert said.measure is not None
    assert said.measure.best == pytest.approx(100e-9 - math.log(9) * 4e3 * 8e-12, rel=1e-9)
    slow = one("output_stages: {rst_out: {load: 8 pF, drive: {min: 6 kohm}}}", EDGE, "por_n")
    assert slow.kind is FAIL
    assert slow.message.endswith("at least 5.467 ns short, whatever greatest drive of rst_out may be")


@pytest.mark.parametrize(
    "fact",
    ["output_stages.rst_out.drive", "output_stages.rst_out.load", "process.plain_edge", "resets.por_n.driven_by"],
)
def test_edge_is_open_without(fact: str) -> None:
    assert one(without(fact), EDGE, "por_n").missing == (fact,)


# reach/synchronised


def test_clocked_load_that_is_released_at_any_time() -> None:
    said = one("loads: {core_logic: {synchronised: false}}", CLOCK, "core_logic")
    assert said.message == "it has a clock, and its reset is released at any time"
    assert said.at == "loads.core_logic.synchronised"
    assert one("", CLOCK, "core_logic").message == "released in step with its clock"
    still = one("loads: {core_logic: {clocked: false, synchronised: null}}", CLOCK, "core_logic")
    assert (still.kind, still.message) == (NONE, "it has no clock")


def test_synchronised_is_open_without() -> None:
    said = one(without("loads.core_logic.synchronised"), CLOCK, "core_logic")
    assert (said.kind, said.missing) == (OPEN, ("loads.core_logic.synchronised",))
    loose = both("loads: {core_logic: {synchronised: false}}", without("loads.core_logic.clocked"))
    said = one(loose, CLOCK, "core_logic")
    assert (said.kind, said.missing) == (OPEN, ("loads.core_logic.clocked",))
    assert said.message.endswith("it holds where clock of core_logic is false")
    assert one(without("loads.core_logic.clocked"), CLOCK, "core_logic").kind is PASS  # in step, clock or not


# reach/*_combined_safely

PAIR: Final = """
comparators:
  uv_twin: {role: under_voltage, watches: avdd, domain: aon}
output_stages:
  twins: {driven_by: [uv, uv_twin], COMBINE, domain: aon, kind: buffer, hold: none}
"""


def test_two_detectors_alike_that_must_agree() -> None:
    said = one(PAIR.replace("COMBINE", "combine: all_agree"), STAGE, "twins")
    assert (said.kind, said.missing) == (OPEN, ("output_stages.twins.combined_against",))  # what for is not said
    assert said.message.endswith("it holds where combined against of twins is false_reset")
    missed = one(PAIR.replace("COMBINE", "combine: all_agree, combined_against: missed_reset"), STAGE, "twins")
    assert missed.message == "uv and uv_twin must all agree: one that fails to assert keeps the others from it"
    assert missed.mend == "combine: any_asserts, which is the safe way against a missed reset"


def test_what_must_agree_against_a_missed_reset_makes_it_likelier() -> None:
    missed = one(PAIR.replace("COMBINE", "combine: all_agree, combined_against: missed_reset"), STAGE, "twins")
    assert missed.why == "it is meant against a missed reset, which it makes more likely"
    meant = one(PAIR.replace("COMBINE", "combine: all_agree, combined_against: false_reset"), STAGE, "twins")
    assert (meant.message, meant.at) == (
        "like detectors must agree, against false resets", "output_stages.twins.combined_against",
    )  # fmt: skip


def test_one_driver_alone_is_combined_with_none() -> None:
    said = one("", STAGE, "uv_out")
    assert (said.kind, said.message) == (NONE, "it has one driver")
    assert (one("", STAGE, "gather").kind, one("", STAGE, "gather").message) == (PASS, "any of its drivers asserts")


@pytest.mark.parametrize(
    ("combine", "kind"),
    [
        ("combine: any_asserts", PASS),
        ("combine: all_agree, combined_against: false_reset", PASS),
        ("combine: all_agree, combined_against: missed_reset", FAIL),
        ("note: nothing is said", OPEN),
    ],
)
def test_combination_for_a_fault_that_is_said(combine: str, kind: Kind) -> None:
    assert one(PAIR.replace("COMBINE", combine), STAGE, "twins").kind is kind


def test_unlike_detectors_must_never_agree() -> None:
    patch = "output_stages: {gather: {combine: all_agree, combined_against: false_reset}}"
    said = one(patch, STAGE, "gather")
    assert said.message == "por_out and uv_out and ov_latch must all agree, and uv_out does not judge avdd for power on"
    assert said.why == "what judges avdd cannot assert it alone"
    assert path_text(said.path) == "uv_out drives gather"


def test_combination_that_fails_either_way_fails_unsaid() -> None:
    """Unlike detectors that must agree, or are meant against a missed reset: failing, whatever is not said besides."""
    unsaid = "output_stages: {gather: {combine: null, driven_by: [por_out]}}"
    assert one(unsaid, STAGE, "gather").kind is NONE
    behind = both(
        PAIR.replace("COMBINE", "combine: all_agree, combined_against: missed_reset"),
        "output_stages: {twins: {driven_by: [uv, uv_twin, unsaid]}, unsaid: {domain: aon, kind: buffer}}",
    )
    assert one(behind, STAGE, "twins").kind is FAIL
    against = both(behind, "output_stages: {twins: {combined_against: false_reset}}")
    assert one(against, STAGE, "twins").missing == ("output_stages.unsaid.driven_by",)


def test_combination_is_open_without() -> None:
    assert one(without("output_stages.gather.combine"), STAGE, "gather").missing == ("output_stages.gather.combine",)
    assert one(without("output_stages.gather.driven_by"), STAGE, "gather").missing == (
        "output_stages.gather.driven_by",
    )  # fmt: skip
