"""Strong components and the cycle of greatest mean weight, against NetworkX and a linear programme."""

from __future__ import annotations

import math
import random
from collections.abc import Mapping

import networkx as nx
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from tests.graph.random_graphs import Successors, as_networkx, chain, graphs
from tidegate.lint.graph.cycles import MeanCycle, greatest_mean_cycle, loops, strong_components

Weights = Mapping[str, Mapping[str, float]]
DEEP = 20_000


@given(graphs(most=9))
@settings(max_examples=80, deadline=None)
def test_strong_components_are_those_of_networkx(successors: Successors) -> None:
    found = strong_components(successors)
    expected = {frozenset(component) for component in nx.strongly_connected_components(as_networkx(successors))}
    assert {frozenset(component) for component in found} == expected
    assert sum(map(len, found)) == len(successors)  # each node in one of them, once
    home = {node: number for number, component in enumerate(found) for node in component}
    assert all(
        home[head] <= home[tail] for tail, heads in successors.items() for head in heads
    )  # what is leant on first


@given(graphs(most=9))
@settings(max_examples=60, deadline=None)
def test_loops_hold_every_node_on_a_cycle(successors: Successors) -> None:
    on_cycles = {node for cycle in nx.simple_cycles(as_networkx(successors)) for node in cycle}
    assert {node for loop in loops(successors) for node in loop} == on_cycles


def test_edges_to_other_nodes_are_not_followed() -> None:
    assert strong_components({"a": ["b", "elsewhere"], "b": ["a"]}) == [["a", "b"]]


def test_deep_chain_and_deep_ring() -> None:
    successors = chain(DEEP)
    assert len(strong_components(successors)) == DEEP
    assert loops(successors) == []
    successors[f"n{DEEP - 1}"] = ["n0"]
    assert [len(loop) for loop in loops(successors)] == [DEEP]


@st.composite
def weighted(draw: st.DrawFn) -> Weights:
    """A small graph with weights, many of them alike so that there are ties."""
    successors = draw(graphs(most=6))
    weight = st.one_of(st.sampled_from((-1.0, 0.0, 0.5, 1.0)), st.floats(-5.0, 5.0))
    return {tail: {head: draw(weight) for head in dict.fromkeys(heads)} for tail, heads in successors.items()}


def mean_of(cycle: tuple[str, ...], weights: Weights) -> float:
    """The mean weight of a cycle, edge by edge; a step that is no edge is an error here."""
    return math.fsum(weights[cycle[number - 1]][node] for number, node in enumerate(cycle)) / len(cycle)


@given(weighted())
@settings(max_examples=120, deadline=None)
def test_greatest_mean_cycle_is_the_best_of_all_simple_cycles(weights: Weights) -> None:
    cycles = list(nx.simple_cycles(as_networkx({tail: list(heads) for tail, heads in weights.items()})))
    found = greatest_mean_cycle(weights)
    if not cycles:
        assert found is None
        return
    assert found is not None
    assert len(set(found.nodes)) == len(found.nodes)
    assert found.mean == pytest.approx(mean_of(found.nodes, weights), abs=1e-12)
    # Two ways that differ by less than 1e-12 of the greatest weight, for each of at most six nodes, count as equal.
    assert found.mean == pytest.approx(max(mean_of(tuple(cycle), weights) for cycle in cycles), abs=1e-10)


@pytest.mark.parametrize("seed", range(4))
def test_greatest_mean_cycle_against_a_linear_programme(seed: int) -> None:
    # The greatest mean is the least m for which heights p exist with p[tail] + m >= p[head] + weight for every edge:
    # the dual of the best circulation of total flow 1; solved by SciPy's linprog.
    random_numbers = random.Random(seed)
    count = 40
    weights = {
        f"n{tail}": {f"n{head}": random_numbers.gauss(0.0, 1.0) for head in random_numbers.sample(range(count), 4)}
        for tail in range(count)
    }
    rows = [(int(tail[1:]), int(head[1:]), w) for tail, heads in weights.items() for head, w in heads.items()]
    matrix = np.zeros((len(rows), count + 1))
    for row, (tail, head, _) in enumerate(rows):
        matrix[row, tail] -= 1.0
        matrix[row, head] += 1.0
        matrix[row, count] = -1.0
    cost = np.zeros(count + 1)
    cost[count] = 1.0
    solved = linprog(cost, A_ub=matrix, b_ub=[-w for _, _, w in rows], bounds=[(None, None)] * (count + 1))
    found = greatest_mean_cycle(weights)
    assert found is not None
    assert found.mean == pytest.approx(solved.fun, abs=1e-8)  # the solver's own tolerance


def test_product_of_one_has_a_mean_logarithm_of_zero() -> None:
    ratios = {"a": {"b": 0.5}, "b": {"c": 4.0}, "c": {"a": 0.5}}
    found = greatest_mean_cycle(
        {tail: {head: math.log(r) for head, r in heads.items()} for tail, heads in ratios.items()}
    )
    assert found is not None
    assert set(found.nodes) == {"a", "b", "c"}
    assert found.mean == pytest.approx(0.0, abs=1e-15)


def test_an_edge_to_itself_is_a_cycle() -> None:
    assert greatest_mean_cycle({"a": {"a": -2.0, "b": 9.0}, "b": {}}) == MeanCycle(("a",), -2.0)


def test_long_ring_has_the_mean_of_its_edges() -> None:
    random_numbers = random.Random(7)
    steps = [random_numbers.uniform(-1.0, 1.0) for _ in range(20_000)]
    found = greatest_mean_cycle({f"n{n}": {f"n{(n + 1) % len(steps)}": step} for n, step in enumerate(steps)})
    assert found is not None
    assert len(found.nodes) == len(steps)
    assert found.mean == pytest.approx(math.fsum(steps) / len(steps), abs=1e-12)


def test_of_cycles_as_good_as_each_other_the_first_is_told() -> None:
    apart = {"a": {"a": 1.0}, "b": {"b": 1.0}}
    assert greatest_mean_cycle(apart) == MeanCycle(("a",), 1.0)
    together = {"a": {"a": 1.0, "b": 0.0}, "b": {"b": 1.0, "a": 0.0}}
    assert greatest_mean_cycle(together) == MeanCycle(("a",), 1.0)


def test_a_cycle_is_told_from_where_it_was_first_entered() -> None:
    # From a the heavier edge enters at c; the way by d gains more, and leads to the same cycle of mean 2.
    weights = {"a": {"c": 1.0, "d": 0.5}, "c": {"d": 1.0}, "d": {"c": 3.0, "a": -9.0}}
    assert greatest_mean_cycle(weights) == MeanCycle(("c", "d"), 2.0)


@pytest.mark.parametrize("count", [3, 10, 25])
def test_a_gain_that_takes_a_round_a_node_to_come_through_is_waited_for(count: int) -> None:
    """Only x1 to xn, y and back is good, and each x learns so a round after the next: n rounds without a better mean.

    c waits on itself with 0; c to x1 costs 5; y to c brings 10; from each x the way back to c looks good at first.
    """
    names = [f"x{number}" for number in range(1, count + 1)]
    weights: dict[str, dict[str, float]] = {
        name: {"c": 0.1 * (count - number), next_: 0.0}
        for number, (name, next_) in enumerate(zip(names, [*names[1:], "y"], strict=True))
    }
    weights |= {"y": {"c": 10.0}, "c": {"c": 0.0, "x1": -5.0}}
    found = greatest_mean_cycle(weights)
    assert found is not None
    assert set(found.nodes) == {"c", "y", *names}
    assert found.mean == pytest.approx(5.0 / (count + 2))
    hash(found)  # cannot be changed
