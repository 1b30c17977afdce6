"""Lines too short to fail: back stress balances the electron wind below a product of density and length."""

from __future__ import annotations

import math

from tidegate.lint.physics.constants import ELEMENTARY_CHARGE_C
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


def blech_threshold_a_per_m(
    *, atomic_volume_m3: float, stress_pa: float, effective_charge: float, resistivity_ohm_m: float
) -> float:
    """Product of current density and length up to which a line does not fail.

    Formula: (jL)c = O S / (|Z*| q rho)
    Symbols:
        atomic_volume_m3    O      m^3     volume of one atom, > 0
        stress_pa           S      Pa      difference of stress between the ends the metal withstands, > 0
        effective_charge    |Z*|   -       effective charge number, as a magnitude, > 0
        resistivity_ohm_m   rho    ohm m   resistivity of the metal at its temperature, > 0
    Returns: (jL)c, in A/m.
    Valid: no residual stress, which takes away from S; S and so (jL)c fall with temperature.
    Source: no net drift where the wind force |Z*| q rho j on an atom equals the force O S/L of the stress
        gradient (Blech, J. Appl. Phys. 47, 1203-1208, 1976), solved for j L.
    Raises: DomainError: if a symbol is not greater than 0.
    """
    require_positive(
        atomic_volume_m3=atomic_volume_m3,
        stress_pa=stress_pa,
        effective_charge=effective_charge,
        resistivity_ohm_m=resistivity_ohm_m,
    )
    wind_force_n_per_a_per_m2 = effective_charge * ELEMENTARY_CHARGE_C * resistivity_ohm_m
    return atomic_volume_m3 * stress_pa / wind_force_n_per_a_per_m2


def immune_length_m(*, threshold_a_per_m: float, current_a: float, width_m: float, thickness_m: float) -> float:
    """Length up to which a line that carries a given current does not fail.

    Formula: Lc = (jL)c w t / I
    Symbols:
        threshold_a_per_m   (jL)c   A/m   product up to which a line does not fail, > 0
        current_a           I       A     magnitude of the steady current, >= 0
        width_m             w       m     effective width, > 0
        thickness_m         t       m     thickness, > 0
    Returns: Lc, in m; infinite at no current.
    Valid: as short_length_product_a_per_m.
    Source: short_length_product_a_per_m solved for the length.
    Raises: DomainError: if a symbol is outside its range.
    """
    require_positive(threshold_a_per_m=threshold_a_per_m, width_m=width_m, thickness_m=thickness_m)
    require_not_negative(current_a=current_a)
    if current_a == 0.0:
        return math.inf
    return threshold_a_per_m * width_m * thickness_m / current_a
