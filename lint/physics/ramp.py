"""The slope of a supply ramp."""

from __future__ import annotations

from tidegate.lint.physics.domain import require_not_negative, require_positive


def ramp_slope_v_per_s(*, rise_v: float, rise_s: float) -> float:
    """Slope of a straight supply ramp.

    Formula: s = V / t
    Symbols:
        rise_v  V  V  height of the ramp, >= 0
        rise_s  t  s  duration of the ramp, > 0
    Returns: s, in V/s.
    Valid: a straight ramp; a curved one is steeper somewhere.
    Source: definition of slope.
    Raises: DomainError: if V is negative or t is not above 0.
    """
    require_not_negative(rise_v=rise_v)
    require_positive(rise_s=rise_s)
    return rise_v / rise_s
