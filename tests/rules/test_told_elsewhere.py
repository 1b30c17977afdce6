"""Who yields to whom: no rule to itself in the end, each to one that is there; and on which elements."""

from __future__ import annotations

import networkx as nx

from tests.rules.sound import judged, patched
from tidegate.lint.judgement import Kind
from tidegate.rules import coverage, reach, start_up, trip_window
from tidegate.rules.catalogue import FAMILIES
from tidegate.rules.told_elsewhere import detectors_resetting, hangs_on, rails_needed

RULES = {rule.id: rule for family in FAMILIES for rule in family}


def test_a_rule_yields_to_one_that_is_there_and_none_to_itself_in_the_end() -> None:
    edges = [(rule.id, each.to) for rule in RULES.values() for each in rule.yields]
    assert {to for _, to in edges} <= RULES.keys()
    assert list(nx.simple_cycles(nx.DiGraph(edges))) == []


def test_what_an_element_hangs_on() -> None:
    description = patched("").description
    behind = set(hangs_on(description.comparators["uv"], description))
    assert behind == {"uv", "aon", "avdd", "bias_start", "ref_fast"}
    assert {"por_n", "rst_out", "gather", "uv", "ref_fast"} <= set(
        hangs_on(description.loads["core_regulator"], description)
    )


def test_the_detectors_that_reset_a_load_when_a_rail_it_needs_falls() -> None:
    description = patched("").description
    found = {name: set(detectors_resetting(load, description)) for name, load in description.loads.items()}
    assert found == {"core_regulator": {"uv"}, "core_logic": {"uv_core"}, "adc": {"uv", "uv_core"}}
    assert rails_needed(description.loads["adc"], description) == ["avdd", "vcore"]
    cut = patched("output_stages: {core_out: {driven_by: [gather]}}").description
    assert set(detectors_resetting(cut.loads["adc"], cut)) == {"uv"}


def test_one_fault_gives_one_finding_and_keeps_the_numbers_of_the_others() -> None:
    """A detector that decides too late: the loads that it resets are told under it."""
    families = (*start_up.RULES, *trip_window.RULES, *reach.RULES, *coverage.RULES)
    said = judged("comparators: {uv: {delay: {min: 0.3 us, max: 50 us}}}", families)
    failed = [key for key, judgement in said.items() if judgement.kind is Kind.FAIL]
    assert ("trip_window/guarantee", "uv") in failed
    assert {subject for _, subject in failed} == {"uv"}
    under = {key: judgement for key, judgement in said.items() if judgement.under}
    assert ("start_up/asserts_in_time", "core_regulator") in under
    assert all(judgement.measure is None or judgement.measure.margin < 0.0 for judgement in under.values())
