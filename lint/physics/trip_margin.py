"""What the trip levels must satisfy, one margin for each requirement: 0 V or above is good."""

from __future__ import annotations

from tidegate.lint.physics.domain import require_finite, require_not_negative
from tidegate.lint.physics.trip_window import TripWindow


def under_voltage_guarantee_v(levels: TripWindow, *, droop_v: float, load_least_v: float) -> float:
    """Room between the lowest supply a guarded load sees unreset and the lowest it is good for.

    Formula: m = F_lo - dV - V_load
    Symbols:
        levels        F_lo    V  lowest falling level
        droop_v       dV      V  fall during the response (droop_during_response_v), >= 0
        load_least_v  V_load  V  lowest supply the most demanding guarded load is guaranteed for
    Returns: m, in V; below 0 the load may run out of range unreset.
    Valid: a supply that falls no faster than dV allows for.
    Source: common practice, no source; definition of the guarantee.
    Raises: DomainError: dV below 0; V_load not finite.
    """
    require_not_negative(droop_v=droop_v)
    require_finite(load_least_v=load_least_v)
    return levels.falling.least_v - droop_v - load_least_v


def under_voltage_quiet_v(
    levels: TripWindow, *, delivered_least_v: float, ripple_v: float, load_step_v: float
) -> float:
    """Room between the lowest supply in service and the highest level that would report it.

    Formula: m = V_min - v_pp / 2 - dI Z - F_hi
    Symbols:
        levels             F_hi   V  highest falling level
        delivered_least_v  V_min  V  lowest mean supply delivered
        ripple_v           v_pp   V  ripple, peak to peak, >= 0
        load_step_v        dI Z   V  load step times source impedance, >= 0
    Returns: m, in V; below 0 the detector may trip in service.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a nuisance trip.
    Raises: DomainError: v_pp or dI Z below 0; V_min not finite.
    """
    require_not_negative(ripple_v=ripple_v, load_step_v=load_step_v)
    require_finite(delivered_least_v=delivered_least_v)
    return delivered_least_v - 0.5 * ripple_v - load_step_v - levels.falling.most_v


def under_voltage_comes_back_v(levels: TripWindow, *, start_least_v: float, ripple_v: float) -> float:
    """Room between the lowest supply at which the chip must start and the highest releasing level.

    Formula: m = V_start - v_pp / 2 - R_hi
    Symbols:
        levels         R_hi     V  highest rising level
        start_least_v  V_start  V  lowest supply at which start-up must succeed
        ripple_v       v_pp     V  ripple, peak to peak, >= 0
    Returns: m, in V; below 0 the reset may never be released.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a successful start.
    Raises: DomainError: v_pp below 0; V_start not finite.
    """
    require_not_negative(ripple_v=ripple_v)
    require_finite(start_least_v=start_least_v)
    return start_least_v - 0.5 * ripple_v - levels.rising.most_v


def over_voltage_guarantee_v(levels: TripWindow, *, rise_v: float, load_most_v: float) -> float:
    """Room between the highest supply a load stands and the highest it sees before the detector answers.

    Formula: m = V_load - (R_hi + dV)
    Symbols:
        levels       R_hi    V  highest rising level
        rise_v       dV      V  rise during the response (droop_during_response_v), >= 0
        load_most_v  V_load  V  highest supply the load is guaranteed for, or its damage level
    Returns: m, in V; below 0 the load may be overstressed unreported.
    Valid: a supply that rises no faster than dV allows for.
    Source: common practice, no source; definition of the guarantee.
    Raises: DomainError: dV below 0; V_load not finite.
    """
    require_not_negative(rise_v=rise_v)
    require_finite(load_most_v=load_most_v)
    return load_most_v - (levels.rising.most_v + rise_v)


def over_voltage_quiet_v(levels: TripWindow, *, delivered_most_v: float, ripple_v: float) -> float:
    """Room between the lowest level that would report an over-voltage and the highest supply in service.

    Formula: m = R_lo - (V_max + v_pp / 2)
    Symbols:
        levels            R_lo   V  lowest rising level
        delivered_most_v  V_max  V  highest mean supply delivered
        ripple_v          v_pp   V  ripple, peak to peak, >= 0
    Returns: m, in V; below 0 the detector may trip in service.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a nuisance trip.
    Raises: DomainError: v_pp below 0; V_max not finite.
    """
    require_not_negative(ripple_v=ripple_v)
    require_finite(delivered_most_v=delivered_most_v)
    return levels.rising.least_v - (delivered_most_v + 0.5 * ripple_v)


def over_voltage_comes_back_v(levels: TripWindow, *, delivered_most_v: float, ripple_v: float) -> float:
    """Room between the lowest level at which an over-voltage report ends and the highest supply in service.

    Formula: m = F_lo - (V_max + v_pp / 2)
    Symbols:
        levels            F_lo   V  lowest falling level
        delivered_most_v  V_max  V  highest mean supply delivered
        ripple_v          v_pp   V  ripple, peak to peak, >= 0
    Returns: m, in V; below 0 the report may last although the supply is back in service.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a report that ends.
    Raises: DomainError: v_pp below 0; V_max not finite.
    """
    require_not_negative(ripple_v=ripple_v)
    require_finite(delivered_most_v=delivered_most_v)
    return levels.falling.least_v - (delivered_most_v + 0.5 * ripple_v)


def power_on_guarantee_v(levels: TripWindow, *, working_least_v: float) -> float:
    """Room between the lowest level of a power-on detector and the lowest supply its followers work at.

    Formula: m = min(F_lo, R_lo) - V_work
    Symbols:
        levels           F_lo, R_lo  V  lowest level on the way down and on the way up
        working_least_v  V_work      V  lowest working supply of everything that leans on it, at the
                                        temperature and corner of the levels
    Returns: m, in V; below 0 something runs below its working supply with reset released.
    Valid: levels and V_work of one corner; extreme against extreme asks for more than the chip needs.
    Source: common practice, no source; definition of the guarantee.
    Raises: DomainError: V_work not finite.
    """
    require_finite(working_least_v=working_least_v)
    return min(levels.falling.least_v, levels.rising.least_v) - working_least_v


def power_on_release_v(levels: TripWindow, *, delivered_least_v: float) -> float:
    """Room between the lowest supply delivered and the highest level at which a power-on detector lets go.

    Formula: m = V_min - R_hi
    Symbols:
        levels             R_hi   V  highest rising level
        delivered_least_v  V_min  V  lowest supply delivered
    Returns: m, in V; below 0 the reset may never be released.
    Valid: a supply that stays at V_min or above.
    Source: common practice, no source; definition of the release.
    Raises: DomainError: V_min not finite.
    """
    require_finite(delivered_least_v=delivered_least_v)
    return delivered_least_v - levels.rising.most_v


def power_on_quiet_v(levels: TripWindow, *, delivered_least_v: float, ripple_v: float, load_step_v: float) -> float:
    """Room between the lowest supply in service and the highest level that would reset the chip again.

    Formula: m = V_min - v_pp / 2 - dI Z - F_hi
    Symbols:
        levels             F_hi   V  highest falling level
        delivered_least_v  V_min  V  lowest mean supply delivered
        ripple_v           v_pp   V  ripple, peak to peak, >= 0
        load_step_v        dI Z   V  load step times source impedance, >= 0
    Returns: m, in V; below 0 the chip may be reset in service.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a nuisance trip.
    Raises: DomainError: v_pp or dI Z below 0; V_min not finite.
    """
    return under_voltage_quiet_v(
        levels, delivered_least_v=delivered_least_v, ripple_v=ripple_v, load_step_v=load_step_v
    )


def power_on_comes_back_v(levels: TripWindow, *, start_least_v: float, ripple_v: float) -> float:
    """Room between the lowest supply at which the chip must start and the highest power-on level.

    Formula: m = V_start - v_pp / 2 - R_hi
    Symbols:
        levels         R_hi     V  highest rising level
        start_least_v  V_start  V  lowest supply at which start-up must succeed
        ripple_v       v_pp     V  ripple, peak to peak, >= 0
    Returns: m, in V; below 0 the reset may never be released.
    Valid: ripple centred on the mean.
    Source: common practice, no source; definition of a successful start.
    Raises: DomainError: v_pp below 0; V_start not finite.
    """
    return under_voltage_comes_back_v(levels, start_least_v=start_least_v, ripple_v=ripple_v)


def power_on_before_under_voltage_v(power_on: TripWindow, *, under_voltage: TripWindow) -> float:
    """Room between the level at which under-voltage decides and the one at which power-on lets go.

    Formula: m = R_uv,lo - R_po,hi
    Symbols:
        power_on       R_po,hi  V  highest rising level of the power-on detector
        under_voltage  R_uv,lo  V  lowest rising level of the under-voltage detector
    Returns: m, in V; below 0 the power-on detector may still hold when the under-voltage detector releases.
    Valid: both on one supply; levels that share no error.
    Source: common practice, no source; order of release on the way up.
    Raises: DomainError: never for windows that are themselves valid.
    """
    return under_voltage.rising.least_v - power_on.rising.most_v
