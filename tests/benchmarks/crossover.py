"""A full-factorial sweep of 10 000 corners, beside SciPy's root finder in a loop over the same corners.

The circuits are invented.
"""

from __future__ import annotations

import math
import time
from collections.abc import Callable, Iterator

import numpy as np
from scipy.optimize import brentq

from tidegate.lint.derived.crossover.crossover_facts import Crossing, CrossoverFacts, JunctionFacts, TransistorFacts
from tidegate.lint.derived.crossover.crossover_sweep import level_of
from tidegate.lint.physics.array_domain import FloatArray
from tidegate.lint.physics.corner_spread import TEMPERATURE, factorial_corners

K_OVER_Q = 1.380649e-23 / 1.602176634e-19
SLOPE_FACTOR, GAIN, FALL_V_PER_K, T_REF_K = 1.15, 26e-6, 0.35e-3, 298.15
SATURATION_A, GAP_EV, EXPONENT = 8e-19, 1.17, 3.0
TENTH = np.linspace(0.0, 1.0, 10)
REPEATS = 20
SAME_V = 1e-9


def between(low: float, high: float) -> tuple[float, ...]:
    """Ten values."""
    return tuple(float(x) for x in low + (high - low) * TENTH)


SPANS = {
    "threshold": between(0.485, 0.515),
    "resistance": between(1.8e6, 2.2e6),
    "offset": between(-3e-3, 3e-3),
    TEMPERATURE: between(233.15, 398.15),
}


def facts(device: JunctionFacts | TransistorFacts) -> CrossoverFacts:
    """Half of the supply against a device fed through a resistor; the corners are those of SPANS."""
    return CrossoverFacts(
        crossing=Crossing.DIVIDER, device=device, ratio=0.5, resistor_ref_k=None, spans={}, nominal={},
        temperature_k=(233.15, 398.15), nominal_k=T_REF_K,
    )  # fmt: skip


def transistor_loop(corners: dict[str, FloatArray]) -> list[float]:
    """SciPy's root of the current balance, corner by corner."""
    found = []
    for threshold_v, ohm, offset_v, t_k in zip(*(axis.tolist() for axis in corners.values()), strict=True):
        thermal_v = K_OVER_Q * t_k
        scale_v = 2.0 * SLOPE_FACTOR * thermal_v
        specific_a = 2.0 * SLOPE_FACTOR * GAIN * thermal_v**2
        vth_v = threshold_v - FALL_V_PER_K * (t_k - T_REF_K)

        def surplus_a(
            v: float, ohm: float = ohm, offset_v: float = offset_v, vth_v: float = vth_v, scale_v: float = scale_v,
            specific_a: float = specific_a,
        ) -> float:  # fmt: skip
            gate_v = 0.5 * v - offset_v
            return specific_a * math.log1p(math.exp((gate_v - vth_v) / scale_v)) ** 2 - (v - gate_v) / ohm

        found.append(brentq(surplus_a, 0.5, 3.0))
    return found


def junction_loop(corners: dict[str, FloatArray]) -> list[float]:
    """SciPy's root of the current balance, corner by corner."""
    found = []
    for _, ohm, offset_v, t_k in zip(*(axis.tolist() for axis in corners.values()), strict=True):
        thermal_v = K_OVER_Q * t_k
        saturation_a = SATURATION_A * (t_k / T_REF_K) ** EXPONENT
        saturation_a *= math.exp(GAP_EV / K_OVER_Q * (1.0 / T_REF_K - 1.0 / t_k))

        def surplus_a(
            v: float, ohm: float = ohm, offset_v: float = offset_v, thermal_v: float = thermal_v,
            saturation_a: float = saturation_a,
        ) -> float:  # fmt: skip
            device_v = 0.5 * v - offset_v
            return saturation_a * math.expm1(device_v / thermal_v) - (v - device_v) / ohm

        found.append(brentq(surplus_a, 0.5, 3.0))
    return found


def at_once_and_one_by_one() -> Iterator[tuple[str, float, float]]:
    """Each device, with the processor time of a sweep and of a loop over the same corners, in s."""
    corners = factorial_corners(SPANS)
    mos = level_of(facts(TransistorFacts(T_REF_K, SLOPE_FACTOR)))
    diode = level_of(facts(JunctionFacts(T_REF_K, EXPONENT, GAP_EV, 1.0)))
    arrays = {
        **corners,
        "threshold slope": np.asarray(FALL_V_PER_K),
        "gain": np.asarray(GAIN),
        "saturation current": np.asarray(SATURATION_A),
    }
    yield "transistor", *_times_s(lambda: mos(arrays), lambda: transistor_loop(corners))
    yield "junction", *_times_s(lambda: diode(arrays), lambda: junction_loop(corners))


def _times_s(swept: Callable[[], FloatArray], looped: Callable[[], list[float]]) -> tuple[float, float]:
    times_s = []
    for _ in range(REPEATS):
        start_s = time.process_time()
        at_once_v = swept()
        times_s.append(time.process_time() - start_s)
    start_s = time.process_time()
    one_by_one_v = looped()
    loop_s = time.process_time() - start_s
    assert np.max(np.abs(at_once_v - np.array(one_by_one_v))) < SAME_V
    return min(times_s), loop_s
