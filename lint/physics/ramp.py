"""The slope of a supply ramp."""

from __future__ import annotations

from tidegate.lint.physics.domain import quotient, require_size


def ramp_slope_v_per_s(*, rise_v: float, rise_s: float) -> float:
    """Slope of a straight supply ramp.

    Formula: s = V / t
    Symbols:
        rise_v  V  V  height of the ramp, >= 0
        rise_s  t  s  duration of the ramp, >= 0 (0: as steep as can be)
    Returns: s, in V/s.
    Valid: a straight ramp; a curved one is steeper somewhere.
    Source: definition of slope.
    Raises: DomainError: if V or t is negative.
    """
    require_size(rise_v=rise_v, rise_s=rise_s)
    return quotient(rise_v, rise_s)
