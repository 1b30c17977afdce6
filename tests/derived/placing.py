"""The sound example with a patch laid over it, placed: what the tests of placement share."""

from __future__ import annotations

from functools import cache

from tests.rules.sound import patched
from tidegate.lint.derived.asking import ask
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement, detector_placement
from tidegate.lint.derived.levels.level_placement import LevelPlacement
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.trip_window import Window


@cache
def placed(patch: str, detector: str) -> DetectorPlacement:
    """The whole answer for one detector."""
    description = patched(patch).description
    return detector_placement(description, build(description), description.comparators[detector])


def found(patch: str, detector: str) -> LevelPlacement:
    """The interval of one detector; it must be known."""
    answer = placed(patch, detector).found
    assert isinstance(answer, LevelPlacement), answer
    return answer


@cache
def windows(patch: str, detector: str) -> tuple[Window, Window]:
    """Where the falling and the rising level lie, by the way that the rules go."""
    description = patched(patch).description
    graph, comparator = build(description), description.comparators[detector]
    down = ask(description, graph, comparator, lambda case: falling_window(case, comparator))
    up = ask(description, graph, comparator, lambda case: rising_window(case, comparator))
    assert isinstance(down, Window) and isinstance(up, Window)
    return down, up
