"""MOS threshold over temperature, and one smooth law from weak to strong inversion with its inverse.

Voltages are magnitudes, so that the same functions serve both polarities. Arrays of corners at once;
``device_at_corner`` has the forms for one number, and both evaluate the laws of ``device_laws``.
"""

from __future__ import annotations

import numpy as np

from tidegate.lint.physics import device_laws
from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, not_negative, positive
from tidegate.lint.physics.silicon import thermal_voltage_v


def threshold_linear_v(*, t_k: Reals, threshold_ref_v: Reals, t_ref_k: Reals, fall_v_per_k: Reals) -> FloatArray:
    """Threshold at a temperature, falling in a straight line.

    Formula: V_TH(T) = V_TH0 - kappa (T - T0)
    Symbols:
        t_k              T      K    absolute temperature, > 0
        threshold_ref_v  V_TH0  V    threshold at T0
        t_ref_k          T0     K    temperature it is stated for, > 0
        fall_v_per_k     kappa  V/K  fall with temperature, > 0 where the threshold falls
    Returns: V_TH, in V, of the common shape of the inputs.
    Valid: about -55 degC to 175 degC; 0.5 mV/K to 4 mV/K is usual.
    Source: I. M. Filanovsky and A. Allam, IEEE Trans. Circuits and Systems I 48(7), 876-884 (2001) (value from
        memory).
    Raises: DomainError: T or T0 not above 0; V_TH0 or kappa not finite.
    """
    found_v = device_laws.threshold_v(
        t_k=positive("t_k", t_k),
        threshold_ref_v=finite("threshold_ref_v", threshold_ref_v),
        t_ref_k=positive("t_ref_k", t_ref_k),
        fall_v_per_k=finite("fall_v_per_k", fall_v_per_k),
    )
    return np.asarray(found_v)


def gain_a_per_v2(*, t_k: Reals, gain_ref_a_per_v2: Reals, t_ref_k: Reals, exponent: Reals) -> FloatArray:
    """Gain factor at a temperature; it follows the mobility.

    Formula: beta(T) = beta0 (T/T0)^UTE
    Symbols:
        t_k                T      K      absolute temperature, > 0
        gain_ref_a_per_v2  beta0  A/V^2  mobility times oxide capacitance times W/L at T0, > 0
        t_ref_k            T0     K      temperature it is stated for, > 0
        exponent           UTE    -      exponent of the mobility, about -1.5
    Returns: beta, in A/V^2, of the common shape of the inputs.
    Valid: lattice scattering; about -55 degC to 175 degC.
    Source: BSIM3v3 manual, temperature dependence (value from memory).
    Raises: DomainError: T, T0 or beta0 not above 0; UTE not finite.
    """
    ratio = positive("t_k", t_k) / positive("t_ref_k", t_ref_k)
    return np.asarray(positive("gain_ref_a_per_v2", gain_ref_a_per_v2) * ratio ** finite("exponent", exponent))


def specific_current_a(*, t_k: Reals, gain: Reals, slope_factor: Reals) -> FloatArray:
    """Current that separates weak from strong inversion.

    Formula: I_S = 2 n beta V_T^2
    Symbols:
        t_k           T     K      absolute temperature, > 0
        gain          beta  A/V^2  gain factor at T (gain_a_per_v2), > 0
        slope_factor  n     -      slope factor, > 0; 1.1 to 1.6 is usual
    Returns: I_S, in A, of the common shape of the inputs.
    Valid: long channel.
    Source: C. C. Enz, F. Krummenacher and E. A. Vittoz, Analog Integrated Circuits and Signal Processing 8, 83-114
        (1995).
    Raises: DomainError: a symbol not above 0.
    """
    found_a = device_laws.specific_current_a(
        thermal_v=thermal_voltage_v(t_k=t_k),
        slope_factor=positive("slope_factor", slope_factor),
        gain_a_per_v2=positive("gain", gain),
    )
    return np.asarray(found_a)


def saturated_current_a(
    *, gate_v: Reals, threshold_v: Reals, slope_factor: Reals, specific_a: Reals, thermal_v: Reals
) -> FloatArray:
    """Drain current in saturation, source at its body, from weak to strong inversion.

    Formula: I = I_S ln^2(1 + exp((V_GS - V_TH) / (2 n V_T)))
    Symbols:
        gate_v        V_GS  V  gate to source
        threshold_v   V_TH  V  threshold at the temperature
        slope_factor  n     -  slope factor, > 0
        specific_a    I_S   A  specific current at the temperature (specific_current_a), > 0
        thermal_v     V_T   V  thermal voltage, > 0
    Returns: I, in A, of the common shape of the inputs.
    Valid: long channel, saturation: drain above about 4 V_T in weak inversion, and so for a diode-connected device
        at more than about 0.1 V.
    Source: Enz, Krummenacher and Vittoz (1995), as for specific_current_a; V_P = (V_G - V_TH)/n, source at its body.
    Raises: DomainError: n, I_S or V_T not above 0; V_GS or V_TH not finite.
    """
    drive_v = finite("gate_v", gate_v) - finite("threshold_v", threshold_v)
    scale_v = 2.0 * positive("slope_factor", slope_factor) * positive("thermal_v", thermal_v)
    return np.asarray(positive("specific_a", specific_a) * np.logaddexp(0.0, drive_v / scale_v) ** 2)


def diode_connected_v(
    *, current_a: Reals, threshold_v: Reals, slope_factor: Reals, specific_a: Reals, thermal_v: Reals
) -> FloatArray:
    """Voltage of a diode-connected device that carries a current: the inverse of saturated_current_a.

    Formula: V_GS = V_TH + 2 n V_T ln(exp(sqrt(I/I_S)) - 1)
    Symbols:
        current_a     I     A  current, > 0
        threshold_v   V_TH  V  threshold at the temperature
        slope_factor  n     -  slope factor, > 0
        specific_a    I_S   A  specific current at the temperature, > 0
        thermal_v     V_T   V  thermal voltage, > 0
    Returns: V_GS, in V, of the common shape of the inputs.
    Valid: as for saturated_current_a.
    Source: saturated_current_a solved for V_GS.
    Raises: DomainError: I, n, I_S or V_T not above 0; V_TH not finite.
    """
    found_v = device_laws.diode_connected_v(
        np,
        current_a=positive("current_a", current_a),
        threshold_v=finite("threshold_v", threshold_v),
        scale_v=2.0 * positive("slope_factor", slope_factor) * positive("thermal_v", thermal_v),
        specific_a=positive("specific_a", specific_a),
    )
    return np.asarray(found_v)


def subthreshold_swing_v_per_decade(*, slope_factor: Reals, thermal_v: Reals) -> FloatArray:
    """Gate voltage for a tenfold current deep in weak inversion.

    Formula: S = n V_T ln 10
    Symbols:
        slope_factor  n    -  slope factor, >= 1
        thermal_v     V_T  V  thermal voltage, >= 0
    Returns: S, in V per decade, of the common shape of the inputs.
    Valid: weak inversion.
    Source: saturated_current_a for V_GS well below V_TH.
    Raises: DomainError: n or V_T below 0.
    """
    n, thermal_v = not_negative("slope_factor", slope_factor), not_negative("thermal_v", thermal_v)
    return np.asarray(n * thermal_v * np.log(10.0))
