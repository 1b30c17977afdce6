"""What a line or a via carries, and how wide and how many they must be for a current."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import (
    DomainError,
    require_finite,
    require_not_negative,
    require_positive,
)

# Far above the rounding of one division (2e-16) and far below any current that is known.
_SAME_COUNT = 1e-9


def line_limit_a(*, drawn_width_m: float, width_bias_m: float, per_width_a_per_m: float) -> float:
    """Current a line may carry, from a limit stated per width.

    Formula: I = jw (w - dw)
    Symbols:
        drawn_width_m       w    m     width in the layout, > dw
        width_bias_m        dw   m     width the process takes away, both sides together, >= 0
        per_width_a_per_m   jw   A/m   limit per effective width, > 0 (1 mA/um is 1000 A/m)
    Returns: I, in A.
    Valid: limit proportional to width; where a process states its limit per drawn width, dw = 0.
    Source: limits stated per width, as in section 14.2.1 of the design manual of google/gf180mcu-pdk.
    Raises: DomainError: if a symbol is outside its range.
    """
    require_positive(drawn_width_m=drawn_width_m, per_width_a_per_m=per_width_a_per_m)
    require_not_negative(width_bias_m=width_bias_m)
    if drawn_width_m <= width_bias_m:
        raise DomainError(f"drawn_width_m must be above width_bias_m = {width_bias_m!r} (found {drawn_width_m!r})")
    return per_width_a_per_m * (drawn_width_m - width_bias_m)


def width_for_current_m(*, current_a: float, per_width_a_per_m: float, width_bias_m: float) -> float:
    """Smallest drawn width of a line that may carry a current.

    Formula: w = I/jw + dw
    Symbols:
        current_a           I    A     magnitude of the current, >= 0
        per_width_a_per_m   jw   A/m   limit per effective width, > 0
        width_bias_m        dw   m     width the process takes away, both sides together, >= 0
    Returns: w, in m.
    Valid: as line_limit_a; the smallest width of the process is not looked at.
    Source: line_limit_a solved for the width.
    Raises: DomainError: if a symbol is outside its range.
    """
    require_not_negative(current_a=current_a, width_bias_m=width_bias_m)
    require_positive(per_width_a_per_m=per_width_a_per_m)
    return current_a / per_width_a_per_m + width_bias_m


def vias_for_current(*, current_a: float, per_via_a: float) -> int:
    """Smallest number of vias (or contacts) that may carry a current together.

    Formula: N = ceil(I / Iv); a quotient within 1e-9 of a whole number counts as that number
    Symbols:
        current_a   I    A   magnitude of the current, >= 0
        per_via_a   Iv   A   limit of one via, > 0
    Returns: N, a count.
    Valid: the vias share the current equally.
    Source: N Iv >= I solved for whole N.
    Raises: DomainError: if a symbol is outside its range.
    """
    require_not_negative(current_a=current_a)
    require_positive(per_via_a=per_via_a)
    quotient = current_a / per_via_a
    require_finite(current_a_over_per_via_a=quotient)
    nearest = round(quotient)
    # 1.5 mA over 0.3 mA comes out a hair above 5, which must not buy a sixth via.
    return nearest if math.isclose(quotient, nearest, rel_tol=_SAME_COUNT) else math.ceil(quotient)
