"""The sound example with a patch laid over it, placed: what the tests of placement share."""

from __future__ import annotations

from functools import cache

from tests.rules.sound import patched
from tidegate.lint.derived.asking import ask
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement, detector_placement
from tidegate.lint.derived.levels.level_placement import LevelPlacement
from tidegate.lint.derived.levels.trip_levels import TripLevel, falling_window, rising_window
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.trip_window import Window


@cache
def placed(patch: str, detector: str) -> DetectorPlacement:
    """The whole answer for one detector."""
    description = patched(patch).description
    return detector_placement(description, build(description), description.comparators[detector])


def found(patch: str, detector: str) -> LevelPlacement:
    """The interval of one detector."""
    return placed(patch, detector).found


def falling_v(answer: LevelPlacement) -> tuple[float, float]:
    """The interval of the falling level, as far as is known, in V."""
    point_v = answer.stated.falling_v
    assert point_v is not None
    return point_v + answer.best.least_v, point_v + answer.best.most_v


def limited_by(answer: LevelPlacement) -> tuple[str, str]:
    """The names of the requirements that set either end."""
    assert answer.best.below is not None and answer.best.above is not None
    return answer.best.below.name, answer.best.above.name


def margins_v(answer: LevelPlacement) -> dict[str, float]:
    """How far the levels as they stand keep each requirement; nothing may be missing."""
    assert all(each.sure_v == each.best_v for each in answer.kept)
    return {each.name: each.best_v for each in answer.kept}


@cache
def windows(patch: str, detector: str) -> tuple[Window, Window]:
    """Where the falling and the rising level lie, by the way that the rules go."""
    description = patched(patch).description
    graph, comparator = build(description), description.comparators[detector]

    def ends(level: TripLevel) -> Window:
        return Window(level.least_v, level.most_v)

    down = ask(description, graph, comparator, lambda case: ends(falling_window(case, comparator)))
    up = ask(description, graph, comparator, lambda case: ends(rising_window(case, comparator)))
    assert isinstance(down, Window) and isinstance(up, Window)
    return down, up
