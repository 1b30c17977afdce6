"""Hysteresis of a supply comparator: how much disturbances need, how much a feedback network gives."""

from __future__ import annotations

import enum
import math

import msgspec

from tidegate.lint.physics.domain import (
    DomainError,
    require_finite,
    require_not_negative,
    require_positive,
)


class Connection(enum.Enum):
    """Which comparator input the watched signal goes to."""

    NON_INVERTING = "non-inverting"
    INVERTING = "inverting"


class Levels(msgspec.Struct, frozen=True):
    """The two levels of a comparator with hysteresis, as seen by its input signal."""

    rising_v: float
    """Level at which the output switches while the signal rises, V."""
    falling_v: float
    """Level at which the output switches back while the signal falls, V."""

    @property
    def hysteresis_v(self) -> float:
        """Distance between the two levels, V."""
        return self.rising_v - self.falling_v


def disturbance_v(
    *, ripple_v: float, dip_v: float, release_droop_v: float, neighbours_v: float, noise_v: float
) -> float:
    """Least hysteresis that keeps a comparator from switching back on its own disturbances.

    Formula: H = ripple + dip + droop + neighbours + noise
    Symbols:
        ripple_v         ripple      V  ripple of the supply, peak to peak, >= 0
        dip_v            dip         V  non-monotonic dip of the ramp inside the band, >= 0
        release_droop_v  droop       V  droop of the supply when the release lets the load start, >= 0
        neighbours_v     neighbours  V  bumps coupled in by neighbours, referred to the supply, >= 0
        noise_v          noise       V  r.m.s. noise times its coverage factor, referred to the supply, >= 0
    Returns: H, in V.
    Valid: worst case, all disturbances at once and in the same direction.
    Source: triangle inequality: no sum of disturbances exceeds the sum of their magnitudes.
    Raises: DomainError: if any symbol is negative.
    """
    require_not_negative(
        ripple_v=ripple_v,
        dip_v=dip_v,
        release_droop_v=release_droop_v,
        neighbours_v=neighbours_v,
        noise_v=noise_v,
    )
    return ripple_v + dip_v + release_droop_v + neighbours_v + noise_v


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
    require_not_negative(load_step_a=load_step_a, source_ohm=source_ohm)
    return load_step_a * source_ohm


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
    require_not_negative(slope_v_per_s=slope_v_per_s, delay_s=delay_s)
    return slope_v_per_s * delay_s


def steepest_ripple_v_per_s(*, peak_to_peak_v: float, frequency_hz: float) -> float:
    """Steepest slope of a sinusoidal ripple.

    Formula: s = pi f Vpp
    Symbols:
        peak_to_peak_v  Vpp  V   ripple, peak to peak, >= 0
        frequency_hz    f    Hz  ripple frequency, > 0
    Returns: s, in V/s.
    Valid: sinusoidal ripple; other shapes have steeper parts.
    Source: greatest value of |d/dt (Vpp/2) sin(2 pi f t)|.
    Raises: DomainError: if Vpp is negative or f is not > 0.
    """
    require_not_negative(peak_to_peak_v=peak_to_peak_v)
    require_positive(frequency_hz=frequency_hz)
    return math.pi * frequency_hz * peak_to_peak_v


def positive_feedback_levels_v(
    *,
    connection: Connection,
    reference_v: float,
    input_ohm: float,
    feedback_ohm: float,
    output_low_v: float,
    output_high_v: float,
) -> Levels:
    """Switching levels of a comparator whose output is fed back to its positive input through a resistor.

    Formula:
        non-inverting: rising  = Vref (1 + R1/R2) - VOL R1/R2
                       falling = Vref (1 + R1/R2) - VOH R1/R2
        inverting:     rising  = (Vref R2 + VOH R1) / (R1 + R2)
                       falling = (Vref R2 + VOL R1) / (R1 + R2)
    Symbols:
        connection     -     -    non-inverting: signal through R1 to the positive input, reference on the
                                  negative input; inverting: the other way round
        reference_v    Vref  V    reference voltage
        input_ohm      R1    ohm  resistor between its source and the positive input, > 0
        feedback_ohm   R2    ohm  resistor between the output and the positive input, > 0
        output_low_v   VOL   V    output when low
        output_high_v  VOH   V    output when high, >= VOL
    Returns: the rising and the falling level of the signal, in V.
    Valid: ideal comparator: no offset, no input current, no hysteresis of its own; outputs as loaded by R2.
    Source: no current into the positive input, so (V1 - V+)/R1 = (V+ - VO)/R2, solved for the signal at which
        both inputs are equal, once for each state of the output.
    Raises: DomainError: if R1 or R2 is not > 0, a voltage is not finite, or VOH < VOL.
    """
    require_finite(reference_v=reference_v, output_low_v=output_low_v, output_high_v=output_high_v)
    require_positive(input_ohm=input_ohm, feedback_ohm=feedback_ohm)
    if output_high_v < output_low_v:
        raise DomainError(f"output_high_v must be at least output_low_v ({output_low_v!r}) (found {output_high_v!r})")
    if connection is Connection.NON_INVERTING:
        ratio = input_ohm / feedback_ohm
        return Levels(
            rising_v=reference_v * (1.0 + ratio) - output_low_v * ratio,
            falling_v=reference_v * (1.0 + ratio) - output_high_v * ratio,
        )
    share = input_ohm / (input_ohm + feedback_ohm)
    return Levels(
        rising_v=reference_v * (1.0 - share) + output_high_v * share,
        falling_v=reference_v * (1.0 - share) + output_low_v * share,
    )
