"""Crossing: signals between supplies, and what is always on and leans on what is not."""

from __future__ import annotations

from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import passive_default, self_bias
from tidegate.rules.crossing import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
STAGE: Final = "crossing/stage_shifted"
NET: Final = "crossing/reset_net_shifted"
HELD: Final = "crossing/input_held"
STAYS: Final = "crossing/stays_on"

EXAMPLES: Final = {
    STAGE: {(STAGE, "core_out")},
    NET: {(NET, "core_rst_n")},
    HELD: {(HELD, "onward")},
    STAYS: {(STAYS, "uv_core")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_where_it_should_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# level shifters


def test_net_read_on_another_supply() -> None:
    said = one("output_stages: {core_out: {kind: buffer}}", NET, "core_rst_n")
    assert said.message == "core_out drives it from avdd, and it is read on vcore, with no level shifter between"
    assert (said.why, said.mend) == ("avdd is 1.8 V, vcore 1.2 V", "a level shifter from avdd to vcore")
    assert path_text(said.path) == "core_out drives core_rst_n"
    assert one("", NET, "core_rst_n").message == "shifted from core_out"


def test_level_shifter_at_either_end_will_do() -> None:
    assert one("output_stages: {rst_out: {domain: core, kind: level_shifter}}", STAGE, "rst_out").kind is PASS
    assert one("output_stages: {rst_out: {domain: core, kind: level_shifter}}", NET, "por_n").kind is PASS


def test_rails_of_one_nominal_level_need_no_shifter() -> None:
    patch = "{rails: {vcore: {nominal: 1.8 V}}, output_stages: {core_out: {kind: buffer}}}"
    said = one(patch, NET, "core_rst_n")
    assert (said.kind, said.message) == (PASS, "from core_out at the same nominal level")


def stage(driven_by: str, domain: str, kind: str = "buffer", hold: str = "none") -> str:
    return f"{{driven_by: [{driven_by}], domain: {domain}, kind: {kind}, inverting: false, hold: {hold}}}"


def test_several_signals_from_other_supplies() -> None:
    """a is shifted, b comes at the same 1.8 V; into the core of 1.2 V both come bare, and the first is told."""
    io = "rails: {vio: {nominal: 1.8 V}}, domains: {io: {rail: vio, kind: always_on}}"
    shifted, bare = stage("uv", "io", kind="level_shifter"), stage("uv", "io")
    patch = f"{{{io}, output_stages: {{a: {shifted}, b: {bare}, c: {stage('a, b', 'aon')}}}}}"
    assert one(patch, STAGE, "c").message == "shifted from a; from b at the same nominal level"
    patch = f"{{output_stages: {{a: {stage('uv', 'aon')}, b: {stage('uv', 'aon')}, c: {stage('a, b', 'core')}}}}}"
    said = one(patch, STAGE, "c")
    assert said.message == "a drives it from avdd, and it is read on vcore, with no level shifter between"
    assert path_text(said.path) == "a drives c"
    both_ends = both(patch, without("output_stages.a.kind", "output_stages.c.kind"))
    assert one(both_ends, STAGE, "c").missing == ("output_stages.a.kind", "output_stages.c.kind")
    assert (one("", STAGE, "gather").kind, one("", STAGE, "gather").message) == (NONE, "driven from its own rail alone")


@pytest.mark.parametrize(
    ("gone", "missing"),
    [
        ("resets.core_rst_n.domain", {"resets.core_rst_n.domain"}),
        ("output_stages.core_out.domain", {"output_stages.core_out.domain"}),
        ("output_stages.core_out.kind", {"output_stages.core_out.kind"}),
        ("domains.core.rail", {"domains.core.rail"}),
        ("resets.core_rst_n.driven_by", {"resets.core_rst_n.driven_by"}),
    ],
)
def test_net_is_open_without(gone: str, missing: set[str]) -> None:
    said = one(without(gone), NET, "core_rst_n")
    assert (said.kind, set(said.missing)) == (OPEN, missing)


def test_nominal_levels_are_asked_for_where_no_shifter_stands() -> None:
    patch = both("output_stages: {core_out: {kind: buffer}}", without("rails.avdd.nominal", "rails.vcore.nominal"))
    assert set(one(patch, NET, "core_rst_n").missing) == {"rails.avdd.nominal", "rails.vcore.nominal"}
    assert one(without("rails.avdd.nominal"), NET, "core_rst_n").kind is PASS


# holds


def test_driver_in_a_switched_domain() -> None:
    said = one("output_stages: {uv_out: {domain: analog}}", HELD, "gather")
    assert said.message == "uv_out drives it, is not held, and lives in analog, which is switched"
    assert said.mend == "hold the output of uv_out, or move uv_out to the domain of gather"
    assert path_text(said.path) == "uv_out drives gather"


def test_driver_on_a_later_rail() -> None:
    said = one("output_stages: {uv_out: {domain: core}}", HELD, "gather")
    assert said.message.endswith("and lives on vcore, which is not among the rails that are up before avdd")


def test_driver_on_an_earlier_rail_is_alive() -> None:
    said = one("output_stages: {core_out: {domain: core}}", HELD, "core_out")
    assert (said.kind, said.message) == (NONE, "every driver is alive whenever it is")


HOLD: Final = "{to: low, through: resistor, resistance: 1 Mohm, coupling: 1 fF}"


def test_drivers_that_are_held_are_named() -> None:
    moved = f"{{domain: analog, hold: {HOLD}}}"
    said = one(f"output_stages: {{por_out: {moved}, uv_out: {moved}}}", HELD, "gather")
    assert (said.kind, said.message, said.at) == (PASS, "held: por_out and uv_out", "output_stages.gather.driven_by")


def test_what_comes_after_a_hold_is_judged_elsewhere() -> None:
    """a passes on the hold of gather to por_n; b is judged here where no hold, or no net, lies on its way."""
    said = one(f"output_stages: {{a: {stage('gather', 'analog')}, rst_out: {{driven_by: [a]}}}}", HELD, "rst_out")
    assert (said.kind, said.message) == (FAIL, "a drives it, is not held, and lives in analog, which is switched")
    patch = f"output_stages: {{a: {stage('gather', 'analog')}, rst_out: {{driven_by: [a]}}}}"
    both_families = judged(patch, (*RULES, *passive_default.RULES))
    assert both_families["passive_default/chain_alive", "gather"].kind is FAIL
    assert both_families[HELD, "rst_out"].under == "passive_default/chain_alive"
    joined = "rst_out: {driven_by: [a, b], combine: any_asserts}"
    for behind in ("gather", "uv"):
        stages = f"a: {stage('gather', 'analog')}, b: {stage('uv', 'analog')}".replace("[uv]", f"[{behind}]")
        found = judged(f"output_stages: {{{stages}, {joined}}}", (*RULES, *passive_default.RULES))[HELD, "rst_out"]
        assert found.under == ("" if behind == "uv" else "passive_default/chain_alive")
    assert found.message == "b drives it, is not held, and lives in analog, which is switched"
    loose = f"a: {stage('ov', 'analog')}, b: {stage('uv', 'analog')}"
    said = one(f"output_stages: {{{loose}, {joined}}}", HELD, "rst_out")
    assert said.message == "a drives it, is not held, and lives in analog, which is switched"
    aside = f"output_stages: {{b: {stage('gather', 'analog')}, c: {stage('b', 'aon')}}}"
    assert one(aside, HELD, "c").message == "b drives it, is not held, and lives in analog, which is switched"


def test_level_shifter_without_a_hold_leaves_its_driver_to_say() -> None:
    moved = "{output_stages: {core_out: {hold: none}}, comparators: {uv_core: {domain: core}}}"
    assert one(moved, HELD, "core_out").missing == ("comparators.uv_core.undecided",)
    said = one(both(moved, "comparators: {uv_core: {undecided: undefined}}"), HELD, "core_out")
    assert (said.kind, said.mend) == (
        FAIL, "move uv_core to the domain of core_out, or let its output assert until it can decide",
    )  # fmt: skip
    assert one(both(moved, "comparators: {uv_core: {undecided: releases}}"), HELD, "core_out").kind is PASS
    held = one("comparators: {uv_core: {domain: core}}", HELD, "core_out")
    assert (held.kind, held.message, held.at) == (
        PASS, "a level shifter whose output is held", "output_stages.core_out.hold",
    )  # fmt: skip


def test_detector_as_a_driver_says_what_its_output_does() -> None:
    moved = "comparators: {uv_core: {domain: core}}"
    said = one(moved, HELD, "core_out")
    assert said.kind is PASS  # core_out is a level shifter, and held
    bare = both(moved, "output_stages: {core_out: {kind: buffer}}")
    assert one(bare, HELD, "core_out").missing == ("comparators.uv_core.undecided",)
    undefined = both(bare, "comparators: {uv_core: {undecided: undefined}}")
    said = one(undefined, HELD, "core_out")
    assert said.message == (
        "uv_core drives it, what its output does while it cannot decide is not defined, and it lives on vcore, which "
        "is not among the rails that are up before avdd"
    )
    assert one(both(bare, "comparators: {uv_core: {undecided: asserts}}"), HELD, "core_out").kind is PASS


@pytest.mark.parametrize("fact", ["output_stages.uv_out.domain", "output_stages.gather.driven_by"])
def test_hold_is_open_without(fact: str) -> None:
    said = one(without(fact), HELD, "gather")
    assert (said.kind, said.missing) == (OPEN, (fact,))


def test_hold_that_is_not_said_is_asked_for() -> None:
    patch = both("output_stages: {uv_out: {domain: analog}}", without("output_stages.uv_out.hold"))
    assert one(patch, HELD, "gather").missing == ("output_stages.uv_out.hold",)


def test_order_of_rails_that_is_not_said_is_asked_for() -> None:
    """vcore comes after avdd; whether vio does, or comes before, nobody says but a description that is whole."""
    io = "rails: {vio: {nominal: 1.8 V}}, domains: {io: {rail: vio, kind: always_on}}"
    patch = f"{{{io}, output_stages: {{uv_out: {{domain: io}}}}, complete: [output_stages]}}"
    said = one(patch, HELD, "gather")
    assert (said.kind, said.missing) == (OPEN, ("rails.avdd.after",))
    whole = one(patch.replace("[output_stages]", "[rails]"), HELD, "gather")
    assert whole.message.endswith("lives on vio, which is not among the rails that are up before avdd")


def test_stage_that_may_be_a_held_shifter_is_asked_for_its_kind() -> None:
    dead = "{output_stages: {uv_out: {domain: analog}, gather: {kind: null}}}"
    assert one(dead, HELD, "gather").missing == ("output_stages.gather.kind",)
    bare = "{output_stages: {uv_out: {domain: analog}, gather: {kind: null, hold: none}}}"
    assert one(bare, HELD, "gather").kind is FAIL
    assert one(both(dead, without("output_stages.uv_out.hold")), HELD, "gather").missing == (
        "output_stages.uv_out.hold",
    )


def test_what_is_bare_already_fails_although_another_signal_is_not_described() -> None:
    patch = f"output_stages: {{a: {stage('uv', 'aon')}, b: {{driven_by: [uv]}}, c: {stage('a, b', 'core')}}}"
    assert one(patch, STAGE, "c").message.startswith("a drives it from avdd, and it is read on vcore")
    alike = f"output_stages: {{b: {{driven_by: [uv]}}, c: {stage('uv, b', 'aon')}}}"
    assert one(alike, STAGE, "c").missing == ("output_stages.b.domain",)


# what is always on

_COPY: Final = """biases:
  bias_copy: {{kind: from_reference, source: {source}, domain: aon, current: 0.1 uA, leakage: 0 A, consumes: 0.1 uA,
    works_from: 1.2 V, settling: 20 us}}
loads: {{adc: {{leans_on: [bias_copy]}}}}
"""
ALWAYS_ON: Final = {
    "references": (
        "ref_main", "references: {ref_main: {domain: aon, consumes: 0.5 uA}}",
        "{references: {ref_main: {domain: aon, consumes: 0.5 uA}}, biases: {bias_main: {domain: aon}}}",
    ),
    "biases": ("bias_copy", _COPY.format(source="ref_main"), _COPY.format(source="ref_fast")),
    "output_stages": (
        "core_out", "{output_stages: {enable: {driven_by: [uv], domain: analog, kind: buffer, inverting: false, "
        "hold: none, works_from: 0.7 V, input_edge: 60 ns, delay: {min: 5 ns, max: 60 ns}}, "
        "core_out: {gated_by: enable}}}", "output_stages: {core_out: {gated_by: uv_out}}",
    ),
}  # fmt: skip


@pytest.mark.parametrize("section", ALWAYS_ON)
def test_what_is_always_on_in_each_section(section: str) -> None:
    name, asleep, awake = ALWAYS_ON[section]
    assert {key for key, kind in changed(asleep, RULES).items() if kind not in (PASS, NONE)} == {(STAYS, name)}
    assert judged(awake, RULES)[STAYS, name].kind is PASS


def test_always_on_is_open_on_what_it_may_lean_on() -> None:
    assert one(without("comparators.uv.bias"), STAYS, "uv").missing == ("comparators.uv.bias",)
    both_ends = both("comparators: {uv_core: {bias: bias_main}}", without("comparators.uv_core.reference"))
    assert one(both_ends, STAYS, "uv_core").kind is FAIL  # whatever it compares with
    gate = f"{{output_stages: {{gate: {stage('ov', 'analog')}, core_out: {{gated_by: gate}}}}}}"
    unsaid = both(gate, without("output_stages.gate.hold"))
    assert one(unsaid, STAYS, "core_out").missing == ("output_stages.gate.hold",)
    off_chip = both("references: {ref_main: {kind: null}}", "comparators: {uv_core: {reference: ref_main}}")
    said = one(off_chip, STAYS, "uv_core")
    assert (said.kind, said.missing) == (OPEN, ("references.ref_main.kind",))
    assert said.message.endswith("it holds where kind of ref_main is external")


def test_detector_that_compares_with_a_switched_reference() -> None:
    said = one("comparators: {uv_core: {reference: ref_main}}", STAYS, "uv_core")
    assert said.message == (
        "it is always on and takes its reference from ref_main, which lives in analog, which is switched"
    )
    assert said.why == "while analog is off, uv_core has no source"
    assert path_text(said.path) == "uv_core takes its reference from ref_main supplied by analog"


def test_words_of_what_it_leans_on() -> None:
    """What biases it, and what enables it; what leans on uv_core through others is no such way."""
    said = one("comparators: {uv_core: {bias: bias_main}}", STAYS, "uv_core")
    assert said.message == "it is always on and is biased by bias_main, which lives in analog, which is switched"
    assert said.why == "while analog is off, uv_core has no source"
    assert said.mend == "let uv_core lean on something that is always on, or move bias_main to a domain that is"
    gate = f"{{output_stages: {{gate: {stage('ov', 'analog')}, core_out: {{gated_by: gate}}}}}}"
    assert one(gate, STAYS, "core_out").why == "while analog is off, core_out has no enable"
    patch = f"{{{LATE}}}, references: {{ref_fast: {{leans_on: [bias_late]}}}}}}"
    said = one(patch, STAYS, "ref_fast")
    assert said.message == "it is always on and leans on bias_late, which lives in late, which is switched"
    assert path_text(said.path) == "ref_fast leans on bias_late supplied by late"


LATE: Final = "domains: {late: {rail: avdd, kind: switched}}, biases: {bias_late: {kind: resistor, domain: late}"
"""A bias in a domain that is switched, it is not said by what."""


def test_the_first_of_several_that_are_switched_is_told() -> None:
    said = one("comparators: {uv_core: {bias: bias_main, reference: ref_main}}", STAYS, "uv_core")
    assert said.message == "it is always on and is biased by bias_main, which lives in analog, which is switched"


def test_a_source_off_the_chip_or_a_held_enable_hides_no_other() -> None:
    off_chip = "{biases: {bias_x: {kind: external}}, comparators: {uv_core: {bias: bias_x, reference: ref_main}}}"
    assert "takes its reference from ref_main" in one(off_chip, STAYS, "uv_core").message
    held = f"output_stages: {{gate: {stage('ov', 'analog', hold=HOLD)}}}"
    patch = f"{{{held}, {LATE}}}, references: {{ref_fast: {{gated_by: gate, leans_on: [bias_late]}}}}}}"
    said = one(patch, STAYS, "ref_fast")
    assert said.message == "it is always on and leans on bias_late, which lives in late, which is switched"


def test_a_loop_that_the_switched_domain_is_not_in_excuses_nothing() -> None:
    """ref_fast and bias_x feed each other; late waits for neither."""
    patch = f"{{{LATE}, bias_x: {{kind: from_reference, source: ref_fast, domain: aon}}}}, "
    patch += "references: {ref_fast: {bias: bias_x, leans_on: [bias_late]}}}"
    said = judged(patch, (*RULES, *self_bias.RULES))[STAYS, "ref_fast"]
    assert (said.kind, said.under, said.why) == (FAIL, "", "while late is off, ref_fast has no source")


def test_words_of_what_stays_on() -> None:
    assert one("", STAYS, "uv").message == "leans on bias_start and ref_fast, which stay on"
    assert one("", STAYS, "gather").message == "leans on nothing but its supply"
    said = one("", STAYS, "ref_main")
    assert (said.kind, said.message) == (NONE, "it lives in analog, which is switched")
    off_chip = "{biases: {bias_x: {kind: external}}, references: {ref_fast: {bias: bias_x}}}"
    assert one(off_chip, STAYS, "ref_fast").message == "leans on nothing but its supply"
    said = one(off_chip, STAYS, "bias_x")
    assert (said.kind, said.message) == (NONE, "it lives off the chip")


def test_detector_that_asserts_meanwhile_is_safe() -> None:
    patch = "comparators: {uv_core: {reference: ref_main, undecided: asserts}}"
    said = one(patch, STAYS, "uv_core")
    assert (said.kind, said.message) == (PASS, "asserts while analog is off, in which ref_main lives")


def test_what_a_detector_switches_on_itself_is_the_matter_of_another_rule() -> None:
    """uv asserts por_n, which switches analog, in which ref_main lives."""
    patch = "comparators: {uv: {reference: ref_main}}"
    assert one(patch, STAYS, "uv").kind is FAIL
    under = judged(patch, (*RULES, *self_bias.RULES))[STAYS, "uv"]
    assert (under.kind, under.under) == (NONE, "self_bias/no_loop")


def test_stage_enabled_from_the_domain_that_is_switched() -> None:
    stage = "enable: {driven_by: [uv], domain: analog, kind: buffer, HOLD}, core_out: {gated_by: enable}"
    bare = "output_stages: {" + stage.replace("HOLD", "hold: none") + "}"
    held = "output_stages: {" + stage.replace("HOLD", "hold: {to: low, through: resistor, resistance: 1 Mohm}") + "}"
    assert one(bare, STAYS, "core_out").message == (
        "it is always on and is gated by enable, which lives in analog, which is switched"
    )
    assert one(held, STAYS, "core_out").kind is PASS


@pytest.mark.parametrize("fact", ["comparators.uv.domain", "references.ref_fast.domain"])
def test_always_on_is_open_without(fact: str) -> None:
    said = one(without(fact), STAYS, "uv")
    assert (said.kind, said.missing) == (OPEN, (fact,))


def test_kinds_of_domains_that_are_not_given() -> None:
    """In one domain with what it leans on it stays on, or sleeps, together with that; in another one it may not."""
    assert one(without("domains.aon.kind"), STAYS, "uv").kind is PASS
    apart = both(
        "comparators: {uv_core: {reference: ref_main}}", without("domains.analog.kind", "domains.analog.switched_by")
    )
    assert one(apart, STAYS, "uv_core").missing == ("domains.analog.kind",)
