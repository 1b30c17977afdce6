"""Facts without which it is not known what an element leans on."""

from __future__ import annotations

import pytest

from tests.rules.sound import SOUND, patched, without
from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.leaning_gaps import before_gaps, leaning_gaps


def gaps(patch: str) -> set[str]:
    """Every gap of a description, as the path of the missing fact."""
    elements = build(patched(patch).description).elements.values()
    return {element.fact(gap) for element in elements for gap in leaning_gaps(element)}


def test_the_sound_example_has_no_gap() -> None:
    graph = build(load(SOUND).description)
    assert not any(gap for element in graph.elements.values() for gap in leaning_gaps(element))
    assert before_gaps(graph) == frozenset()


@pytest.mark.parametrize(
    "fact",
    [
        "domains.core.rail",
        "domains.core.kind",
        "domains.analog.switched_by",
        "references.ref_main.bias",
        "references.ref_main.domain",
        "biases.bias_main.kind",
        "biases.bias_main.source",
        "biases.bias_main.domain",
        "comparators.uv.domain",
        "comparators.uv.bias",
        "comparators.uv.reference",
        "output_stages.gather.driven_by",
        "output_stages.gather.domain",
        "resets.por_n.driven_by",
        "loads.adc.domain",
        "bypasses.skip_core.domain",
    ],
)
def test_each_gap_is_named(fact: str) -> None:
    assert gaps(without(fact)) == {fact}


@pytest.mark.parametrize(
    "patch",
    [
        "references: {ref_fast: {kind: external, domain: null, self_biased: null}}",
        "references: {ref_main: {kind: divider, bias: null, self_biased: null}}",
        "references: {ref_main: {bias: null, leans_on: [bias_main]}}",
        "biases: {bias_main: {kind: external, source: null, domain: null}}",
        "comparators: {por: {reference: null}}",  # a crossover makes its level
        "domains: {core: {kind: always_on, switched_by: null}}",
    ],
)
def test_what_needs_no_telling_is_no_gap(patch: str) -> None:
    assert gaps(patch) == set()


def test_a_register_says_what_clears_it() -> None:
    assert gaps("bypasses: {skip_core: {controlled_by: register}}") == {"bypasses.skip_core.reset_by"}


def test_before_gaps_is_everything_that_leans_on_one() -> None:
    graph = build(patched(without("loads.core_regulator.domain")).description)
    # The regulator makes vcore; what lives on vcore, and what needs that, is behind it.
    assert before_gaps(graph) == {"core_regulator", "vcore", "core", "core_logic", "adc"}
