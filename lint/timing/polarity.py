"""The level at a stage's output that asserts the reset nets behind it."""

from __future__ import annotations

from collections import deque
from collections.abc import Mapping
from typing import Final

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind

_OPPOSITE: Final = {"low": "high", "high": "low"}
_INVERTS_BY_KIND: Final = {"inverter": True, "buffer": False}


class Polarity(msgspec.Struct, frozen=True):
    """The levels of all stages that assert, and the facts that are missing for those of which it is not known."""

    level: Mapping[str, str | None]
    unsaid: Mapping[str, tuple[str, ...]]


def polarity(description: Description, graph: Graph) -> Polarity:
    """The levels that assert, and what is missing for them."""
    return Polarity(asserting_levels(description, graph), _unsaid(description, graph))


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
        inverts = _inverts(stage)
        out = level[stage.id]
        at_input = None if out is None or inverts is None else (_OPPOSITE[out] if inverts else out)
        for driver in graph.tails(stage.id, EdgeKind.DRIVES):
            _meet(level, driver, at_input, waiting)
    return level


def _inverts(stage: OutputStage) -> bool | None:
    return stage.inverting if stage.inverting is not None else _INVERTS_BY_KIND.get(stage.kind or "")


def _meet(level: dict[str, str | None], element: str, found: str | None, waiting: deque[str]) -> None:
    """Note a level; an element that is wanted at two levels has none."""
    if element not in level:
        level[element] = found
    elif level[element] is None or level[element] == found:
        return
    else:
        level[element] = None
    waiting.append(element)


def _unsaid(description: Description, graph: Graph) -> Mapping[str, tuple[str, ...]]:
    """Of each stage, the nearest facts behind it without which the level that asserts is not known."""
    found: dict[str, dict[str, None]] = {}
    starts = [(net.id, net.fact("active")) for net in description.resets.values() if net.active is None]
    stages = description.output_stages.values()
    starts += [(stage.id, stage.fact("inverting")) for stage in stages if _inverts(stage) is None]
    for start, fact in starts:
        waiting, seen = [start], {start}
        for here in waiting:
            for driver in graph.tails(here, EdgeKind.DRIVES):
                if driver not in seen:
                    seen.add(driver)
                    found.setdefault(driver, {})[fact] = None
                    element = graph.elements[driver]
                    if isinstance(element, OutputStage) and _inverts(element) is not None:
                        waiting.append(driver)
    return {name: tuple(facts) for name, facts in found.items()}
