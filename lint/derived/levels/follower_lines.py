"""What must work once a power-on detector lets go, and the supply that it needs at each temperature."""

from __future__ import annotations

from collections.abc import Sequence

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.guarded_loads import Bound
from tidegate.lint.physics.domain import product


class FollowerLine(msgspec.Struct, frozen=True):
    """The supply that an element needs: a straight line over temperature.

    Symbols:
        at_cold_v      V    at the lowest temperature
        slope_v_per_k  V/K  how it moves, where that helps least
    """

    element: str
    at_cold_v: float
    slope_v_per_k: float

    def needs_v(self, t_k: float, cold_k: float) -> float:
        """The supply needed at a temperature, V."""
        return self.at_cold_v + product(self.slope_v_per_k, t_k - cold_k)


def follower_lines(case: Case, bounds: Sequence[Bound]) -> list[FollowerLine]:
    """A line for each element that follows: level where nothing is said about temperature."""
    return [_line(case, bound) for bound in bounds]


def most_demanding(lines: Sequence[FollowerLine], t_k: float, cold_k: float) -> FollowerLine:
    """The line that needs most at a temperature."""
    return max(lines, key=lambda line: (line.needs_v(t_k, cold_k), line.element))


def _line(case: Case, bound: Bound) -> FollowerLine:
    reference = case.description.references.get(bound.element)
    if reference is None or reference.works_from_slope is None:
        return FollowerLine(bound.element, bound.level_v, 0.0)
    facts = case.of(reference)
    return FollowerLine(bound.element, facts.works_from.most(), facts.works_from_slope.most())
