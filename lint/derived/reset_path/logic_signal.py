"""Where a logic signal comes from, and whether it arrives inverted."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.reset_path import inverts
from tidegate.lint.description.model.reset_path import OutputStage


class Origin(msgspec.Struct, frozen=True):
    """The element that makes a signal, and whether the signal is its inverse."""

    element: str
    inverted: bool


def origin(case: Case, element: str) -> Origin:
    """Follow a signal back through stages that pass it on: one driver, and no memory.

    Where it is not given what a stage on the way does, all that it may do is tried.
    """
    inverted = False
    seen: set[str] = set()
    while element not in seen:
        seen.add(element)
        stage = case.graph.elements[element]
        if not isinstance(stage, OutputStage) or stage.driven_by is None or len(stage.driven_by) != 1:
            break
        if case.of(stage).kind.must() == "latch":
            break
        inverted ^= inverts(case, stage)
        element = stage.driven_by[0]
    return Origin(element, inverted)
