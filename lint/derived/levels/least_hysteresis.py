"""How much hysteresis a detector needs at least."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.hysteresis_need import need_at_coverage, need_over_life
from tidegate.lint.derived.levels.trip_levels import hysteresis_window
from tidegate.lint.description.model.detector import Comparator


def nominal_hysteresis_needed_v(case: Case, comparator: Comparator, *, nominal_v: float, anywhere: bool) -> float:
    """The least hysteresis as a nominal value, with the tolerance that it has, in V.

    ``anywhere``: whether the levels have no place yet, so that a dip of the supply can fall between them.
    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    needed_v = least_hysteresis_v(case, comparator, anywhere=anywhere)
    return needed_v + max(0.0, nominal_v - hysteresis_window(case, comparator).least_v)


def least_hysteresis_v(case: Case, comparator: Comparator, *, anywhere: bool) -> float:
    """The least hysteresis that covers what disturbs the supply and lets noise trip it seldom enough, in V.

    Raises: DomainError: where a formula refuses its numbers.
    """
    needs = (ask(case, comparator, placed=not anywhere) for ask in (need_at_coverage, need_over_life))
    return max(need.value for need in needs)
