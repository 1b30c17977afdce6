"""Threshold mismatch from a matching coefficient, whichever of the two conventions it is stated in."""

from __future__ import annotations

import math
from enum import Enum

from tidegate.lint.physics.domain import require_not_negative, require_positive


class MatchingOf(Enum):
    """What a matching coefficient is the standard deviation of: process documents state either."""

    PAIR = "difference of two equal devices"
    DEVICE = "one device against its nominal"


def pair_mismatch_v(*, coefficient_v_m: float, matching_of: MatchingOf, width_m: float, length_m: float) -> float:
    """Standard deviation of the threshold difference between two equal devices side by side.

    Formula: sigma = A / sqrt(W L) for a pair coefficient; sqrt(2) A / sqrt(W L) for a device coefficient
    Symbols:
        coefficient_v_m  A  V m  matching coefficient, >= 0 (1 mV um = 1e-9 V m)
        matching_of              what A is stated for
        width_m          W  m    effective width, > 0
        length_m         L  m    effective length, > 0
    Returns: sigma, in V.
    Valid: devices at no distance; not for wide and short or narrow and long ones (P. G. Drennan and C. C. McAndrew,
        IEEE J. Solid-State Circuits 38(3), 2003).
    Source: M. J. M. Pelgrom, A. C. J. Duinmaijer and A. P. G. Welbers, IEEE J. Solid-State Circuits 24(5), 1433-1439
        (1989).
    Raises: DomainError: A below 0; W or L not above 0.
    """
    require_not_negative(coefficient_v_m=coefficient_v_m)
    require_positive(width_m=width_m, length_m=length_m)
    sigma_v = coefficient_v_m / math.sqrt(width_m * length_m)
    return sigma_v if matching_of is MatchingOf.PAIR else math.sqrt(2.0) * sigma_v


def device_mismatch_v(*, coefficient_v_m: float, matching_of: MatchingOf, width_m: float, length_m: float) -> float:
    """Standard deviation of the threshold of one device against its nominal.

    Formula: sigma = A / sqrt(2 W L) for a pair coefficient; A / sqrt(W L) for a device coefficient
    Symbols:
        coefficient_v_m  A  V m  matching coefficient, >= 0 (1 mV um = 1e-9 V m)
        matching_of              what A is stated for
        width_m          W  m    effective width, > 0
        length_m         L  m    effective length, > 0
    Returns: sigma, in V.
    Valid: as for pair_mismatch_v.
    Source: as for pair_mismatch_v; the difference of two independent devices has twice the variance of one.
    Raises: DomainError: A below 0; W or L not above 0.
    """
    pair_v = pair_mismatch_v(
        coefficient_v_m=coefficient_v_m, matching_of=matching_of, width_m=width_m, length_m=length_m
    )
    return pair_v / math.sqrt(2.0)


def mirror_mismatch_share(*, threshold_v: float, gain_share: float, overdrive_v: float) -> float:
    """Relative standard deviation of the output current of a mirror of two equal devices.

    Formula: sigma(dI/I) = sqrt(sigma_beta^2 + 4 sigma_VT^2 / (V_GS - V_T)^2)
    Symbols:
        threshold_v  sigma_VT    V  standard deviation of the threshold difference of the pair, >= 0
        gain_share   sigma_beta  -  relative standard deviation of the gain difference of the pair, >= 0
        overdrive_v  V_GS - V_T  V  overdrive, > 0
    Returns: sigma(dI/I), dimensionless.
    Valid: strong inversion, saturation; threshold and gain uncorrelated.
    Source: Pelgrom et al. (1989), as for pair_mismatch_v.
    Raises: DomainError: sigma_VT or sigma_beta below 0; the overdrive not above 0.
    """
    require_not_negative(threshold_v=threshold_v, gain_share=gain_share)
    require_positive(overdrive_v=overdrive_v)
    return math.hypot(gain_share, 2.0 * threshold_v / overdrive_v)
