"""Lines too short to fail: back stress balances the electron wind below a product of density and length."""

from __future__ import annotations

from tidegate.lint.physics.domain import require_not_negative, require_positive


def short_length_product_a_per_m(*, current_a: float, width_m: float, thickness_m: float, length_m: float) -> float:
    """Product of current density and length of one line segment.

    Formula: jL = I L / (w t)
    Symbols:
        current_a     I   A   magnitude of the steady current, >= 0
        width_m       w   m   effective width, > 0
        thickness_m   t   m   thickness, > 0
        length_m      L   m   length between two barriers to the metal (vias, contacts), > 0
    Returns: jL, in A/m (1 A/cm is 100 A/m).
    Valid: one straight segment of even cross-section that metal neither enters nor leaves at its ends.
    Source: I. A. Blech, J. Appl. Phys. 47, 1203-1208 (1976).
    Raises: DomainError: if a symbol is outside its range.
    """
    require_not_negative(current_a=current_a)
    require_positive(width_m=width_m, thickness_m=thickness_m, length_m=length_m)
    return current_a / width_m / thickness_m * length_m
