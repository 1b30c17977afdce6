"""The error of a level that is made without a reference: how far its components move it from where it is stated."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.crossover.crossover_level import release_level
from tidegate.lint.description.model.detector import Comparator


def stated_centre_v(comparator: Comparator) -> float | None:
    """The level, in V, at which a crossover is stated to let go; None where not one is, but a range, or several."""
    if comparator.crossover is None or comparator.codes or comparator.trip is None or comparator.trip.rising is None:
        return None
    rising = comparator.trip.rising
    return rising.typical if rising.plain else None


@answered_once
def crossover_error_v(case: Case, comparator: Comparator, *, upwards: bool) -> float:
    """How far up, or down, the components move the level at most, in V; 0 where they do not reach that side.

    It moves the falling level as it does the rising one.
    Raises:
        MissingFactsError: where a component is not given.
        NoCrossingError: where at some corner there is no level.
    """
    centre_v = stated_centre_v(comparator)
    assert centre_v is not None
    level = release_level(case, comparator)
    return max(level.most().level_v - centre_v if upwards else centre_v - level.least().level_v, 0.0)
