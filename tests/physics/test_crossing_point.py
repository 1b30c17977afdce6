from __future__ import annotations

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from tidegate.lint.physics import crossover, fed_branch, mos_threshold, resistor, silicon
from tidegate.lint.physics.crossing_point import (
    NoCrossingError,
    branch_level_v,
    divider_crossing_v,
    reference_crossing_v,
)
from tidegate.lint.physics.device_at_corner import (
    Device,
    DiodeConnected,
    Junction,
    diode_connected_at,
    junction_at,
    series_ohm_at,
    slope_factor_of_swing,
)
from tidegate.lint.physics.domain import DomainError

RANDOM = np.random.default_rng(20260101)
SAME = 1e-9
"""Relative: both solutions settle to some roundings, and the level divides by a ratio of 0.3 or more."""


def draws(count: int, low: float, high: float) -> list[float]:
    return [float(x) for x in RANDOM.uniform(low, high, count)]


MOS_CORNERS = list(
    zip(
        draws(200, 233.15, 398.15), draws(200, 0.3, 0.7), draws(200, 0.2e-3, 2e-3), draws(200, 1.1, 1.6),
        draws(200, 1e-6, 1e-4), draws(200, 1e6, 5e6), draws(200, 0.35, 0.6), draws(200, -5e-3, 5e-3), strict=True,
    )
)  # fmt: skip


@pytest.mark.parametrize("corner", MOS_CORNERS[:20], ids=lambda corner: f"{corner[0]:.0f}K")
def test_mos_crossing_against_scipy_root_finder(corner: tuple[float, ...]) -> None:
    """SciPy's brentq on the balance of currents at a supply: device law at a V - V_os against the resistor."""
    t_k, threshold_v, fall, n, beta, r_ohm, ratio, offset_v = corner
    thermal_v = 8.617333262e-5 * t_k
    vth_v = threshold_v - fall * (t_k - 298.15)

    def surplus(supply_v: float) -> float:
        gate_v = ratio * supply_v - offset_v
        inversion = math.log1p(math.exp((gate_v - vth_v) / (2 * n * thermal_v)))
        return 2 * n * beta * thermal_v**2 * inversion**2 - (supply_v - gate_v) / r_ohm

    device = diode_connected_at(
        t_k=t_k, threshold_ref_v=threshold_v, t_ref_k=298.15, fall_v_per_k=fall, slope_factor=n, gain_a_per_v2=beta
    )
    found_v = divider_crossing_v(device, series_ohm=r_ohm, divider_ratio=ratio, offset_v=offset_v)
    assert found_v == pytest.approx(brentq(surplus, 0.9 * found_v, 1.1 * found_v + 0.1, xtol=1e-13), rel=SAME)
    assert surplus(found_v * 1.001) > 0.0 > surplus(found_v * 0.999)


def test_mos_crossing_is_that_of_the_solver_for_arrays() -> None:
    for t_k, threshold_v, fall, n, beta, r_ohm, ratio, offset_v in MOS_CORNERS:
        branch = fed_branch.MosBranch(
            series_ohm=r_ohm,
            threshold_v=mos_threshold.threshold_linear_v(
                t_k=t_k, threshold_ref_v=threshold_v, t_ref_k=298.15, fall_v_per_k=fall
            ),
            slope_factor=n,
            specific_a=mos_threshold.specific_current_a(t_k=t_k, gain=beta, slope_factor=n),
            thermal_v=silicon.thermal_voltage_v(t_k=t_k),
        )
        device = diode_connected_at(
            t_k=t_k, threshold_ref_v=threshold_v, t_ref_k=298.15, fall_v_per_k=fall, slope_factor=n, gain_a_per_v2=beta
        )
        expected_v = float(crossover.divider_mos_trip_v(branch, divider_ratio=ratio, offset_v=offset_v))
        found_v = divider_crossing_v(device, series_ohm=r_ohm, divider_ratio=ratio, offset_v=offset_v)
        assert found_v == pytest.approx(expected_v, rel=SAME)
        current_a = 1e-7
        expected_v = float(branch.level_v(current_a))
        assert branch_level_v(device, series_ohm=r_ohm, current_a=current_a) == pytest.approx(expected_v, rel=SAME)


def test_diode_crossing_is_that_of_the_solver_for_arrays() -> None:
    corners = zip(
        draws(200, 233.15, 398.15), draws(200, 1e-18, 1e-15), draws(200, 1.0, 1.3), draws(200, 1e5, 5e6),
        draws(200, 0.3, 0.6), draws(200, -3e-3, 3e-3), strict=True,
    )  # fmt: skip
    for t_k, saturation_a, emission, r_ohm, ratio, offset_v in corners:
        branch = fed_branch.DiodeBranch(
            series_ohm=r_ohm,
            saturation_a=silicon.saturation_current_a(
                t_k=t_k, is_ref_a=saturation_a, t_ref_k=298.15, xti=3.0 / emission, gap_ev=1.17 / emission
            ),
            emission_v=emission * silicon.thermal_voltage_v(t_k=t_k),
        )
        device = junction_at(
            t_k=t_k, saturation_ref_a=saturation_a, t_ref_k=298.15, temperature_exponent=3.0, gap_ev=1.17,
            emission=emission,
        )  # fmt: skip
        expected_v = float(crossover.divider_diode_trip_v(branch, divider_ratio=ratio, offset_v=offset_v))
        found_v = divider_crossing_v(device, series_ohm=r_ohm, divider_ratio=ratio, offset_v=offset_v)
        assert found_v == pytest.approx(expected_v, rel=SAME)


@pytest.mark.parametrize("polarity", ["junction", "transistor"])
def test_reference_crossing_is_that_of_the_solver_for_arrays_and_of_scipy(polarity: str) -> None:
    """SciPy's brentq on the balance of currents: the reference's straight line against m I with V = I R + V_dev(I)."""
    corners = zip(
        draws(100, 2e5, 2e6), draws(100, 0.5, 2.0), draws(100, 0.3, 1.2), draws(100, 0.0, 0.4), draws(100, 1e-7, 4e-6),
        draws(100, 0.02, 0.034), strict=True,
    )  # fmt: skip
    crossed = 0
    for r_ohm, mirror, start_v, rise_v, regulated_a, thermal_v in corners:
        device: Device
        branch: fed_branch.Branch
        if polarity == "junction":
            device, branch = Junction(1e-17, thermal_v), fed_branch.DiodeBranch(r_ohm, 1e-17, thermal_v)
        else:
            device = DiodeConnected(0.5, 2.4 * thermal_v, 5e-8)
            branch = fed_branch.MosBranch(r_ohm, 0.5, 1.2, 5e-8, thermal_v)
        reference = {"start_v": start_v, "rise_v": rise_v, "regulated_a": regulated_a}
        try:
            expected_v = float(crossover.reference_overtakes_v(branch, mirror_ratio=mirror, **reference))
        except crossover.NoCrossingError:
            with pytest.raises(NoCrossingError):
                reference_crossing_v(device, series_ohm=r_ohm, mirror_ratio=mirror, **reference)
            continue
        found_v = reference_crossing_v(device, series_ohm=r_ohm, mirror_ratio=mirror, **reference)
        assert found_v == pytest.approx(expected_v, rel=SAME)

        def missing_v(log_a: float, r_ohm: float = r_ohm, found_v: float = found_v, device: Device = device) -> float:
            return math.exp(log_a) * r_ohm + device.voltage_v(math.exp(log_a)) - found_v

        crude_a = mirror * math.exp(brentq(missing_v, -60.0, -5.0, xtol=1e-14))
        assert crude_a * rise_v == pytest.approx(regulated_a * (found_v - start_v), rel=1e-6, abs=1e-15)
        crossed += 1
    assert 30 < crossed < 100


def test_resistance_is_that_for_arrays() -> None:
    """IHP SG13G2 process specification, Rev 1.2, p. 12: 1360 ohm per square, -2300 ppm/K, 2.1 ppm/K^2 from 300 K."""
    law = {"r_ref_ohm": 1360.0, "t_ref_k": 300.0, "tc1_per_k": -2300e-6, "tc2_per_k2": 2.1e-6}
    assert series_ohm_at(t_k=400.0, **law) == pytest.approx(1360.0 * 0.791, rel=1e-12)
    for t_k in draws(50, 233.15, 398.15):
        assert series_ohm_at(t_k=t_k, **law) == float(resistor.resistance_ohm(t_k=t_k, **law))


def test_diode_behind_a_resistor_against_the_published_lambert_w_example() -> None:
    """Boost C++ libraries, example lambert_w_diode: 25 fA, 249.3 ohm, 0.9 V, k and q rounded as there: 1.08485 mA."""
    device = Junction(saturation_a=25e-15, emission_v=1.38e-23 * 298.0 / 1.6e-19)
    assert branch_level_v(device, series_ohm=249.3, current_a=1.0848517e-3) == pytest.approx(0.9, abs=1e-7)


def test_slope_factor_against_the_ideal_swing() -> None:
    """59.16 mV per decade at 298.15 K is n = 1: k T/q ln 10 with the constants of the SI."""
    assert slope_factor_of_swing(swing_v_per_decade=0.0591597, t_k=298.15) == pytest.approx(1.0, abs=1e-5)


@given(
    ratio=st.floats(0.3, 0.6), r_ohm=st.floats(1e5, 1e7), more=st.floats(1.01, 2.0), threshold_v=st.floats(0.35, 0.7)
)
@settings(max_examples=60, deadline=None)
def test_level_moves_with_each_parameter_as_it_must(
    ratio: float, r_ohm: float, more: float, threshold_v: float
) -> None:
    """A higher threshold or offset raises the level; a larger resistance or ratio lowers it."""

    def level_v(*, ratio: float = ratio, r_ohm: float = r_ohm, up_v: float = 0.0, offset_v: float = 0.0) -> float:
        device = DiodeConnected(threshold_v=threshold_v + up_v, scale_v=0.07, specific_a=70e-9)
        return divider_crossing_v(device, series_ohm=r_ohm, divider_ratio=ratio, offset_v=offset_v)

    here_v = level_v()
    assert level_v(up_v=0.01) > here_v
    assert level_v(offset_v=0.002) > here_v
    assert level_v(r_ohm=r_ohm * more) < here_v
    assert level_v(ratio=ratio * 1.01) < here_v


def scipy_crossing_v(device: Device, r_ohm: float, ratio: float, offset_v: float, low_v: float, high_v: float) -> float:
    """SciPy's brentq on the voltage of the device, its current being what the resistor lets through."""

    def ahead_v(device_v: float) -> float:
        supply_v = (device_v + offset_v) / ratio
        return device_v - device.voltage_v((supply_v - device_v) / r_ohm)

    return (brentq(ahead_v, low_v, high_v, xtol=1e-14, rtol=1e-14) + offset_v) / ratio


# Devices whose voltage lies above the first guess of 1 V; the last two favour the divider by so much that at first, or
# at first and at 2 V and at 4 V, no current would flow at all.
HIGH_DEVICES = (
    pytest.param(DiodeConnected(0.9, 0.07, 7e-8), 0.0, 0.95, 2.0, id="just above 1 V"),
    pytest.param(DiodeConnected(3.0, 0.07, 7e-8), 0.0, 2.0, 6.0, id="3 V"),
    pytest.param(DiodeConnected(20.0, 0.07, 7e-8), 0.0, 15.0, 40.0, id="20 V"),
    pytest.param(Junction(1e-17, 0.104), -0.49999999, 1.5, 4.0, id="stack of four, -0.5 V"),
    pytest.param(DiodeConnected(5.0, 0.07, 7e-8), -2.0, 4.5, 8.0, id="5 V, -2 V"),
)


@pytest.mark.parametrize(("device", "offset_v", "low_v", "high_v"), HIGH_DEVICES)
def test_crossing_far_above_the_first_guess(device: Device, offset_v: float, low_v: float, high_v: float) -> None:
    found_v = divider_crossing_v(device, series_ohm=1e6, divider_ratio=0.5, offset_v=offset_v)
    assert found_v == pytest.approx(scipy_crossing_v(device, 1e6, 0.5, offset_v, low_v, high_v), rel=1e-12)


def test_the_upper_of_two_crossings_just_above_the_first_guess() -> None:
    # The offset is such that at 1 V the device is a hair behind and its voltage rises by 1.5 V a volt; so it gets ahead
    # just above and is overtaken a little further up. The constants place the point there, SciPy finds the crossing.
    emission_v, ratio, r_ohm, behind_v = 0.1, 0.5, 1e6, 1e-3
    share = (1.0 - ratio) / (ratio * r_ohm)
    current_a = share * emission_v / 1.5
    device = Junction(current_a * math.exp(-(1.0 - behind_v) / emission_v), emission_v)
    offset_v = (current_a - share) * ratio * r_ohm
    found_v = divider_crossing_v(device, series_ohm=r_ohm, divider_ratio=ratio, offset_v=offset_v)
    assert found_v == pytest.approx(scipy_crossing_v(device, r_ohm, ratio, offset_v, 1.02, 2.0), rel=1e-10)


@pytest.mark.parametrize(
    ("device", "offset_v"),
    [
        pytest.param(Junction(saturation_a=1e-3, emission_v=0.0257), 0.0, id="leaks more than the resistor brings"),
        pytest.param(Junction(saturation_a=1e-17, emission_v=0.0257), -0.5, id="junction, the divider 0.5 V ahead"),
        pytest.param(DiodeConnected(0.6, 0.07, 5e-8), -0.5, id="transistor, the divider 0.5 V ahead"),
        pytest.param(DiodeConnected(-0.2, 0.07, 5e-8), 0.0, id="transistor that never turns off"),
    ],
)
def test_no_crossing_is_never_filled_in(device: Device, offset_v: float) -> None:
    with pytest.raises(NoCrossingError) as refused:
        divider_crossing_v(device, series_ohm=1e6, divider_ratio=0.5, offset_v=offset_v)
    assert str(refused.value) == "no crossing: the device never gets ahead of the divided supply"


@pytest.mark.parametrize("behind_v", [10.0**exponent for exponent in range(-9, -1)])
def test_a_device_that_all_but_gets_ahead(behind_v: float) -> None:
    # As for crossover: R IS is half of n V_T (1 - a)/a, and at -(1 - a) n V_T (0.5 - ln 0.5 - 1) the device touches.
    device = Junction(0.5 * 0.6 / 0.4 * 0.026 / 1e6, 0.026)
    touching_v = -0.6 * 0.026 * (0.5 - math.log(0.5) - 1.0)
    with pytest.raises(NoCrossingError):
        divider_crossing_v(device, series_ohm=1e6, divider_ratio=0.4, offset_v=touching_v - behind_v)
    if behind_v < 1e-3:
        found_v = divider_crossing_v(device, series_ohm=1e6, divider_ratio=0.4, offset_v=touching_v + behind_v)
        branch = fed_branch.DiodeBranch(1e6, device.saturation_a, 0.026)
        expected_v = crossover.divider_diode_trip_v(branch, divider_ratio=0.4, offset_v=touching_v + behind_v)
        # Where two crossings all but meet, a level is good to the square root of a rounding.
        assert found_v == pytest.approx(float(expected_v), rel=1e-6)


def test_a_level_that_no_number_holds_is_refused() -> None:
    # 2^199 V, 8.03e59 V, is the last that is tried; such a device is all threshold, and a half of the supply is it.
    found_v = divider_crossing_v(DiodeConnected(6e59, 0.07, 5e-8), series_ohm=1e6, divider_ratio=0.5, offset_v=0.0)
    assert found_v == pytest.approx(1.2e60, rel=1e-12)
    with pytest.raises(DomainError) as refused:
        divider_crossing_v(DiodeConnected(1.2e60, 0.07, 5e-8), series_ohm=1e6, divider_ratio=0.5, offset_v=0.0)
    assert str(refused.value) == "divider_ratio, series_ohm and the device have no level within the range of a number"


# Powers of two, so that m V_r/I_0 is exact: 2^20 ohm.
EXACT = {"mirror_ratio": 1.0, "start_v": 0.3, "rise_v": 0.5, "regulated_a": 2.0**-21}


def test_the_reference_must_rise_faster_than_the_crude_current_and_not_as_fast() -> None:
    device = Junction(saturation_a=1e-17, emission_v=0.0257)
    for series_ohm in (2.0**20, 2.0**20 - 0.5):
        with pytest.raises(NoCrossingError, match=r"^no crossing: the reference current rises"):
            reference_crossing_v(device, series_ohm=series_ohm, **EXACT)
    # Half an ohm is left, on which almost nothing drops: the current is that of the diode at 0.3 V, by Shockley's law.
    found_v = reference_crossing_v(device, series_ohm=2.0**20 + 0.5, **EXACT)
    assert found_v - 0.3 == pytest.approx(2.0**20 * 1e-17 * math.expm1(0.3 / 0.0257), rel=1e-6)


@pytest.mark.parametrize(
    "device", [Junction(1e-17, 0.0257), Junction(1e-9, 0.0257), DiodeConnected(0.5, 0.07, 5e-8)], ids=repr
)
@pytest.mark.parametrize("current_a", [1e-12, 1e-9, 1e-7, 1e-4])
def test_slope_against_a_difference_quotient_of_mpmath(device: Device, current_a: float) -> None:
    def voltage_v(i: mpmath.mpf) -> mpmath.mpf:
        if isinstance(device, Junction):
            return device.emission_v * mpmath.log1p(i / device.saturation_a)
        return device.threshold_v + device.scale_v * mpmath.log(mpmath.expm1(mpmath.sqrt(i / device.specific_a)))

    with mpmath.workdps(40):
        expected_ohm = float(
            mpmath.diff(voltage_v, mpmath.mpf(current_a), h=mpmath.mpf(current_a) * mpmath.mpf("1e-12"))
        )
    assert device.slope_ohm(current_a) == pytest.approx(expected_ohm, rel=1e-9)


def test_a_level_within_a_billionth_of_the_thermal_scale_is_rounding() -> None:
    assert Junction(1e-17, 0.026).least_v == pytest.approx(26e-12, rel=1e-12)
    assert DiodeConnected(0.5, 0.07, 5e-8).least_v == pytest.approx(70e-12, rel=1e-12)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"series_ohm": 0.0}, "series_ohm must be greater than 0 (found 0.0)"),
        ({"divider_ratio": 0.0}, "divider_ratio must be greater than 0 (found 0.0)"),
        ({"divider_ratio": 1.0}, "divider_ratio must lie in 0.0 to 0.999999999999 (found 1.0)"),
        ({"offset_v": math.inf}, "offset_v must be a finite number (found inf)"),
    ],
    ids=["resistance", "ratio_0", "ratio_1", "offset"],
)
def test_divider_refuses(change: dict[str, float], message: str) -> None:
    device = Junction(saturation_a=1e-17, emission_v=0.0257)
    with pytest.raises(DomainError) as refused:
        divider_crossing_v(device, **({"series_ohm": 1e6, "divider_ratio": 0.5, "offset_v": 0.0} | change))
    assert str(refused.value) == message


JUNCTION = {
    "t_k": 300.0, "saturation_ref_a": 1e-17, "t_ref_k": 300.0, "temperature_exponent": 3.0, "gap_ev": 1.17,
    "emission": 1.0,
}  # fmt: skip
MOS = {
    "t_k": 300.0, "threshold_ref_v": 0.5, "t_ref_k": 300.0, "fall_v_per_k": 1e-3, "slope_factor": 1.3,
    "gain_a_per_v2": 1e-5,
}  # fmt: skip


@pytest.mark.parametrize("symbol", sorted(set(JUNCTION) - {"temperature_exponent"}))
def test_junction_refuses(symbol: str) -> None:
    with pytest.raises(DomainError, match=f"^{symbol} must be greater than 0"):
        junction_at(**(JUNCTION | {symbol: 0.0}))


@pytest.mark.parametrize("symbol", sorted(set(MOS) - {"threshold_ref_v", "fall_v_per_k"}))
def test_mos_refuses(symbol: str) -> None:
    with pytest.raises(DomainError, match=f"^{symbol} must be greater than 0"):
        diode_connected_at(**(MOS | {symbol: 0.0}))


@pytest.mark.parametrize("symbol", ["threshold_ref_v", "fall_v_per_k"])
def test_mos_refuses_what_is_not_finite(symbol: str) -> None:
    with pytest.raises(DomainError, match=f"^{symbol} must be a finite number"):
        diode_connected_at(**(MOS | {symbol: math.nan}))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"series_ohm": 0.0}, "series_ohm must be greater than 0 (found 0.0)"),
        ({"mirror_ratio": 0.0}, "mirror_ratio must be greater than 0 (found 0.0)"),
        ({"start_v": 0.0}, "start_v must be greater than 0 (found 0.0)"),
        ({"rise_v": -0.1}, "rise_v must be at least 0 (found -0.1)"),
        ({"regulated_a": 0.0}, "regulated_a must be greater than 0 (found 0.0)"),
        ({"rise_v": 30.0}, "no crossing: the reference current rises slower than the crude one"),
        ({"start_v": 30.0}, "no crossing: the reference regulates below the crude current"),
    ],
    ids=str,
)
def test_reference_crossing_refuses(change: dict[str, float], message: str) -> None:
    sound = {"series_ohm": 1e6, "mirror_ratio": 1.0, "start_v": 0.9, "rise_v": 0.3, "regulated_a": 1e-5}
    with pytest.raises(DomainError) as refused:
        reference_crossing_v(Junction(saturation_a=1e-17, emission_v=0.0257), **(sound | change))
    assert str(refused.value) == message


@pytest.mark.parametrize("symbol", ["t_k", "r_ref_ohm", "t_ref_k"])
def test_resistance_refuses(symbol: str) -> None:
    sound = {"t_k": 300.0, "r_ref_ohm": 1e3, "t_ref_k": 300.0, "tc1_per_k": 0.0, "tc2_per_k2": 0.0}
    with pytest.raises(DomainError, match=f"^{symbol} must be greater than 0"):
        series_ohm_at(**(sound | {symbol: 0.0}))
    with pytest.raises(DomainError, match=r"^tc1_per_k must be a finite number"):
        series_ohm_at(**(sound | {"tc1_per_k": math.nan}))
    with pytest.raises(DomainError, match=r"^resistance_ohm must be greater than 0"):
        series_ohm_at(**(sound | {"t_k": 400.0, "tc1_per_k": -0.02}))


def test_the_rest_refuses() -> None:
    with pytest.raises(DomainError, match=r"^temperature_exponent must be a finite number"):
        junction_at(**(JUNCTION | {"temperature_exponent": math.inf}))
    with pytest.raises(DomainError, match=r"^saturation_a must be greater than 0"):
        Junction(saturation_a=0.0, emission_v=0.0257)
    with pytest.raises(DomainError, match=r"^scale_v must be greater than 0"):
        DiodeConnected(threshold_v=0.5, scale_v=0.0, specific_a=1e-7)
    with pytest.raises(DomainError, match=r"^current_a must be greater than 0"):
        branch_level_v(Junction(saturation_a=1e-17, emission_v=0.0257), series_ohm=1.0, current_a=0.0)
    with pytest.raises(DomainError, match=r"^swing_v_per_decade must be greater than 0"):
        slope_factor_of_swing(swing_v_per_decade=0.0, t_k=300.0)
