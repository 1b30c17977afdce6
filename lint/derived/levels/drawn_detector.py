"""A detector as Monte Carlo draws it."""

from __future__ import annotations

import math
from collections.abc import Iterator

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import NoAnswerError
from tidegate.lint.derived.levels.placing import Placing
from tidegate.lint.derived.levels.requirements import Requirement
from tidegate.lint.derived.levels.trip_causes import causes, is_complete, tracks
from tidegate.lint.derived.levels.trip_levels import Which
from tidegate.lint.derived.policy import coverage
from tidegate.lint.description.model.detector import Comparator, Trip
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.physics.part_draws import Level
from tidegate.lint.physics.tolerance import Contributor, Kind, standard_uncertainty_v
from tidegate.lint.physics.yield_estimate import Demand, DrawnDetector, Side


def drawn_detector(case: Case, placing: Placing) -> tuple[DrawnDetector, float]:
    """The detector with its errors and all that its levels must keep, and the coverage at which a bound counts.

    Raises:
        MissingFactsError: where not everything is known that its levels must keep, what moves them, or which errors
            move both together.
        NoAnswerError: where its levels are not stated as nominal values.
    """
    detector = placing.detector
    trip = detector.trip or Trip()
    falling_v, rising_v = (
        None if span is None or not span.plain else span.typical for span in (trip.falling, trip.rising)
    )
    if falling_v is None or rising_v is None:
        raise NoAnswerError("not drawn: give both levels as nominal values with error contributors")
    if not is_complete(detector):
        raise MissingFactsError([case.of(detector).errors.path])
    up, down = (_contributors(case, detector, level_v) for level_v in (rising_v, falling_v))
    sigmas = coverage(case)
    ratio = _sigma_v(up, sigmas) / _sigma_v(down, sigmas) if _sigma_v(down, sigmas) else 1.0
    demands = tuple(
        # Errors are drawn in the size they have at the rising level. Those of the falling level are smaller by one
        # ratio of standard deviations; its limits move away by the same ratio, which leaves the share that fails.
        Demand(
            f"{required.name} ({which})", Level(which), Side(required.end),
            limit_v if which == "rising" else falling_v + (limit_v - falling_v) * ratio,
        )
        for required in _required(case, placing)
        for which in _levels(detector, required)
        if math.isfinite(limit_v := required.need.value)
    )  # fmt: skip
    return DrawnDetector(detector.id, rising_v, falling_v, tuple(up), demands), sigmas


def _required(case: Case, placing: Placing) -> Iterator[Requirement]:
    for due in placing.dues:
        found = due.work_out(case, placing.detector)
        if found is not None:
            yield found


def _levels(detector: Comparator, required: Requirement) -> tuple[Which, ...]:
    """The levels that must keep a requirement: both, where it is the lower one."""
    both = detector.role == "power_on" and required.name == "protects"
    return ("falling", "rising") if both else (required.which,)


def _contributors(case: Case, detector: Comparator, level_v: float) -> list[Contributor]:
    """The errors of a level in V; a standard deviation is that of a normal distribution."""
    return [
        Contributor(
            name=each.name, at_rail_v=each.at_v(level_v), kind=each.kind,
            coverage=1.0 if each.kind is Kind.SIGMA else None, rectangular=False,
            tracks=tracks(case, detector, each.name),
        )
        for each in causes(case, detector)
    ]  # fmt: skip


def _sigma_v(errors: list[Contributor], sigmas: float) -> float:
    return math.hypot(*(standard_uncertainty_v(error, coverage=sigmas) for error in errors))
