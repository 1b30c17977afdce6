"""Loops of elements that lean on each other: which start, which do not, and of which it cannot be said."""

from __future__ import annotations

from tests.rules.sound import SOUND, patched
from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.edge import path_text
from tidegate.lint.graph.leaning_loops import LeaningLoop, in_a_loop, leaning_loops

# The converter's reference and its bias take their currents from each other.
RING = "references: {{ref_main: {{start_up: {ref}}}}}\nbiases: {{bias_main: {{source: ref_main, start_up: {bias}}}}}"
CIRCUIT = "{by: a leak, least_slope: 0 V/s}"


def loop_of(patch: str, member: str) -> LeaningLoop:
    return leaning_loops(build(patched(patch).description))[member]


def test_the_sound_example_has_no_loop() -> None:
    graph = build(load(SOUND).description)
    assert in_a_loop(graph) == frozenset()
    assert leaning_loops(graph) == {}


def test_a_ring_without_start_up_circuit_is_a_deadlock() -> None:
    loop = loop_of(RING.format(ref="none", bias="none"), "bias_main")
    assert loop.members == ("bias_main", "ref_main")
    assert path_text(loop.deadlock) == "bias_main biased by ref_main biased by bias_main"
    assert loop.started_by == loop.unknown == ()


def test_one_start_up_circuit_starts_the_ring() -> None:
    loop = loop_of(RING.format(ref="none", bias=CIRCUIT), "ref_main")
    assert loop == LeaningLoop(("bias_main", "ref_main"), ("bias_main",), (), (), ())
    hash(loop)  # cannot be changed


def test_what_is_not_said_is_neither() -> None:
    loop = loop_of(RING.format(ref="none", bias="null"), "ref_main")
    assert loop.deadlock == ()
    assert path_text(loop.doubtful) == "bias_main biased by ref_main biased by bias_main"
    assert loop.unknown == ("bias_main",)


def test_a_second_ring_in_the_loop_needs_a_start_of_its_own() -> None:
    # ref_main and bias_main start; bias_main and bias_more wait for each other without ref_main.
    patch = f"""
        references: {{ref_main: {{start_up: {CIRCUIT}}}}}
        biases:
          bias_main: {{source: ref_main, start_up: none, gated_by: bias_more}}
          bias_more: {{kind: from_reference, source: bias_main, domain: analog, start_up: none}}
    """
    loop = loop_of(patch, "bias_more")
    assert loop.members == ("bias_main", "bias_more", "ref_main")
    assert loop.started_by == ("ref_main",)
    assert path_text(loop.deadlock) == "bias_main gated by bias_more biased by bias_main"


def test_a_start_up_circuit_does_not_replace_an_enable() -> None:
    loop = loop_of(f"biases: {{bias_main: {{source: ref_fast, gated_by: ref_main, start_up: {CIRCUIT}}}}}", "ref_main")
    assert loop.started_by == ("bias_main",)
    assert loop.unknown == ("ref_main",)
    assert path_text(loop.doubtful) == "bias_main gated by ref_main biased by bias_main"


def test_a_rail_made_by_what_it_feeds_is_a_deadlock() -> None:
    loop = loop_of("loads: {core_regulator: {domain: core}}", "vcore")
    assert path_text(loop.deadlock) == "core_regulator supplied by core supplied by vcore made by core_regulator"


def test_rails_that_wait_for_each_other_are_a_deadlock() -> None:
    loop = loop_of("rails: {avdd: {after: vcore}}", "avdd")
    assert path_text(loop.deadlock) == "avdd comes up after vcore comes up after avdd"


def test_a_cycle_through_a_comparator_is_not_among_them() -> None:
    graph = build(patched("biases: {bias_start: {gated_by: por_n}}").description)
    assert {"por", "uv", "ov", "bias_start", "por_n"} <= in_a_loop(graph)
    assert "uv_core" not in in_a_loop(graph)
    assert leaning_loops(graph) == {}
