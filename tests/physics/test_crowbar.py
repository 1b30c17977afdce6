"""Crowbar current: Veendrick's published table, and a full DC solution of the inverter by SciPy."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace
from scipy.integrate import quad
from scipy.optimize import brentq

from tidegate.lint.physics.crowbar import (
    Inverter,
    conduction_time_s,
    current_at_v,
    edge_charge_c,
    peak_current_a,
    peak_equivalent_time_s,
    switching_threshold_v,
)
from tidegate.lint.physics.domain import DomainError


def symmetric(*, supply_v: float, threshold_v: float, beta: float) -> Inverter:
    return Inverter(supply_v, threshold_v, threshold_v, beta, beta)


# Inverter of a worked table on H. J. M. Veendrick, IEEE JSSC 19(4), 468-473 (1984), in course notes
# (second-hand): beta 0.64 mA/V^2, VDD 0.75 V, VT 0.25 V, 1.5 fF load, 1.5 GHz, so two edges in 667 ps.
VEENDRICK = symmetric(supply_v=0.75, threshold_v=0.25, beta=0.64e-3)
VEENDRICK_CLOCK_HZ = 1.5e9
VEENDRICK_LOAD_F = 1.5e-15

# (edge in s, printed short-circuit power in nW, printed share of the switching power in %)
VEENDRICK_TABLE = (
    (10e-12, 13.0, 1.0),
    (20e-12, 25.0, 2.0),
    (40e-12, 50.0, 4.0),
    (80e-12, 100.0, 7.9),
    (160e-12, 200.0, 15.8),
    (320e-12, 400.0, 31.6),
)


@pytest.mark.parametrize(
    ("edge_s", "power_nw", "share_percent"),
    VEENDRICK_TABLE,
    ids=[f"veendrick-1984-second-hand-{row[0] * 1e12:.0f}ps" for row in VEENDRICK_TABLE],
)
def test_short_circuit_power_of_veendricks_table(edge_s: float, power_nw: float, share_percent: float) -> None:
    power_w = 2.0 * VEENDRICK.supply_v * edge_charge_c(VEENDRICK, edge_s=edge_s) * VEENDRICK_CLOCK_HZ
    switching_w = VEENDRICK_LOAD_F * VEENDRICK.supply_v**2 * VEENDRICK_CLOCK_HZ

    assert switching_w * 1e9 == pytest.approx(1266.0, abs=0.5)  # as printed, to the last digit
    # Half of the last printed digit; 12.5 nW is printed as 13, so a hair more than half.
    assert power_w * 1e9 == pytest.approx(power_nw, abs=0.5 + 1e-9)
    assert 100.0 * power_w / switching_w == pytest.approx(share_percent, abs=0.051)


# Algebra on Veendrick's law, each also solved by SciPy in test_against_full_dc_solution below.
UNEQUAL = Inverter(1.8, 0.45, 0.5, 200e-6, 80e-6)
# (inverter, edge in s, (peak in A, charge in C), tolerance from the digits given)
DERIVED = (
    (VEENDRICK, 20e-12, (5.00e-6, 1.111e-17), 1e-4),
    (symmetric(supply_v=1.8, threshold_v=0.45, beta=100e-6), 1e-6, (10.125e-6, 1.6875e-12), 1e-9),
    (UNEQUAL, 1e-6, (10.84464e-6, 1.7070266e-12), 5e-7),
    (symmetric(supply_v=1.8, threshold_v=0.45, beta=50e-6), 1e-3, (5.0625e-6, 0.84375e-9), 1e-9),
)


@pytest.mark.parametrize(
    ("inverter", "edge_s", "expected", "rel"),
    DERIVED,
    ids=["derived-scipy-0.75V", "derived-scipy-1.8V", "derived-scipy-unequal", "derived-scipy-1ms"],
)
def test_derived_values(inverter: Inverter, edge_s: float, expected: tuple[float, float], rel: float) -> None:
    peak_a, charge_c = expected
    assert peak_current_a(inverter) == pytest.approx(peak_a, rel=rel)
    assert edge_charge_c(inverter, edge_s=edge_s) == pytest.approx(charge_c, rel=rel)


def test_switching_threshold_of_unequal_devices() -> None:
    assert switching_threshold_v(UNEQUAL) == pytest.approx(0.779312, abs=5e-7)  # SciPy brentq


def drain_current_a(*, beta: float, drive_v: float, drain_v: float) -> float:
    """Shichman-Hodges drain current, triode and saturation, no channel-length modulation."""
    if drive_v <= 0.0:
        return 0.0
    if drain_v >= drive_v:
        return 0.5 * beta * drive_v**2
    return beta * (drive_v - 0.5 * drain_v) * drain_v


def solved_current_a(inverter: Inverter, input_v: float) -> float:
    """Supply current with the output voltage found so that both devices carry the same."""
    supply_v = inverter.supply_v

    def nmos_a(output_v: float) -> float:
        return drain_current_a(
            beta=inverter.nmos_beta_a_per_v2,
            drive_v=input_v - inverter.nmos_threshold_v,
            drain_v=output_v,
        )

    def pmos_a(output_v: float) -> float:
        return drain_current_a(
            beta=inverter.pmos_beta_a_per_v2,
            drive_v=supply_v - input_v - inverter.pmos_threshold_v,
            drain_v=supply_v - output_v,
        )

    output_v = brentq(lambda v: nmos_a(v) - pmos_a(v), 0.0, supply_v, xtol=1e-15, rtol=1e-14)
    return 0.5 * (nmos_a(output_v) + pmos_a(output_v))


SOLVED = (
    symmetric(supply_v=1.8, threshold_v=0.45, beta=100e-6),
    UNEQUAL,
    Inverter(1.2, 0.2, 0.55, 5e-6, 300e-6),
    Inverter(3.3, 0.0, 0.7, 40e-6, 40e-6),
)


@pytest.mark.parametrize("inverter", SOLVED, ids=["equal", "unequal", "strong-pmos", "native-nmos"])
def test_against_full_dc_solution(inverter: Inverter) -> None:
    middle_v = switching_threshold_v(inverter)
    corners = [inverter.nmos_threshold_v, middle_v, inverter.supply_v - inverter.pmos_threshold_v]
    peak_a = peak_current_a(inverter)

    for step in range(21):
        input_v = inverter.supply_v * step / 20
        assert current_at_v(inverter, input_v=input_v) == pytest.approx(
            solved_current_a(inverter, input_v), rel=1e-9, abs=1e-9 * peak_a
        )
    assert peak_a == pytest.approx(solved_current_a(inverter, middle_v), rel=1e-9)

    edge_s = 2e-6
    charge_c, _ = quad(
        lambda t: solved_current_a(inverter, inverter.supply_v * t / edge_s),
        0.0,
        edge_s,
        points=[edge_s * v / inverter.supply_v for v in corners],
        epsabs=1e-9 * peak_a * edge_s,
    )
    assert edge_charge_c(inverter, edge_s=edge_s) == pytest.approx(charge_c, rel=1e-7)


@pytest.mark.parametrize("exponent", [0.5, 1.0, 1.4, 2.0, 3.0])
@pytest.mark.parametrize("inverter", SOLVED, ids=["equal", "unequal", "strong-pmos", "native-nmos"])
def test_peak_equivalent_time_against_scipy_quad(inverter: Inverter, exponent: float) -> None:
    edge_s = 5e-3
    peak_a = solved_current_a(inverter, switching_threshold_v(inverter))
    corners = [
        inverter.nmos_threshold_v,
        switching_threshold_v(inverter),
        inverter.supply_v - inverter.pmos_threshold_v,
    ]
    wear, _ = quad(
        lambda v: (solved_current_a(inverter, v) / peak_a) ** exponent,
        0.0,
        inverter.supply_v,
        points=corners,
        epsabs=1e-9,
    )
    assert peak_equivalent_time_s(inverter, edge_s=edge_s, exponent=exponent) == pytest.approx(
        wear * edge_s / inverter.supply_v, rel=1e-7
    )


def test_conduction_time_and_the_mean_over_it() -> None:
    # Veendrick: over the time both devices conduct, the mean is a third of the peak.
    time_s = conduction_time_s(UNEQUAL, edge_s=1e-6)
    assert time_s == pytest.approx(1e-6 * (1.8 - 0.45 - 0.5) / 1.8, rel=1e-12)
    assert edge_charge_c(UNEQUAL, edge_s=1e-6) / time_s == pytest.approx(peak_current_a(UNEQUAL) / 3.0, rel=1e-12)


@pytest.mark.parametrize("supply_v", [0.45, 0.5], ids=["below-sum-second-hand", "at-sum"])
def test_no_current_where_the_supply_does_not_exceed_both_thresholds(supply_v: float) -> None:
    inverter = symmetric(supply_v=supply_v, threshold_v=0.25, beta=0.64e-3)
    assert peak_current_a(inverter) == 0.0
    assert conduction_time_s(inverter, edge_s=1e-3) == 0.0
    assert edge_charge_c(inverter, edge_s=1e-3) == 0.0
    assert peak_equivalent_time_s(inverter, edge_s=1e-3, exponent=2.0) == 0.0
    assert all(current_at_v(inverter, input_v=supply_v * k / 10) == 0.0 for k in range(11))


thresholds_v = st.floats(0.1, 0.8)
betas = st.floats(1e-6, 1e-2)
inverters = st.builds(Inverter, st.floats(1.7, 5.5), thresholds_v, thresholds_v, betas, betas)


@settings(max_examples=60)
@given(inverters, st.floats(0.0, 1.0))
def test_no_input_draws_more_than_the_peak(inverter: Inverter, part: float) -> None:
    input_v = part * inverter.supply_v
    peak_a = peak_current_a(inverter)
    assert current_at_v(inverter, input_v=input_v) <= peak_a * (1.0 + 1e-9)
    assert current_at_v(inverter, input_v=switching_threshold_v(inverter)) == pytest.approx(peak_a, rel=1e-9)


@settings(max_examples=60)
@given(inverters, st.floats(1e-9, 1.0), st.floats(1.0, 1e3))
def test_charge_scales_with_edge_and_beta(inverter: Inverter, edge_s: float, factor: float) -> None:
    charge_c = edge_charge_c(inverter, edge_s=edge_s)
    stronger = replace(
        inverter,
        nmos_beta_a_per_v2=factor * inverter.nmos_beta_a_per_v2,
        pmos_beta_a_per_v2=factor * inverter.pmos_beta_a_per_v2,
    )
    assert edge_charge_c(inverter, edge_s=factor * edge_s) == pytest.approx(factor * charge_c, rel=1e-9)
    assert edge_charge_c(stronger, edge_s=edge_s) == pytest.approx(factor * charge_c, rel=1e-9)


@settings(max_examples=40)
@given(thresholds_v, betas, st.floats(0.2, 2.0), st.floats(1.0, 3.0))
def test_energy_grows_with_the_cube_of_the_overlap(
    threshold_v: float, beta: float, overlap_v: float, factor: float
) -> None:
    def energy_j(span_v: float) -> float:
        inverter = symmetric(supply_v=span_v + 2.0 * threshold_v, threshold_v=threshold_v, beta=beta)
        return inverter.supply_v * edge_charge_c(inverter, edge_s=1e-6)

    assert energy_j(factor * overlap_v) == pytest.approx(factor**3 * energy_j(overlap_v), rel=1e-7)


@settings(max_examples=40)
@given(inverters, st.floats(0.01, 0.3))
def test_a_higher_threshold_never_draws_more(inverter: Inverter, rise_v: float) -> None:
    higher = replace(inverter, nmos_threshold_v=inverter.nmos_threshold_v + rise_v)
    assert peak_current_a(higher) <= peak_current_a(inverter)
    assert edge_charge_c(higher, edge_s=1e-6) <= edge_charge_c(inverter, edge_s=1e-6)


def test_an_inverter_cannot_be_changed() -> None:
    with pytest.raises(AttributeError):
        UNEQUAL.supply_v = 3.3  # type: ignore[misc]


@pytest.mark.parametrize(
    ("symbol", "value", "message"),
    [
        ("supply_v", 0.0, "supply_v must be greater than 0 (found 0.0)"),
        ("nmos_threshold_v", -0.1, "nmos_threshold_v must be at least 0 (found -0.1)"),
        ("pmos_threshold_v", -0.45, "pmos_threshold_v must be at least 0 (found -0.45)"),
        ("nmos_beta_a_per_v2", 0.0, "nmos_beta_a_per_v2 must be greater than 0 (found 0.0)"),
        ("pmos_beta_a_per_v2", float("inf"), "pmos_beta_a_per_v2 must be greater than 0 (found inf)"),
    ],
)
def test_an_inverter_out_of_range_is_refused(symbol: str, value: float, message: str) -> None:
    with pytest.raises(DomainError) as refusal:
        replace(UNEQUAL, **{symbol: value})
    assert str(refusal.value) == message


def test_no_switching_threshold_where_no_input_turns_both_on() -> None:
    with pytest.raises(DomainError) as refusal:
        switching_threshold_v(Inverter(0.5, 0.25, 0.375, 1e-4, 1e-4))
    assert str(refusal.value) == ("supply_v must be at least nmos_threshold_v + pmos_threshold_v = 0.625 (found 0.5)")
    assert switching_threshold_v(Inverter(0.5, 0.25, 0.25, 1e-4, 1e-4)) == pytest.approx(0.25)


def test_arguments_out_of_range_are_refused() -> None:
    with pytest.raises(DomainError, match=r"^input_v must lie in 0\.0 to 1\.8 \(found 1\.9\)$"):
        current_at_v(UNEQUAL, input_v=1.9)
    for function in (conduction_time_s, edge_charge_c):
        with pytest.raises(DomainError, match=r"^edge_s must be greater than 0 \(found 0\.0\)$"):
            function(UNEQUAL, edge_s=0.0)
    with pytest.raises(DomainError, match=r"^edge_s must be greater than 0 \(found -1\.0\)$"):
        peak_equivalent_time_s(UNEQUAL, edge_s=-1.0, exponent=2.0)
    with pytest.raises(DomainError, match=r"^exponent must be greater than 0 \(found 0\.0\)$"):
        peak_equivalent_time_s(UNEQUAL, edge_s=1e-6, exponent=0.0)
