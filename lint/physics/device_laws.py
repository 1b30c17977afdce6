"""The laws of the parts of a crossover, each written once: for a number by ``math``, for arrays by ``numpy``.

Nothing is checked here. The functions that check, and state formula, units, range and source, are those of
``device_at_corner`` for one number, and those of ``silicon``, ``mos_threshold`` and ``resistor`` for arrays.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol, TypeVar

from tidegate.lint.physics.constants import BOLTZMANN_EV_PER_K

if TYPE_CHECKING:
    from tidegate.lint.physics.array_domain import FloatArray

N = TypeVar("N", float, "FloatArray")
"""A number, or an array over the corners: all arguments of one call are of the same sort."""


class Functions(Protocol[N]):
    """The elementary functions: the module ``math`` for a number, ``numpy`` for arrays."""

    def exp(self, x: N, /) -> N:
        """e^x."""

    def expm1(self, x: N, /) -> N:
        """e^x - 1."""

    def log(self, x: N, /) -> N:
        """ln x."""

    def log1p(self, x: N, /) -> N:
        """ln(1 + x)."""

    def sqrt(self, x: N, /) -> N:
        """Square root."""


def thermal_voltage_v(t_k: N) -> N:
    """k T/q, V."""
    return BOLTZMANN_EV_PER_K * t_k


def saturation_current_a(
    by: Functions[N], *, t_k: N, saturation_ref_a: N, t_ref_k: N, temperature_exponent: N, gap_ev: N
) -> N:
    """IS0 (T/T0)^XTI exp((Eg/k) (1/T0 - 1/T)), A."""
    exponent = temperature_exponent * by.log(t_k / t_ref_k)
    exponent = exponent + gap_ev / BOLTZMANN_EV_PER_K * (1.0 / t_ref_k - 1.0 / t_k)
    return saturation_ref_a * by.exp(exponent)


def junction_voltage_v(by: Functions[N], *, current_a: N, saturation_a: N, emission_v: N) -> N:
    """n V_T ln(1 + I/IS), V."""
    return emission_v * by.log1p(current_a / saturation_a)


def threshold_v(*, t_k: N, threshold_ref_v: N, t_ref_k: N, fall_v_per_k: N) -> N:
    """V_TH0 - kappa (T - T0), V."""
    return threshold_ref_v - fall_v_per_k * (t_k - t_ref_k)


def specific_current_a(*, thermal_v: N, slope_factor: N, gain_a_per_v2: N) -> N:
    """2 n beta V_T^2, A."""
    return 2.0 * slope_factor * gain_a_per_v2 * thermal_v**2


def diode_connected_v(by: Functions[N], *, current_a: N, threshold_v: N, scale_v: N, specific_a: N) -> N:
    """V_TH + 2 n V_T ln(exp(sqrt(I/I_S)) - 1), V; scale_v is 2 n V_T."""
    root = by.sqrt(current_a / specific_a)
    # ln(e^s - 1) = s + ln(1 - e^-s): neither overflows in strong nor cancels in weak inversion.
    return threshold_v + scale_v * (root + by.log(-by.expm1(-root)))


def resistance_ohm(*, t_k: N, r_ref_ohm: N, t_ref_k: N, tc1_per_k: N, tc2_per_k2: N) -> N:
    """R0 (1 + TC1 (T - T0) + TC2 (T - T0)^2), ohm."""
    above_k = t_k - t_ref_k
    return r_ref_ohm * (1.0 + above_k * (tc1_per_k + above_k * tc2_per_k2))
