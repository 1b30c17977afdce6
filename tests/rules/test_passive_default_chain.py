from __future__ import annotations

import json
from collections.abc import Mapping
from types import MappingProxyType
from typing import Any, Final

import pytest

from tests.rules.sound import both, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.passive_default import RULES

HELD: Final = "passive_default/held"
ALIVE: Final = "passive_default/chain_alive"
LEVEL: Final = "passive_default/level"
STRENGTH: Final = "passive_default/hold_strength"
DRIVER: Final = "passive_default/driver_wins"


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


def test_the_first_of_several_stages_that_lose_the_hold_is_told() -> None:
    second = {"driven_by": ["stretch"], "domain": "analog", "kind": "buffer", "hold": "none"}
    said = one(stretch(stages(second=second, rst_out={"driven_by": ["second"]}), domain="analog"), ALIVE, "gather")
    assert said.message.startswith("stretch comes after its hold, is not held, and ")
    assert path_text(said.path) == "gather drives stretch"


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
    said = one(both(stretch(also, domain="io"), "complete: [output_stages]"), ALIVE, "gather")
    assert (said.kind, said.missing) == (Kind.OPEN, ("rails.avdd.after",))  # before which vio may come
    whole = one(stretch(also, domain="io"), ALIVE, "gather")
    rail = {"aon": "avdd", "core": "vcore"}[held_on]
    assert whole.kind is Kind.FAIL
    assert whole.message.endswith(f"lives on vio, which is not among the rails that are up before {rail}")


def test_rails_that_come_after_each_other_do_not_hang() -> None:
    patch = stretch({"rails": {"avdd": {"after": "vcore", "delay": "1 ms"}}}, domain="core")
    assert one(patch, ALIVE, "gather").kind in (Kind.PASS, Kind.FAIL)


CHAIN_OPEN: Final = (
    (stretch(domain=None), "output_stages.stretch.domain"),
    (
        stretch({**stages(gather={"domain": "core"}), "domains": {"core": {"kind": None}}}, domain="core"),
        "domains.core.kind",
    ),
    (stretch({"domains": {"core": {"rail": None}}}, domain="core"), "domains.core.rail"),
    (stretch(domain="core", hold=None), "output_stages.stretch.hold"),
    (stretch(stages(gather={"domain": None})), "output_stages.gather.domain"),
)


@pytest.mark.parametrize(("patch", "missing"), CHAIN_OPEN, ids=[missing for _, missing in CHAIN_OPEN])
def test_chain_is_open_without_what_tells_whether_it_is_alive(patch: str, missing: str) -> None:
    said = one(patch, ALIVE, "gather")
    assert (said.kind, said.missing) == (Kind.OPEN, (missing,))


def test_a_stage_that_is_dead_either_way_fails_although_its_domain_is_not_known() -> None:
    """core is on vcore, which comes up after avdd: switched or not, it is dead while gather is held."""
    said = one(stretch({"domains": {"core": {"kind": None}}}, domain="core"), ALIVE, "gather")
    assert said.kind is Kind.FAIL
    unknown = stretch(stages(second={"driven_by": ["stretch"], "hold": "none"}, rst_out={"driven_by": ["second"]}),
                      domain="analog")  # fmt: skip
    assert one(unknown, ALIVE, "gather").kind is Kind.FAIL  # nothing is said of where second lives


def test_the_last_stage_is_judged_by_one_rule_alone() -> None:
    patch = "output_stages: {rst_out: {hold: none, domain: analog}}"
    said = one(patch, ALIVE, "gather")
    assert said.kind is Kind.PASS
    assert said.message == "no stage that is not held stands between its hold and the last one"
    assert set(of_kind(judged(patch, RULES), Kind.FAIL)) == {(HELD, "por_n")}


def test_what_may_be_driven_by_a_held_stage_is_asked_for() -> None:
    """A net or stage that does not say what drives it may come after the hold; what drives the hold does not."""
    spare = stretch({"resets": {"spare_n": {"active": "low", "guards": ["adc"]}}})
    for rule in (ALIVE, LEVEL, STRENGTH, DRIVER):
        said = one(spare, rule, "gather")
        assert (said.kind, said.missing) == (Kind.OPEN, ("resets.spare_n.driven_by",))
    before = both(stretch(), without("output_stages.uv_out.driven_by"))
    assert [one(before, rule, "gather").kind for rule in (ALIVE, LEVEL, STRENGTH, DRIVER)] == [Kind.PASS] * 4


def test_nets_that_are_not_described_may_lie_behind_a_hold() -> None:
    nowhere = both("{resets: null, domains: {analog: {switched_by: rst_out}}, complete: [output_stages]}")
    assert one(nowhere, LEVEL, "rst_out").missing == ("resets",)
    none = both(nowhere, "complete: [resets]")
    assert (one(none, LEVEL, "rst_out").kind, one(none, LEVEL, "rst_out").message) == (
        Kind.NOT_APPLICABLE, "no reset net lies behind it",
    )  # fmt: skip


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
    assert (said.kind, said.missing) == (Kind.OPEN, ("output_stages.rst_out.inverting",))
    assert said.message.endswith("it holds where inverting of rst_out is false")
    # Where the level arrives wrong on another way, it is wrong whatever the stage does.
    wrong = "output_stages: {rst_out: {inverting: null, kind: delay}, core_out: {inverting: true}}"
    assert one(wrong, LEVEL, "gather").kind is Kind.FAIL


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
    assert path_text(one(right, LEVEL, "rst_out").path) == "rst_out drives por_n"
    two = "resets: {rst: {driven_by: [rst_out], active: high}, rst2: {driven_by: [rst_out], active: high}}"
    said = one(two, LEVEL, "rst_out")
    assert said.message == "held low, it leaves rst low, which resets when high"
    assert path_text(said.path) == "rst_out drives rst"


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
