"""The level at a stage's output that asserts the reset nets behind it."""

from __future__ import annotations

from collections import deque
from collections.abc import Mapping
from typing import Final

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind

_OPPOSITE: Final = {"low": "high", "high": "low"}
_INVERTS_BY_KIND: Final = {"inverter": True, "buffer": False}


def asserting_levels(description: Description, graph: Graph) -> Mapping[str, str | None]:
    """Of each stage, ``low`` or ``high``; None where ways lead to nets that differ, or a fact is missing."""
    level: dict[str, str | None] = {}
    waiting: deque[str] = deque()
    for reset in description.resets.values():
        for driver in graph.tails(reset.id, EdgeKind.DRIVES):
            _meet(level, driver, reset.active, waiting)
    while waiting:
        stage = graph.elements[waiting.popleft()]
        if not isinstance(stage, OutputStage):
            continue
        inverts = stage.inverting if stage.inverting is not None else _INVERTS_BY_KIND.get(stage.kind or "")
        out = level[stage.id]
        at_input = None if out is None or inverts is None else (_OPPOSITE[out] if inverts else out)
        for driver in graph.tails(stage.id, EdgeKind.DRIVES):
            _meet(level, driver, at_input, waiting)
    return level


def _meet(level: dict[str, str | None], element: str, found: str | None, waiting: deque[str]) -> None:
    """Note a level; an element that is wanted at two levels has none."""
    if element not in level:
        level[element] = found
    elif level[element] is None or level[element] == found:
        return
    else:
        level[element] = None
    waiting.append(element)
