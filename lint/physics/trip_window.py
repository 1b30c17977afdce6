"""How far a trip level may lie off, and how far the supply moves on until the answer."""

from __future__ import annotations

from collections.abc import Sequence
from enum import Enum

import msgspec

from tidegate.lint.physics.domain import DomainError, product, require_finite, require_size
from tidegate.lint.physics.tolerance import Contributor, root_sum_square_v, worst_case_v


class Combination(Enum):
    """How error contributors are combined."""

    WORST_CASE = "worst case"
    ROOT_SUM_SQUARE = "root sum square"


class Window(msgspec.Struct, frozen=True):
    """Range of a voltage, ends included.

    Raises: DomainError: an end that is not finite; ends the wrong way round.
    """

    least_v: float
    most_v: float

    def __post_init__(self) -> None:
        require_finite(least_v=self.least_v, most_v=self.most_v)
        if self.least_v > self.most_v:
            raise DomainError(f"least_v must be at most most_v, {self.most_v!r} (found {self.least_v!r})")


def combined_error_v(contributors: Sequence[Contributor], *, coverage: float, method: Combination) -> float:
    """Error of one level under the chosen combination.

    Formula: worst_case_v or root_sum_square_v
    Symbols:
        contributors        errors at the rail
        coverage      k  -  coverage factor, > 0
        method              which combination
    Returns: E, in V.
    Valid: as for the combination chosen.
    Source: as for the combination chosen.
    Raises: DomainError: if k is not above 0.
    """
    if method is Combination.WORST_CASE:
        return worst_case_v(contributors, coverage=coverage)
    return root_sum_square_v(contributors, coverage=coverage)


def response_time_s(*, delay_s: float, filter_s: float, sampling_period_s: float) -> float:
    """Longest time from the crossing to the answer.

    Formula: t = t_d + t_f + T_s
    Symbols:
        delay_s            t_d  s  response of the comparator at the overdrive it gets, >= 0
        filter_s           t_f  s  time the crossing must last to count, >= 0
        sampling_period_s  T_s  s  time between looks, >= 0; 0 where it always looks
    Returns: t, in s.
    Valid: a crossing just after a look waits a whole period.
    Source: sum of delays in series.
    Raises: DomainError: a time below 0.
    """
    require_size(delay_s=delay_s, filter_s=filter_s, sampling_period_s=sampling_period_s)
    return delay_s + filter_s + sampling_period_s


def droop_during_response_v(*, slew_v_per_s: float, delay_s: float) -> float:
    """How far the supply goes on moving while the detector answers.

    Formula: dV = s t
    Symbols:
        slew_v_per_s  s  V/s  fastest collapse or overshoot, as a magnitude, >= 0
        delay_s       t  s    longest response (response_time_s), >= 0
    Returns: dV, in V.
    Valid: constant slew; an upper bound where the supply stops before t is over.
    Source: integral of a constant slew.
    Raises: DomainError: s or t below 0.
    """
    require_size(slew_v_per_s=slew_v_per_s, delay_s=delay_s)
    return product(slew_v_per_s, delay_s)
