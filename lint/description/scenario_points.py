"""The points of described waveforms: each at one time and one level, none before the one above it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from tidegate.lint.description.model.description import Description, Point
from tidegate.lint.description.place import Fault, Path, dotted
from tidegate.lint.description.sources import Sources
from tidegate.lint.quantity import Dimension, show


def point_faults(description: Description, sources: Sources) -> list[Fault]:
    """What keeps the waveforms of the scenarios from being drawn; empty if nothing does."""
    return [
        Fault(sources.place(path), dotted(path), problem, advice)
        for name, scenario in description.scenarios.items()
        for number, waveform in enumerate(scenario.waveforms)
        for path, problem, advice in _wrong(waveform.points, ("scenarios", name, "waveforms", number, "points"))
    ]


def _wrong(points: Sequence[Point], above: Path) -> Iterator[tuple[Path, str, str]]:
    before_s = 0.0
    for index, point in enumerate(points):
        for fact, noun, span in (("at", "time", point.at), ("level", "level", point.level)):
            if span.middle is None:
                advice = f"a point has one {noun}: write it without min and max"
                yield (*above, index, fact), "one end of a range", advice
        at_s = point.at.middle
        if at_s is not None and at_s < before_s:
            times = f"{show(at_s, Dimension.DURATION)} after {show(before_s, Dimension.DURATION)}"
            yield (*above, index, "at"), f"goes back in time ({times})", "write the points in the order of their times"
        before_s = before_s if at_s is None else at_s
