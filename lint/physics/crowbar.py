"""Current that runs straight from supply to ground through an inverter whose input edge is slow."""

from __future__ import annotations

import math

import msgspec

from tidegate.lint.physics.domain import (
    DomainError,
    require_not_negative,
    require_positive,
    require_within,
)


class Inverter(msgspec.Struct, frozen=True):
    """A static CMOS inverter of square-law devices.

    Symbols:
        supply_v              VDD    V      supply, > 0
        nmos_threshold_v      Vtn    V      threshold of the NMOS device, >= 0
        pmos_threshold_v      |Vtp|  V      threshold of the PMOS device, as a magnitude, >= 0
        nmos_beta_a_per_v2    bn     A/V^2  gain factor mu Cox W/L of the NMOS device, > 0
        pmos_beta_a_per_v2    bp     A/V^2  gain factor mu Cox W/L of the PMOS device, > 0
    Valid: enhancement devices; a threshold below 0 V never turns off inside the supply range.
    Raises: DomainError: if a symbol is outside its range.
    """

    supply_v: float
    nmos_threshold_v: float
    pmos_threshold_v: float
    nmos_beta_a_per_v2: float
    pmos_beta_a_per_v2: float

    def __post_init__(self) -> None:
        require_positive(
            supply_v=self.supply_v,
            nmos_beta_a_per_v2=self.nmos_beta_a_per_v2,
            pmos_beta_a_per_v2=self.pmos_beta_a_per_v2,
        )
        require_not_negative(nmos_threshold_v=self.nmos_threshold_v, pmos_threshold_v=self.pmos_threshold_v)


def _overlap_v(inverter: Inverter) -> float:
    """Span of input voltage, in V, over which both devices conduct; 0 where they never do."""
    return max(0.0, inverter.supply_v - inverter.nmos_threshold_v - inverter.pmos_threshold_v)


def switching_threshold_v(inverter: Inverter) -> float:
    """Input voltage at which both devices are saturated and carry the peak current.

    Formula: VM = (VDD - |Vtp| + r Vtn) / (1 + r), r = sqrt(bn/bp)
    Symbols:
        inverter    VDD, Vtn, |Vtp|, bn, bp as in Inverter, with Vtn + |Vtp| <= VDD
    Returns: VM, in V.
    Valid: square law, no channel-length modulation, no load current.
    Source: equal saturation currents, bn/2 (VM - Vtn)^2 = bp/2 (VDD - |Vtp| - VM)^2 (Shichman and Hodges,
        IEEE J. Solid-State Circuits SC-3, 1968, for the square law).
    Raises: DomainError: if VDD < Vtn + |Vtp|; then no input voltage turns both devices on.
    """
    both_v = inverter.nmos_threshold_v + inverter.pmos_threshold_v
    if inverter.supply_v < both_v:
        raise DomainError(
            f"supply_v must be at least nmos_threshold_v + pmos_threshold_v = {both_v!r} (found {inverter.supply_v!r})"
        )
    r = math.sqrt(inverter.nmos_beta_a_per_v2 / inverter.pmos_beta_a_per_v2)
    return (inverter.supply_v - inverter.pmos_threshold_v + r * inverter.nmos_threshold_v) / (1.0 + r)


def current_at_v(inverter: Inverter, *, input_v: float) -> float:
    """Current from supply to ground while the input stands at one voltage.

    Formula: I = min(In, Ip), In = bn/2 (Vin - Vtn)^2, Ip = bp/2 (VDD - Vin - |Vtp|)^2; a device below its
        threshold carries nothing
    Symbols:
        inverter    VDD, Vtn, |Vtp|, bn, bp as in Inverter
        input_v     Vin    V    input voltage, 0 <= Vin <= VDD
    Returns: I, in A.
    Valid: static input, square law, no channel-length modulation, no subthreshold current, no load current.
    Source: the two devices are in series, and a device can carry at most its saturation current; the
        output settles where the stronger device drops into its triode region and carries as much as the
        weaker one, which stays saturated (Shichman and Hodges, IEEE J. Solid-State Circuits SC-3, 1968).
    Raises: DomainError: if Vin is outside 0..VDD.
    """
    require_within(least=0.0, most=inverter.supply_v, input_v=input_v)
    nmos_drive_v = max(0.0, input_v - inverter.nmos_threshold_v)
    pmos_drive_v = max(0.0, inverter.supply_v - input_v - inverter.pmos_threshold_v)
    return min(
        0.5 * inverter.nmos_beta_a_per_v2 * nmos_drive_v**2,
        0.5 * inverter.pmos_beta_a_per_v2 * pmos_drive_v**2,
    )


def peak_current_a(inverter: Inverter) -> float:
    """Largest current from supply to ground, reached with the input at the switching threshold.

    Formula: Ipk = bn/2 (VM - Vtn)^2 = bn bp / (2 (sqrt(bn) + sqrt(bp))^2) (VDD - Vtn - |Vtp|)^2
    Symbols:
        inverter    VDD, Vtn, |Vtp|, bn, bp as in Inverter
    Returns: Ipk, in A; exactly 0 where VDD <= Vtn + |Vtp|.
    Valid: as current_at_v.
    Source: In rises and Ip falls with the input voltage, so min(In, Ip) is largest where they are equal;
        equal devices give H. J. M. Veendrick, IEEE J. Solid-State Circuits 19(4), 468-473 (1984):
        Ipk = b/8 (VDD - 2 Vt)^2.
    Raises: nothing; an Inverter is already in range.
    """
    root_n = math.sqrt(inverter.nmos_beta_a_per_v2)
    root_p = math.sqrt(inverter.pmos_beta_a_per_v2)
    return 0.5 * (root_n * root_p / (root_n + root_p) * _overlap_v(inverter)) ** 2


def conduction_time_s(inverter: Inverter, *, edge_s: float) -> float:
    """Part of a full-swing linear input edge during which both devices conduct.

    Formula: tc = (te/VDD) (VDD - Vtn - |Vtp|)
    Symbols:
        inverter    VDD, Vtn, |Vtp| as in Inverter
        edge_s      te    s    time the input takes from 0 V to VDD (not 10 % to 90 %), > 0
    Returns: tc, in s; exactly 0 where VDD <= Vtn + |Vtp|.
    Valid: linear edge; no subthreshold current.
    Source: the input moves at VDD/te and both devices conduct between Vtn and VDD - |Vtp|.
    Raises: DomainError: if te is not greater than 0.
    """
    require_positive(edge_s=edge_s)
    return edge_s * (_overlap_v(inverter) / inverter.supply_v)


def peak_equivalent_time_s(inverter: Inverter, *, edge_s: float, exponent: float) -> float:
    """Time at the peak current that does the same wear as one edge, for wear proportional to I^n.

    Formula: tq = (te/VDD) ((VM - Vtn) + (VDD - |Vtp| - VM)) / (2 n + 1) = tc / (2 n + 1)
    Symbols:
        inverter    VDD, Vtn, |Vtp|, VM as in Inverter and switching_threshold_v
        edge_s      te    s    time the input takes from 0 V to VDD, > 0
        exponent    n     -    exponent of the current in the wear, > 0
    Returns: tq, in s; exactly 0 where VDD <= Vtn + |Vtp|.
    Valid: as current_at_v; linear edge.
    Source: tq is the integral of (I/Ipk)^n dt over the edge. With dt = (te/VDD) dVin, and
        I/Ipk = ((Vin - Vtn)/(VM - Vtn))^2 from Vtn up to VM, substituting u = (Vin - Vtn)/(VM - Vtn) gives
        (te/VDD) (VM - Vtn) integral of u^(2n) du from 0 to 1 = (te/VDD) (VM - Vtn)/(2n + 1); the falling
        side from VM to VDD - |Vtp| gives the same with its own width, and the two widths add up to
        VDD - Vtn - |Vtp|, whatever the two betas are.
    Raises: DomainError: if te or n is not greater than 0.
    """
    require_positive(exponent=exponent)
    return conduction_time_s(inverter, edge_s=edge_s) / (2.0 * exponent + 1.0)


def edge_charge_c(inverter: Inverter, *, edge_s: float) -> float:
    """Charge that passes from supply to ground during one full-swing linear input edge.

    Formula: Q = (te/VDD) (bn (VM - Vtn)^3 + bp (VDD - |Vtp| - VM)^3) / 6 = Ipk tc / 3
    Symbols:
        inverter    VDD, Vtn, |Vtp|, bn, bp, VM as in Inverter and switching_threshold_v
        edge_s      te    s    time the input takes from 0 V to VDD, > 0
    Returns: Q, in C; exactly 0 where VDD <= Vtn + |Vtp|.
    Valid: as current_at_v, linear edge; a load makes the charge smaller.
    Source: peak_equivalent_time_s with n = 1; both forms are equal because
        bn (VM - Vtn)^2 = bp (VDD - |Vtp| - VM)^2 = 2 Ipk. Equal devices give
        Q = b te (VDD - 2 Vt)^3 / (24 VDD) (Veendrick, IEEE J. Solid-State Circuits 19(4), 468-473, 1984).
    Raises: DomainError: if te is not greater than 0.
    """
    return peak_current_a(inverter) * peak_equivalent_time_s(inverter, edge_s=edge_s, exponent=1.0)
