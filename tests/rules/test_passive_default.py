from __future__ import annotations

import json
import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import Any, Final

import pytest
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from tests.rules.sound import changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.passive_default import RULES

HELD: Final = "passive_default/held"
ALIVE: Final = "passive_default/chain_alive"
LEVEL: Final = "passive_default/level"
STRENGTH: Final = "passive_default/hold_strength"
DRIVER: Final = "passive_default/driver_wins"
BUDGET: Final = "passive_default/holds_within_budget"
LATCH: Final = "passive_default/latch_state"
HELD_STAGES: Final = ("gather", "rst_out", "core_out")
OF_A_HOLD: Final = (ALIVE, LEVEL, STRENGTH, DRIVER)

# por_n and what drives it, turned round: held high, resets when high.
HIGH: Final = """
output_stages:
  gather: {{hold: {{to: high}}}}
  rst_out: {{hold: {{to: high}}, {stage}}}
  core_out: {{driven_by: [uv_core]}}
resets: {{por_n: {{active: high, {net}}}}}
"""


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def stretch(also: Mapping[str, Mapping[str, Any]] = MappingProxyType({}), **facts: Any) -> str:
    """A patch with a stage between gather and rst_out, which are both held; it is alive, and not held."""
    stage = {
        "driven_by": ["gather"], "domain": "aon", "kind": "buffer", "threshold": {"min": "0.4 V", "max": "1.25 V"},
        "hold": "none", **facts,
    }  # fmt: skip
    patch: dict[str, Any] = {"output_stages": {"stretch": stage, "rst_out": {"driven_by": ["stretch"]}}}
    for section, entries in also.items():
        for name, entry in entries.items():
            patch.setdefault(section, {}).setdefault(name, {}).update(entry)
    return json.dumps(patch)


def stages(**entries: Mapping[str, Any]) -> Mapping[str, Mapping[str, Any]]:
    """More facts of output stages, for ``stretch``."""
    return {"output_stages": entries}


def high(stage: str = "", net: str = "") -> str:
    return HIGH.format(stage=stage, net=net)


def ramp_v(*, hold_ohm: float, coupling_f: float, total_f: float, slope_v_per_s: float, ramp_s: float) -> float:
    """The node equation C dv/dt = Cc s - v/R from rest, solved by SciPy."""
    solved = solve_ivp(
        lambda _, v: (coupling_f * slope_v_per_s - v / hold_ohm) / total_f,
        (0.0, ramp_s), [0.0], method="LSODA", rtol=1e-10, atol=1e-15,
    )  # fmt: skip
    return float(solved.y[0, -1])


# What the sound example gives


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), Kind.FAIL, Kind.OPEN, Kind.REVIEW) == []


def test_rules_that_have_nothing_to_say_on_the_sound_example() -> None:
    loose = ("por_out", "uv_out", "ov_out", "ov_latch")
    no_latch = ("por_out", "uv_out", "ov_out", "gather", "rst_out", "core_out")
    expected = {(BUDGET, "analog"), (BUDGET, "core"), *((LATCH, stage) for stage in no_latch)}
    expected |= {(rule, stage) for stage in loose for rule in OF_A_HOLD}
    assert set(of_kind(judged("", RULES), Kind.NOT_APPLICABLE)) == expected
    assert one("", LEVEL, "uv_out").message == "nothing holds its output"
    assert one("", BUDGET, "core").message == "nothing in it is held"
    assert one("", LATCH, "gather").message == "it is no latch"


# Examples: one fault, and exactly the judgements that it changes

FAULTS: Final = {
    HELD: {
        (HELD, "por_n"): Kind.FAIL,
        **{(rule, "rst_out"): Kind.NOT_APPLICABLE for rule in OF_A_HOLD},
    },
    ALIVE: {
        (ALIVE, "gather"): Kind.FAIL,
        **{(rule, "stretch"): Kind.NOT_APPLICABLE for rule in (*OF_A_HOLD, LATCH)},  # the new stage
    },
    LEVEL: {(LEVEL, "rst_out"): Kind.FAIL},
    STRENGTH: {(STRENGTH, "rst_out"): Kind.FAIL},
    DRIVER: {(DRIVER, "rst_out"): Kind.FAIL},
    BUDGET: {(BUDGET, "aon"): Kind.FAIL},
    LATCH: {(LATCH, "ov_latch"): Kind.FAIL},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_fails_alone_and_holds(rule: object) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]  # type: ignore[attr-defined]
    mended = changed(rule.example.holds, RULES)  # type: ignore[attr-defined]
    assert set(mended.values()) <= {Kind.NOT_APPLICABLE}, "nothing but what a new stage has nothing to say on"


# Facts that are missing

OPEN: Final = (
    ("resets.por_n.driven_by", {(HELD, "por_n"): ["resets.por_n.driven_by"]}),
    (
        "output_stages.rst_out.hold",
        {(HELD, "por_n"): ["output_stages.rst_out.hold"], (BUDGET, "aon"): ["output_stages.rst_out.hold"]},
    ),
    (
        "output_stages.gather.hold",
        {(ALIVE, "gather"): ["output_stages.gather.hold"], (BUDGET, "aon"): ["output_stages.gather.hold"]},
    ),
    (
        "output_stages.rst_out.hold.to",
        {(rule, "rst_out"): ["output_stages.rst_out.hold.to"] for rule in (LEVEL, STRENGTH, DRIVER)},
    ),
    (
        "output_stages.rst_out.hold.resistance",
        {
            (STRENGTH, "rst_out"): ["output_stages.rst_out.hold.resistance"],
            (DRIVER, "rst_out"): ["output_stages.rst_out.hold.resistance"],
            (BUDGET, "aon"): ["output_stages.rst_out.hold.resistance"],
        },
    ),
    (
        "output_stages.rst_out.hold.resistance.min",
        {
            (DRIVER, "rst_out"): ["output_stages.rst_out.hold.resistance.min"],
            (BUDGET, "aon"): ["output_stages.rst_out.hold.resistance.min"],
        },
    ),
    (
        "output_stages.rst_out.hold.resistance.max",
        {(STRENGTH, "rst_out"): ["output_stages.rst_out.hold.resistance.max"]},
    ),
    ("output_stages.rst_out.hold.coupling", {(STRENGTH, "rst_out"): ["output_stages.rst_out.hold.coupling"]}),
    ("output_stages.rst_out.leakage", {(STRENGTH, "rst_out"): ["output_stages.rst_out.leakage"]}),
    ("output_stages.rst_out.load", {(STRENGTH, "rst_out"): ["output_stages.rst_out.load"]}),
    ("output_stages.rst_out.drive", {(DRIVER, "rst_out"): ["output_stages.rst_out.drive"]}),
    ("output_stages.rst_out.inverting", {}),  # a buffer, which says it
    (
        "output_stages.rst_out.threshold",
        {
            (STRENGTH, "gather"): ["output_stages.rst_out.threshold"],
            (DRIVER, "gather"): ["output_stages.rst_out.threshold"],
        },
    ),
    (
        "output_stages.rst_out.domain",
        {
            (STRENGTH, "rst_out"): ["output_stages.rst_out.domain"],
            (DRIVER, "rst_out"): ["output_stages.rst_out.domain"],
        },
    ),
    (
        "resets.por_n.receivers",
        {
            (STRENGTH, "rst_out"): ["resets.por_n.receivers.leakage", "resets.por_n.receivers.threshold"],
            (DRIVER, "rst_out"): ["resets.por_n.receivers.threshold"],
        },
    ),
    ("resets.por_n.receivers.leakage", {(STRENGTH, "rst_out"): ["resets.por_n.receivers.leakage"]}),
    ("resets.por_n.receivers.threshold.min", {(STRENGTH, "rst_out"): ["resets.por_n.receivers.threshold.min"]}),
    ("resets.por_n.receivers.threshold.max", {(DRIVER, "rst_out"): ["resets.por_n.receivers.threshold.max"]}),
    (
        "resets.por_n.active",
        {(LEVEL, "gather"): ["resets.por_n.active"], (LEVEL, "rst_out"): ["resets.por_n.active"]},
    ),
    ("rails.avdd.nominal", {(STRENGTH, stage): ["rails.avdd.nominal"] for stage in HELD_STAGES}),
    ("rails.avdd.rise", {(STRENGTH, stage): ["rails.avdd.rise"] for stage in HELD_STAGES}),
    (
        "rails.avdd.delivered",
        {
            (BUDGET, "aon"): ["rails.avdd.delivered"],
            **{(DRIVER, stage): ["rails.avdd.delivered"] for stage in HELD_STAGES},
        },
    ),
    ("domains.aon.budget", {(BUDGET, "aon"): ["domains.aon.budget"]}),
    (
        "domains.aon.rail",
        {
            (BUDGET, "aon"): ["domains.aon.rail"],
            **{(rule, stage): ["domains.aon.rail"] for rule in (STRENGTH, DRIVER) for stage in HELD_STAGES},
        },
    ),
    ("references.ref_fast.consumes", {(BUDGET, "aon"): ["references.ref_fast.consumes"]}),
    ("biases.bias_start.consumes", {(BUDGET, "aon"): ["biases.bias_start.consumes"]}),
    ("comparators.uv.consumes", {(BUDGET, "aon"): ["comparators.uv.consumes"]}),
    ("output_stages.ov_latch.kind", {(LATCH, "ov_latch"): ["output_stages.ov_latch.kind"]}),
    ("output_stages.ov_latch.power_up", {(LATCH, "ov_latch"): ["output_stages.ov_latch.power_up"]}),
)  # fmt: skip


@pytest.mark.parametrize(("fact", "expected"), OPEN, ids=[fact for fact, _ in OPEN])
def test_missing_fact_is_open_and_named(fact: str, expected: dict[tuple[str, str], list[str]]) -> None:
    said = judged(without(fact), RULES)
    assert {key: list(said[key].missing) for key in of_kind(said, Kind.OPEN)} == expected
    assert of_kind(said, Kind.FAIL) == []


def test_all_that_is_missing_is_named_at_once() -> None:
    patch = without(
        "output_stages.rst_out.leakage", "output_stages.rst_out.hold.coupling", "output_stages.rst_out.load",
        "resets.por_n.receivers", "rails.avdd.nominal", "rails.avdd.rise",
    )  # fmt: skip
    assert set(one(patch, STRENGTH, "rst_out").missing) == {
        "output_stages.rst_out.leakage", "output_stages.rst_out.hold.coupling", "output_stages.rst_out.load",
        "resets.por_n.receivers.leakage", "resets.por_n.receivers.threshold", "rails.avdd.nominal", "rails.avdd.rise",
    }  # fmt: skip
    everyone = without("references.ref_fast.consumes", "comparators.ov.consumes", "domains.aon.budget")
    assert set(one(everyone, BUDGET, "aon").missing) == {
        "references.ref_fast.consumes", "comparators.ov.consumes", "domains.aon.budget",
    }  # fmt: skip


def test_a_hold_that_is_not_described_is_asked_for_by_one_rule() -> None:
    last, inner = without("output_stages.rst_out.hold"), without("output_stages.gather.hold")
    for rule in OF_A_HOLD:
        said = one(last, rule, "rst_out")
        assert said.kind is Kind.NOT_APPLICABLE
        assert said.message == "it is not said what holds its output (passive_default/held asks for it)"
    for rule in (LEVEL, STRENGTH, DRIVER):
        said = one(inner, rule, "gather")
        assert said.kind is Kind.NOT_APPLICABLE
        assert said.message == "it is not said what holds its output (passive_default/chain_alive asks for it)"


# passive_default/held


def test_net_without_a_hold() -> None:
    said = one("output_stages: {rst_out: {hold: none}}", HELD, "por_n")
    assert said.kind is Kind.FAIL
    assert said.message == "nothing holds the output of rst_out, which drives it"
    assert said.mend == "hold the output of rst_out low through a resistor"
    assert said.at == "resets.por_n.driven_by"
    assert path_text(said.path) == "rst_out drives por_n"


def test_net_that_a_comparator_drives_is_not_held() -> None:
    said = one("resets: {core_rst_n: {driven_by: [uv_core]}}", HELD, "core_rst_n")
    assert said.kind is Kind.FAIL
    assert said.message == "driven directly by uv_core: the output of a comparator has no hold"
    assert said.mend == "put a stage with an output held low between uv_core and the net"
    assert path_text(said.path) == "uv_core drives core_rst_n"


def test_one_held_driver_of_several_is_not_enough() -> None:
    said = one("resets: {por_n: {driven_by: [rst_out, uv, uv_out, ov_out]}}", HELD, "por_n")
    assert said.kind is Kind.FAIL
    assert said.message == (
        "driven directly by uv: the output of a comparator has no hold; "
        "nothing holds the output of uv_out and of ov_out, which drives it"
    )
    both = one("resets: {por_n: {driven_by: [rst_out, core_out]}}", HELD, "por_n")
    assert (both.kind, both.message) == (Kind.PASS, "held by rst_out and core_out")


def test_net_without_drivers_is_open() -> None:
    assert one("resets: {por_n: {driven_by: []}}", HELD, "por_n").missing == ("resets.por_n.driven_by",)


def test_unheld_net_fails_although_another_hold_is_not_described() -> None:
    patch = """
output_stages: {rst_out: {hold: none}, core_out: {hold: null}}
resets: {por_n: {driven_by: [rst_out, core_out]}}
"""
    assert one(patch, HELD, "por_n").kind is Kind.FAIL


# passive_default/chain_alive


def test_what_comes_after_a_hold() -> None:
    assert one("", ALIVE, "rst_out").message == "no stage comes after its hold"
    assert one("", ALIVE, "gather").message == "every stage after its hold is held too"
    said = one(stretch(inverting=False), ALIVE, "gather")
    assert (said.kind, said.message) == (Kind.PASS, "alive after its hold: stretch")


def test_stage_in_a_switched_domain_loses_the_hold_before_it() -> None:
    said = one(stretch(domain="analog"), ALIVE, "gather")
    assert said.kind is Kind.FAIL
    assert said.message == "stretch comes after its hold, is not held, and lives in analog, which is switched"
    assert said.mend == "hold the output of stretch too, or move it to a domain that is always on and up with avdd"
    assert path_text(said.path) == "gather drives stretch"
    held = stretch(domain="analog", hold={"to": "low", "through": "resistor", "resistance": "900 Mohm"})
    assert one(held, ALIVE, "gather").kind is Kind.PASS


def test_gated_stage_loses_the_hold_before_it() -> None:
    said = one(stretch(gated_by="core_rst_n"), ALIVE, "gather")
    assert said.message == "stretch comes after its hold, is not held, and works only when core_rst_n enables it"
    assert said.kind is Kind.FAIL


def test_stage_on_a_later_rail_loses_the_hold_before_it() -> None:
    said = one(stretch(domain="core"), ALIVE, "gather")
    assert said.kind is Kind.FAIL
    assert said.message == "stretch comes after its hold, is not held, and lives on vcore, which comes up after avdd"


def test_stage_on_an_earlier_rail_is_alive() -> None:
    assert one(stretch(stages(gather={"domain": "core"})), ALIVE, "gather").kind is Kind.PASS


def test_rail_of_a_regulator_comes_up_after_what_the_regulator_needs() -> None:
    patch = stretch({"rails": {"vcore": {"after": None, "delay": None}}}, domain="core")
    assert one(patch, ALIVE, "gather").message.endswith("lives on vcore, which comes up after avdd")


@pytest.mark.parametrize("held_on", ["aon", "core"])
def test_rails_of_which_the_order_is_not_given(held_on: str) -> None:
    also = {
        **stages(gather={"domain": held_on}),
        "rails": {"vio": {"nominal": "3.3 V"}},
        "domains": {"io": {"rail": "vio", "kind": "always_on"}},
    }
    said = one(stretch(also, domain="io"), ALIVE, "gather")
    if held_on == "aon":  # nothing is said about what comes before avdd
        assert (said.kind, said.missing) == (Kind.OPEN, ("rails.avdd.after",))
    else:  # vcore has its predecessors, and vio is none of them
        assert said.kind is Kind.FAIL
        assert said.message.endswith("lives on vio, which is not among the rails that are up before vcore")


def test_rails_that_come_after_each_other_do_not_hang() -> None:
    patch = stretch({"rails": {"avdd": {"after": "vcore", "delay": "1 ms"}}}, domain="core")
    assert one(patch, ALIVE, "gather").kind in (Kind.PASS, Kind.FAIL)


CHAIN_OPEN: Final = (
    (stretch(domain=None), "output_stages.stretch.domain"),
    (stretch({"domains": {"core": {"kind": None}}}, domain="core"), "domains.core.kind"),
    (stretch({"domains": {"core": {"rail": None}}}, domain="core"), "domains.core.rail"),
    (stretch(domain="core", hold=None), "output_stages.stretch.hold"),
    (stretch(stages(gather={"domain": None})), "output_stages.gather.domain"),
)


@pytest.mark.parametrize(("patch", "missing"), CHAIN_OPEN, ids=[missing for _, missing in CHAIN_OPEN])
def test_chain_is_open_without_what_tells_whether_it_is_alive(patch: str, missing: str) -> None:
    said = one(patch, ALIVE, "gather")
    assert (said.kind, said.missing) == (Kind.OPEN, (missing,))


def test_the_last_stage_is_judged_by_one_rule_alone() -> None:
    patch = "output_stages: {rst_out: {hold: none, domain: analog}}"
    said = one(patch, ALIVE, "gather")
    assert said.kind is Kind.NOT_APPLICABLE
    assert said.message == "the output of rst_out is not held (passive_default/held says so)"
    assert set(of_kind(judged(patch, RULES), Kind.FAIL)) == {(HELD, "por_n")}


def test_a_stage_that_leads_to_no_reset_net_is_no_part_of_the_chain() -> None:
    patch = """
output_stages:
  monitor: {driven_by: [gather], domain: analog, kind: buffer, threshold: {min: 0.4 V, max: 1.25 V}, hold: none}
"""
    assert one(patch, ALIVE, "gather").kind is Kind.PASS
    held = patch.replace("hold: none", "hold: {to: high, through: resistor, resistance: 1 Mohm}")
    for rule, why in ((ALIVE, "no reset net lies behind it"), (LEVEL, "no reset net lies behind it"),
                      (STRENGTH, "it drives nothing"), (DRIVER, "it drives nothing")):  # fmt: skip
        said = one(held, rule, "monitor")
        assert (said.kind, said.message) == (Kind.NOT_APPLICABLE, why)


# passive_default/level


def test_hold_to_the_wrong_level() -> None:
    said = one("output_stages: {rst_out: {hold: {to: high}}}", LEVEL, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "held high, it leaves por_n high, which resets when low"
    assert said.mend == "hold its output low"
    assert said.at == "output_stages.rst_out.hold.to"
    assert path_text(said.path) == "rst_out drives por_n"


@pytest.mark.parametrize(
    "inverts", ["inverting: true", "inverting: true, kind: schmitt", "inverting: null, kind: inverter"]
)
def test_a_stage_that_inverts_after_the_hold_turns_its_level(inverts: str) -> None:
    patch = f"output_stages: {{rst_out: {{{inverts}}}, core_out: {{driven_by: [uv_core]}}}}"
    said = one(patch, LEVEL, "gather")
    assert said.kind is Kind.FAIL
    assert said.message == "held low, it leaves por_n high, which resets when low"
    assert said.mend == "hold its output high"
    assert path_text(said.path) == "gather drives rst_out drives por_n"
    assert one(patch, LEVEL, "rst_out").kind is Kind.PASS, "its own output is held behind its inversion"


def test_two_inversions_undo_each_other() -> None:
    alone = {"driven_by": ["uv_core"]}  # the other net goes its own way
    twice = stretch(stages(rst_out={"inverting": True}, core_out=alone), kind="inverter")
    assert one(twice, LEVEL, "gather").message == "held low, it leaves por_n low"
    assert one(stretch(kind="inverter"), LEVEL, "gather").kind is Kind.FAIL


def test_kind_that_says_nothing_of_inversion_is_open() -> None:
    said = one("output_stages: {rst_out: {inverting: null, kind: delay}}", LEVEL, "gather")
    assert said.missing == ("output_stages.rst_out.inverting",)


def test_every_net_and_every_way_counts() -> None:
    nets = "resets: {rst: {driven_by: [rst_out], active: high, guards: [adc]}}"
    said = one(nets, LEVEL, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "held low, it leaves rst low, which resets when high"
    assert said.mend == "one inversion more, or one less, on the way shown"
    ways = stretch({"resets": {"por_n": {"driven_by": ["rst_out", "gather"]}}}, kind="inverter")
    said = one(ways, LEVEL, "gather")
    assert said.mend == "one inversion more, or one less, on the way shown"
    assert path_text(said.path) == "gather drives stretch drives rst_out drives por_n"
    right = "resets: {also_n: {driven_by: [rst_out], active: low, guards: [adc]}}"
    assert one(right, LEVEL, "rst_out").message == "held low, it leaves por_n low and also_n low"


@pytest.mark.parametrize("inverting", [False, True])
def test_stages_that_drive_each_other_in_a_loop_do_not_hang(inverting: bool) -> None:
    loop = stages(gather={"driven_by": ["por_out", "stretch"]}, rst_out={"inverting": inverting})
    said = judged(stretch(loop), RULES)
    assert said[LEVEL, "gather"].kind is (Kind.FAIL if inverting else Kind.PASS)
    assert said[ALIVE, "gather"].kind is Kind.PASS
    own = "output_stages: {rst_out: {driven_by: [gather, rst_out]}}"
    assert judged(own, RULES)[LEVEL, "rst_out"].kind is Kind.PASS


def test_an_inverting_loop_behind_a_hold_leaves_no_level() -> None:
    # two stages behind the hold drive each other, and an odd number of them inverts
    ring = stretch(driven_by=["gather", "rst_out"], kind="inverter")
    said = one(ring, LEVEL, "gather")
    assert (said.kind, said.mend) == (Kind.FAIL, "one inversion more, or one less, on the way shown")


# passive_default/hold_strength


def test_strength_of_the_sound_example_against_the_node_equation() -> None:
    said = one("", STRENGTH, "rst_out")
    # 20 nA from the stage and 2 nA from its receivers, 1.2 Mohm at the most; 1.8 V in 50 us through 4 fF of 400 fF
    leaks_v = (20e-9 + 2e-9) * 1.2e6
    adds_v = ramp_v(hold_ohm=1.2e6, coupling_f=4e-15, total_f=400e-15, slope_v_per_s=1.8 / 50e-6, ramp_s=50e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(leaks_v + adds_v, rel=1e-7)
    assert said.measure.need == 0.45
    assert said.message == "not driven, it rises to 26.57 mV, at most 450 mV needed"
    assert said.why == (
        "26.4 mV from 22 nA through 1.2 Mohm + 172.8 uV from a ramp of 36 V/ms; por_n surely reads low up to 450 mV"
    )


def test_ramp_that_is_short_against_the_node() -> None:
    # tau = 1.2 Mohm * 4 pF = 4.8 us against a rise of 1 us: the node follows the capacitive divider, nearly
    patch = """
output_stages: {rst_out: {load: {min: 4 pF, max: 9 pF}, hold: {coupling: {min: 0 fF, max: 0.8 pF}}}}
rails: {avdd: {rise: {min: 1 us, max: 20 ms}}}
"""
    said = one(patch, STRENGTH, "rst_out")
    adds_v = ramp_v(hold_ohm=1.2e6, coupling_f=0.8e-12, total_f=4e-12, slope_v_per_s=1.8e6, ramp_s=1e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(22e-9 * 1.2e6 + adds_v, rel=1e-7)
    assert 0.3 < adds_v < 1.8 * 0.8 / 4


def test_too_weak_a_hold_and_the_one_that_would_do() -> None:
    said = one("resets: {por_n: {receivers: {leakage: {max: 500 nA}}}}", STRENGTH, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "not driven, it rises to 624.2 mV, at most 450 mV needed"
    assert said.why == (
        "624 mV from 520 nA through 1.2 Mohm + 172.8 uV from a ramp of 36 V/ms; por_n surely reads low up to 450 mV"
    )

    def above_v(hold_ohm: float) -> float:
        tau_s = hold_ohm * 400e-15
        coupled_v = hold_ohm * 4e-15 * 36e3 * -math.expm1(-50e-6 / tau_s)
        return 520e-9 * hold_ohm + coupled_v - 0.45

    largest_ohm = brentq(above_v, 1e3, 1e7, xtol=1e-3)
    assert math.floor(largest_ohm / 1e3) == 865  # rounded down: a larger one would not do
    assert said.mend == "a hold of 865 kohm or less; now up to 1.2 Mohm"
    assert said.at == "output_stages.rst_out.hold.resistance"


@pytest.mark.parametrize(("threshold", "kind"), [("26.39", "fail"), ("26.4", "pass"), ("26.41", "pass")])
def test_strength_at_its_limit(threshold: str, kind: str) -> None:
    # without coupling the level is 22 nA * 1.2 Mohm = 26.4 mV
    patch = f"""
output_stages: {{rst_out: {{hold: {{coupling: 0 fF}}}}}}
resets: {{por_n: {{receivers: {{threshold: {{min: {threshold} mV, max: 1.2 V}}}}}}}}
"""
    said = one(patch, STRENGTH, "rst_out")
    assert said.kind == kind
    assert said.why.startswith("26.4 mV from 22 nA through 1.2 Mohm; por_n")


def test_without_coupling_neither_load_nor_ramp_is_asked_for() -> None:
    patch = """
output_stages: {rst_out: {hold: {coupling: 0 fF}, load: null, domain: null}}
rails: {avdd: {rise: null, nominal: null}}
"""
    assert one(patch, STRENGTH, "rst_out").kind is Kind.PASS


def test_the_strictest_reader_decides() -> None:
    patch = """
output_stages: {rst_out: {threshold: {min: 0.4 V, max: 1.25 V}}}
resets:
  also_n: {driven_by: [rst_out], active: low, receivers: {threshold: {min: 0.2 V, max: 1.3 V}, leakage: 8 nA}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert "36 mV from 30 nA through 1.2 Mohm" in strength.why  # 20 + 2 + 8 nA
    assert strength.why.endswith("also_n surely reads low up to 200 mV")
    assert driver.why.endswith("also_n surely reads high from 1.3 V on")


# Input levels at a pin, as quoted by others from the JEDEC JESD8 family (second-hand; see lint/physics/logic_levels.py)
STANDARD_LEVELS: Final = (
    # standard, rail of the stage and the receivers least and most, low up to, high from
    ("JESD8-7A", "1.71 V", "1.89 V", 0.35 * 1.71, 0.65 * 1.71),
    ("JESD8-5A.01", "2.4 V", "2.6 V", 0.7, 1.7),
    ("JESD8C.01", "3.0 V", "3.6 V", 0.8, 2.0),
)


@pytest.mark.parametrize(("standard", "least", "most", "low_v", "high_v"), STANDARD_LEVELS)
def test_receivers_at_a_pin_keep_a_published_standard(
    standard: str, least: str, most: str, low_v: float, high_v: float
) -> None:
    patch = f"""
rails: {{avdd: {{delivered: {{min: {least}, max: {most}}}}}}}
resets: {{por_n: {{receivers: {{threshold: null, levels: {standard}}}}}}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert strength.measure is not None
    assert driver.measure is not None
    assert strength.measure.need == pytest.approx(low_v, rel=1e-12)
    assert driver.measure.need == pytest.approx(high_v, rel=1e-12)
    assert f"por_n ({standard}) surely reads low" in strength.why


def test_standard_on_another_rail_is_taken_at_the_end_that_is_worst() -> None:
    patch = """
output_stages: {rst_out: {drive: 8 kohm}}
resets: {por_n: {domain: core, receivers: {threshold: null, levels: JESD8-12A.01}}}
"""
    strength, driver = one(patch, STRENGTH, "rst_out"), one(patch, DRIVER, "rst_out")
    assert strength.measure is not None
    assert driver.measure is not None
    assert strength.measure.need == pytest.approx(0.35 * 1.14)  # the least that vcore delivers
    assert driver.measure.need == pytest.approx(0.65 * 1.26)  # the most


def test_standard_outside_its_supply_range_is_open() -> None:
    said = one("resets: {por_n: {receivers: {threshold: null, levels: JESD8C.01}}}", STRENGTH, "rst_out")
    assert said.kind is Kind.OPEN
    assert said.message == (
        "the numbers given lie outside the range of the formula: supply_v must lie in 2.7 to 3.6 (found 1.71)"
    )


def test_a_threshold_beside_a_standard_counts_too() -> None:
    both = "resets: {por_n: {receivers: {threshold: {min: 0.2 V, max: 1.5 V}, levels: JESD8-7A}}}"
    assert one(both, STRENGTH, "rst_out").why.endswith("por_n surely reads low up to 200 mV")
    loose = "resets: {por_n: {receivers: {threshold: {min: 0.8 V, max: 0.9 V}, levels: JESD8-7A}}}"
    assert one(loose, STRENGTH, "rst_out").why.endswith("por_n (JESD8-7A) surely reads low up to 598.5 mV")


def test_standard_asks_for_the_domain_of_the_receivers() -> None:
    patch = "resets: {por_n: {domain: null, receivers: {threshold: null, levels: JESD8-7A}}}"
    assert one(patch, STRENGTH, "rst_out").missing == ("resets.por_n.domain",)


# A hold to the rail: levels count from the rail downwards


def test_hold_to_high_counts_from_the_least_supply() -> None:
    said = one(high(), STRENGTH, "rst_out")
    # the node stays behind the ramp by what charges its whole load through the hold
    behind_v = ramp_v(hold_ohm=1.2e6, coupling_f=400e-15, total_f=400e-15, slope_v_per_s=36e3, ramp_s=50e-6)
    assert said.measure is not None
    assert said.measure.have == pytest.approx(1.71 - 22e-9 * 1.2e6 - behind_v, rel=1e-7)
    assert said.measure.need == 1.2
    assert said.message == "not driven, it stays up at 1.666 V, at least 1.2 V needed"
    assert said.why == (
        "1.71 V less 26.4 mV from 22 nA through 1.2 Mohm + 17.28 mV from a ramp of 36 V/ms; "
        "por_n surely reads high from 1.2 V on"
    )
    assert of_kind(judged(high(), RULES), Kind.FAIL, Kind.OPEN) == []


@pytest.mark.parametrize(("threshold", "kind"), [("1.6835", "pass"), ("1.6836", "pass"), ("1.6837", "fail")])
def test_hold_to_high_at_its_limit(threshold: str, kind: str) -> None:
    # without load nothing stays behind: 1.71 V - 26.4 mV = 1.6836 V
    patch = high("load: 0 fF", f"receivers: {{threshold: {{min: 0.45 V, max: {threshold} V}}}}")
    assert one(patch, STRENGTH, "rst_out").kind == kind


def test_too_weak_a_hold_to_high() -> None:
    patch = high("load: 0 fF", "receivers: {leakage: {max: 480 nA}}")
    said = one(patch, STRENGTH, "rst_out")
    assert said.message == "not driven, it stays up at 1.11 V, at least 1.2 V needed"
    assert said.mend == "a hold of 1.02 Mohm or less; now up to 1.2 Mohm"  # 510 mV / 500 nA


def test_no_hold_to_high_does_where_the_supply_does_not_reach_the_reader() -> None:
    said = one(high("", "receivers: {threshold: {min: 0.45 V, max: 1.72 V}}"), STRENGTH, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.mend == "no hold will do: a supply, or a reader, with room between the two levels"


# passive_default/driver_wins


@pytest.mark.parametrize(("threshold", "kind"), [("1.367", "pass"), ("1.368", "pass"), ("1.369", "fail")])
def test_driver_against_a_hold_to_low_at_its_limit(threshold: str, kind: str) -> None:
    # 1.71 V * 800/(800 + 200) = 1.368 V
    patch = f"""
output_stages: {{rst_out: {{drive: 200 kohm}}}}
resets: {{por_n: {{receivers: {{threshold: {{min: 0.45 V, max: {threshold} V}}}}}}}}
"""
    assert one(patch, DRIVER, "rst_out").kind == kind


def test_driver_that_loses_against_a_hold_to_low() -> None:
    said = one("output_stages: {rst_out: {drive: {max: 400 kohm}}}", DRIVER, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.message == "driven high, it reaches 1.14 V, at least 1.2 V needed"
    assert said.why == (
        "1.71 V through 400 kohm of drive against a hold of 800 kohm; por_n surely reads high from 1.2 V on"
    )
    # 400 kohm * 1.2/(1.71 - 1.2) = 941.18 kohm, rounded up: a smaller one would not do
    assert said.mend == "a hold of 942 kohm or more; now down to 800 kohm"


@pytest.mark.parametrize(("threshold", "kind"), [("0.379", "pass"), ("0.378", "pass"), ("0.377", "fail")])
def test_driver_against_a_hold_to_high_at_its_limit(threshold: str, kind: str) -> None:
    # 1.89 V * 200/(800 + 200) = 0.378 V
    patch = high("drive: 200 kohm", f"receivers: {{threshold: {{min: {threshold} V, max: 1.2 V}}}}")
    assert one(patch, DRIVER, "rst_out").kind == kind


def test_driver_that_loses_against_a_hold_to_high() -> None:
    said = one(high("drive: 300 kohm"), DRIVER, "rst_out")
    assert said.message == "driven low, it comes down to 515.5 mV, at most 450 mV needed"
    assert said.why == (
        "1.89 V through 300 kohm of drive against a hold of 800 kohm; por_n surely reads low up to 450 mV"
    )
    assert said.mend == "a hold of 960 kohm or more; now down to 800 kohm"  # 300 kohm * 1.44/0.45


def test_no_hold_does_for_a_reader_above_the_supply_of_its_driver() -> None:
    said = one("output_stages: {rst_out: {domain: core}}", DRIVER, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.mend == "no hold will do: a supply, or a reader, with room between the two levels"


def test_reader_that_is_low_at_any_level_is_no_error() -> None:
    said = one(high("", "receivers: {threshold: {min: 2 V, max: 2.2 V}}"), DRIVER, "rst_out")
    assert said.kind is Kind.PASS


# passive_default/holds_within_budget

TAKEN_A: Final = math.fsum(
    (
        1.89 / 1.6e6, 1.89 / 0.8e6, 1.89 / 0.8e6,  # holds of gather, rst_out and core_out at their least
        1.2e-6, 0.2e-6, 0.4e-6, 0.35e-6, 0.35e-6, 0.35e-6,  # reference, bias and four comparators
        10e-9, 20e-9, 20e-9,  # leakage of the three stages
    )
)  # fmt: skip


@pytest.mark.parametrize(("budget", "kind"), [("8.80624", "fail"), ("8.80625", "pass"), ("8.80626", "pass")])
def test_budget_at_its_limit(budget: str, kind: str) -> None:
    said = one(f"domains: {{aon: {{budget: {budget} uA}}}}", BUDGET, "aon")
    assert pytest.approx(8.80625e-6, rel=1e-12) == TAKEN_A
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A, rel=1e-12)
    assert said.kind == kind


def test_budget_that_is_exceeded() -> None:
    said = one("domains: {aon: {budget: 5 uA}}", BUDGET, "aon")
    assert said.message == "its holds and circuits take 8.806 uA, at most 5 uA needed"
    assert said.why == (
        "hold of rst_out 2.362 uA, hold of core_out 2.362 uA, ref_fast 1.2 uA, hold of gather 1.181 uA, 8 more 1.7 uA"
    )
    assert said.mend == "take 3.81 uA less, or a budget of at least 8.81 uA"


def test_what_a_stage_is_said_to_take_counts() -> None:
    said = one("output_stages: {por_out: {consumes: {typ: 0.1 uA, max: 0.3 uA}}}", BUDGET, "aon")
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A + 0.3e-6, rel=1e-12)
    assert said.kind is Kind.FAIL


def test_stage_that_is_moved_takes_its_hold_along() -> None:
    said = judged("output_stages: {rst_out: {domain: core}}", RULES)
    here, there = said[BUDGET, "aon"].measure, said[BUDGET, "core"].measure
    assert here is not None
    assert there is not None
    assert here.have == pytest.approx(TAKEN_A - 1.89 / 0.8e6 - 20e-9, rel=1e-12)
    assert there.have == pytest.approx(1.26 / 0.8e6 + 20e-9, rel=1e-12)


# passive_default/latch_state


def test_latch_that_comes_up_either_way() -> None:
    said = one("output_stages: {ov_latch: {power_up: undefined}}", LATCH, "ov_latch")
    assert (said.kind, said.message) == (Kind.FAIL, "it comes up in either state")
    assert said.mend == "let a power-on detector set or reset it, or make it lopsided"
    assert one("", LATCH, "ov_latch").message == "it releases when its supply comes up"
    asserts = one("output_stages: {ov_latch: {power_up: asserts}}", LATCH, "ov_latch")
    assert asserts.message == "it asserts when its supply comes up"
