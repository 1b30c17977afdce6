"""What each part leans on, by hand; the order against NetworkX; loops that a start-up circuit opens."""

from __future__ import annotations

import random
from typing import Any

import msgspec
import networkx as nx
import pytest

from tests.timing.random_subsystems import comparator, load, random_parts, source, stage
from tidegate.lint.timing.order import (
    in_order,
    leans_on,
    rails_of,
    reached,
    readiness_of,
    without_started_loops,
)
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
    DomainPart,
    RailPart,
    ResetPart,
    SourcePart,
    TimedPart,
    bounds_of,
    times_of,
)


def detector() -> Any:
    made = comparator("uv", needs=("ref",), works_from=NOTHING, rising=NOTHING, falling=NOTHING, delay=NOTHING)
    return msgspec.structs.replace(made, watches="vx", armed_by=("por",))


def core() -> Any:
    made = load("core", needs=("ref",), works=NOTHING, ready=NOTHING)
    return msgspec.structs.replace(made, works=(("vdd", NOTHING), ("vx", NOTHING)), domain="aon")


@pytest.mark.parametrize(
    ("part", "needed", "rails"),
    [
        (RailPart("vdd", None, None, NOTHING), (), set()),
        (RailPart("vdd", "vx", None, NOTHING), ("vx",), set()),
        (RailPart("vdd", "vx", "maker", NOTHING), ("vx", "maker"), set()),
        (RailPart("vdd", None, "maker", NOTHING), ("maker",), set()),
        (DomainPart("aon", "vdd", ("one", "two")), ("vdd", "one", "two"), set()),
        (source("ref", needs=("bias",), works_from=NOTHING, settling=NOTHING), ("vdd", "aon", "bias"), {"vdd"}),
        (detector(), ("vdd", "aon", "vx", "ref", "por"), {"vdd", "vx"}),
        (stage("out", driven_by=("uv",), works_from=NOTHING, delay=NOTHING), ("vdd", "aon", "uv"), {"vdd"}),
        (ResetPart("rst", ("out",), False, ("core",), "vdd", 0.0), ("out",), set()),
        (core(), ("vdd", "vx", "aon", "ref", "rst"), {"vdd", "vx"}),
        (msgspec.structs.replace(core(), domain=None), ("vdd", "vx", "ref", "rst"), {"vdd", "vx"}),
    ],
    ids=lambda value: type(value).__name__,
)
def test_what_each_part_leans_on(part: TimedPart, needed: tuple[str, ...], rails: set[str]) -> None:
    assert leans_on(part) == needed
    assert type(part).__struct_config__.frozen
    assert rails_of(part) == rails


def test_readiness_waits_for_no_reset() -> None:
    assert readiness_of(core()) == ("vdd", "vx", "aon", "ref")
    assert readiness_of(msgspec.structs.replace(core(), domain=None)) == ("vdd", "vx", "ref")


@pytest.mark.parametrize("seed", range(4))
def test_each_comes_after_what_it_needs(seed: int) -> None:
    parts = random_parts(random.Random(seed))
    known: dict[str, TimedPart] = {"vdd": RailPart("vdd", None, None, NOTHING), "aon": DomainPart("aon", "vdd", ())}
    order = in_order(parts | known)
    place = {name: number for number, (group, _) in enumerate(order) for name in group}
    graph = nx.DiGraph([(needed, name) for name, part in parts.items() for needed in leans_on(part)])
    assert set(place) == set(graph)
    assert all(place[needed] < place[name] for needed, name in graph.edges)
    assert all(len(group) == 1 and not loops for group, loops in order)


def sources(**needs: tuple[str, ...]) -> dict[str, TimedPart]:
    return {name: source(name, needs=needed, works_from=NOTHING, settling=NOTHING) for name, needed in needs.items()}


def test_what_leans_on_itself_comes_together() -> None:
    found = in_order(sources(one=("two",), two=("one",), alone=("alone",), last=("one",)))
    assert {(frozenset(group), loops) for group, loops in found} == {
        (frozenset({"one", "two"}), True), (frozenset({"alone"}), True), (frozenset({"last"}), False),
    }  # fmt: skip


def test_a_source_that_starts_itself_waits_for_nothing_in_its_loop() -> None:
    parts = sources(one=("two", "outer"), two=("one",), outer=())
    two = parts["two"]
    assert isinstance(two, SourcePart)
    freed = without_started_loops(parts | {"two": msgspec.structs.replace(two, starts_itself=True)})
    assert freed == parts | {"two": msgspec.structs.replace(two, starts_itself=True, needs=())}
    one = parts["one"]
    assert isinstance(one, SourcePart)
    freed = without_started_loops(parts | {"one": msgspec.structs.replace(one, starts_itself=True)})
    assert freed["one"] == msgspec.structs.replace(one, starts_itself=True, needs=("outer",))
    assert freed["two"] == two
    assert without_started_loops(parts) == parts


def test_a_source_that_starts_itself_outside_a_loop_keeps_what_it_needs() -> None:
    parts = sources(one=("two",), two=())
    one = parts["one"]
    assert isinstance(one, SourcePart)
    parts["one"] = msgspec.structs.replace(one, starts_itself=True)
    assert without_started_loops(parts) == parts


def test_reached_is_the_element_and_all_behind_it() -> None:
    successors = {"a": ["b", "c", "b"], "b": ["d"], "c": ["d", "a"], "e": ["a"]}
    assert reached(successors, "a") == ["a", "b", "c", "d"]
    assert reached(successors, "elsewhere") == ["elsewhere"]
    assert set(reached(successors, "e")) == {"e", *nx.descendants(nx.DiGraph(successors), "e")}


def test_every_quantity_of_a_part_and_its_times_without_its_levels() -> None:
    made = comparator(
        "uv", needs=(), works_from=Bounds(1.0, 2.0), rising=Bounds(3.0, 4.0), falling=Bounds(5.0, 6.0),
        delay=Bounds(7.0, 8.0), filter=Bounds(9.0, 10.0), pulse=Bounds(11.0, 12.0),
    )  # fmt: skip
    assert dict(bounds_of(made)) == {
        "works_from": (1.0, 2.0), "rising": (3.0, 4.0), "falling": (5.0, 6.0), "filter": (9.0, 10.0),
        "delay": (7.0, 8.0), "pulse": (11.0, 12.0),
    }  # fmt: skip
    assert list(times_of(made)) == [(9.0, 10.0), (7.0, 8.0), (11.0, 12.0)]
    assert list(bounds_of(DomainPart("aon", "vdd", ()))) == []
