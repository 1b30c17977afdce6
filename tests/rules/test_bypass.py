"""Bypass: where each rule passes, fails, asks and stays open."""

from __future__ import annotations

import json
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.rule import Rule
from tidegate.rules.bypass import RULES

PASS, FAIL, OPEN, REVIEW, NONE = Kind.PASS, Kind.FAIL, Kind.OPEN, Kind.REVIEW, Kind.NOT_APPLICABLE

PRESENT: Final = "bypass/present"
INDEPENDENT: Final = "bypass/independent"
UP: Final = "bypass/control_up"
INACTIVE: Final = "bypass/default_inactive"
HELD: Final = "bypass/default_held"
LOCKED: Final = "bypass/locked"
READABLE: Final = "bypass/readable"
CAUTION: Final = "bypass/over_voltage_caution"


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def skip_core(**facts: Any) -> str:
    """A patch of the override of uv_core."""
    return json.dumps({"bypasses": {"skip_core": facts}})


def test_sound_example_keeps_every_rule_but_for_one_agreed_caution() -> None:
    judgements = judged("", RULES)
    assert of_kind(judgements, FAIL, OPEN) == []
    assert of_kind(judgements, REVIEW) == [(CAUTION, "skip_resets")]
    assert judgements[CAUTION, "skip_resets"].waiver


# What each example changes.
FAULTS: Final = {
    PRESENT: {(PRESENT, "uv_core"): FAIL},
    INDEPENDENT: {(INDEPENDENT, "skip_core"): FAIL},
    UP: {(UP, "skip_core"): FAIL},
    INACTIVE: {(INACTIVE, "skip_core"): FAIL},
    HELD: {(HELD, "skip_core"): FAIL},
    LOCKED: {(LOCKED, "skip_core"): FAIL},
    READABLE: {(READABLE, "skip_core"): FAIL},
    CAUTION: {(CAUTION, "skip_core"): REVIEW},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_is_one_fault(rule: Rule) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]
    assert changed(rule.example.holds, RULES) == {}


def test_levels() -> None:
    warnings = {rule.id for rule in RULES if rule.level is Level.WARNING}
    assert warnings == {READABLE, CAUTION}
    assert {rule.level for rule in RULES} == {Level.WARNING, Level.ERROR}


# present


def test_a_detector_without_override_fails() -> None:
    judgement = one("bypasses: {skip_core: null}", PRESENT, "uv_core")
    assert judgement.message == "no override takes it out of the way to core_rst_n"
    assert judgement.why == ""
    assert judgement.mend == ("an override that forces released, on uv_core, or on core_out, which every way passes")
    assert path_text(judgement.path) == "uv_core drives core_out drives core_rst_n"
    several = one("bypasses: {skip_resets: {forces: asserted}}", PRESENT, "uv")
    assert several.message == "no override takes it out of the way to por_n and core_rst_n"
    assert several.why == "skip_resets can only force the reset, not lift it"
    assert several.mend == "an override that forces released, on uv, or on uv_out, which every way passes"
    assert path_text(several.path) == "uv drives uv_out drives gather drives rst_out drives por_n"


@pytest.mark.parametrize("where", ["uv_core", "core_out", "core_rst_n"])
def test_an_override_on_every_way_will_do(where: str) -> None:
    judgement = one(skip_core(overrides=where), PRESENT, "uv_core")
    assert judgement.kind is PASS
    assert judgement.message == "can be taken out of the way to core_rst_n"
    assert judgement.why == "by skip_core"


TWO_WAYS: Final = """
output_stages:
  beside: {driven_by: [uv_core], domain: aon, kind: buffer}
resets: {core_rst_n: {driven_by: [core_out, beside], combine: any_asserts}}
"""


def test_an_override_on_one_of_two_ways_will_not_do() -> None:
    patch = TWO_WAYS + "bypasses: {skip_core: {overrides: core_out}}"
    judgement = one(patch, PRESENT, "uv_core")
    assert judgement.kind is FAIL
    assert path_text(judgement.path) == "uv_core drives beside drives core_rst_n"
    assert judgement.mend == "an override that forces released, on uv_core"
    two = TWO_WAYS + "bypasses: {skip_core: {overrides: core_out}, skip_beside: {overrides: beside, forces: released}}"
    assert one(two, PRESENT, "uv_core").kind is PASS
    assert one(TWO_WAYS + "bypasses: {skip_core: {overrides: core_rst_n}}", PRESENT, "uv_core").kind is PASS


def test_one_way_is_enough_where_all_drivers_must_agree() -> None:
    agree = TWO_WAYS.replace("any_asserts", "all_agree") + "bypasses: {skip_core: {overrides: core_out}}"
    assert one(agree, PRESENT, "uv_core").kind is PASS
    unsaid = TWO_WAYS.replace("any_asserts", "null") + "bypasses: {skip_core: {overrides: core_out}}"
    assert one(unsaid, PRESENT, "uv_core").missing == ("resets.core_rst_n.combine",)


def test_an_override_that_asserts_takes_nothing_out() -> None:
    judgement = one(skip_core(forces="asserted"), PRESENT, "uv_core")
    assert judgement.kind is FAIL
    assert judgement.why == "skip_core can only force the reset, not lift it"


def test_present_asks_once_for_overrides_of_which_nothing_is_said() -> None:
    """A section that is left out is one question of the subsystem, and no failure of each detector."""
    left_out = "{bypasses: null, waivers: null, complete: [comparators, resets, output_stages]}"
    asked = {key: said for key, said in judged(left_out, RULES).items() if said.kind is OPEN}
    assert set(asked) == {(PRESENT, detector) for detector in ("por", "uv", "ov", "uv_core")}
    assert {said.missing for said in asked.values()} == {("bypasses",)}
    assert asked[PRESENT, "uv_core"].message == (
        "nothing is said of an override that takes it out of the way to core_rst_n"
    )
    none = judged("{bypasses: none, waivers: null, complete: [comparators]}", RULES)
    assert {key for key, said in none.items() if said.kind is FAIL} == set(asked)


def test_a_detector_beside_others_that_are_overridden_is_asked_about() -> None:
    """skip_resets is described, and nobody says that there is no other override."""
    said = one("{bypasses: {skip_core: null}, complete: [comparators]}", PRESENT, "uv_core")
    assert (said.kind, said.missing) == (OPEN, ("bypasses",))
    assert one("{bypasses: {skip_core: null}, complete: [comparators]}", PRESENT, "uv").kind is PASS
    # What is described, and might lift it, is asked for first.
    unsaid = "{bypasses: {skip_core: {forces: null}}, complete: [comparators]}"
    assert one(unsaid, PRESENT, "uv_core").missing == ("bypasses.skip_core.forces",)


def test_a_way_that_may_lead_past_an_override_is_asked_for() -> None:
    """The net may be driven by uv_core beside core_out; what leads to uv_core is not driven by it."""
    past = both(skip_core(overrides="core_out"), "resets: {spare_n: {active: low, guards: [adc]}}")
    assert one(past, PRESENT, "uv_core").missing == ("resets.spare_n.driven_by",)
    before = both(without("output_stages.uv_out.driven_by"))
    assert one(before, PRESENT, "uv_core").missing == ("output_stages.uv_out.driven_by",)
    assert one(before, CAUTION, "skip_core").kind is PASS  # nothing lies behind uv_core


def test_detectors_without_any_net_described_wait_for_the_nets() -> None:
    alone = "{resets: null, loads: null, domains: {analog: {switched_by: null, kind: always_on}}, waivers: null, "
    alone += "rails: {vcore: {made_by: null}}, neighbours: null, bypasses: {skip_core: {reset_by: null}}, "
    said = one(alone + "modes: null, complete: [bypasses]}", PRESENT, "uv_core")
    assert (said.kind, said.missing) == (OPEN, ("resets",))
    none = one(alone + "modes: null, complete: [bypasses, resets]}", PRESENT, "uv_core")
    assert (none.kind, none.message) == (NONE, "it drives no reset net")


def test_present_is_open_on_what_might_be_an_override() -> None:
    assert one(without("bypasses.skip_core.forces"), PRESENT, "uv_core").missing == ("bypasses.skip_core.forces",)
    assert one(without("bypasses.skip_core.overrides"), PRESENT, "uv_core").missing == ("bypasses.skip_core.overrides",)
    assert one(without("bypasses.skip_core.forces"), PRESENT, "uv").kind is PASS


def test_a_detector_that_drives_no_reset_needs_no_override() -> None:
    patch = "{output_stages: {core_out: {driven_by: [gather]}}, bypasses: {skip_core: null}}"
    judgement = one(patch, PRESENT, "uv_core")
    assert judgement.kind is NONE
    assert judgement.message == "it drives no reset net"
    unsaid = patch[:-1] + ", resets: {core_rst_n: {driven_by: null}}}"
    assert one(unsaid, PRESENT, "uv_core").missing == ("resets.core_rst_n.driven_by",)


# default_inactive, default_held, locked, readable


def test_an_override_that_is_active_by_default() -> None:
    judgement = one(skip_core(default="active"), INACTIVE, "skip_core")
    assert judgement.message == "active when nobody sets it: what it overrides is out of force in every chip"
    assert judgement.mend == "make inactive the default"
    assert judgement.at == "bypasses.skip_core.default"


def test_a_default_that_is_active_and_floats_is_one_finding() -> None:
    """That nothing holds it is told under what it rests at, with its own words."""
    assert one(skip_core(default="active"), HELD, "skip_core").kind is PASS
    floats = one(skip_core(default="active", hold="none"), HELD, "skip_core")
    assert (floats.kind, floats.under) == (NONE, INACTIVE)
    assert floats.message.startswith("nothing holds its default: a pin that nobody drives floats")
    assert one(skip_core(default=None, hold="none"), HELD, "skip_core").kind is FAIL


@pytest.mark.parametrize("control", ["pin", "test_port"])
def test_a_control_from_outside_is_held(control: str) -> None:
    hold = {"to": "low", "through": "resistor", "resistance": {"min": "80 kohm", "max": "120 kohm"}}
    held = one(skip_core(controlled_by=control, hold=hold), HELD, "skip_core")
    assert (held.kind, held.message) == (PASS, "held low through at most 120 kohm")
    floating = one(skip_core(controlled_by=control, hold="none"), HELD, "skip_core")
    assert floating.kind is FAIL
    assert floating.message == f"nothing holds its default: a {control.replace('_', ' ')} that nobody drives floats"
    assert floating.mend == "a hold resistor to the inactive level"
    assert floating.at == "bypasses.skip_core.hold"


def test_a_register_is_cleared_and_a_fuse_holds_itself() -> None:
    register = one(skip_core(controlled_by="register", reset_by="por_n", hold="none"), HELD, "skip_core")
    assert (register.kind, register.message) == (PASS, "por_n clears the register")
    fuse = one(skip_core(controlled_by="fuse", hold="none"), HELD, "skip_core")
    assert (fuse.kind, fuse.message) == (NONE, "a fuse holds its own state")


@pytest.mark.parametrize(
    ("fact", "rules"),
    [
        ("default", {INACTIVE}),
        ("controlled_by", {HELD}),
        ("hold", {HELD}),
        ("hold.to", {HELD}),
        ("hold.resistance", {HELD}),
        ("locked_outside_test", {LOCKED}),
        ("readable", {READABLE}),
        ("overrides", {INDEPENDENT, UP, CAUTION}),
        ("domain", {INDEPENDENT, UP}),
    ],
)
def test_what_is_open_about_an_override(fact: str, rules: set[str]) -> None:
    judgements = judged(without(f"bypasses.skip_core.{fact}"), RULES)
    assert {rule for rule, subject in of_kind(judgements, OPEN) if subject == "skip_core"} == rules
    for rule in rules:
        assert judgements[rule, "skip_core"].missing == (f"bypasses.skip_core.{fact}",)


def test_a_hold_of_which_nothing_is_said_names_all() -> None:
    judgement = one(without("bypasses.skip_core.hold.to", "bypasses.skip_core.hold.resistance"), HELD, "skip_core")
    assert judgement.missing == ("bypasses.skip_core.hold.to", "bypasses.skip_core.hold.resistance")


def test_an_override_that_is_not_locked_or_not_seen() -> None:
    unlocked = one(skip_core(locked_outside_test=False), LOCKED, "skip_core")
    assert unlocked.message == "can be set outside test: uv_core can be taken out in the field"
    assert unlocked.mend == "let it act only in test"
    hidden = one(skip_core(readable=False), READABLE, "skip_core")
    assert hidden.message == "its state cannot be read back: an override left active is not noticed"
    assert hidden.mend == "a status bit, or a pin that shows the state"


# over_voltage_caution


def test_a_caution_names_the_damage_level() -> None:
    judgement = one("rails: {avdd: {damage: {min: 2.4 V, max: 2.6 V}}}", CAUTION, "skip_resets")
    assert judgement.kind is REVIEW
    assert judgement.level is Level.WARNING
    assert judgement.message == (
        "lifts por_n and core_rst_n past ov: while it is active, no reset protects the loads against over-voltage"
    )
    assert judgement.why == "ov cannot assert por_n and core_rst_n then, however high the supply"
    assert judgement.mend == "limit the bench supply while it is active: avdd below 2.4 V, which damages"
    assert path_text(judgement.path) == "gather driven by ov_latch driven by ov_out driven by ov"


def test_a_caution_does_not_wait_for_the_damage_level() -> None:
    judgement = one(without("rails.avdd.damage"), CAUTION, "skip_resets")
    assert judgement.kind is REVIEW
    assert judgement.mend == "limit the bench supply while it is active: avdd below its damage level (not given)"


@pytest.mark.parametrize("where", ["ov", "ov_out", "ov_latch", "gather"])
def test_every_place_on_the_way_of_the_detector_counts(where: str) -> None:
    judgement = one(skip_core(overrides=where), CAUTION, "skip_core")
    assert judgement.kind is REVIEW
    assert judgement.path[0].element == where
    assert judgement.path[-1].element == "ov"


@pytest.mark.parametrize(("where", "net"), [("rst_out", "por_n"), ("core_out", "core_rst_n"), ("por_n", "por_n")])
def test_only_the_nets_that_are_lost_are_named(where: str, net: str) -> None:
    judgement = one(skip_core(overrides=where), CAUTION, "skip_core")
    assert judgement.why == f"ov cannot assert {net} then, however high the supply"


BESIDE: Final = """
output_stages: {beside: {driven_by: [ov], domain: aon, kind: inverter}}
resets:
  por_n: {driven_by: [rst_out, beside], combine: COMBINE}
  core_rst_n: {driven_by: [core_out, beside], combine: COMBINE}
"""


def test_a_detector_with_another_way_stays_in_force() -> None:
    judgement = one(BESIDE.replace("COMBINE", "any_asserts"), CAUTION, "skip_resets")
    assert (judgement.kind, judgement.message) == (PASS, "ov still reaches every reset net without it")
    agree = one(BESIDE.replace("COMBINE", "all_agree"), CAUTION, "skip_resets")
    assert agree.kind is REVIEW  # one released driver is enough to lift the net
    unsaid = one(BESIDE.replace("COMBINE", "null"), CAUTION, "skip_resets")
    assert unsaid.missing == ("resets.por_n.combine", "resets.core_rst_n.combine")


OV_CORE: Final = "comparators: {ov_core: {role: over_voltage, watches: vcore, domain: aon}}"


def test_several_detectors_that_stay_in_force() -> None:
    """ov_core drives both nets beside what is overridden, as ov does; one that drives no net has none to lose."""
    beside = BESIDE.replace("COMBINE", "any_asserts").replace("[ov]", "[ov_core, ov], combine: any_asserts")
    latch = "output_stages: {ov_latch: {driven_by: [ov_out, ov_core], combine: any_asserts}}"
    said = one(both(OV_CORE, beside, latch), CAUTION, "skip_resets")
    assert (said.kind, said.message) == (PASS, "ov_core and ov still reach every reset net without it")
    spare = "output_stages: {spare: {driven_by: [ov_core, ov], combine: any_asserts, domain: aon, kind: inverter}}"
    said = one(both(OV_CORE, spare, skip_core(overrides="spare")), CAUTION, "skip_core")
    assert (said.kind, said.message) == (PASS, "ov still reaches every reset net without it")


def test_several_detectors_that_are_lifted_together() -> None:
    latch = "output_stages: {ov_latch: {driven_by: [ov_out, ov_core], combine: any_asserts}}"
    said = one(both(OV_CORE, latch), CAUTION, "skip_resets")
    assert (said.kind, said.why) == (
        REVIEW, "ov_core and ov cannot assert por_n and core_rst_n then, however high the supply",
    )  # fmt: skip
    assert said.mend == (
        "limit the bench supply while it is active: vcore below 2 V, which damages and avdd below 2.5 V, which damages"
    )
    assert path_text(said.path) == "gather driven by ov_latch driven by ov_core"


def test_an_override_that_forces_the_reset_needs_no_caution() -> None:
    judgement = one("bypasses: {skip_resets: {forces: asserted}}", CAUTION, "skip_resets")
    assert (judgement.kind, judgement.message) == (NONE, "it forces the reset, and lifts none")
    assert one(without("bypasses.skip_resets.forces"), CAUTION, "skip_resets").missing == (
        "bypasses.skip_resets.forces",
    )
    assert one("", CAUTION, "skip_core").message == "lifts the reset of no over-voltage detector"


def test_a_caution_is_open_on_an_unknown_driver() -> None:
    assert one(
        skip_core(overrides="spare")[:-1] + ', "output_stages": {"spare": {"domain": "aon"}}}', CAUTION, "skip_core"
    ).missing == ("output_stages.spare.driven_by",)
