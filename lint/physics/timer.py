"""Times made by components: an RC charging to a threshold, a current into a capacitor, periods counted."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import DomainError, require_not_negative, require_positive


def charge_time_s(*, r_ohm: float, c_f: float, v_final_v: float, v_th_v: float) -> float:
    """Time for an RC node to charge from 0 V up to a threshold.

    Formula: t = R C ln(Vf / (Vf - Vth))
    Symbols:
        r_ohm      R    ohm  series resistance, > 0
        c_f        C    F    node capacitance, > 0
        v_final_v  Vf   V    voltage the node settles to, > 0
        v_th_v     Vth  V    receiver threshold, 0 <= Vth < Vf
    Returns: t, in s.
    Valid: linear R and C; no load current.
    Source: solution of dV/dt = (Vf - V)/(R C), V(0) = 0.
    Raises: DomainError: if Vth is not in [0, Vf).
    """
    require_positive(r_ohm=r_ohm, c_f=c_f, v_final_v=v_final_v)
    require_not_negative(v_th_v=v_th_v)
    if v_th_v >= v_final_v:
        raise DomainError(f"v_th_v must be below v_final_v, {v_final_v!r} (found {v_th_v!r})")
    return -r_ohm * c_f * math.log1p(-v_th_v / v_final_v)


def current_charge_time_s(*, current_a: float, c_f: float, v_th_v: float) -> float:
    """Time for a constant current to charge a capacitor from 0 V up to a threshold.

    Formula: t = C Vth / I
    Symbols:
        current_a  I    A  charging current, > 0
        c_f        C    F  capacitance, > 0
        v_th_v     Vth  V  receiver threshold, >= 0
    Returns: t, in s.
    Valid: a current that does not depend on the voltage; no leakage.
    Source: I = C dV/dt.
    Raises: DomainError: I or C not above 0; Vth below 0.
    """
    require_positive(current_a=current_a, c_f=c_f)
    require_not_negative(v_th_v=v_th_v)
    return c_f * v_th_v / current_a


def counted_time_s(*, count: float, period_s: float) -> float:
    """Time of a number of clock periods.

    Formula: t = N T
    Symbols:
        count     N  -  periods counted, > 0
        period_s  T  s  period, > 0
    Returns: t, in s.
    Valid: a clock that runs from the start.
    Source: definition.
    Raises: DomainError: N or T not above 0.
    """
    require_positive(count=count, period_s=period_s)
    return count * period_s
