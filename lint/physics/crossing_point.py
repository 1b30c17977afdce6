"""Trip level made without a reference, at one corner and one temperature, with the standard library alone.

The modules ``crossover`` and ``fed_branch`` solve arrays of corners by closed forms and need NumPy. A review judges a
few corners at a time and should not pay for loading it, so here one corner is solved by Newton's method on the current
balance. A test holds the two against each other.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final, Protocol

from tidegate.lint.physics.constants import BOLTZMANN_EV_PER_K
from tidegate.lint.physics.domain import DomainError, require_finite, require_positive, require_within

_MOST_STEPS: Final = 200
_SETTLED: Final = 1e-14
_TRIVIAL: Final = 1e-9
"""Part of the thermal voltage below which a level is the trivial crossing at 0 V, missed by a rounding."""


class NoCrossingError(DomainError):
    """The device never gets ahead of the divided supply, so that nothing holds reset at any supply."""


class Device(Protocol):
    """What a crossing asks of a device that carries a current."""

    def voltage_v(self, current_a: float) -> float:
        """Voltage across the device at a current > 0, V."""

    def slope_ohm(self, current_a: float) -> float:
        """Change of that voltage with the current, ohm."""

    @property
    def least_v(self) -> float:
        """Voltages of the device below this are none: rounding, V."""


@dataclass(frozen=True, slots=True)
class Junction:
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
        return self.emission_v * math.log1p(current_a / self.saturation_a)

    def slope_ohm(self, current_a: float) -> float:
        """dV/dI, ohm."""
        return self.emission_v / (current_a + self.saturation_a)

    @property
    def least_v(self) -> float:
        """Rounding of the voltage, V."""
        return _TRIVIAL * self.emission_v


@dataclass(frozen=True, slots=True)
class DiodeConnected:
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
        root = math.sqrt(current_a / self.specific_a)
        # ln(e^s - 1) = s + ln(1 - e^-s): neither overflows in strong nor cancels in weak inversion.
        return self.threshold_v + self.scale_v * (root + math.log(-math.expm1(-root)))

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
    exponent = temperature_exponent * math.log(t_k / t_ref_k)
    exponent += gap_ev / BOLTZMANN_EV_PER_K * (1.0 / t_ref_k - 1.0 / t_k)
    return Junction(
        saturation_a=saturation_ref_a * math.exp(exponent / emission), emission_v=emission * BOLTZMANN_EV_PER_K * t_k
    )


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
    thermal_v = BOLTZMANN_EV_PER_K * t_k
    return DiodeConnected(
        threshold_v=threshold_ref_v - fall_v_per_k * (t_k - t_ref_k),
        scale_v=2.0 * slope_factor * thermal_v,
        specific_a=2.0 * slope_factor * gain_a_per_v2 * thermal_v**2,
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
    return swing_v_per_decade / (BOLTZMANN_EV_PER_K * t_k * math.log(10.0))


def divider_crossing_v(device: Device, *, series_ohm: float, divider_ratio: float, offset_v: float) -> float:
    """Supply at which a part of it overtakes the voltage of a device fed from it through a resistor.

    Formula: a V = V_dev + V_os with V_dev = V_dev(I), I = (V - V_dev)/R = ((1 - a) V_dev + V_os)/(a R)
    Symbols:
        device                 V_dev(I)     the device at its corner and temperature
        series_ohm     R                ohm  resistance at the corner and temperature, > 0
        divider_ratio  a                -    part of the supply that is compared, 0 < a < 1
        offset_v       V_os             V    offset of the comparison; above 0 it raises the level
    Returns: V, in V: the level above which the part stays ahead.
    Valid: ideal divider that does not load the branch; a MOS device at more than about 0.1 V.
    Source: Newton's method on F(V_dev) = V_dev - V_dev(I(V_dev)). F is convex, since V_dev(I) is concave, so that from
        a start right of its last root the method falls on that root without passing it.
    Raises: DomainError: R not above 0; a not in (0, 1); V_os not finite. NoCrossingError: nothing holds reset at any
        supply.
    """
    require_positive(series_ohm=series_ohm, divider_ratio=divider_ratio)
    require_within(least=0.0, most=1.0 - 1e-12, divider_ratio=divider_ratio)
    require_finite(offset_v=offset_v)
    per_ohm = 1.0 / (divider_ratio * series_ohm)
    share = (1.0 - divider_ratio) * per_ohm

    def balance(at_v: float) -> tuple[float, float] | None:
        current_a = share * at_v + offset_v * per_ohm
        if current_a <= 0.0:
            return None
        return at_v - device.voltage_v(current_a), 1.0 - device.slope_ohm(current_a) * share

    device_v = 1.0
    for _ in range(_MOST_STEPS):
        found = balance(device_v)
        if found is not None and found[0] >= 0.0 and found[1] > 0.0:
            break
        device_v *= 2.0
    for _ in range(_MOST_STEPS):
        found = balance(device_v)
        if found is None or found[1] <= 0.0:
            break
        step_v = found[0] / found[1]
        device_v -= step_v
        if abs(step_v) <= _SETTLED * (1.0 + abs(device_v)):
            trip_v = (device_v + offset_v) / divider_ratio
            if trip_v > device.least_v:
                return trip_v
            break
    raise NoCrossingError("no crossing: the device never gets ahead of the divided supply")


def branch_level_v(device: Device, *, series_ohm: float, current_a: float) -> float:
    """Supply at which a device behind a resistor carries a current.

    Formula: V = I R + V_dev(I)
    Symbols:
        device      V_dev(I)       the device at its corner and temperature
        series_ohm  R         ohm  resistance at the corner and temperature, > 0
        current_a   I         A    current, > 0
    Returns: V, in V.
    Valid: quasi-static.
    Source: Kirchhoff's voltage law.
    Raises: DomainError: R or I not above 0.
    """
    require_positive(series_ohm=series_ohm, current_a=current_a)
    return current_a * series_ohm + device.voltage_v(current_a)
