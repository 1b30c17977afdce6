"""The root sum of squares against worked examples of the GUM and of NIST: the law for independent inputs."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import NamedTuple

import pytest
from scipy import stats
from uncertainties import ufloat

from tidegate.lint.physics.tolerance import Contributor, Kind, root_sum_square_v


def combined(c: Sequence[float], u: Sequence[float], *, coverage: float = 1.0) -> float:
    """What the inputs of a budget amount to as contributors of a level; the law does not ask for the unit."""
    sizes = (abs(one * other) for one, other in zip(c, u, strict=True))
    contributors = [
        Contributor(f"x{i}", size, Kind.SIGMA, coverage=1.0, rectangular=False, tracks=True)
        for i, size in enumerate(sizes)
    ]
    return root_sum_square_v(contributors, coverage=coverage)


class Budget(NamedTuple):
    """A published uncertainty budget: inputs, and the results as printed, with half of the last digit unless noted."""

    source: str
    c: Sequence[float]
    u: Sequence[float]
    combined: float
    combined_within: float


BUDGETS = (
    Budget(
        # JCGM 100:2008 H.1, end gauge, in nm (second-hand): printed 32, from 31.7.
        "gum-h1-end-gauge",
        c=(1.0, 1.0, 0.0, 0.0, 0.1 * 50_000_623.0, -50_000_623.0 * 11.5e-6),
        u=(25.0, 9.7, 1.2e-6, 0.41, 0.58e-6, 0.029),
        combined=31.7,
        combined_within=0.05,
    ),
    Budget(
        # JCGM 100:2008 H.1, the difference d, in nm (second-hand).
        "gum-h1-difference",
        c=(1.0, 1.0, 1.0),
        u=(5.8, 3.9, 6.7),
        combined=9.7,
        combined_within=0.05,
    ),
    Budget(
        # JCGM 100:2008 H.1, temperature, in degC (second-hand): 0.2, and a swing of half-width 0.5 caught at random.
        "gum-h1-temperature",
        c=(1.0, 1.0),
        u=(0.2, 0.5 / math.sqrt(2.0)),
        combined=0.41,
        combined_within=0.005,
    ),
    Budget(
        # NIST Technical Note 1900, example E11, attenuator, in dB (second-hand).
        "nist-tn1900-e11",
        c=(1.0,) * 9,
        u=(0.0091, 0.0025, 0.0003, 0.002, 0.002, 0.02, 0.0014, 0.0003, 0.0021),
        combined=0.0224,
        combined_within=0.00005,
    ),
)


@pytest.mark.parametrize("budget", BUDGETS, ids=[row.source for row in BUDGETS])
def test_published_budget(budget: Budget) -> None:
    assert combined(budget.c, budget.u) == pytest.approx(budget.combined, abs=budget.combined_within)


def test_expanded_uncertainty_of_gum_h1() -> None:
    # JCGM 100:2008 H.1 (second-hand): U99 = t(16) u_c = 2.92 * 32 nm = 93 nm.
    sensitivities, uncertainties = (1.0, 1.0, 5.0000623e6, -575.0071645), (25.0, 9.7, 0.58e-6, 0.029)
    k99 = float(stats.t.ppf(0.995, 16))
    assert k99 == pytest.approx(2.92, abs=0.005)
    assert k99 * round(combined(sensitivities, uncertainties)) == pytest.approx(93.0, abs=0.5)
    # The document expands the rounded 32 nm; 31.7 nm itself comes to 92.5 nm.
    assert combined(sensitivities, uncertainties, coverage=k99) == pytest.approx(92.5, abs=0.2)


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
    u = combined(sensitivities, case.uncertainties)
    assert reference.nominal_value == pytest.approx(case.result, rel=1e-4)
    assert u == pytest.approx(case.uncertainty, abs=case.within)
    assert u == pytest.approx(reference.std_dev, rel=1e-9)
