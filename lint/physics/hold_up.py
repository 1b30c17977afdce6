"""Hold-up: how long a capacitor carries a load once its supply is gone, and the capacitance a time needs."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import DomainError, require_not_negative, require_positive


def hold_up_time_s(*, c_f: float, drop_v: float, load_a: float) -> float:
    """Time for a constant current to discharge a capacitor by a given drop.

    Formula: t = C dV / I
    Symbols:
        c_f     C   F  capacitance, >= 0
        drop_v  dV  V  allowed drop, >= 0
        load_a  I   A  load current, > 0
    Returns: t, in s.
    Valid: load current that does not depend on the voltage; no other source.
    Source: I = C dV/dt, I constant.
    Raises: DomainError: if I is not > 0, or C or dV is negative.
    """
    require_not_negative(c_f=c_f, drop_v=drop_v)
    require_positive(load_a=load_a)
    return c_f * drop_v / load_a


def capacitance_for_hold_up_f(*, time_s: float, drop_v: float, load_a: float) -> float:
    """Least capacitance that carries a constant current for a time within a given drop.

    Formula: C = I t / dV
    Symbols:
        time_s  t   s  time to carry the load, >= 0
        drop_v  dV  V  allowed drop, > 0
        load_a  I   A  load current, >= 0
    Returns: C, in F.
    Valid: as hold_up_time_s.
    Source: hold_up_time_s solved for C.
    Raises: DomainError: if dV is not > 0, or t or I is negative.
    """
    require_not_negative(time_s=time_s, load_a=load_a)
    require_positive(drop_v=drop_v)
    return load_a * time_s / drop_v


def constant_power_hold_up_time_s(*, c_f: float, start_v: float, end_v: float, load_w: float) -> float:
    """Time for a load of constant power to discharge a capacitor from one voltage to another.

    Formula: t = C (V1^2 - V2^2) / (2 P)
    Symbols:
        c_f      C   F  capacitance, >= 0
        start_v  V1  V  voltage at the start, >= V2
        end_v    V2  V  voltage at the end, > 0
        load_w   P   W  load power, > 0
    Returns: t, in s.
    Valid: power that does not depend on the voltage, as with a switching regulator of constant efficiency.
    Source: energy balance, C (V1^2 - V2^2)/2 = P t.
    Raises: DomainError: if V2 or P is not > 0, V1 < V2, or C is negative.
    """
    require_not_negative(c_f=c_f)
    require_positive(load_w=load_w)
    _require_fall(start_v=start_v, end_v=end_v)
    return c_f * (start_v - end_v) * (start_v + end_v) / (2.0 * load_w)


def constant_power_capacitance_f(*, time_s: float, start_v: float, end_v: float, load_w: float) -> float:
    """Least capacitance that carries a load of constant power for a time.

    Formula: C = 2 P t / (V1^2 - V2^2)
    Symbols:
        time_s   t   s  time to carry the load, >= 0
        start_v  V1  V  voltage at the start, > V2
        end_v    V2  V  lowest voltage allowed, > 0
        load_w   P   W  load power, >= 0
    Returns: C, in F.
    Valid: as constant_power_hold_up_time_s.
    Source: constant_power_hold_up_time_s solved for C.
    Raises: DomainError: if V2 is not > 0, V1 is not above V2, or t or P is negative.
    """
    require_not_negative(time_s=time_s, load_w=load_w)
    _require_strict_fall(start_v=start_v, end_v=end_v)
    return 2.0 * load_w * time_s / ((start_v - end_v) * (start_v + end_v))


def resistive_hold_up_time_s(*, c_f: float, start_v: float, end_v: float, load_ohm: float) -> float:
    """Time for a resistor to discharge a capacitor from one voltage to another.

    Formula: t = R C ln(V1 / V2)
    Symbols:
        c_f       C   F    capacitance, >= 0
        start_v   V1  V    voltage at the start, >= V2
        end_v     V2  V    voltage at the end, > 0
        load_ohm  R   ohm  load resistance, > 0
    Returns: t, in s.
    Valid: linear R and C.
    Source: solution of C dV/dt = -V/R, V(0) = V1.
    Raises: DomainError: if V2 or R is not > 0, V1 < V2, or C is negative.
    """
    require_not_negative(c_f=c_f)
    require_positive(load_ohm=load_ohm)
    _require_fall(start_v=start_v, end_v=end_v)
    return load_ohm * c_f * math.log(start_v / end_v)


def resistive_capacitance_f(*, time_s: float, start_v: float, end_v: float, load_ohm: float) -> float:
    """Least capacitance that carries a resistive load for a time.

    Formula: C = t / (R ln(V1 / V2))
    Symbols:
        time_s    t   s    time to carry the load, >= 0
        start_v   V1  V    voltage at the start, > V2
        end_v     V2  V    lowest voltage allowed, > 0
        load_ohm  R   ohm  load resistance, > 0
    Returns: C, in F.
    Valid: as resistive_hold_up_time_s.
    Source: resistive_hold_up_time_s solved for C.
    Raises: DomainError: if V2 or R is not > 0, V1 is not above V2, or t is negative.
    """
    require_not_negative(time_s=time_s)
    require_positive(load_ohm=load_ohm)
    _require_strict_fall(start_v=start_v, end_v=end_v)
    return time_s / (load_ohm * math.log(start_v / end_v))


def usable_energy_share(*, start_v: float, end_v: float) -> float:
    """Share of a capacitor's energy that a discharge from one voltage to another gives out.

    Formula: u = 1 - (V2 / V1)^2
    Symbols:
        start_v  V1  V  voltage at the start, >= V2
        end_v    V2  V  voltage at the end, > 0
    Returns: u, between 0 and 1 (no unit).
    Valid: linear C.
    Source: energy C V^2/2 at either end.
    Raises: DomainError: if V2 is not > 0 or V1 < V2.
    """
    _require_fall(start_v=start_v, end_v=end_v)
    return 1.0 - (end_v / start_v) ** 2


def _require_fall(*, start_v: float, end_v: float) -> None:
    """Refuse a discharge that ends above its start, or at or below 0 V."""
    require_positive(start_v=start_v, end_v=end_v)
    if start_v < end_v:
        raise DomainError(f"start_v must be at least end_v ({end_v!r}) (found {start_v!r})")


def _require_strict_fall(*, start_v: float, end_v: float) -> None:
    """Refuse a discharge that does not end below its start, or ends at or below 0 V."""
    require_positive(start_v=start_v, end_v=end_v)
    if start_v <= end_v:
        raise DomainError(f"start_v must be above end_v ({end_v!r}) (found {start_v!r})")
