"""Resistance over temperature, and its extremes, which need not lie at the ends of the range."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, positive
from tidegate.lint.physics.domain import DomainError, require_positive


@dataclass(frozen=True, slots=True)
class ResistanceRange:
    """Extremes of a resistance over a range of temperature, and where they lie.

    Symbols:
        least_ohm   ohm  smallest resistance
        least_at_k  K    temperature at which it is reached
        most_ohm    ohm  largest resistance
        most_at_k   K    temperature at which it is reached
    """

    least_ohm: float
    least_at_k: float
    most_ohm: float
    most_at_k: float


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
    above_k = positive("t_k", t_k) - positive("t_ref_k", t_ref_k)
    share = 1.0 + above_k * (finite("tc1_per_k", tc1_per_k) + above_k * finite("tc2_per_k2", tc2_per_k2))
    return positive("resistance_ohm", np.asarray(positive("r_ref_ohm", r_ref_ohm) * share))


def resistance_range(
    *, least_k: float, most_k: float, r_ref_ohm: float, t_ref_k: float, tc1_per_k: float, tc2_per_k2: float
) -> ResistanceRange:
    """Extremes of a resistance over a range of temperature.

    Formula: the least and the most of R at both ends, and at T = T0 - TC1 / (2 TC2) where that lies between them
    Symbols:
        least_k     T1   K      lowest temperature, > 0
        most_k      T2   K      highest temperature, >= T1
        r_ref_ohm   R0   ohm    resistance at T0, > 0
        t_ref_k     T0   K      temperature it is stated for, > 0
        tc1_per_k   TC1  1/K    linear coefficient
        tc2_per_k2  TC2  1/K^2  quadratic coefficient
    Returns: both extremes in ohm and the temperatures in K at which they lie; the lower temperature of equals.
    Valid: as for resistance_ohm.
    Source: dR/dT = 0 of resistance_ohm.
    Raises: DomainError: as for resistance_ohm; T2 below T1.
    """
    require_positive(least_k=least_k, most_k=most_k, r_ref_ohm=r_ref_ohm, t_ref_k=t_ref_k)
    if most_k < least_k:
        raise DomainError(f"most_k must be at least least_k, {least_k!r} (found {most_k!r})")
    places_k = [least_k, most_k]
    if tc2_per_k2 != 0.0:
        turn_k = t_ref_k - tc1_per_k / (2.0 * tc2_per_k2)
        if least_k < turn_k < most_k:
            places_k.insert(1, turn_k)
    values_ohm = resistance_ohm(
        t_k=np.array(places_k),
        r_ref_ohm=r_ref_ohm,
        t_ref_k=t_ref_k,
        tc1_per_k=tc1_per_k,
        tc2_per_k2=tc2_per_k2,
    )
    low, high = int(np.argmin(values_ohm)), int(np.argmax(values_ohm))
    return ResistanceRange(
        least_ohm=float(values_ohm[low]),
        least_at_k=places_k[low],
        most_ohm=float(values_ohm[high]),
        most_at_k=places_k[high],
    )
