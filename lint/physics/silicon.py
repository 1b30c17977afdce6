"""Junctions over temperature: thermal voltage, saturation current, voltage at a current; arrays of corners at once.

``device_at_corner`` has the forms for one number; both evaluate the laws of ``device_laws``.
"""

from __future__ import annotations

import numpy as np

from tidegate.lint.physics import device_laws
from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, not_negative, positive


def thermal_voltage_v(*, t_k: Reals) -> FloatArray:
    """Thermal voltage.

    Formula: V_T = k T / q
    Symbols:
        t_k  T  K  absolute temperature, > 0; any shape
    Returns: V_T, in V, of the shape of T.
    Valid: always.
    Source: definition; k and q from the SI.
    Raises: DomainError: T not above 0.
    """
    return np.asarray(device_laws.thermal_voltage_v(positive("t_k", t_k)))


def saturation_current_a(*, t_k: Reals, is_ref_a: Reals, t_ref_k: Reals, xti: Reals, gap_ev: Reals) -> FloatArray:
    """Saturation current at a temperature, from one band gap for all temperatures.

    Formula: IS(T) = IS0 (T/T0)^XTI exp((Eg/k) (1/T0 - 1/T))
    Symbols:
        t_k       T    K   absolute temperature, > 0
        is_ref_a  IS0  A   saturation current at T0, > 0
        t_ref_k   T0   K   temperature it is stated for, > 0
        xti       XTI  -   exponent of temperature; a junction of emission coefficient n counts XTI/n
        gap_ev    Eg   eV  band gap as the exponent counts it, > 0; a junction of emission coefficient n counts Eg/n
    Returns: IS, in A, of the common shape of the inputs.
    Valid: diffusion current; gap_ev is a fitted number (1.11 to 1.21 for silicon), not the gap at T.
    Source: saturation-current law of the SPICE junction models (L. W. Nagel, Memorandum ERL-M520, University of
        California, Berkeley, 1975).
    Raises: DomainError: T, T0, IS0 or Eg not above 0; XTI not finite.
    """
    found_a = device_laws.saturation_current_a(
        np,
        t_k=positive("t_k", t_k),
        saturation_ref_a=positive("is_ref_a", is_ref_a),
        t_ref_k=positive("t_ref_k", t_ref_k),
        temperature_exponent=finite("xti", xti),
        gap_ev=positive("gap_ev", gap_ev),
    )
    return np.asarray(found_a)


def junction_voltage_v(*, current_a: Reals, saturation_a: Reals, emission_v: Reals) -> FloatArray:
    """Voltage of a junction that carries a current: of a diode, or base to emitter at a collector current.

    Formula: V = n V_T ln(1 + I/IS)
    Symbols:
        current_a     I      A  current, >= 0
        saturation_a  IS     A  saturation current at the temperature, > 0
        emission_v    n V_T  V  emission coefficient times thermal voltage, > 0
    Returns: V, in V, of the common shape of the inputs.
    Valid: no series resistance, no high-level injection.
    Source: W. Shockley, Bell System Technical Journal 28, 435-489 (1949), solved for V.
    Raises: DomainError: I below 0; IS or n V_T not above 0.
    """
    found_v = device_laws.junction_voltage_v(
        np,
        current_a=not_negative("current_a", current_a),
        saturation_a=positive("saturation_a", saturation_a),
        emission_v=positive("emission_v", emission_v),
    )
    return np.asarray(found_v)
