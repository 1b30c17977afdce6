"""Random noise at a comparator: its size, how often it trips a level, and the distance that stops it."""

from __future__ import annotations

import math

from tidegate.lint.physics.constants import BOLTZMANN_J_PER_K
from tidegate.lint.physics.domain import require_not_negative, require_positive


def zero_level_rate_hz(*, bandwidth_hz: float) -> float:
    """How often flat, band-limited Gaussian noise crosses its mean upwards.

    Formula: nu0 = B / sqrt(3)
    Symbols:
        bandwidth_hz  B  Hz  upper edge of the band, which starts at 0 Hz, > 0
    Returns: nu0, in crossings a second (one direction; both directions together are twice this).
    Valid: Gaussian noise, flat from 0 to B and nothing above. A single RC pole does not limit the band
        enough: the second moment of its spectrum diverges.
    Source: S. O. Rice, "Mathematical Analysis of Random Noise", Bell System Technical Journal 23 (1944) and
        24 (1945): nu0 = sqrt(integral of f^2 S(f) df / integral of S(f) df), here with S constant up to B.
    Raises: DomainError: if B is not > 0.
    """
    require_positive(bandwidth_hz=bandwidth_hz)
    return bandwidth_hz / math.sqrt(3.0)


def false_trip_rate_hz(*, sigma_v: float, bandwidth_hz: float, distance_v: float) -> float:
    """How often noise alone reaches a level that lies a distance away from the mean.

    Formula: nu = nu0 exp(-a^2 / (2 sigma^2)), nu0 = B / sqrt(3)
    Symbols:
        sigma_v       sigma  V   r.m.s. noise, > 0
        bandwidth_hz  B      Hz  upper edge of the noise band, > 0
        distance_v    a      V   distance from the mean to the level, >= 0
    Returns: nu, in trips a second.
    Valid: as zero_level_rate_hz; the mean stands still.
    Source: Rice (1944-45), Gaussian level crossings; see zero_level_rate_hz.
    Raises: DomainError: if sigma or B is not > 0, or a is negative.
    """
    require_positive(sigma_v=sigma_v)
    require_not_negative(distance_v=distance_v)
    return zero_level_rate_hz(bandwidth_hz=bandwidth_hz) * math.exp(-0.5 * (distance_v / sigma_v) ** 2)


def expected_false_trips(*, sigma_v: float, bandwidth_hz: float, distance_v: float, life_s: float) -> float:
    """False trips to be expected over a service life.

    Formula: N = T nu0 exp(-a^2 / (2 sigma^2))
    Symbols:
        sigma_v       sigma  V   r.m.s. noise, > 0
        bandwidth_hz  B      Hz  upper edge of the noise band, > 0
        distance_v    a      V   distance from the mean to the level, >= 0
        life_s        T      s   time spent at that distance, >= 0
    Returns: N, a mean number of trips (no unit).
    Valid: as false_trip_rate_hz.
    Source: the rate of false_trip_rate_hz, constant over T.
    Raises: DomainError: if sigma or B is not > 0, or a or T is negative.
    """
    require_not_negative(life_s=life_s)
    return life_s * false_trip_rate_hz(sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, distance_v=distance_v)


def false_trip_distance_v(*, sigma_v: float, bandwidth_hz: float, life_s: float, allowed_trips: float) -> float:
    """Least distance from the mean to the level at which noise trips it no more often than allowed.

    Formula: a = sigma sqrt(2 ln(nu0 T / N)), nu0 = B / sqrt(3); a = 0 where nu0 T <= N
    Symbols:
        sigma_v        sigma  V   r.m.s. noise, >= 0
        bandwidth_hz   B      Hz  upper edge of the noise band, > 0
        life_s         T      s   service life, > 0
        allowed_trips  N      1   mean number of false trips allowed in T, > 0 (may be a fraction)
    Returns: a, in V.
    Valid: as false_trip_rate_hz.
    Source: the rate of false_trip_rate_hz times T, set equal to N and solved for a.
    Raises: DomainError: if sigma is negative, or B, T or N is not > 0.
    """
    require_not_negative(sigma_v=sigma_v)
    require_positive(life_s=life_s, allowed_trips=allowed_trips)
    # Logarithms are added, not factors multiplied, so that no combination of inputs overflows.
    ratio_log = math.log(zero_level_rate_hz(bandwidth_hz=bandwidth_hz)) + math.log(life_s) - math.log(allowed_trips)
    if ratio_log <= 0.0:
        return 0.0
    return sigma_v * math.sqrt(2.0 * ratio_log)


def slow_ramp_crossings(*, sigma_v: float, bandwidth_hz: float, slope_v_per_s: float) -> float:
    """Chatter: how often a noisy, slow ramp crosses a threshold that has no hysteresis.

    Formula: n = sqrt(2 pi) nu0 sigma / s, nu0 = B / sqrt(3)
    Symbols:
        sigma_v        sigma  V    r.m.s. noise, >= 0
        bandwidth_hz   B      Hz   upper edge of the noise band, > 0
        slope_v_per_s  s      V/s  magnitude of the slope of the ramp, > 0
    Returns: n, a mean number of crossings in the direction of the ramp (no unit).
    Valid: ramp slow beside the noise, s well below 2 pi nu0 sigma. The exact mean, the crossing that the ramp
        itself makes included, is larger by 1/2 for a slow ramp and by 1 for a fast one.
    Source: integral over all time of the rate of false_trip_rate_hz at the distance s t.
    Raises: DomainError: if sigma is negative, or B or s is not > 0.
    """
    require_not_negative(sigma_v=sigma_v)
    require_positive(slope_v_per_s=slope_v_per_s)
    return math.sqrt(2.0 * math.pi) * zero_level_rate_hz(bandwidth_hz=bandwidth_hz) * sigma_v / slope_v_per_s


def share_outside(*, width_sigmas: float) -> float:
    """Share of the time that Gaussian noise spends outside a window centred on its mean.

    Formula: p = erfc(w / (2 sqrt(2)))
    Symbols:
        width_sigmas  w  1  whole width of the window (peak to peak), in r.m.s. values, >= 0
    Returns: p, between 0 and 1 (no unit).
    Valid: Gaussian noise.
    Source: the normal distribution outside -w/2 to w/2; tabulated as peak-to-peak or crest factor of noise in
        data-converter and amplifier handbooks.
    Raises: DomainError: if w is negative.
    """
    require_not_negative(width_sigmas=width_sigmas)
    return math.erfc(width_sigmas / math.sqrt(8.0))


def thermal_noise_v(*, r_ohm: float, bandwidth_hz: float, temperature_k: float) -> float:
    """Thermal noise of a resistor in a given noise bandwidth, r.m.s.

    Formula: vn = sqrt(4 k T R B)
    Symbols:
        r_ohm          R  ohm  resistance, >= 0
        bandwidth_hz   B  Hz   equivalent noise bandwidth, > 0
        temperature_k  T  K    absolute temperature, > 0
    Returns: vn, in V r.m.s.
    Valid: h f << k T, which holds up to far above 1 GHz at any temperature of a chip.
    Source: J. B. Johnson and H. Nyquist, Physical Review 32 (1928).
    Raises: DomainError: if R is negative, or B or T is not > 0.
    """
    require_not_negative(r_ohm=r_ohm)
    require_positive(bandwidth_hz=bandwidth_hz, temperature_k=temperature_k)
    return math.sqrt(4.0 * BOLTZMANN_J_PER_K * temperature_k * r_ohm * bandwidth_hz)


def sampled_noise_v(*, c_f: float, temperature_k: float) -> float:
    """Thermal noise on a capacitor fed through any resistance, r.m.s.

    Formula: vn = sqrt(k T / C)
    Symbols:
        c_f            C  F  capacitance, > 0
        temperature_k  T  K  absolute temperature, > 0
    Returns: vn, in V r.m.s.
    Valid: as thermal_noise_v; the resistance does not matter.
    Source: thermal_noise_v with the noise bandwidth of one RC pole, B = 1 / (4 R C).
    Raises: DomainError: if C or T is not > 0.
    """
    require_positive(c_f=c_f, temperature_k=temperature_k)
    return math.sqrt(BOLTZMANN_J_PER_K * temperature_k / c_f)
