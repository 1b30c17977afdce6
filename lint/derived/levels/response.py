"""How long a detector takes to answer, and how far its rail moves meanwhile."""

from __future__ import annotations

import math

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.view import Number
from tidegate.lint.physics.trip_window import droop_during_response_v, response_time_s
from tidegate.lint.quantity import Dimension, show


@answered_once
def answer_s(case: Case, comparator: Comparator) -> float:
    """Longest time from the crossing to the answer, in s."""
    own = case.of(comparator)
    return response_time_s(delay_s=own.delay.most(), filter_s=own.filter.most(), sampling_period_s=own.sampling.most())


def slope(case: Case, comparator: Comparator) -> Number:
    """The fact that says how steeply the rail moves out of service, towards the level that asserts."""
    rail = case.of(case.description.rails[comparator.watches])
    return rail.overshoot if comparator.role == "over_voltage" else rail.collapse


@answered_once
def moved_v(case: Case, comparator: Comparator) -> float:
    """How far the rail moves on while the detector answers, in V."""
    return droop_during_response_v(slew_v_per_s=slope(case, comparator).most(), delay_s=answer_s(case, comparator))


def response_text(case: Case, comparator: Comparator) -> str:
    """The move of the rail until the answer, in words, as far as it is known."""
    moves = "rises" if comparator.role == "over_voltage" else "falls"
    moved = case.if_known(lambda: (answer_s(case, comparator), moved_v(case, comparator)))
    if moved is None or not all(map(math.isfinite, moved)):
        return f"{comparator.watches} {moves} by what is not known yet"
    return (
        f"{show(moved[0], Dimension.DURATION)} later, {comparator.watches} {moves} {show(moved[1], Dimension.VOLTAGE)}"
    )
