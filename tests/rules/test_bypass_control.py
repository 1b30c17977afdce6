"""Bypass: whether the control of an override stands on its own, and is up when it is needed."""

from __future__ import annotations

import json
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.bypass import RULES

PASS, FAIL, OPEN, REVIEW, NONE = Kind.PASS, Kind.FAIL, Kind.OPEN, Kind.REVIEW, Kind.NOT_APPLICABLE

INDEPENDENT: Final = "bypass/independent"
UP: Final = "bypass/control_up"
HELD: Final = "bypass/default_held"


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def skip_core(**facts: Any) -> str:
    """A patch of the override of uv_core."""
    return json.dumps({"bypasses": {"skip_core": facts}})


def test_a_register_cleared_by_what_it_overrides() -> None:
    judgement = one(skip_core(controlled_by="register", reset_by="core_rst_n"), INDEPENDENT, "skip_core")
    assert judgement.kind is FAIL
    assert judgement.message == "leans on what it overrides: it is cleared by core_rst_n, which uv_core drives"
    assert judgement.why == "while uv_core holds reset, the override that should lift it cannot be set"
    assert judgement.mend == "clear it by a reset that uv_core does not drive"
    assert path_text(judgement.path) == (
        "skip_core cleared by core_rst_n driven by core_out driven by uv_core overridden by skip_core"
    )
    assert one(skip_core(controlled_by="register", reset_by="por_n"), INDEPENDENT, "skip_core").kind is PASS


def guarded(control: str | None) -> str:
    """core_rst_n guards the domain of the control of skip_core; the register itself is cleared by another net."""
    return json.dumps(
        {
            "domains": {"control": {"rail": "avdd", "kind": "always_on"}},
            "resets": {"core_rst_n": {"guards": ["control"]}},
            "bypasses": {"skip_core": {"controlled_by": control, "domain": "control", "reset_by": "por_n"}},
        }
    )


def test_a_register_in_a_domain_that_is_reset_with_it() -> None:
    judgement = one(guarded("register"), INDEPENDENT, "skip_core")
    assert judgement.kind is FAIL
    assert judgement.message == "leans on what it overrides: it is guarded by core_rst_n, which uv_core drives"
    assert judgement.mend == "let it do without core_rst_n"


@pytest.mark.parametrize("control", ["pin", "fuse"])
def test_a_pin_or_fuse_is_not_cleared_with_its_domain(control: str) -> None:
    assert one(guarded(control), INDEPENDENT, "skip_core").kind is PASS


def test_a_test_port_in_a_domain_that_is_reset_is_for_a_person() -> None:
    judgement = one(guarded("test_port"), INDEPENDENT, "skip_core")
    assert judgement.kind is REVIEW
    assert judgement.message == "rests on the test port not being cleared with control"
    assert judgement.why == "control is guarded by core_rst_n, which uv_core drives"
    assert judgement.mend == "a domain of its own for the test port, if core_rst_n does not clear it"
    assert path_text(judgement.path) == (
        "skip_core supplied by control guarded by core_rst_n driven by core_out driven by uv_core "
        "overridden by skip_core"
    )
    assert one(guarded(None), INDEPENDENT, "skip_core").missing == ("bypasses.skip_core.controlled_by",)


def test_a_test_port_in_a_domain_that_another_net_resets() -> None:
    """por_n guards the control, and nothing that uv_core drives."""
    patch = {
        "domains": {"control": {"rail": "avdd", "kind": "always_on"}},
        "resets": {"por_n": {"guards": ["adc", "core_regulator", "control"]}},
        "bypasses": {"skip_core": {"controlled_by": "test_port", "domain": "control"}},
    }
    judgement = one(json.dumps(patch), INDEPENDENT, "skip_core")
    assert (judgement.kind, judgement.message) == (PASS, "leans on nothing that waits for uv_core")


def test_a_control_on_a_rail_that_waits_for_what_it_overrides() -> None:
    patch = "bypasses: {skip_resets: {domain: core}}"
    judgement = one(patch, INDEPENDENT, "skip_resets")
    assert judgement.message == "leans on what it overrides: core_regulator is guarded by por_n, which gather drives"
    assert judgement.mend == "let core_regulator do without por_n"
    assert path_text(judgement.path) == (
        "skip_resets supplied by core supplied by vcore made by core_regulator guarded by por_n driven by rst_out "
        "driven by gather overridden by skip_resets"
    )
    assert changed(patch, RULES) == {(INDEPENDENT, "skip_resets"): FAIL, (UP, "skip_resets"): NONE}
    under = one(patch, UP, "skip_resets")
    assert (under.under, under.message) == (
        INDEPENDENT, "its control lives on vcore, which waits for por_n (bypass/independent says so)",
    )  # fmt: skip


def test_an_override_that_leans_on_a_load_behind_it() -> None:
    judgement = one(skip_core(leans_on=["core_logic"]), INDEPENDENT, "skip_core")
    assert judgement.message == "leans on what it overrides: core_logic is guarded by core_rst_n, which uv_core drives"
    itself = one(skip_core(leans_on=["uv_core"]), INDEPENDENT, "skip_core")
    assert itself.message == "leans on what it overrides: it leans on uv_core"
    assert itself.mend == "let it do without uv_core"


@pytest.mark.parametrize(
    "fact",
    [
        "bypasses.skip_core.overrides",
        "bypasses.skip_core.domain",
        "domains.aon.rail",
        "domains.aon.kind",
    ],
)
def test_independent_is_open(fact: str) -> None:
    assert one(without(fact), INDEPENDENT, "skip_core").missing == (fact,)


def test_independent_is_open_on_what_might_guard_the_control() -> None:
    """A net that waits for uv_core and does not say what it guards may hold the domain of the control."""
    patch = both(guarded("register"), without("resets.core_rst_n.guards"))
    assert one(patch, INDEPENDENT, "skip_core").missing == ("resets.core_rst_n.guards",)
    other = both(guarded("register"), "resets: {core_rst_n: {guards: [adc]}, por_n: {guards: null}}")
    assert one(other, INDEPENDENT, "skip_core").kind is PASS  # por_n does not wait for uv_core
    unsaid = both(guarded("pin"), "resets: {core_rst_n: {guards: [adc]}, spare_n: {guards: [control]}}")
    assert one(unsaid, INDEPENDENT, "skip_core").missing == ("resets.spare_n.driven_by",)


def test_control_in_a_switched_domain_fails_whatever_it_overrides() -> None:
    patch = both(skip_core(domain="analog"), without("bypasses.skip_core.overrides"))
    assert one(patch, UP, "skip_core").kind is FAIL


def test_a_register_that_nothing_is_said_to_clear_is_open() -> None:
    patch = skip_core(controlled_by="register")
    assert one(patch, INDEPENDENT, "skip_core").missing == ("bypasses.skip_core.reset_by",)
    assert one(patch, HELD, "skip_core").missing == ("bypasses.skip_core.reset_by",)
    assert changed(patch, RULES) == {(INDEPENDENT, "skip_core"): OPEN, (HELD, "skip_core"): OPEN}


# control_up


def test_a_control_on_an_earlier_rail_or_the_watched_one() -> None:
    judgement = one("rails: {vcore: {delay: {min: 20 us, max: 200 us}}}", UP, "skip_core")
    assert judgement.message == "its control is up with avdd"
    assert judgement.why == "vcore comes up after avdd, 20 us later or more"
    own = one(skip_core(domain="core"), UP, "skip_core")
    assert (own.kind, own.message, own.why) == (PASS, "its control is up with vcore", "")
    assert one("", UP, "skip_resets").why == ""


def test_a_control_in_a_switched_domain() -> None:
    judgement = one(skip_core(domain="analog"), UP, "skip_core")
    assert judgement.kind is FAIL
    assert judgement.message == "its control lives in analog, which is switched by por_n"
    assert judgement.mend == "move the control to a domain that is always on"
    assert path_text(judgement.path) == "skip_core supplied by analog gated by por_n"
    assert judgement.at == "bypasses.skip_core.domain"


# A third rail, with what makes it and when.
OTHER: Final = """
rails: {{io: {{{order}}}}}
domains: {{pads: {{rail: io, kind: always_on}}}}
bypasses: {{{who}: {{domain: pads}}}}
"""


def test_a_control_on_a_later_rail() -> None:
    judgement = one(OTHER.format(order="after: avdd, delay: 1 ms", who="skip_resets"), UP, "skip_resets")
    assert judgement.kind is FAIL
    assert judgement.message == "its control lives on io, which comes up after avdd"
    assert judgement.why == "io comes up after avdd, 1 ms later or more"
    assert judgement.mend == "move the control to avdd, or to a rail that is up before it"
    assert path_text(judgement.path) == "skip_resets supplied by pads supplied by io comes up after avdd"


def test_a_control_on_a_rail_whose_maker_is_held_in_reset() -> None:
    # Another regulator, which por_n holds; what is overridden drives core_rst_n alone.
    patch = OTHER.format(order="made_by: booster", who="skip_core") + (
        "loads: {booster: {needs: [{rail: avdd}], domain: aon}}\n"
        "resets: {por_n: {guards: [adc, core_regulator, booster]}}\n"
    )
    judgement = one(patch, UP, "skip_core")
    assert judgement.kind is FAIL
    assert judgement.message == "its control lives on io, which waits for por_n"
    assert judgement.why == "the override is dead until por_n is released"
    assert judgement.mend == "move the control to vcore, or to a rail that is up before it"
    assert path_text(judgement.path) == "skip_core supplied by pads supplied by io made by booster guarded by por_n"


# Behind core_out stand detectors of avdd and, first, of vcore, which comes up after avdd.
BEHIND_BOTH: Final = "rails: {{io: {{{order}}}}}\ndomains: {{pads: {{rail: io, kind: always_on}}}}\n"
CORE_OUT: Final = "bypasses: {skip_core: {domain: pads, overrides: core_out}}"


@pytest.mark.parametrize(
    ("order", "kind", "message"),
    [
        ("nominal: 3.3 V", REVIEW, "rests on io being up before avdd"),
        ("after: avdd, delay: 1 ms", FAIL, "its control lives on io, which comes up after avdd"),
        ("after: vcore, delay: 1 ms", FAIL, "its control lives on io, which waits for por_n"),
    ],
)
def test_a_control_for_several_rails_is_to_be_up_before_the_first(order: str, kind: Kind, message: str) -> None:
    judgement = one(BEHIND_BOTH.format(order=order) + CORE_OUT, UP, "skip_core")
    assert (judgement.kind, judgement.message) == (kind, message)
    assert "move the control to avdd" in judgement.mend
    # Where nothing says which of the two is first, the one that is found first is named.
    apart = BEHIND_BOTH.format(order="nominal: 3.3 V").replace(
        "rails: {", "rails: {vcore: {made_by: null, after: null}, "
    )
    assert one(apart + CORE_OUT, UP, "skip_core").message == "rests on io being up before vcore"


def test_a_control_on_a_rail_of_unknown_order_is_for_a_person() -> None:
    judgement = one(OTHER.format(order="nominal: 3.3 V", who="skip_core"), UP, "skip_core")
    assert judgement.kind is REVIEW
    assert judgement.message == "rests on io being up before vcore"
    assert judgement.why == "its control lives on io, and nothing says that vcore comes up after it"
    assert judgement.mend == "give rails.vcore.after and its delay if it does; else move the control to vcore"


@pytest.mark.parametrize(
    "facts",
    [
        ["bypasses.skip_core.overrides"],
        ["bypasses.skip_core.domain"],
        ["domains.aon.kind"],
        ["domains.aon.rail"],
        ["domains.aon.kind", "domains.aon.rail"],
        ["bypasses.skip_core.overrides", "bypasses.skip_core.domain"],
    ],
)
def test_control_up_is_open(facts: list[str]) -> None:
    assert one(without(*facts), UP, "skip_core").missing == tuple(facts)


def test_control_up_asks_for_every_detector_behind() -> None:
    assert one(without("output_stages.por_out.driven_by"), UP, "skip_resets").missing == (
        "output_stages.por_out.driven_by",
    )
    patch = (
        "{output_stages: {spare: {driven_by: [twin], domain: aon}, twin: {driven_by: [spare], domain: aon}}, "
        "bypasses: {skip_core: {overrides: spare}}}"
    )
    judgement = one(patch, UP, "skip_core")
    assert (judgement.kind, judgement.message) == (NONE, "no detector's decision passes through spare")
