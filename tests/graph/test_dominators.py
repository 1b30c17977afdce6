"""What stands on every way, against NetworkX and by taking each node out."""

from __future__ import annotations

import networkx as nx
from hypothesis import given, settings

from tests.graph.random_graphs import Successors, as_networkx, chain, graphs
from tidegate.lint.graph.dominators import immediate_dominators, on_every_way, on_every_way_to_each

DEEP = 20_000


@given(graphs(most=9))
@settings(max_examples=80, deadline=None)
def test_immediate_dominators_are_those_of_networkx(successors: Successors) -> None:
    expected = dict(nx.immediate_dominators(as_networkx(successors), "n0"))
    expected.pop("n0", None)  # NetworkX 3.6 leaves the start node out, versions before it do not
    assert immediate_dominators(successors, "n0") == expected


@given(graphs(most=8))
@settings(max_examples=60, deadline=None)
def test_on_every_way_is_whatever_cuts_the_goal_off(successors: Successors) -> None:
    whole = as_networkx(successors)
    for goal in list(successors)[1:]:
        reached = nx.has_path(whole, "n0", goal)
        cutting = set()
        for node in set(successors) - {"n0", goal}:
            less = whole.copy()
            less.remove_node(node)
            if reached and not nx.has_path(less, "n0", goal):
                cutting.add(node)
        chain_found = on_every_way(successors, "n0", goal)
        assert set(chain_found) == cutting
        assert len(chain_found) == len(cutting)
        lengths = nx.single_source_shortest_path_length(whole, "n0")
        distances = [lengths[node] for node in chain_found]
        assert distances == sorted(distances)  # from the root on
    goals = list(successors)[1:]
    singly = [on_every_way(successors, "n0", goal) for goal in goals]
    assert on_every_way_to_each(successors, "n0", goals) == singly


def test_a_goal_that_is_the_root_or_unknown_has_nothing_before_it() -> None:
    assert on_every_way({"a": ["b"], "b": ["a"]}, "a", "a") == ()
    assert on_every_way({"a": ["b"], "b": []}, "a", "elsewhere") == ()


def test_heads_that_are_no_keys_lead_nowhere() -> None:
    assert immediate_dominators({"a": ["b"]}, "a") == {"b": "a"}


def test_deep_chain() -> None:
    successors = chain(DEEP)
    last = f"n{DEEP - 1}"
    assert len(on_every_way(successors, "n0", last)) == DEEP - 2
    successors["n0"].append(last)  # a second way past all of them
    assert on_every_way(successors, "n0", last) == ()


def test_deep_chain_with_a_way_back_from_every_node() -> None:
    successors = chain(DEEP)
    for heads in successors.values():
        heads.append("n0")
    assert len(immediate_dominators(successors, "n0")) == DEEP - 1
