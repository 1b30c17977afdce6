"""How long a detector takes to answer, and how far its rail moves meanwhile."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.trip_window import droop_during_response_v, response_time_s


class Response(msgspec.Struct, frozen=True):
    """The longest answer of a detector in its parts, and the steepest move of its rail away from service."""

    delay_s: float
    filter_s: float
    sampling_s: float
    slew_v_per_s: float

    @property
    def time_s(self) -> float:
        """Longest time from the crossing to the answer, in s."""
        return response_time_s(delay_s=self.delay_s, filter_s=self.filter_s, sampling_period_s=self.sampling_s)

    @property
    def moved_v(self) -> float:
        """How far the rail moves on in that time, in V."""
        return droop_during_response_v(slew_v_per_s=self.slew_v_per_s, delay_s=self.time_s)


@answered_once
def response(case: Case, comparator: Comparator) -> Response:
    """The longest answer of a detector; a filter or a sampling period that is left out is not there.

    Raises: MissingFactsError: where its delay, or the slope of its rail, is not given.
    """
    facts = case.of(comparator)
    rail = case.of(case.description.rails[comparator.watches])
    found = Response(
        delay_s=facts.most("delay"),
        filter_s=0.0 if comparator.filter is None else facts.most("filter"),
        sampling_s=0.0 if comparator.sampling is None else facts.most("sampling"),
        slew_v_per_s=rail.most("overshoot" if comparator.role == "over_voltage" else "collapse"),
    )
    case.settle()
    return found
