"""Random noise at a comparator: how often it trips a level, and the distance that stops it."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import product, require_not_negative, require_positive, require_size


def zero_level_rate_hz(*, bandwidth_hz: float) -> float:
    """How often flat, band-limited Gaussian noise crosses its mean upwards.

    Formula: nu0 = B / sqrt(3)
    Symbols:
        bandwidth_hz  B  Hz  upper edge of the band, which starts at 0 Hz, >= 0
    Returns: nu0, in crossings a second (one direction; both directions together are twice this).
    Valid: Gaussian noise, flat from 0 to B and nothing above. A single RC pole does not limit the band
        enough: the second moment of its spectrum diverges.
    Source: S. O. Rice, "Mathematical Analysis of Random Noise", Bell System Technical Journal 23 (1944) and
        24 (1945): nu0 = sqrt(integral of f^2 S(f) df / integral of S(f) df), here with S constant up to B.
    Raises: DomainError: if B is negative.
    """
    require_size(bandwidth_hz=bandwidth_hz)
    return bandwidth_hz / math.sqrt(3.0)


def false_trip_rate_hz(*, sigma_v: float, bandwidth_hz: float, distance_v: float) -> float:
    """How often noise alone reaches a level that lies a distance away from the mean.

    Formula: nu = nu0 exp(-a^2 / (2 sigma^2)), nu0 = B / sqrt(3)
    Symbols:
        sigma_v       sigma  V   r.m.s. noise, > 0
        bandwidth_hz  B      Hz  upper edge of the noise band, >= 0
        distance_v    a      V   distance from the mean to the level, >= 0
    Returns: nu, in trips a second.
    Valid: as zero_level_rate_hz; the mean stands still.
    Source: Rice (1944-45), Gaussian level crossings; see zero_level_rate_hz.
    Raises: DomainError: if sigma is not > 0, or B or a is negative.
    """
    require_positive(sigma_v=sigma_v)
    require_not_negative(distance_v=distance_v)
    return zero_level_rate_hz(bandwidth_hz=bandwidth_hz) * math.exp(-0.5 * (distance_v / sigma_v) ** 2)


def false_trip_distance_v(*, sigma_v: float, bandwidth_hz: float, life_s: float, allowed_trips: float) -> float:
    """Least distance from the mean to the level at which noise trips it no more often than allowed.

    Formula: a = sigma sqrt(2 ln(nu0 T / N)), nu0 = B / sqrt(3); a = 0 where nu0 T <= N
    Symbols:
        sigma_v        sigma  V   r.m.s. noise, >= 0
        bandwidth_hz   B      Hz  upper edge of the noise band, >= 0
        life_s         T      s   service life, >= 0
        allowed_trips  N      1   mean number of false trips allowed in T, > 0 (may be a fraction)
    Returns: a, in V.
    Valid: as false_trip_rate_hz.
    Source: the rate of false_trip_rate_hz times T, set equal to N and solved for a.
    Raises: DomainError: if sigma, B or T is negative, or N is not > 0.
    """
    require_size(sigma_v=sigma_v, life_s=life_s)
    require_positive(allowed_trips=allowed_trips)
    rate_hz = zero_level_rate_hz(bandwidth_hz=bandwidth_hz)
    if rate_hz == 0.0 or life_s == 0.0:
        return 0.0
    # Logarithms are added, not factors multiplied, so that no combination of inputs overflows.
    ratio_log = math.log(rate_hz) + math.log(life_s) - math.log(allowed_trips)
    return product(sigma_v, math.sqrt(2.0 * max(0.0, ratio_log)))
