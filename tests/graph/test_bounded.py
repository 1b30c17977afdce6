"""Rows, rings and crowds at their limits, which are made small here; the longest row against NetworkX."""

from __future__ import annotations

from pathlib import Path

import networkx as nx
import pytest

from tests.rules.sound import SOUND
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.graph import bounded
from tidegate.lint.graph.bounded import bounded_graph
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.paths import adjacency

ADVICE = "describe elements that decide nothing as one"


@pytest.fixture
def limits(monkeypatch: pytest.MonkeyPatch) -> pytest.MonkeyPatch:
    """Both limits out of the way, for a test to set the one it is about."""
    monkeypatch.setattr(bounded, "MOST_IN_A_ROW", 10**6)
    monkeypatch.setattr(bounded, "MOST_WATCHING", 10**6)
    return monkeypatch


def rails(tmp_path: Path, text: str) -> Loaded:
    """A description of rails alone, ``a`` or ``b>a`` (b comes up after a) a line; the first stands in line 2."""
    entries = [line.split(">") for line in text.split()]
    lines = [f"  {name}: {{{f'after: {after[0]}' if after else 'nominal: 1 V'}}}" for name, *after in entries]
    file = tmp_path / "rails.yaml"
    file.write_text("\n".join(["rails:", *lines]), "utf-8")
    return load(file, shown="rails.yaml")


def faults(loaded: Loaded) -> tuple[Fault, ...]:
    with pytest.raises(DescriptionError) as refused:
        bounded_graph(loaded)
    return refused.value.faults


@pytest.mark.parametrize("count", [1, 2, 5])
def test_a_row_as_long_as_the_limit_is_followed(limits: pytest.MonkeyPatch, tmp_path: Path, count: int) -> None:
    text = " ".join(["r1", *(f"r{number}>r{number - 1}" for number in range(2, count + 1))])
    loaded = rails(tmp_path, f"{text} apart")
    limits.setattr(bounded, "MOST_IN_A_ROW", count)
    graph = bounded_graph(loaded)
    assert len(graph.elements) == count + 1
    assert list(graph.edges()) == list(build(loaded.description).edges())


def test_a_row_one_longer_is_told_at_its_end(limits: pytest.MonkeyPatch, tmp_path: Path) -> None:
    loaded = rails(tmp_path, "r1 r2>r1 r3>r2 r4>r3 r5>r4")
    limits.setattr(bounded, "MOST_IN_A_ROW", 3)
    # r4 is the first with more than three in its row; r5, which has one more, is not told besides.
    problem = "more than 3 elements stand in a row behind it"
    assert faults(loaded) == (Fault(Place("rails.yaml", 5, 3), "rails.r4", problem, ADVICE),)


@pytest.mark.parametrize("needs", ["[{rail: a}, {rail: c}]", "[{rail: c}, {rail: a}]"])
def test_the_longer_of_two_ways_counts(limits: pytest.MonkeyPatch, tmp_path: Path, needs: str) -> None:
    file = tmp_path / "ways.yaml"
    file.write_text(
        "rails:\n  a: {nominal: 1 V}\n  b: {after: a}\n  c: {after: b}\n" + f"loads:\n  m: {{needs: {needs}}}\n",
        "utf-8",
    )
    loaded = load(file)
    limits.setattr(bounded, "MOST_IN_A_ROW", 3)
    assert [fault.path for fault in faults(loaded)] == ["loads.m"]  # m, c, b, a
    limits.setattr(bounded, "MOST_IN_A_ROW", 4)
    bounded_graph(loaded)


def test_a_ring_counts_all_its_members(limits: pytest.MonkeyPatch, tmp_path: Path) -> None:
    loaded = rails(tmp_path, "a>c b>a c>b apart")
    limits.setattr(bounded, "MOST_IN_A_ROW", 3)
    bounded_graph(loaded)
    limits.setattr(bounded, "MOST_IN_A_ROW", 2)
    (fault,) = faults(loaded)
    assert fault.problem == "more than 2 elements lean on each other in a ring"
    assert fault.path == "rails.a"  # the first of the description


def test_a_row_that_a_ring_makes_too_long_is_a_row(limits: pytest.MonkeyPatch, tmp_path: Path) -> None:
    # c and d lean on each other; c leans on b too, by its maker: a, b and the ring are four.
    file = tmp_path / "ring.yaml"
    file.write_text(
        "rails:\n  a: {nominal: 1 V}\n  c: {after: d}\n  d: {after: c, made_by: m}\n"
        "loads:\n  m: {needs: [{rail: a}]}\n", "utf-8",
    )  # fmt: skip
    loaded = load(file, shown="ring.yaml")
    limits.setattr(bounded, "MOST_IN_A_ROW", 3)
    (fault,) = faults(loaded)
    assert fault.problem == "more than 3 elements stand in a row behind it"
    assert fault.path == "rails.c"
    limits.setattr(bounded, "MOST_IN_A_ROW", 2)
    (fault,) = faults(loaded)
    assert fault.problem == "more than 2 elements stand in a row behind it"  # the ring of two alone is none too large
    limits.setattr(bounded, "MOST_IN_A_ROW", 4)
    bounded_graph(loaded)


def test_the_longest_row_of_the_sound_example_is_that_of_networkx(limits: pytest.MonkeyPatch) -> None:
    loaded = load(SOUND)
    graph = build(loaded.description)
    whole = nx.DiGraph(adjacency(graph, graph.needs))
    assert nx.is_directed_acyclic_graph(whole)
    longest = nx.dag_longest_path_length(whole) + 1
    assert longest < len(graph.elements)
    limits.setattr(bounded, "MOST_IN_A_ROW", longest)
    bounded_graph(loaded)
    limits.setattr(bounded, "MOST_IN_A_ROW", longest - 1)
    assert len(faults(loaded)) == 1


def test_a_crowd_is_told_at_its_rail(limits: pytest.MonkeyPatch) -> None:
    loaded = load(SOUND, shown="sound.yaml")  # por, uv and ov watch avdd, uv_core watches vcore
    limits.setattr(bounded, "MOST_WATCHING", 3)
    bounded_graph(loaded)
    limits.setattr(bounded, "MOST_WATCHING", 2)
    line = SOUND.read_text("utf-8").splitlines().index("  avdd:") + 1
    advice = "describe the codes of one detector as codes, or split the description"
    expected = Fault(Place("sound.yaml", line, 3), "rails.avdd", "more than 2 detectors watch it (found 3)", advice)
    assert faults(loaded) == (expected,)


def test_every_crowd_and_the_row_are_told_at_once(limits: pytest.MonkeyPatch) -> None:
    loaded = load(SOUND)
    limits.setattr(bounded, "MOST_WATCHING", 0)
    limits.setattr(bounded, "MOST_IN_A_ROW", 1)
    told = faults(loaded)
    assert {fault.path for fault in told} > {"rails.avdd", "rails.vcore"}
    assert len(told) == 3


def test_a_ring_of_several_sections_is_told_at_its_first_element(limits: pytest.MonkeyPatch, tmp_path: Path) -> None:
    file = tmp_path / "mixed.yaml"
    file.write_text("rails:\n  c: {made_by: m}\nloads:\n  m: {needs: [{rail: c}]}\n", "utf-8")
    limits.setattr(bounded, "MOST_IN_A_ROW", 1)
    problem = "more than 1 elements lean on each other in a ring"
    assert faults(load(file, shown="mixed.yaml")) == (Fault(Place("mixed.yaml", 2, 3), "rails.c", problem, ADVICE),)
