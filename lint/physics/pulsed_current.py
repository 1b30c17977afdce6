"""Steady currents that stand for a rectangular pulse train: one for wear, one for heating."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import require_not_negative, require_positive, require_within


def average_current_a(*, peak_a: float, duty: float) -> float:
    """Steady current that moves as much metal as a unipolar rectangular pulse train.

    Formula: Iavg = r Ip
    Symbols:
        peak_a   Ip   A   current during the pulse, as a magnitude, >= 0
        duty     r    -   share of the time the pulse is on, 0 to 1
    Returns: Iavg, in A.
    Valid: pulses of one direction, repeated faster than about 1 kHz.
    Source: average-current model, B. K. Liew, N. W. Cheung and C. Hu, IEEE Trans. Electron Devices 37,
        1343-1351 (1990).
    Raises: DomainError: if Ip is below 0, or r is outside 0..1.
    """
    require_not_negative(peak_a=peak_a)
    require_within(least=0.0, most=1.0, duty=duty)
    return duty * peak_a


def rms_current_a(*, peak_a: float, duty: float) -> float:
    """Steady current that heats a wire as much as a rectangular pulse train.

    Formula: Irms = sqrt(r) Ip
    Symbols:
        peak_a   Ip   A   current during the pulse, as a magnitude, >= 0
        duty     r    -   share of the time the pulse is on, 0 to 1
    Returns: Irms, in A.
    Valid: pulses repeated much faster than the thermal time constant of the wire; either direction.
    Source: definition of the root-mean-square value: Irms^2 is the mean of I^2, here r Ip^2.
    Raises: DomainError: if Ip is below 0, or r is outside 0..1.
    """
    require_not_negative(peak_a=peak_a)
    require_within(least=0.0, most=1.0, duty=duty)
    return math.sqrt(duty) * peak_a


def pulsed_life_gain(*, duty: float, exponent: float) -> float:
    """Life under a unipolar pulse train over life under a steady current equal to its peak.

    Formula: G = r^-n
    Symbols:
        duty       r   -   share of the time the pulse is on, 0 to 1
        exponent   n   -   exponent of the current density in Black's law, > 0
    Returns: G, dimensionless, >= 1; infinite at no duty and where it exceeds the largest float.
    Valid: as average_current_a; equal metal temperature in both cases.
    Source: Black's law, life proportional to J^-n, with the average current r Ip (Liew, Cheung and Hu, IEEE
        Trans. Electron Devices 37, 1343-1351, 1990).
    Raises: DomainError: if r is outside 0..1, or n is not greater than 0.
    """
    require_within(least=0.0, most=1.0, duty=duty)
    require_positive(exponent=exponent)
    wear_rate = math.pow(duty, exponent)
    return 1.0 / wear_rate if wear_rate > 0.0 else math.inf
