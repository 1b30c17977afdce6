"""What is kept of the last answer, and for which questions."""

from __future__ import annotations

from tests.rules.sound import patched
from tidegate.lint.description.model.description import Description
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.kept_last import keeps_last


def test_an_answer_is_kept_for_the_same_two_objects_alone() -> None:
    asked: list[tuple[Description, Graph]] = []

    @keeps_last
    def count(description: Description, graph: Graph) -> int:
        """How often it was asked."""
        asked.append((description, graph))
        return len(asked)

    first, second = patched("").description, patched("").description
    one, other = build(first), build(first)
    assert count(first, one) == count(first, one) == 1
    assert count(first, other) == 2  # another graph
    assert count(second, other) == 3  # another description, though it says the same
    assert count(second, other) == 3
    assert count(first, one) == 4  # no more than the last one is kept
    assert asked == [(first, one), (first, other), (second, other), (first, one)]
    assert count.__name__ == "count"
    assert count.__doc__ == "How often it was asked."


def test_two_questions_do_not_share_what_they_keep() -> None:
    description = patched("").description
    graph = build(description)
    assert keeps_last(lambda *_: "one")(description, graph) == "one"
    assert keeps_last(lambda *_: "other")(description, graph) == "other"
