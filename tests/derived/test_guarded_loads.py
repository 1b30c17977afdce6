"""Which loads a detector guards, and what must work once a power-on detector lets go."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from tests.rules.sound import patched, without
from tidegate.lint.case import Case
from tidegate.lint.derived.asking import Unknown, ask
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, guarded_loads, least_supplies
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.edge import path_text


def bounds(
    patch: str, detector: str, find: Callable[[Case, Comparator], list[Bound]]
) -> list[tuple[str, float]] | Unknown:
    description = patched(patch).description
    comparator = description.comparators[detector]
    answer = ask(description, build(description), comparator, lambda case: find(case, comparator))
    return answer if isinstance(answer, Unknown) else [(bound.element, bound.level_v) for bound in answer]


def test_the_most_demanding_load_stands_first() -> None:
    patch = "loads: {core_regulator: {needs: {0: {works: {min: 1.62 V, max: 1.95 V}}}}}"
    assert bounds(patch, "uv", least_supplies) == [("core_regulator", 1.62), ("adc", 1.6)]
    assert bounds(patch, "ov", greatest_supplies) == [("core_regulator", 1.95), ("adc", 1.98)]


def test_a_load_that_does_not_say_from_which_supply_it_works_is_missing() -> None:
    answer = bounds(without("loads.adc.needs.0.works"), "uv", least_supplies)
    assert isinstance(answer, Unknown)
    assert answer.missing == ("loads.adc.needs.0.works",)


def test_the_way_to_a_load() -> None:
    description = patched("").description
    paths = {load.id: path_text(path) for load, path in guarded_loads(build(description), "uv")}
    assert paths["adc"].startswith("uv drives uv_out drives gather")
    assert paths["adc"].endswith("por_n guards adc")


def test_a_guarded_domain_guards_the_loads_in_it() -> None:
    patch = "resets: {core_rst_n: {guards: [core]}}"
    assert bounds(patch, "uv_core", least_supplies) == [("core_logic", 1.08)]


def test_what_takes_over_from_power_on() -> None:
    found = bounds("", "por", follower_supplies)
    assert isinstance(found, list)
    assert {name for name, _ in found} == {"uv", "ov", "uv_core", "ref_fast", "bias_start"}
    assert found == sorted(found, key=lambda bound: -bound[1])


def test_without_an_under_voltage_detector_power_on_answers_for_the_loads() -> None:
    patch = "comparators: {uv: {watches: vcore}}"
    found = bounds(patch, "por", follower_supplies)
    assert isinstance(found, list)
    assert found[0] == ("adc", 1.6)
    assert ("core_regulator", 1.6) in found


def test_what_another_rail_feeds_does_not_count() -> None:
    patch = "domains: {other: {rail: vcore, kind: always_on}}\ncomparators: {ov: {domain: other}}"
    found = bounds(patch, "por", follower_supplies)
    assert isinstance(found, list)
    assert "ov" not in {name for name, _ in found}


@pytest.mark.parametrize("fact", ["comparators.uv.works_from", "references.ref_fast.works_from"])
def test_what_does_not_say_from_which_supply_it_works_is_missing(fact: str) -> None:
    answer = bounds(without(fact), "por", follower_supplies)
    assert isinstance(answer, Unknown)
    assert answer.missing == (fact,)
