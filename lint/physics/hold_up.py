"""Hold-up: how long a capacitor carries a load once its supply is gone."""

from __future__ import annotations

from tidegate.lint.physics.domain import require_not_negative, require_positive


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
