"""A diode, a MOS device and a resistor at one corner and one temperature, with the standard library alone.

The forms for one number of what ``silicon``, ``mos_threshold`` and ``resistor`` state for arrays; both evaluate the
laws of ``device_laws``.
"""

from __future__ import annotations

import math
from typing import Final, Protocol

import msgspec

from tidegate.lint.physics import device_laws
from tidegate.lint.physics.domain import require_finite, require_positive

_TRIVIAL: Final = 1e-9
"""Part of the thermal voltage below which a level is the trivial crossing at 0 V, missed by a rounding."""


class Device(Protocol):
    """What a crossing asks of a device that carries a current."""

    def voltage_v(self, current_a: float) -> float:
        """Voltage across the device at a current > 0, V."""

    def slope_ohm(self, current_a: float) -> float:
        """Change of that voltage with the current, ohm."""

    @property
    def least_v(self) -> float:
        """Voltages of the device below this are none: rounding, V."""


class Junction(msgspec.Struct, frozen=True):
    """A diode, or a diode-connected bipolar transistor, at one corner and temperature.

    Formula: V = n V_T ln(1 + I/IS)
    Symbols:
        saturation_a  IS     A  saturation current at the temperature, > 0
        emission_v    n V_T  V  emission coefficient times thermal voltage, > 0
    Source: W. Shockley, Bell System Technical Journal 28, 435-489 (1949), solved for V.
    Raises: DomainError: a symbol not above 0.
    """

    saturation_a: float
    emission_v: float

    def __post_init__(self) -> None:
        require_positive(saturation_a=self.saturation_a, emission_v=self.emission_v)

    def voltage_v(self, current_a: float) -> float:
        """Voltage at a current >= 0, V."""
        return device_laws.junction_voltage_v(
            math, current_a=current_a, saturation_a=self.saturation_a, emission_v=self.emission_v
        )

    def slope_ohm(self, current_a: float) -> float:
        """dV/dI, ohm."""
        return self.emission_v / (current_a + self.saturation_a)

    @property
    def least_v(self) -> float:
        """Rounding of the voltage, V."""
        return _TRIVIAL * self.emission_v


class DiodeConnected(msgspec.Struct, frozen=True):
    """A diode-connected MOS device at one corner and temperature; voltages are magnitudes.

    Formula: V = V_TH + 2 n V_T ln(exp(sqrt(I/I_S)) - 1)
    Symbols:
        threshold_v  V_TH     V  threshold at the temperature
        scale_v      2 n V_T  V  twice the slope factor times the thermal voltage, > 0
        specific_a   I_S      A  specific current at the temperature, > 0
    Source: C. C. Enz, F. Krummenacher and E. A. Vittoz, Analog Integrated Circuits and Signal Processing 8, 83-114
        (1995), solved for V.
    Raises: DomainError: I_S or 2 n V_T not above 0; V_TH not finite.
    """

    threshold_v: float
    scale_v: float
    specific_a: float

    def __post_init__(self) -> None:
        require_finite(threshold_v=self.threshold_v)
        require_positive(scale_v=self.scale_v, specific_a=self.specific_a)

    def voltage_v(self, current_a: float) -> float:
        """Voltage at a current > 0, V."""
        return device_laws.diode_connected_v(
            math,
            current_a=current_a,
            threshold_v=self.threshold_v,
            scale_v=self.scale_v,
            specific_a=self.specific_a,
        )

    def slope_ohm(self, current_a: float) -> float:
        """dV/dI, ohm."""
        root = math.sqrt(current_a / self.specific_a)
        return self.scale_v / (-math.expm1(-root) * 2.0 * root * self.specific_a)

    @property
    def least_v(self) -> float:
        """Rounding of the voltage, V."""
        return _TRIVIAL * self.scale_v


def junction_at(
    *, t_k: float, saturation_ref_a: float, t_ref_k: float, temperature_exponent: float, gap_ev: float, emission: float
) -> Junction:
    """A junction at a temperature.

    Formula: IS(T) = IS0 (T/T0)^(XTI/n) exp((Eg/(n k)) (1/T0 - 1/T)); V_T = k T/q
    Symbols:
        t_k                   T    K   absolute temperature, > 0
        saturation_ref_a      IS0  A   saturation current at T0, > 0
        t_ref_k               T0   K   temperature it is stated for, > 0
        temperature_exponent  XTI  -   exponent of temperature
        gap_ev                Eg   eV  band gap of the law, > 0
        emission              n    -   emission coefficient, > 0
    Returns: the junction with IS(T) in A and n V_T in V.
    Valid: as for saturation_current_a of silicon.
    Source: saturation-current law of the SPICE junction models (L. W. Nagel, Memorandum ERL-M520, University of
        California, Berkeley, 1975).
    Raises: DomainError: T, T0, IS0, Eg or n not above 0; XTI not finite.
    """
    require_positive(t_k=t_k, t_ref_k=t_ref_k, saturation_ref_a=saturation_ref_a, gap_ev=gap_ev, emission=emission)
    require_finite(temperature_exponent=temperature_exponent)
    saturation_a = device_laws.saturation_current_a(
        math,
        t_k=t_k,
        saturation_ref_a=saturation_ref_a,
        t_ref_k=t_ref_k,
        temperature_exponent=temperature_exponent / emission,
        gap_ev=gap_ev / emission,
    )
    return Junction(saturation_a=saturation_a, emission_v=emission * device_laws.thermal_voltage_v(t_k))


def diode_connected_at(
    *,
    t_k: float,
    threshold_ref_v: float,
    t_ref_k: float,
    fall_v_per_k: float,
    slope_factor: float,
    gain_a_per_v2: float,
) -> DiodeConnected:
    """A diode-connected MOS device at a temperature.

    Formula: V_TH(T) = V_TH0 - kappa (T - T0); I_S = 2 n beta V_T^2; V_T = k T/q
    Symbols:
        t_k              T      K      absolute temperature, > 0
        threshold_ref_v  V_TH0  V      threshold at T0
        t_ref_k          T0     K      temperature it is stated for, > 0
        fall_v_per_k     kappa  V/K    fall of the threshold with temperature
        slope_factor     n      -      slope factor, > 0
        gain_a_per_v2    beta   A/V^2  gain factor at T, > 0
    Returns: the device with V_TH(T) in V, 2 n V_T in V and I_S in A.
    Valid: as for threshold_linear_v and specific_current_a of mos_threshold.
    Source: those two functions.
    Raises: DomainError: T, T0, n or beta not above 0; V_TH0 or kappa not finite.
    """
    require_positive(t_k=t_k, t_ref_k=t_ref_k, slope_factor=slope_factor, gain_a_per_v2=gain_a_per_v2)
    require_finite(threshold_ref_v=threshold_ref_v, fall_v_per_k=fall_v_per_k)
    thermal_v = device_laws.thermal_voltage_v(t_k)
    return DiodeConnected(
        threshold_v=device_laws.threshold_v(
            t_k=t_k, threshold_ref_v=threshold_ref_v, t_ref_k=t_ref_k, fall_v_per_k=fall_v_per_k
        ),
        scale_v=2.0 * slope_factor * thermal_v,
        specific_a=device_laws.specific_current_a(
            thermal_v=thermal_v, slope_factor=slope_factor, gain_a_per_v2=gain_a_per_v2
        ),
    )


def slope_factor_of_swing(*, swing_v_per_decade: float, t_k: float) -> float:
    """Slope factor of a device whose subthreshold swing is stated.

    Formula: n = S / (V_T ln 10)
    Symbols:
        swing_v_per_decade  S  V  gate voltage for a tenfold current in weak inversion, > 0
        t_k                 T  K  temperature it is stated for, > 0
    Returns: n, dimensionless.
    Valid: weak inversion.
    Source: subthreshold_swing_v_per_decade of mos_threshold, solved for n.
    Raises: DomainError: S or T not above 0.
    """
    require_positive(swing_v_per_decade=swing_v_per_decade, t_k=t_k)
    return swing_v_per_decade / (device_laws.thermal_voltage_v(t_k) * math.log(10.0))


def series_ohm_at(*, t_k: float, r_ref_ohm: float, t_ref_k: float, tc1_per_k: float, tc2_per_k2: float) -> float:
    """Resistance at a temperature: the form for one number of resistance_ohm of resistor.

    Formula: R(T) = R0 (1 + TC1 (T - T0) + TC2 (T - T0)^2)
    Symbols:
        t_k         T    K      absolute temperature, > 0
        r_ref_ohm   R0   ohm    resistance at T0, > 0
        t_ref_k     T0   K      temperature it is stated for, > 0
        tc1_per_k   TC1  1/K    linear coefficient
        tc2_per_k2  TC2  1/K^2  quadratic coefficient
    Returns: R, in ohm.
    Valid: the range the coefficients were fitted over.
    Source: as for resistance_ohm of resistor.
    Raises: DomainError: T, T0 or R0 not above 0; a coefficient not finite; a resistance that is not above 0.
    """
    require_positive(t_k=t_k, r_ref_ohm=r_ref_ohm, t_ref_k=t_ref_k)
    require_finite(tc1_per_k=tc1_per_k, tc2_per_k2=tc2_per_k2)
    found_ohm = device_laws.resistance_ohm(
        t_k=t_k, r_ref_ohm=r_ref_ohm, t_ref_k=t_ref_k, tc1_per_k=tc1_per_k, tc2_per_k2=tc2_per_k2
    )
    require_positive(resistance_ohm=found_ohm)
    return found_ohm
