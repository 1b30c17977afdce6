"""What stands between the rail and the input of a comparator."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator


def input_share(case: Case, comparator: Comparator) -> float:
    """The part of a change of the rail that reaches the comparison; 1 where the input is the rail itself.

    Where a crossover makes the level, both sides of the comparison move with the rail, so that the part is less than
    what the crossover compares: it must be given.
    Raises: MissingFactsError: where it is not given.
    """
    if comparator.divider is None and comparator.crossover is None:
        return 1.0
    share = case.of(comparator).number("divider.ratio")
    case.settle()
    return share
