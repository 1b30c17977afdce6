"""The level that asserts, followed by hand from the reset nets back through the stages that drive them."""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from tests.rules.sound import patched
from tidegate.lint.graph.dependency import build
from tidegate.lint.timing.polarity import asserting_levels, polarity


def levels(patch: str = "") -> Mapping[str, str | None]:
    description = patched(patch).description
    return asserting_levels(description, build(description))


def test_the_sound_example() -> None:
    # Both nets are active low; only ov_out inverts, so that ov says "high" for too high.
    assert levels() == {
        "rst_out": "low", "gather": "low", "por_out": "low", "uv_out": "low", "ov_latch": "low", "ov_out": "low",
        "por": "low", "uv": "low", "ov": "high", "core_out": "low", "uv_core": "low",
    }  # fmt: skip


def test_nets_that_are_active_high() -> None:
    high = "resets: {por_n: {active: high}, core_rst_n: {active: high}}"
    assert levels(high) == {
        name: {"low": "high", "high": "low"}[level] for name, level in levels().items() if level is not None
    }


def test_two_nets_that_differ_leave_what_drives_both_without_a_level() -> None:
    found = levels("resets: {core_rst_n: {active: high}}")
    assert (found["rst_out"], found["core_out"], found["uv_core"]) == ("low", "high", "high")
    # gather drives both, and so does all before it.
    assert {found[name] for name in ("gather", "por_out", "uv_out", "ov_latch", "ov_out", "por", "uv", "ov")} == {None}


def test_an_inverter_between_makes_two_nets_agree() -> None:
    patch = "{resets: {core_rst_n: {active: high}}, output_stages: {core_out: {inverting: true}}}"
    found = levels(patch)
    assert (found["core_out"], found["uv_core"], found["gather"], found["por"]) == ("high", "low", "low", "low")


@pytest.mark.parametrize(
    ("stage", "expected"),
    [
        ("{kind: inverter, inverting: null}", "high"),
        ("{kind: buffer, inverting: null}", "low"),
        ("{kind: inverter, inverting: false}", "low"),  # what is said of it goes before its kind
        ("{kind: buffer, inverting: true}", "high"),
        ("{kind: schmitt, inverting: null}", None),
        ("{kind: null, inverting: null}", None),
    ],
)
def test_what_inverts(stage: str, expected: str | None) -> None:
    assert levels(f"output_stages: {{por_out: {stage}}}")["por"] == expected


def test_a_net_that_does_not_say_what_is_active_leaves_its_drivers_without_a_level() -> None:
    found = levels("resets: {core_rst_n: {active: null}}")
    assert (found["rst_out"], found["core_out"], found["uv_core"], found["gather"]) == ("low", None, None, None)


def test_a_stage_in_a_ring_is_left_after_it_has_no_level() -> None:
    # por_out drives gather and is driven by it through an inverter: wanted low and high.
    found = levels("output_stages: {por_out: {driven_by: [por, gather], combine: any_asserts, inverting: true}}")
    assert found["gather"] is None
    assert found["rst_out"] == "low"
    same = levels("output_stages: {por_out: {driven_by: [por, gather], combine: any_asserts}}")
    assert same["gather"] == same["por_out"] == "low"


@pytest.mark.parametrize(
    ("patch", "stage", "expected"),
    [
        ("", "gather", ()),
        ("resets: {por_n: {active: null}}", "rst_out", ("resets.por_n.active",)),
        ("resets: {por_n: {active: null}}", "gather", ("resets.por_n.active",)),
        ("resets: {por_n: {active: null}}", "core_out", ()),
        ("output_stages: {core_out: {inverting: null}}", "gather", ("output_stages.core_out.inverting",)),
        ("output_stages: {core_out: {inverting: null}}", "core_out", ()),
        # The nearest: what is behind a stage of which it is not known whether it inverts does not help.
        (
            "{resets: {core_rst_n: {active: null}}, output_stages: {core_out: {inverting: null}}}", "gather",
            ("output_stages.core_out.inverting",),
        ),
    ],
)  # fmt: skip
def test_what_is_missing_for_a_level(patch: str, stage: str, expected: tuple[str, ...]) -> None:
    description = patched(patch).description
    assert polarity(description, build(description)).unsaid.get(stage, ()) == expected
