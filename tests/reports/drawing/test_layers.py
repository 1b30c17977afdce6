"""Layers, crossings and positions, held against a count of all pairs, networkx and SciPy."""

from __future__ import annotations

import random
from itertools import combinations, pairwise

import networkx
import numpy
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import minimize

from tidegate.lint.reports.drawing.layers import crossings, layer_of_each, ordered, spread


def two_layers(seed: int) -> tuple[list[list[str]], list[tuple[str, str]]]:
    dice = random.Random(seed)
    upper = [f"u{number}" for number in range(dice.randint(1, 8))]
    lower = [f"l{number}" for number in range(dice.randint(1, 8))]
    links = [(one, other) for one in upper for other in lower if dice.random() < 0.4]
    return [upper, lower], links


@given(st.integers(0, 10_000))
def test_crossings_are_the_pairs_that_cross(seed: int) -> None:
    orders, links = two_layers(seed)
    place = {node: number for layer in orders for number, node in enumerate(layer)}
    pairs = sum((place[a] - place[c]) * (place[b] - place[d]) < 0 for (a, b), (c, d) in combinations(links, 2))
    assert crossings(orders, links) == pairs


@given(st.integers(0, 10_000))
def test_ordering_never_adds_crossings_and_keeps_lanes(seed: int) -> None:
    orders, links = two_layers(seed)
    lane = {node: int(node[1:]) % 2 for layer in orders for node in layer}
    by_lane = [sorted(layer, key=lane.__getitem__) for layer in orders]
    found = ordered(orders, links, lane.__getitem__)
    assert crossings(found, links) <= crossings(by_lane, links)
    for before, after in zip(orders, found, strict=True):
        assert sorted(before) == sorted(after)
        assert [lane[node] for node in after] == sorted(lane[node] for node in after)


@given(st.integers(0, 10_000))
def test_layers_are_longest_paths(seed: int) -> None:
    graph = networkx.gnp_random_graph(10, 0.3, seed=seed, directed=True)
    acyclic = networkx.DiGraph([(one, other) for one, other in graph.edges if one < other])
    acyclic.add_nodes_from(range(10))
    nodes = [str(node) for node in range(10)]
    needs = {str(node): [str(other) for other in acyclic.predecessors(node)] for node in acyclic}
    found = layer_of_each(nodes, needs, dict.fromkeys(nodes, 0), most=100)
    for number, generation in enumerate(networkx.topological_generations(acyclic)):
        assert {found[str(node)] for node in generation} == {number}


def test_no_layer_of_a_lane_is_wider_than_asked_and_cycles_do_not_hang() -> None:
    nodes = [f"n{number}" for number in range(30)]
    needs = {"n1": ["n2"], "n2": ["n1"]}
    found = layer_of_each(nodes, needs, dict.fromkeys(nodes, 0), most=7)
    counts = [list(found.values()).count(layer) for layer in set(found.values())]
    assert max(counts) == 7
    assert found["n1"] != found["n2"]


@pytest.mark.parametrize("seed", range(8))
def test_spread_is_the_least_squares_solution(seed: int) -> None:
    # Reference: SciPy's SLSQP on the same constrained problem.
    dice = numpy.random.default_rng(seed)
    wanted = dice.uniform(0.0, 100.0, 6)
    distances = dice.uniform(5.0, 15.0, 5)
    ours = spread(list(wanted), list(distances), low=0.0, high=120.0)
    constraints = [
        {"type": "ineq", "fun": lambda x, number=number: x[number + 1] - x[number] - distances[number]}
        for number in range(5)
    ]
    start = numpy.concatenate(([0.0], numpy.cumsum(distances)))
    solved = minimize(
        lambda x: float(((x - wanted) ** 2).sum()), start, bounds=[(0.0, 120.0)] * 6, constraints=constraints,
        method="SLSQP", options={"ftol": 1e-12, "maxiter": 500},
    )  # fmt: skip
    assert ours == pytest.approx(list(solved.x), abs=1e-3)


@given(st.lists(st.floats(-1e3, 1e3), min_size=1, max_size=12))
def test_spread_keeps_distances(wanted: list[float]) -> None:
    found = spread(wanted, [10.0] * (len(wanted) - 1), low=0.0, high=1000.0)
    assert all(other - one >= 10.0 - 1e-6 for one, other in pairwise(found))
    assert min(found) >= -1e-6
    assert max(found) <= 1000.0 + 1e-6
