"""Hysteresis of a supply comparator: what a supply does while its level should rest, and while it is yet to move."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import product, require_size


def release_droop_v(*, load_step_a: float, source_ohm: float) -> float:
    """Droop of a supply when the load that was held in reset starts to draw current.

    Formula: droop = dI Rs
    Symbols:
        load_step_a  dI  A    current step at release, >= 0
        source_ohm   Rs  ohm  resistance of the source up to the point that is watched, >= 0
    Returns: droop, in V.
    Valid: resistive source; a regulator's own transient response is not in it.
    Source: Ohm's law.
    Raises: DomainError: if dI or Rs is negative.
    """
    require_size(load_step_a=load_step_a, source_ohm=source_ohm)
    return product(load_step_a, source_ohm)


def supply_travel_v(*, slope_v_per_s: float, delay_s: float) -> float:
    """How far a supply moves on while the detector is still making up its mind.

    Formula: travel = s t
    Symbols:
        slope_v_per_s  s  V/s  magnitude of the slope of the supply, >= 0
        delay_s        t  s    response delay plus filter, >= 0
    Returns: travel, in V.
    Valid: constant slope over the delay.
    Source: definition of slope.
    Raises: DomainError: if s or t is negative.
    """
    require_size(slope_v_per_s=slope_v_per_s, delay_s=delay_s)
    return product(slope_v_per_s, delay_s)


def steepest_ripple_v_per_s(*, peak_to_peak_v: float, frequency_hz: float) -> float:
    """Steepest slope of a sinusoidal ripple.

    Formula: s = pi f Vpp
    Symbols:
        peak_to_peak_v  Vpp  V   ripple, peak to peak, >= 0
        frequency_hz    f    Hz  ripple frequency, >= 0
    Returns: s, in V/s.
    Valid: sinusoidal ripple; other shapes have steeper parts.
    Source: greatest value of |d/dt (Vpp/2) sin(2 pi f t)|.
    Raises: DomainError: if Vpp or f is negative.
    """
    require_size(peak_to_peak_v=peak_to_peak_v, frequency_hz=frequency_hz)
    return math.pi * product(frequency_hz, peak_to_peak_v)
