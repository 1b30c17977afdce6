"""The graph of the sound example, edge by edge, and who leans on whom."""

from __future__ import annotations

from collections import Counter

import pytest
import yaml

from tests.rules.sound import SOUND, patched, without
from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import SECTIONS, Graph, build
from tidegate.lint.graph.edge import EdgeKind

# Read off examples/sound.yaml by hand: element, relation, elements it is had with, each in one place.
EDGES = """
vcore | made by | core_regulator
vcore | comes up after | avdd
aon | supplied by | avdd
analog | supplied by | avdd
analog | gated by | por_n
core | supplied by | vcore
ref_fast | supplied by | aon
ref_main | supplied by | analog
ref_main | biased by | bias_main
bias_start | supplied by | aon
bias_main | supplied by | analog
bias_main | biased by | ref_fast
por | supplied by | aon
por | watches | avdd
por | biased by | bias_start
uv | supplied by | aon
uv | watches | avdd
uv | biased by | bias_start
uv | takes its reference from | ref_fast
ov | supplied by | aon
ov | watches | avdd
ov | biased by | bias_start
ov | takes its reference from | ref_fast
uv_core | supplied by | aon
uv_core | watches | vcore
uv_core | biased by | bias_start
uv_core | takes its reference from | ref_fast
por_out | supplied by | aon
por | drives | por_out
uv_out | supplied by | aon
uv | drives | uv_out
ov_out | supplied by | aon
ov | drives | ov_out
ov_latch | supplied by | aon
ov_out | drives | ov_latch
gather | supplied by | aon
por_out | drives | gather
uv_out | drives | gather
ov_latch | drives | gather
rst_out | supplied by | aon
gather | drives | rst_out
core_out | supplied by | aon
uv_core | drives | core_out
gather | drives | core_out
rst_out | drives | por_n
por_n | guards | adc
por_n | guards | core_regulator
core_out | drives | core_rst_n
core_rst_n | guards | core_logic
core_rst_n | guards | adc
core_regulator | supplied by | aon
core_regulator | supplied by | avdd
core_regulator | takes its reference from | ref_fast
core_logic | supplied by | core
core_logic | supplied by | vcore
adc | supplied by | analog
adc | supplied by | avdd
adc | supplied by | vcore
adc | takes its reference from | ref_main
skip_resets | supplied by | aon
skip_resets | overrides | gather
skip_core | supplied by | aon
skip_core | overrides | uv_core
uv | couples to | ov
ov | couples to | uv
core_out | couples to | uv_core
core_regulator | couples to | uv
"""


def sound() -> Graph:
    return build(load(SOUND).description)


def test_the_edges_of_the_sound_example() -> None:
    found = Counter((edge.tail, edge.kind.forwards, edge.head) for edge in sound().edges())
    expected = Counter(tuple(word.strip() for word in line.split("|")) for line in EDGES.strip().splitlines())
    assert found == expected


def test_every_edge_stands_in_the_list_of_both_its_ends() -> None:
    graph = sound()
    edges = Counter(graph.edges())
    assert Counter(edge for element in graph.elements for edge in graph.out(element)) == edges
    assert Counter(edge for element in graph.elements for edge in graph.into(element)) == edges


def test_elements_stand_in_the_order_of_sections_and_of_the_file() -> None:
    text = yaml.safe_load(SOUND.read_text("utf-8"))
    assert list(sound().elements) == [name for section in SECTIONS for name in text.get(section, ())]


def test_every_edge_names_the_fact_it_comes_from() -> None:
    text = yaml.safe_load(SOUND.read_text("utf-8"))
    for edge in sound().edges():
        value = text
        for step in edge.fact.split("."):
            value = value[int(step)] if step.isdigit() else value[step]
        names = value if isinstance(value, list) else [value]
        assert value is True or edge.head in names or edge.tail in names, edge


def test_heads_and_tails_are_those_of_one_kind() -> None:
    graph = sound()
    assert graph.heads("uv", EdgeKind.TAKES_REFERENCE_FROM) == ["ref_fast"]
    assert graph.heads("uv", EdgeKind.DRIVES) == ["uv_out"]
    assert graph.tails("por_n", EdgeKind.DRIVES) == ["rst_out"]
    assert graph.tails("por", EdgeKind.DRIVES) == []


@pytest.mark.parametrize(
    ("element", "leans_on"),
    [
        ("uv_core", {"aon", "bias_start", "ref_fast"}),  # watching vcore is no leaning on it
        ("vcore", {"core_regulator", "avdd"}),
        ("gather", {"aon", "por_out", "uv_out", "ov_latch"}),
        ("adc", {"analog", "avdd", "vcore", "ref_main", "por_n", "core_rst_n"}),
        ("skip_core", {"aon"}),  # nor is overriding
        ("ov", {"aon", "bias_start", "ref_fast"}),  # nor coupling
    ],
)
def test_what_an_element_leans_on(element: str, leans_on: set[str]) -> None:
    assert {there for there, _, _ in sound().needs(element)} == leans_on


def assert_each_is_the_other_way_round(graph: Graph) -> None:
    needs = {(here, there, edge) for here in graph.elements for there, _, edge in graph.needs(here)}
    needed = {(there, here, edge) for here in graph.elements for there, _, edge in graph.needed_by(here)}
    assert needs == needed


def test_needed_by_is_needs_the_other_way_round() -> None:
    assert_each_is_the_other_way_round(sound())


GUARDED = "{resets: {core_rst_n: {guards: [core, aon]}}, bypasses: {skip_core: {controlled_by: register}}}"


def test_a_guarded_domain_holds_what_has_a_reset() -> None:
    graph = build(patched(GUARDED).description)
    assert_each_is_the_other_way_round(graph)
    held = {there for there, _, edge in graph.needed_by("core_rst_n") if edge.kind is EdgeKind.GUARDS}
    assert held == {"core_logic", "core_regulator", "skip_core"}  # loads and the register; not the pin, nor detectors
    assert ("core_rst_n", "guarded by") in [(there, words) for there, words, _ in graph.needs("core_logic")]
    assert {there for there, _, _ in graph.needs("aon")} == {"avdd"}  # the domain itself stays supplied
    assert {there for there, _, _ in graph.needs("skip_resets")} == {"aon"}


def test_once_is_worked_out_once() -> None:
    graph = sound()
    asked: list[Graph] = []

    def count(whole: Graph) -> int:
        asked.append(whole)
        return len(whole.elements)

    assert graph.once(count) == graph.once(count) == len(graph.elements)
    assert asked == [graph]


# One field each, on top of the sound example or in place of what stands there; the edges it makes, written by hand.
FIELDS = [
    ("rails: {avdd: {made_by: ref_fast}}", {"avdd made by ref_fast rails.avdd.made_by"}),
    ("rails: {avdd: {after: vcore}}", {"avdd comes up after vcore rails.avdd.after"}),
    ("domains: {core: {kind: switched, switched_by: uv}}", {"core gated by uv domains.core.switched_by"}),
    ("references: {ref_fast: {bias: bias_main}}", {"ref_fast biased by bias_main references.ref_fast.bias"}),
    ("references: {ref_fast: {bias: none}}", set()),
    ("references: {ref_fast: {gated_by: por_n}}", {"ref_fast gated by por_n references.ref_fast.gated_by"}),
    (
        "references: {ref_fast: {leans_on: [uv, adc]}}",
        {"ref_fast leans on uv references.ref_fast.leans_on", "ref_fast leans on adc references.ref_fast.leans_on"},
    ),
    ("references: {ref_fast: {leans_on: []}}", set()),
    ("biases: {bias_start: {source: ref_main}}", {"bias_start biased by ref_main biases.bias_start.source"}),
    ("biases: {bias_start: {gated_by: adc}}", {"bias_start gated by adc biases.bias_start.gated_by"}),
    ("biases: {bias_start: {leans_on: [gather]}}", {"bias_start leans on gather biases.bias_start.leans_on"}),
    ("comparators: {uv: {armed_by: por}}", {"uv gated by por comparators.uv.armed_by"}),
    ("comparators: {uv: {gated_by: por_n}}", {"uv gated by por_n comparators.uv.gated_by"}),
    ("comparators: {por: {reference: ref_main}}", {"por takes its reference from ref_main comparators.por.reference"}),
    ("output_stages: {gather: {gated_by: bias_main}}", {"gather gated by bias_main output_stages.gather.gated_by"}),
    ("output_stages: {por_out: {driven_by: [por, ov]}}", {"ov drives por_out output_stages.por_out.driven_by"}),
    ("resets: {por_n: {driven_by: [rst_out, por]}}", {"por drives por_n resets.por_n.driven_by"}),
    (
        "resets: {por_n: {guards: [adc, core_regulator, core]}}",
        {"por_n guards core resets.por_n.guards"},
    ),
    ("loads: {adc: {gated_by: uv}}", {"adc gated by uv loads.adc.gated_by"}),
    (
        "loads: {core_logic: {references: [ref_fast]}}",
        {"core_logic takes its reference from ref_fast loads.core_logic.references"},
    ),
    ("loads: {adc: {leans_on: [uv_core]}}", {"adc leans on uv_core loads.adc.leans_on"}),
    (
        "loads: {core_logic: {needs: [{rail: vcore}, {rail: avdd}]}}",
        {"core_logic supplied by avdd loads.core_logic.needs.1.rail"},
    ),
    ("bypasses: {skip_core: {reset_by: por_n}}", {"skip_core cleared by por_n bypasses.skip_core.reset_by"}),
    ("bypasses: {skip_core: {leans_on: [ref_main]}}", {"skip_core leans on ref_main bypasses.skip_core.leans_on"}),
    ("neighbours: {core_return: {mutual: true}}", {"uv_core couples to core_out neighbours.core_return.mutual"}),
    ("neighbours: {core_return: {mutual: false}}", set()),
]  # fmt: skip


def told(graph: Graph) -> Counter[str]:
    return Counter(f"{edge.tail} {edge.kind.forwards} {edge.head} {edge.fact}" for edge in graph.edges())


@pytest.mark.parametrize(("patch", "expected"), FIELDS, ids=lambda value: value if isinstance(value, str) else "")
def test_each_field_makes_its_edges_and_no_other(patch: str, expected: set[str]) -> None:
    before, after = told(sound()), told(build(patched(patch).description))
    assert set(after - before) == expected
    assert not before - after


@pytest.mark.parametrize(
    ("fact", "edges"),
    [
        ("neighbours.uv_beside_ov.mutual", {"ov couples to uv neighbours.uv_beside_ov.mutual"}),
        ("comparators.uv.reference", {"uv takes its reference from ref_fast comparators.uv.reference"}),
        ("domains.core.rail", {"core supplied by vcore domains.core.rail"}),
    ],
)
def test_a_fact_that_is_not_given_makes_no_edge(fact: str, edges: set[str]) -> None:
    before, after = told(sound()), told(build(patched(without(fact)).description))
    assert set(before - after) == edges
    assert not after - before


def test_an_element_without_edges_has_none() -> None:
    graph = build(patched("rails: {vx: {nominal: 1 V}}").description)
    assert (
        list(graph.out("vx")) == list(graph.into("vx")) == list(graph.needs("vx")) == list(graph.needed_by("vx")) == []
    )
    assert list(graph.out("uv_beside_ov")) == []  # a pair of neighbours is an element, and no end of an edge


def test_which_way_each_relation_leans() -> None:
    """By hand: what an element cannot be up or judged without; watching, overriding and coupling are none of it."""
    tail = {kind.name for kind in EdgeKind if kind.tail_leans}
    head = {kind.name for kind in EdgeKind if kind.head_leans}
    assert tail == {
        "SUPPLIED_BY", "BIASED_BY", "TAKES_REFERENCE_FROM", "LEANS_ON", "GATED_BY", "MADE_BY", "COMES_AFTER",
        "CLEARED_BY",
    }  # fmt: skip
    assert head == {"DRIVES", "GUARDS"}
