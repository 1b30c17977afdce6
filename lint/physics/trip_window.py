"""Windows of the rising and the falling trip level of a comparator, and of the hysteresis between them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from enum import Enum

import msgspec

from tidegate.lint.physics.domain import DomainError, require_finite, require_not_negative
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


class TripWindow(msgspec.Struct, frozen=True):
    """Where both levels lie, and what lies between them.

    The hysteresis is a window of its own: where the levels are tracked, their windows may overlap while the
    hysteresis is sound, so it cannot be read off the other two.

    Symbols:
        rising      R  V  level passed on the way up
        falling     F  V  level passed on the way down
        hysteresis  H  V  R - F of one and the same comparator
        tracked           every error moves both levels together
    """

    rising: Window
    falling: Window
    hysteresis: Window
    tracked: bool


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


def window_from_contributors(
    *,
    rising_v: float,
    falling_v: float,
    contributors: Sequence[Contributor],
    hysteresis_error_v: float,
    coverage: float,
    method: Combination,
) -> TripWindow:
    """Windows of both levels about their nominals.

    Formula: R in [R0 - E, R0 + E], F in [F0 - E, F0 + E], H in [R0 - F0 - E_H, R0 - F0 + E_H];
             E combines all contributors;
             worst case E_H = e_H + 2 E(untracked); root sum square E_H = sqrt(e_H^2 + 2 E(untracked)^2)
    Symbols:
        rising_v            R0   V  nominal rising level
        falling_v           F0   V  nominal falling level
        contributors             all that moves a level, each level alike; tracked ones cancel in H
        hysteresis_error_v  e_H  V  error of the difference itself at coverage k, >= 0; it widens H only (a
                                    level reached through H: window_from_falling, window_from_rising)
        coverage            k    -  coverage factor, > 0
        method                   which combination
    Returns: the three windows, in V; tracked if all contributors are.
    Valid: errors that act alike in both directions; untracked ones act on each level on its own.
    Source: JCGM 100:2008 (GUM), 5.1.2 equation (10), for a difference; worst case: triangle inequality.
    Raises: DomainError: a level not finite; e_H below 0; k not above 0.
    """
    require_finite(rising_v=rising_v, falling_v=falling_v)
    require_not_negative(hysteresis_error_v=hysteresis_error_v)
    untracked = [c for c in contributors if not c.tracks]
    error_v = combined_error_v(contributors, coverage=coverage, method=method)
    apart_v = combined_error_v(untracked, coverage=coverage, method=method)
    if method is Combination.WORST_CASE:
        difference_v = hysteresis_error_v + 2.0 * apart_v
    else:
        difference_v = math.hypot(hysteresis_error_v, math.sqrt(2.0) * apart_v)
    nominal_v = rising_v - falling_v
    return TripWindow(
        rising=Window(rising_v - error_v, rising_v + error_v),
        falling=Window(falling_v - error_v, falling_v + error_v),
        hysteresis=Window(nominal_v - difference_v, nominal_v + difference_v),
        tracked=not untracked,
    )


def window_from_ranges(*, rising: Window, falling: Window, hysteresis: Window | None, tracked: bool) -> TripWindow:
    """Windows from measured or published ranges of the levels.

    Formula: H as given; else, tracked: from R_lo - F_lo to R_hi - F_hi; else: from R_lo - F_hi to R_hi - F_lo
    Symbols:
        rising      R  V  range of the rising level
        falling     F  V  range of the falling level
        hysteresis  H  V  range of their difference, where it is stated; None where it is not
        tracked           both levels come from one reference: low with low, high with high
    Returns: the three windows, in V.
    Valid: ranges of the same parts under the same conditions.
    Source: interval arithmetic; for tracked levels, both ranges run over one shared error.
    Raises: DomainError: never for windows that are themselves valid.
    """
    if hysteresis is None and tracked:
        ends_v = (rising.least_v - falling.least_v, rising.most_v - falling.most_v)
        hysteresis = Window(min(ends_v), max(ends_v))
    elif hysteresis is None:
        hysteresis = Window(rising.least_v - falling.most_v, rising.most_v - falling.least_v)
    return TripWindow(rising=rising, falling=falling, hysteresis=hysteresis, tracked=tracked)


def window_from_falling(*, falling: Window, hysteresis: Window) -> TripWindow:
    """Windows where the falling level and the hysteresis are stated; the rising level is their sum.

    Formula: R in [F_lo + H_lo, F_hi + H_hi]
    Symbols:
        falling     F  V  range of the falling level
        hysteresis  H  V  range of the hysteresis
    Returns: the three windows, in V; tracked.
    Valid: any ranges; wide where F and H are themselves correlated.
    Source: interval arithmetic.
    Raises: DomainError: never for windows that are themselves valid.
    """
    rising = Window(falling.least_v + hysteresis.least_v, falling.most_v + hysteresis.most_v)
    return TripWindow(rising=rising, falling=falling, hysteresis=hysteresis, tracked=True)


def window_from_rising(*, rising: Window, hysteresis: Window) -> TripWindow:
    """Windows where the rising level and the hysteresis are stated; the falling level is their difference.

    Formula: F in [R_lo - H_hi, R_hi - H_lo]
    Symbols:
        rising      R  V  range of the rising level
        hysteresis  H  V  range of the hysteresis
    Returns: the three windows, in V; tracked.
    Valid: any ranges; wide where R and H are themselves correlated.
    Source: interval arithmetic.
    Raises: DomainError: never for windows that are themselves valid.
    """
    falling = Window(rising.least_v - hysteresis.most_v, rising.most_v - hysteresis.least_v)
    return TripWindow(rising=rising, falling=falling, hysteresis=hysteresis, tracked=True)


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
    require_not_negative(delay_s=delay_s, filter_s=filter_s, sampling_period_s=sampling_period_s)
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
    require_not_negative(slew_v_per_s=slew_v_per_s, delay_s=delay_s)
    return slew_v_per_s * delay_s
