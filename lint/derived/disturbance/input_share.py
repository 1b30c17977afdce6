"""What stands between the rail and the input of a comparator."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator


def input_share(case: Case, comparator: Comparator) -> float:
    """The part of a change of the rail that reaches the comparison, 0 to 1: 1 where it is said that nothing divides.

    Where a crossover makes the level, both sides of the comparison move with the rail, so that the part is less than
    what the crossover compares: it must be given.
    """
    return case.of(comparator).divider.ratio.number()
