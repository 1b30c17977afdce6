"""Resistance over temperature, whose extremes need not lie at the ends of the range; arrays of corners at once."""

from __future__ import annotations

from tidegate.lint.physics import device_laws
from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, positive


def resistance_ohm(*, t_k: Reals, r_ref_ohm: Reals, t_ref_k: Reals, tc1_per_k: Reals, tc2_per_k2: Reals) -> FloatArray:
    """Resistance at a temperature.

    Formula: R(T) = R0 (1 + TC1 (T - T0) + TC2 (T - T0)^2)
    Symbols:
        t_k         T    K      absolute temperature, > 0
        r_ref_ohm   R0   ohm    resistance at T0, > 0
        t_ref_k     T0   K      temperature it is stated for, > 0
        tc1_per_k   TC1  1/K    linear coefficient
        tc2_per_k2  TC2  1/K^2  quadratic coefficient
    Returns: R, in ohm, of the common shape of the inputs.
    Valid: the range the coefficients were fitted over.
    Source: resistor law of process documents (IHP SG13G2 process specification, Rev 1.2, p. 24 A.af).
    Raises: DomainError: T, T0 or R0 not above 0; a coefficient not finite; a resistance that is not above 0.
    """
    found_ohm = device_laws.resistance_ohm(
        t_k=positive("t_k", t_k),
        r_ref_ohm=positive("r_ref_ohm", r_ref_ohm),
        t_ref_k=positive("t_ref_k", t_ref_k),
        tc1_per_k=finite("tc1_per_k", tc1_per_k),
        tc2_per_k2=finite("tc2_per_k2", tc2_per_k2),
    )
    return positive("resistance_ohm", found_ohm)
