"""Junction voltages over temperature: band gap, saturation current, base-emitter voltage; arrays of corners at once.

``device_at_corner`` has the forms for one number; both evaluate the laws of ``device_laws``.
"""

from __future__ import annotations

from typing import Final

import msgspec
import numpy as np

from tidegate.lint.physics import device_laws
from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, not_negative, positive
from tidegate.lint.physics.domain import require_not_negative, require_positive


class VarshniGap(msgspec.Struct, frozen=True):
    """Parameters of Varshni's law for a band gap.

    Symbols:
        zero_ev         Eg0    eV    gap at 0 K, > 0
        alpha_ev_per_k  alpha  eV/K  > 0
        beta_k          beta   K     >= 0
    Raises: DomainError: a parameter out of its range.
    """

    zero_ev: float
    alpha_ev_per_k: float
    beta_k: float

    def __post_init__(self) -> None:
        require_positive(zero_ev=self.zero_ev, alpha_ev_per_k=self.alpha_ev_per_k)
        require_not_negative(beta_k=self.beta_k)


SILICON_GAP: Final = VarshniGap(zero_ev=1.17, alpha_ev_per_k=4.73e-4, beta_k=636.0)
"""Silicon, the set in wide use (Ioffe Institute, NSM archive; value from memory)."""

SILICON_GAP_1166: Final = VarshniGap(zero_ev=1.166, alpha_ev_per_k=4.73e-4, beta_k=636.0)
"""Silicon, the same slope from 1.166 eV (E. Kaklin, notes on physics for electronics, "Bandgap")."""

SILICON_GAP_1967: Final = VarshniGap(zero_ev=1.1557, alpha_ev_per_k=7.021e-4, beta_k=1108.0)
"""Silicon, Varshni's own fit (Y. P. Varshni, Physica 34, 149-154, 1967; value from memory)."""


def band_gap_ev(*, t_k: Reals, gap: VarshniGap) -> FloatArray:
    """Band gap at a temperature.

    Formula: Eg(T) = Eg0 - alpha T^2 / (T + beta)
    Symbols:
        t_k  T                 K  absolute temperature, > 0; any shape
        gap  Eg0, alpha, beta     parameters of the semiconductor
    Returns: Eg, in eV, of the shape of T.
    Valid: an empirical fit; for silicon about 0 K to 800 K.
    Source: Y. P. Varshni, Physica 34, 149-154 (1967).
    Raises: DomainError: T not above 0.
    """
    t_k = positive("t_k", t_k)
    return np.asarray(gap.zero_ev - gap.alpha_ev_per_k * t_k**2 / (t_k + gap.beta_k))


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


def saturation_current_varshni_a(
    *, t_k: Reals, is_ref_a: Reals, t_ref_k: Reals, xti: Reals, gap: VarshniGap
) -> FloatArray:
    """Saturation current at a temperature, from a band gap that itself moves with temperature.

    Formula: IS(T) = IS0 (T/T0)^XTI exp(Eg(T0)/(k T0) - Eg(T)/(k T))
    Symbols:
        t_k       T    K  absolute temperature, > 0
        is_ref_a  IS0  A  saturation current at T0, > 0
        t_ref_k   T0   K  temperature it is stated for, > 0
        xti       XTI  -  exponent of temperature
        gap       Eg      band gap by Varshni's law
    Returns: IS, in A, of the common shape of the inputs.
    Valid: diffusion current of a junction with emission coefficient 1.
    Source: junction law of the BSIM4 model (value from memory), with the gap of band_gap_ev.
    Raises: DomainError: T, T0 or IS0 not above 0; XTI not finite.
    """
    t_k, t_ref_k = positive("t_k", t_k), positive("t_ref_k", t_ref_k)
    is_ref_a = positive("is_ref_a", is_ref_a)
    exponent = finite("xti", xti) * np.log(t_k / t_ref_k)
    exponent = exponent + band_gap_ev(t_k=t_ref_k, gap=gap) / thermal_voltage_v(t_k=t_ref_k)
    exponent = exponent - band_gap_ev(t_k=t_k, gap=gap) / thermal_voltage_v(t_k=t_k)
    return np.asarray(is_ref_a * np.exp(exponent))


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


def base_emitter_slope_v_per_k(*, t_k: Reals, base_emitter_v: Reals, gap_v: Reals, xti: Reals) -> FloatArray:
    """Change of the base-emitter voltage with temperature at a constant collector current.

    Formula: dV_BE/dT = (V_BE - XTI V_T - Eg/q) / T
    Symbols:
        t_k             T     K  absolute temperature, > 0
        base_emitter_v  V_BE  V  base-emitter voltage at T
        gap_v           Eg/q  V  band gap, as a voltage, > 0
        xti             XTI   -  exponent of temperature in the saturation current (4 + m, m the mobility's)
    Returns: dV_BE/dT, in V/K, of the common shape of the inputs.
    Valid: I much larger than IS; the law of saturation_current_a.
    Source: B. Razavi, Design of Analog CMOS Integrated Circuits, chapter on band-gap references (second-hand);
        derivative of V_T ln(I/IS(T)).
    Raises: DomainError: T or Eg/q not above 0; V_BE or XTI not finite.
    """
    t_k = positive("t_k", t_k)
    over_v = finite("base_emitter_v", base_emitter_v) - positive("gap_v", gap_v)
    return np.asarray((over_v - finite("xti", xti) * thermal_voltage_v(t_k=t_k)) / t_k)


def ptat_difference_v(*, t_k: Reals, density_ratio: Reals) -> FloatArray:
    """Difference of two base-emitter voltages at different current densities; proportional to temperature.

    Formula: dV_BE = V_T ln N
    Symbols:
        t_k            T  K  absolute temperature, > 0
        density_ratio  N  -  ratio of the current densities, > 0
    Returns: dV_BE, in V, of the common shape of the inputs.
    Valid: equal devices at equal temperature, emission coefficient 1.
    Source: difference of two junction_voltage_v, I much larger than IS.
    Raises: DomainError: T or N not above 0.
    """
    return np.asarray(thermal_voltage_v(t_k=t_k) * np.log(positive("density_ratio", density_ratio)))
