"""How a description wants its numbers combined; what it leaves out has a default that every report tells.

Policy is no fact of a circuit: it is never missing, and no corner of a reading is asked for it.
"""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.description.model.description import POLICY, Conditions
from tidegate.lint.physics.trip_window import Combination

_NOTHING_SAID = Conditions()


def combination(case: Case) -> Combination:
    """How error contributors combine: in the worst case, unless the conditions say otherwise."""
    return Combination[str(_said(case).combine or POLICY["combine"]).upper()]


def coverage(case: Case) -> float:
    """With how many standard deviations a random quantity counts."""
    given = _said(case).coverage
    return float(POLICY["coverage"]) if given is None else float(given)


def false_trips(case: Case) -> float:
    """How many false trips from noise are accepted over the service life."""
    given = _said(case).false_trips
    return float(POLICY["false_trips"]) if given is None else float(given)


def _said(case: Case) -> Conditions:
    return case.description.conditions or _NOTHING_SAID
