"""The law of propagation of uncertainty against worked examples of the GUM and of NIST."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import NamedTuple

import numpy as np
import pytest
from scipy import stats
from uncertainties import ufloat

from tidegate.lint.physics.tolerance import ARCSINE_DIVISOR, combined_uncertainty, effective_degrees_of_freedom

INF = math.inf


class Budget(NamedTuple):
    """A published uncertainty budget: inputs, and the results as printed, with half of the last digit unless noted."""

    source: str
    c: Sequence[float]
    u: Sequence[float]
    nu: Sequence[float]
    combined: float
    combined_within: float
    effective: float
    effective_within: float


BUDGETS = (
    Budget(
        # JCGM 100:2008 H.1, end gauge, in nm (second-hand): printed 32, from 31.7; nu_eff printed 16.7, from rounded
        # contributions (16.75 from the inputs).
        "gum-h1-end-gauge",
        c=(1.0, 1.0, 0.0, 0.0, 0.1 * 50_000_623.0, -50_000_623.0 * 11.5e-6),
        u=(25.0, 9.7, 1.2e-6, 0.41, 0.58e-6, 0.029),
        nu=(18.0, 25.6, INF, INF, 50.0, 2.0),
        combined=31.7,
        combined_within=0.05,
        effective=16.7,
        effective_within=0.06,
    ),
    Budget(
        # JCGM 100:2008 H.1, the difference d, in nm (second-hand). The document takes the fourth power of the rounded
        # 9.7, which alone turns 25.4 degrees of freedom into 25.6.
        "gum-h1-difference",
        c=(1.0, 1.0, 1.0),
        u=(5.8, 3.9, 6.7),
        nu=(24.0, 5.0, 8.0),
        combined=9.7,
        combined_within=0.05,
        effective=25.6,
        effective_within=0.2,
    ),
    Budget(
        # JCGM 100:2008 H.1, temperature, in degC (second-hand): 0.2, and a swing of half-width 0.5 caught at random.
        "gum-h1-temperature",
        c=(1.0, 1.0),
        u=(0.2, 0.5 / ARCSINE_DIVISOR),
        nu=(INF, INF),
        combined=0.41,
        combined_within=0.005,
        effective=INF,
        effective_within=0.0,
    ),
    Budget(
        # Welch-Satterthwaite example (second-hand): 0.57 with 9 degrees of freedom, 0.25 exact.
        "welch-satterthwaite",
        c=(1.0, 1.0),
        u=(0.57, 0.25),
        nu=(9.0, INF),
        combined=math.hypot(0.57, 0.25),
        combined_within=1e-12,
        effective=12.80,
        effective_within=0.005,
    ),
    Budget(
        # NIST Technical Note 1900, example E11, attenuator, in dB (second-hand); only the first has few degrees of
        # freedom, and it hardly counts.
        "nist-tn1900-e11",
        c=(1.0,) * 9,
        u=(0.0091, 0.0025, 0.0003, 0.002, 0.002, 0.02, 0.0014, 0.0003, 0.0021),
        nu=(INF,) * 9,
        combined=0.0224,
        combined_within=0.00005,
        effective=INF,
        effective_within=0.0,
    ),
)


@pytest.mark.parametrize("budget", BUDGETS, ids=[row.source for row in BUDGETS])
def test_published_budget(budget: Budget) -> None:
    found = combined_uncertainty(sensitivities=budget.c, uncertainties=budget.u, correlations=None)
    assert found == pytest.approx(budget.combined, abs=budget.combined_within)

    contributions = [c * u for c, u in zip(budget.c, budget.u, strict=True)]
    nu = effective_degrees_of_freedom(contributions=contributions, degrees_of_freedom=budget.nu)
    assert nu == pytest.approx(budget.effective, abs=budget.effective_within)


def test_expanded_uncertainty_of_gum_h1() -> None:
    # JCGM 100:2008 H.1 (second-hand): U99 = t(16) u_c = 2.92 * 32 nm = 93 nm.
    u = combined_uncertainty(
        sensitivities=(1.0, 1.0, 5.0000623e6, -575.0071645),
        uncertainties=(25.0, 9.7, 0.58e-6, 0.029),
        correlations=None,
    )
    k99 = float(stats.t.ppf(0.995, 16))
    assert k99 == pytest.approx(2.92, abs=0.005)
    assert k99 * round(u) == pytest.approx(93.0, abs=0.5)


# JCGM 100:2008 H.2 (second-hand): five simultaneous readings of V in V, I in A, phase in rad.
H2_READINGS = np.array(
    [
        (5.007, 19.663e-3, 1.0456),
        (4.994, 19.639e-3, 1.0438),
        (5.005, 19.640e-3, 1.0468),
        (4.990, 19.685e-3, 1.0428),
        (4.999, 19.678e-3, 1.0433),
    ]
)
H2_MEANS = H2_READINGS.mean(axis=0)
H2_UNCERTAINTIES = tuple(H2_READINGS.std(axis=0, ddof=1) / math.sqrt(len(H2_READINGS)))
H2_CORRELATIONS = np.corrcoef(H2_READINGS.T).tolist()


def h2_sensitivities() -> dict[str, np.ndarray]:
    v, i, phi = H2_MEANS
    z = v / i
    return {
        "R": np.array([math.cos(phi) / i, -z * math.cos(phi) / i, -z * math.sin(phi)]),
        "X": np.array([math.sin(phi) / i, -z * math.sin(phi) / i, z * math.cos(phi)]),
        "Z": np.array([1.0 / i, -z / i, 0.0]),
    }


def h2_uncertainty(c: np.ndarray, correlations: list[list[float]] | None) -> float:
    return combined_uncertainty(sensitivities=c.tolist(), uncertainties=H2_UNCERTAINTIES, correlations=correlations)


@pytest.mark.parametrize(
    ("name", "expected_ohm", "independent_ohm"),
    [("R", 0.071, 0.195), ("X", 0.295, 0.201), ("Z", 0.236, 0.204)],
    ids=["gum-h2-R", "gum-h2-X", "gum-h2-Z"],
)
def test_correlated_inputs_of_gum_h2(name: str, expected_ohm: float, independent_ohm: float) -> None:
    c = h2_sensitivities()[name]
    # The document rounds its correlations before use (X: 0.2956 without), hence one unit of the last digit.
    assert h2_uncertainty(c, H2_CORRELATIONS) == pytest.approx(expected_ohm, abs=0.001)
    # What forgetting the correlation gives; far outside the tolerance above.
    assert h2_uncertainty(c, None) == pytest.approx(independent_ohm, abs=0.001)


@pytest.mark.parametrize(
    ("first", "second", "expected"),
    [("R", "X", -0.588), ("R", "Z", -0.485), ("X", "Z", 0.993)],
    ids=["gum-h2-r(R,X)", "gum-h2-r(R,Z)", "gum-h2-r(X,Z)"],
)
def test_correlated_results_of_gum_h2(first: str, second: str, expected: float) -> None:
    c = h2_sensitivities()
    u_sum, u1, u2 = (h2_uncertainty(x, H2_CORRELATIONS) for x in (c[first] + c[second], c[first], c[second]))
    assert (u_sum**2 - u1**2 - u2**2) / (2.0 * u1 * u2) == pytest.approx(expected, abs=0.0015)


# NIST Technical Note 1900, linear law (second-hand). E3: viscometer, u 1.027; E13: expansion coefficient, 1/degC.
def viscosity(m: Sequence[float]) -> float:
    return m[0] * m[1] * (m[2] - m[3]) / (m[4] * (m[2] - m[5]))


def expansion(m: Sequence[float]) -> float:
    return (m[2] - m[0]) / (m[0] * (m[3] - m[1]))


class Measurement(NamedTuple):
    source: str
    model: Callable[[Sequence[float]], float]
    values: Sequence[float]
    uncertainties: Sequence[float]
    result: float
    uncertainty: float
    within: float


MEASUREMENTS = (
    Measurement(
        "nist-tn1900-e3",
        viscosity,
        values=(4.63, 61.0, 2217.0, 1180.0, 36.6, 810.0),
        uncertainties=(0.0463, 6.1, 0.5, 0.5, 5.49, 0.5),
        result=5.687,
        uncertainty=1.03,
        within=0.005,
    ),
    Measurement(
        "nist-tn1900-e13",
        expansion,
        values=(1.4999, 288.15, 1.5021, 373.10),
        uncertainties=(1e-4, 0.02, 2e-4, 0.05),
        result=1.7266e-5,
        uncertainty=1.76e-6,
        within=0.005e-6,
    ),
)


@pytest.mark.parametrize("case", MEASUREMENTS, ids=[row.source for row in MEASUREMENTS])
def test_linear_law_of_nist_examples(case: Measurement) -> None:
    inputs = [ufloat(x, u) for x, u in zip(case.values, case.uncertainties, strict=True)]
    reference = case.model(inputs)  # derivatives, and the law itself, from the uncertainties library
    sensitivities = [reference.derivatives[x] for x in inputs]
    u = combined_uncertainty(sensitivities=sensitivities, uncertainties=case.uncertainties, correlations=None)
    assert reference.nominal_value == pytest.approx(case.result, rel=1e-4)
    assert u == pytest.approx(case.uncertainty, abs=case.within)
    assert u == pytest.approx(reference.std_dev, rel=1e-9)
