"""A detector as Monte Carlo draws it."""

from __future__ import annotations

import math

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import NoAnswerError
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.placement_facts import PlacementFacts, limits
from tidegate.lint.derived.levels.trip_levels import level_errors
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.placement import Level, Limit
from tidegate.lint.physics.tolerance import Contributor, standard_uncertainty_v
from tidegate.lint.physics.yield_estimate import Demand, DrawnDetector


def drawn_detector(case: Case, comparator: Comparator, facts: PlacementFacts) -> tuple[DrawnDetector, float]:
    """The detector with its errors and all that its levels must keep, and the coverage at which a bound counts.

    Raises: MissingFactsError: where it is not said which errors move both levels together, or what a bound counts as.
    """
    levels = facts.levels
    own = levels.falling.half_v == 0.0 == levels.rising.half_v and not levels.falling.above_base_v
    if levels.falling_v is None or levels.rising_v is None or not own or levels.rising.above_base_v:
        raise NoAnswerError("not drawn: give both levels as nominal values with error contributors")
    shipped = as_shipped(case, comparator)
    (up, _, _), (down, _, _), coverage = case.gather(
        lambda: level_errors(case, shipped, levels.rising_v or 0.0, tracking_matters=True),
        lambda: level_errors(case, shipped, levels.falling_v or 0.0, tracking_matters=True),
        lambda: case.whole.number("conditions.coverage"),
    )
    ratio = _sigma_v(up, coverage) / _sigma_v(down, coverage) if _sigma_v(down, coverage) else 1.0

    def limit_v(limit: Limit) -> float:
        # Errors are drawn in the size they have at the rising level. Those of the falling level are smaller by one
        # ratio of standard deviations; its limits move away by the same ratio, which leaves the share that fails.
        if limit.level is Level.RISING or levels.falling_v is None:
            return limit.nominal_v
        return levels.falling_v + (limit.nominal_v - levels.falling_v) * ratio

    demands = tuple(
        Demand(f"{limit.by.value} ({limit.level.value})", limit.level, limit.side, limit_v(limit))
        for limit in limits(facts)
    )
    return DrawnDetector(comparator.id, levels.rising_v, levels.falling_v, tuple(up), demands), coverage


def _sigma_v(errors: list[Contributor], coverage: float) -> float:
    return math.hypot(*(standard_uncertainty_v(error, coverage=coverage) for error in errors))
