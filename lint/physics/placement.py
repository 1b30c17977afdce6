"""Where the nominal trip levels may lie: the requirements on them, solved for the level."""

from __future__ import annotations

import math
from collections.abc import Sequence
from enum import Enum

import msgspec

from tidegate.lint.physics.domain import DomainError, require_finite, require_not_negative
from tidegate.lint.physics.trip_window import Combination


class Requirement(Enum):
    """What limits a level."""

    GUARANTEE = "guarantee"
    QUIET = "quiet"
    COMES_BACK = "comes back"
    RELEASE = "release"
    BEFORE_UNDER_VOLTAGE = "before under-voltage"


class Level(Enum):
    """Which of the two trip levels."""

    RISING = "rising"
    FALLING = "falling"


class Side(Enum):
    """Which way a limit holds."""

    LEAST = "least"
    MOST = "most"


class LevelError(msgspec.Struct, frozen=True):
    """Error of a level as a function of where the level lies: a fixed part and one that scales with it.

    Formula: worst case E(V) = e + p V; root sum square E(V) = sqrt(e^2 + (p V)^2)
    Symbols:
        fixed_v  e  V  part that does not depend on the level, already combined, >= 0
        share    p  -  part that scales with the level, already combined, 0 <= p < 1
        method         how the two combine
    Raises: DomainError: e below 0; p not in [0, 1).
    """

    fixed_v: float
    share: float
    method: Combination

    def __post_init__(self) -> None:
        require_not_negative(fixed_v=self.fixed_v, share=self.share)
        if self.share >= 1.0:
            raise DomainError(f"share must be below 1 (found {self.share!r})")

    def at_v(self, level_v: float) -> float:
        """Error at a nominal level, in V."""
        if self.method is Combination.WORST_CASE:
            return self.fixed_v + self.share * abs(level_v)
        return math.hypot(self.fixed_v, self.share * level_v)

    def lowest_nominal_v(self, floor_v: float) -> float:
        """Lowest nominal level that stays at or above a floor, V: the root of V - E(V) = floor."""
        return self._nominal_v(floor_v, 1.0)

    def highest_nominal_v(self, ceiling_v: float) -> float:
        """Highest nominal level that stays at or below a ceiling, V: the root of V + E(V) = ceiling."""
        return self._nominal_v(ceiling_v, -1.0)

    def _nominal_v(self, end_v: float, side: float) -> float:
        if self.method is Combination.WORST_CASE:
            # The scaling part grows away from 0 V on either side, so its sign follows the level's.
            start_v = end_v + side * self.fixed_v
            return start_v / (1.0 - math.copysign(self.share, side * start_v))
        # (V - end)^2 = e^2 + p^2 V^2, the root on the far side of the error.
        rest = 1.0 - self.share**2
        radicand = (self.share * end_v) ** 2 + rest * self.fixed_v**2
        return (end_v + side * math.sqrt(radicand)) / rest


class Limit(msgspec.Struct, frozen=True):
    """One end for one nominal level, error already taken off.

    Symbols:
        by            the requirement behind it
        level         the level it holds for
        side          whether the level must be at least or at most nominal_v
        nominal_v  V  the end, error of the level already taken off
    """

    by: Requirement
    level: Level
    side: Side
    nominal_v: float


class Placement(msgspec.Struct, frozen=True):
    """Where the nominal falling level may lie; the rising one lies the hysteresis above it.

    Symbols:
        least_v           V  lowest; minus infinity where nothing limits it
        most_v            V  highest; infinity where nothing limits it; below least_v where nothing fits
        limited_below_by     the requirement that sets least_v
        limited_above_by     the requirement that sets most_v
        short_v           V  how much is missing, least_v - most_v; 0 where a level fits
    """

    least_v: float
    most_v: float
    limited_below_by: Requirement | None
    limited_above_by: Requirement | None
    short_v: float


def under_voltage_limits(
    *,
    falling_error: LevelError,
    rising_error: LevelError,
    load_least_v: float,
    droop_v: float,
    delivered_least_v: float,
    start_least_v: float,
    ripple_v: float,
    load_step_v: float,
) -> tuple[Limit, ...]:
    """Limits on the levels of an under-voltage detector.

    Formula: F - E_F >= V_load + dV; F + E_F <= V_min - v_pp/2 - dI Z; R + E_R <= V_start - v_pp/2
    Symbols:
        falling_error      E_F      error of the falling level
        rising_error       E_R      error of the rising level
        load_least_v       V_load   V  lowest supply the most demanding guarded load is guaranteed for
        droop_v            dV       V  fall during the response, >= 0
        delivered_least_v  V_min    V  lowest mean supply delivered
        start_least_v      V_start  V  lowest supply at which start-up must succeed
        ripple_v           v_pp     V  ripple, peak to peak, >= 0
        load_step_v        dI Z     V  load step times source impedance, >= 0
    Returns: the limits on the nominal levels, in V.
    Valid: as for the under-voltage margins of trip_margin.
    Source: those margins set to 0 and solved for the level.
    Raises: DomainError: a size below 0; a level not finite.
    """
    require_finite(load_least_v=load_least_v, delivered_least_v=delivered_least_v, start_least_v=start_least_v)
    require_not_negative(droop_v=droop_v, ripple_v=ripple_v, load_step_v=load_step_v)
    quiet_v = delivered_least_v - 0.5 * ripple_v - load_step_v
    return (
        _at_least(Requirement.GUARANTEE, Level.FALLING, falling_error, load_least_v + droop_v),
        _at_most(Requirement.QUIET, Level.FALLING, falling_error, quiet_v),
        _at_most(Requirement.COMES_BACK, Level.RISING, rising_error, start_least_v - 0.5 * ripple_v),
    )


def over_voltage_limits(
    *,
    falling_error: LevelError,
    rising_error: LevelError,
    load_most_v: float,
    rise_v: float,
    delivered_most_v: float,
    ripple_v: float,
) -> tuple[Limit, ...]:
    """Limits on the levels of an over-voltage detector.

    Formula: R + E_R <= V_load - dV; R - E_R >= V_max + v_pp/2; F - E_F >= V_max + v_pp/2
    Symbols:
        falling_error     E_F     error of the falling level
        rising_error      E_R     error of the rising level
        load_most_v       V_load  V  highest supply the load is guaranteed for, or its damage level
        rise_v            dV      V  rise during the response, >= 0
        delivered_most_v  V_max   V  highest mean supply delivered
        ripple_v          v_pp    V  ripple, peak to peak, >= 0
    Returns: the limits on the nominal levels, in V.
    Valid: as for the over-voltage margins of trip_margin.
    Source: those margins set to 0 and solved for the level.
    Raises: DomainError: a size below 0; a level not finite.
    """
    require_finite(load_most_v=load_most_v, delivered_most_v=delivered_most_v)
    require_not_negative(rise_v=rise_v, ripple_v=ripple_v)
    service_v = delivered_most_v + 0.5 * ripple_v
    return (
        _at_most(Requirement.GUARANTEE, Level.RISING, rising_error, load_most_v - rise_v),
        _at_least(Requirement.QUIET, Level.RISING, rising_error, service_v),
        _at_least(Requirement.COMES_BACK, Level.FALLING, falling_error, service_v),
    )


def power_on_limits(
    *,
    falling_error: LevelError,
    rising_error: LevelError,
    working_least_v: float,
    delivered_least_v: float,
    start_least_v: float,
    ripple_v: float,
    load_step_v: float,
    under_voltage_rising_least_v: float | None,
) -> tuple[Limit, ...]:
    """Limits on the levels of a power-on detector.

    Formula: F - E_F >= V_work; R - E_R >= V_work; F + E_F <= V_min - v_pp/2 - dI Z; R + E_R <= V_min;
             R + E_R <= V_start - v_pp/2; R + E_R <= R_uv,lo
    Symbols:
        falling_error                 E_F      error of the falling level
        rising_error                  E_R      error of the rising level
        working_least_v               V_work   V  lowest working supply of everything that leans on it
        delivered_least_v             V_min    V  lowest supply delivered
        start_least_v                 V_start  V  lowest supply at which start-up must succeed
        ripple_v                      v_pp     V  ripple, peak to peak, >= 0
        load_step_v                   dI Z     V  load step times source impedance, >= 0
        under_voltage_rising_least_v  R_uv,lo  V  lowest rising level of the under-voltage detector on this
                                                  supply; None where there is none
    Returns: the limits on the nominal levels, in V.
    Valid: as for the power-on margins of trip_margin.
    Source: those margins set to 0 and solved for the level.
    Raises: DomainError: a size below 0; a level not finite.
    """
    require_finite(working_least_v=working_least_v, delivered_least_v=delivered_least_v, start_least_v=start_least_v)
    require_not_negative(ripple_v=ripple_v, load_step_v=load_step_v)
    quiet_v = delivered_least_v - 0.5 * ripple_v - load_step_v
    limits = [
        _at_least(Requirement.GUARANTEE, Level.FALLING, falling_error, working_least_v),
        _at_least(Requirement.GUARANTEE, Level.RISING, rising_error, working_least_v),
        _at_most(Requirement.QUIET, Level.FALLING, falling_error, quiet_v),
        _at_most(Requirement.RELEASE, Level.RISING, rising_error, delivered_least_v),
        _at_most(Requirement.COMES_BACK, Level.RISING, rising_error, start_least_v - 0.5 * ripple_v),
    ]
    if under_voltage_rising_least_v is not None:
        require_finite(under_voltage_rising_least_v=under_voltage_rising_least_v)
        limits.append(
            _at_most(Requirement.BEFORE_UNDER_VOLTAGE, Level.RISING, rising_error, under_voltage_rising_least_v)
        )
    return tuple(limits)


def _at_least(by: Requirement, level: Level, error: LevelError, floor_v: float) -> Limit:
    return Limit(by, level, Side.LEAST, error.lowest_nominal_v(floor_v))


def _at_most(by: Requirement, level: Level, error: LevelError, ceiling_v: float) -> Limit:
    return Limit(by, level, Side.MOST, error.highest_nominal_v(ceiling_v))


def placement(limits: Sequence[Limit], *, hysteresis_v: float) -> Placement:
    """Interval of the nominal falling level that keeps every limit.

    Formula: F_least = max of (F limits, R limits - H); F_most = min of (F limits, R limits - H)
    Symbols:
        limits           limits on either nominal level, V
        hysteresis_v  H  V  nominal hysteresis, >= 0
    Returns: the interval in V, what sets each end (the first of equals), and what is short if it is empty.
    Valid: R = F + H.
    Source: intersection of intervals.
    Raises: DomainError: H below 0.
    """
    require_not_negative(hysteresis_v=hysteresis_v)
    least_v, below_by = -math.inf, None
    most_v, above_by = math.inf, None
    for limit in limits:
        end_v = limit.nominal_v - (hysteresis_v if limit.level is Level.RISING else 0.0)
        if limit.side is Side.LEAST and end_v > least_v:
            least_v, below_by = end_v, limit.by
        elif limit.side is Side.MOST and end_v < most_v:
            most_v, above_by = end_v, limit.by
    return Placement(least_v, most_v, below_by, above_by, short_v=max(0.0, least_v - most_v))


def largest_hysteresis_v(limits: Sequence[Limit]) -> float:
    """Largest nominal hysteresis for which both levels keep their limits.

    Formula: H = min of (R at most) - max of (F at least)
    Symbols:
        limits  limits on either nominal level, V
    Returns: H, in V; below 0 where not even none fits; infinity where one of the two levels is free.
    Valid: R = F + H; a level whose own limits contradict each other is helped by no H, and placement says so.
    Source: F_least <= F_most of placement, solved for H.
    Raises: DomainError: never.
    """
    rising_v = [x.nominal_v for x in limits if x.level is Level.RISING and x.side is Side.MOST]
    falling_v = [x.nominal_v for x in limits if x.level is Level.FALLING and x.side is Side.LEAST]
    return min(rising_v, default=math.inf) - max(falling_v, default=-math.inf)
