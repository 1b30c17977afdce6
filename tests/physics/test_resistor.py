"""Resistance over temperature: process documents, a foundry's table, and an extreme inside the range."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from scipy.optimize import minimize_scalar

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.resistor import resistance_ohm

# google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a, models/ngspice/sm141064.ngspice L38606-07: p+ poly,
# unsalicided, 25 degC.
PPOLYF_U = {"t_ref_k": 298.15, "tc1_per_k": -0.9e-4, "tc2_per_k2": 7e-7}

# Same repository, 180MCU_SPICE_DATA/Resistor/RES07b-temp-ppolyf_u.nl_out.xlsx, L/W = 150/50 um, typical, ohm per
# square: circuit-simulator output, not silicon. The table has no value at 25 degC; it follows from that at 15 degC.
PPOLYF_U_TABLE = ((-40.0, 354.32), (15.0, 351.51), (95.0, 350.07), (115.0, 350.21), (175.0, 351.78))
PPOLYF_U_OHM = 351.51 / (1.0 + 0.9e-4 * 10.0 + 7e-7 * 100.0)


@pytest.mark.parametrize(
    ("t_degc", "ohm"), PPOLYF_U_TABLE, ids=[f"gf180-ppolyf_u-{t:.0f}-degC" for t, _ in PPOLYF_U_TABLE]
)
def test_sheet_resistance_of_gf180_table(t_degc: float, ohm: float) -> None:
    found = resistance_ohm(t_k=t_degc + 273.15, r_ref_ohm=PPOLYF_U_OHM, **PPOLYF_U)
    # The simulated strip has end contacts with a temperature coefficient of their own: 0.1 %.
    assert float(found) == pytest.approx(ohm, rel=1e-3)


def test_minimum_of_gf180_p_poly_lies_inside_the_range() -> None:
    # Derived: 25 + 9e-5/(2 * 7e-7) = 89.3 degC; the table above is lowest at 95 degC, the nearest it lists.
    least = minimize_scalar(
        lambda t: float(resistance_ohm(t_k=t, r_ref_ohm=PPOLYF_U_OHM, **PPOLYF_U)),
        bounds=(233.15, 398.15),
        method="bounded",
    )
    assert least.x - 273.15 == pytest.approx(89.3, abs=0.05)


def test_negative_coefficient_of_ihp_rhigh() -> None:
    # IHP SG13G2 process specification, Rev 1.2, p. 12: 1360 ohm per square, -2300 ppm/K, 2.1 ppm/K^2 from 300 K. By
    # hand at 400 K: 1360 (1 - 0.23 + 0.021).
    found = resistance_ohm(t_k=400.0, r_ref_ohm=1360.0, t_ref_k=300.0, tc1_per_k=-2300e-6, tc2_per_k2=2.1e-6)
    assert float(found) == pytest.approx(1360.0 * 0.791, rel=1e-12)


def law(**changed: float) -> dict[str, float]:
    return {"t_k": 300.0, "r_ref_ohm": 1e3, "t_ref_k": 300.0, "tc1_per_k": 0.0, "tc2_per_k2": 0.0, **changed}


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: resistance_ohm(**law(t_k=0.0)), "t_k must be greater than 0 (found 0.0)"),
    (lambda: resistance_ohm(**law(t_ref_k=-1.0)), "t_ref_k must be greater than 0 (found -1.0)"),
    (lambda: resistance_ohm(**law(r_ref_ohm=0.0)), "r_ref_ohm must be greater than 0 (found 0.0)"),
    (lambda: resistance_ohm(**law(tc1_per_k=math.nan)), "tc1_per_k must be a finite number (found nan)"),
    (lambda: resistance_ohm(**law(tc2_per_k2=math.inf)), "tc2_per_k2 must be a finite number (found inf)"),
    (
        lambda: resistance_ohm(**law(t_k=400.0, tc1_per_k=-0.02)),
        "resistance_ohm must be greater than 0 (found -1000.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
