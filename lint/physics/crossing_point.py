"""Trip level made without a reference, at one corner and one temperature, with the standard library alone.

``crossover`` solves arrays of corners by closed forms and needs NumPy. A review judges a few corners at a time and
should not pay for loading it, so here one corner is solved by Newton's method on the current balance. The devices of
both evaluate the laws of ``device_laws``; a test holds the two solutions against each other.
"""

from __future__ import annotations

from typing import Final

from tidegate.lint.physics.device_at_corner import Device
from tidegate.lint.physics.domain import (
    DomainError,
    require_finite,
    require_not_negative,
    require_positive,
    require_within,
)

_MOST_DOUBLINGS: Final = 200
"""From 1 V; far above any voltage that is known."""

_NEVER_AHEAD: Final = "no crossing: the device never gets ahead of the divided supply"


class NoCrossingError(DomainError):
    """Nothing overtakes: the device never gets ahead of the divided supply, or the reference never of the device."""


def divider_crossing_v(device: Device, *, series_ohm: float, divider_ratio: float, offset_v: float) -> float:
    """Supply at which a part of it overtakes the voltage of a device fed from it through a resistor.

    Formula: a V = V_dev + V_os with V_dev = V_dev(I), I = (V - V_dev)/R = ((1 - a) V_dev + V_os)/(a R)
    Symbols:
        device                 V_dev(I)     the device at its corner and temperature
        series_ohm     R                ohm  resistance at the corner and temperature, > 0
        divider_ratio  a                -    part of the supply that is compared, 0 < a < 1
        offset_v       V_os             V    offset of the comparison; above 0 it raises the level
    Returns: V, in V: the level above which the part stays ahead.
    Valid: ideal divider that does not load the branch; a MOS device at more than about 0.1 V.
    Source: Newton's method on F(V_dev) = V_dev - V_dev(I(V_dev)). F is convex, since V_dev(I) is concave, so that from
        a start right of its last root the method falls on that root without passing it.
    Raises: DomainError: R not above 0; a not in (0, 1); V_os not finite. NoCrossingError: nothing holds reset at any
        supply.
    """
    require_positive(series_ohm=series_ohm, divider_ratio=divider_ratio)
    require_within(least=0.0, most=1.0 - 1e-12, divider_ratio=divider_ratio)
    require_finite(offset_v=offset_v)
    per_ohm = 1.0 / (divider_ratio * series_ohm)
    share = (1.0 - divider_ratio) * per_ohm

    def balance(at_v: float) -> tuple[float, float] | None:
        current_a = share * at_v + offset_v * per_ohm
        if current_a <= 0.0:
            return None
        return at_v - device.voltage_v(current_a), 1.0 - device.slope_ohm(current_a) * share

    device_v = 1.0
    for _ in range(_MOST_DOUBLINGS):
        found = balance(device_v)
        if found is not None and found[0] >= 0.0 and found[1] > 0.0:
            break
        device_v *= 2.0
    else:
        raise DomainError("divider_ratio, series_ohm and the device have no level within the range of a number")
    while True:
        found = balance(device_v)
        if found is None or found[1] <= 0.0:
            raise NoCrossingError(_NEVER_AHEAD)
        next_v = device_v - found[0] / found[1]
        if not next_v < device_v:  # only rounding ends the fall
            break
        device_v = next_v
    trip_v = (device_v + offset_v) / divider_ratio
    if trip_v <= device.least_v:
        raise NoCrossingError(_NEVER_AHEAD)
    return trip_v


def branch_level_v(device: Device, *, series_ohm: float, current_a: float) -> float:
    """Supply at which a device behind a resistor carries a current.

    Formula: V = I R + V_dev(I)
    Symbols:
        device      V_dev(I)       the device at its corner and temperature
        series_ohm  R         ohm  resistance at the corner and temperature, > 0
        current_a   I         A    current, > 0
    Returns: V, in V.
    Valid: quasi-static.
    Source: Kirchhoff's voltage law.
    Raises: DomainError: R or I not above 0.
    """
    require_positive(series_ohm=series_ohm, current_a=current_a)
    return current_a * series_ohm + device.voltage_v(current_a)


def reference_crossing_v(
    device: Device, *, series_ohm: float, mirror_ratio: float, start_v: float, rise_v: float, regulated_a: float
) -> float:
    """Supply at which the current of a starting reference overtakes a crude current, mirrored: the trip level.

    Formula: m I_c = I_0 (V - V_s)/V_r, V = I_c R + V_dev(I_c); so V_s = I_c (R - m V_r/I_0) + V_dev(I_c), and
             V = V_s + I_c m V_r/I_0
    Symbols:
        device        V_dev(I)       the device at its corner and temperature
        series_ohm    R         ohm  resistance at the corner and temperature, > 0
        mirror_ratio  m         -    crude current at the comparison over that in the branch, > 0
        start_v       V_s       V    supply at which the reference's current sets in, > 0
        rise_v        V_r       V    how much further the supply rises until it regulates, >= 0
        regulated_a   I_0       A    current in regulation, > 0
    Returns: V, in V.
    Valid: the reference's current rises in a straight line; quasi-static.
    Source: Newton's method on the equation for I_c. Its right side is concave and rises, so that from a start left of
        its root the method climbs to that root without passing it.
    Raises: DomainError: R, m, V_s or I_0 not above 0; V_r below 0. NoCrossingError: the reference rises slower than
        the crude current, or regulates below it.
    """
    require_positive(series_ohm=series_ohm, mirror_ratio=mirror_ratio, start_v=start_v, regulated_a=regulated_a)
    require_not_negative(rise_v=rise_v)
    share_ohm = mirror_ratio * rise_v / regulated_a
    left_ohm = series_ohm - share_ohm
    if left_ohm <= 0.0:
        raise NoCrossingError("no crossing: the reference current rises slower than the crude one")
    crude_a = _current_a(device, left_ohm=left_ohm, source_v=start_v)
    if mirror_ratio * crude_a > regulated_a:
        raise NoCrossingError("no crossing: the reference regulates below the crude current")
    return start_v + share_ohm * crude_a


def _current_a(device: Device, *, left_ohm: float, source_v: float) -> float:
    """Root of source_v = I R + V_dev(I)."""
    current_a = source_v / left_ohm
    while current_a * left_ohm + device.voltage_v(current_a) > source_v:
        current_a *= 0.5
    while True:
        missing_v = source_v - current_a * left_ohm - device.voltage_v(current_a)
        next_a = current_a + missing_v / (left_ohm + device.slope_ohm(current_a))
        if not next_a > current_a:  # only rounding ends the climb
            return current_a
        current_a = next_a
