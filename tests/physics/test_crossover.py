"""Trip levels without a reference: SciPy's root finder on the circuit equations, at corners and at random draws."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from scipy.optimize import brentq

from tidegate.lint.physics.corner_spread import factorial_corners
from tidegate.lint.physics.crossover import (
    NoCrossingError,
    crude_overtakes_v,
    divider_diode_trip_v,
    divider_mos_trip_v,
    reference_overtakes_v,
)
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.fed_branch import Branch, DiodeBranch, MosBranch
from tidegate.lint.physics.mos_threshold import gain_a_per_v2, specific_current_a, threshold_linear_v
from tidegate.lint.physics.resistor import resistance_ohm
from tidegate.lint.physics.silicon import saturation_current_a, thermal_voltage_v

# Circuits are invented. Saturation current, its law and its corners are the model card of the GF180 pnp
# (sm141064.ngspice L47295-47308, L309-, L339- in google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a).
SATURATION_A, GAP_EV, XTI, NOMINAL_K = 9e-19, 1.17, 3.0, 298.15
K_OVER_Q = 1.380649e-23 / 1.602176634e-19
SLOPE_FACTOR = 1.3

DIODE_SPANS = {
    "series_ohm": (0.8e6, 1.0e6, 1.2e6),
    "saturation_a": (0.65 * SATURATION_A, SATURATION_A, 1.35 * SATURATION_A),
    "offset_v": (-0.008, 0.0, 0.008),
    "divider_ratio": (0.42, 0.45),
    "t_k": (233.15, 273.15, 298.15, 348.15, 398.15),
}
MOS_SPANS = {
    "series_ohm": (0.8e6, 1.0e6, 1.2e6),
    "threshold_v": (0.53, 0.63, 0.73),
    "offset_v": (-0.008, 0.0, 0.008),
    "divider_ratio": (0.5, 0.6),
    "t_k": (233.15, 273.15, 298.15, 348.15, 398.15),
}

Values = dict[str, np.ndarray]


def diode_branch(c: Values) -> DiodeBranch:
    ohm = resistance_ohm(t_k=c["t_k"], r_ref_ohm=c["series_ohm"], t_ref_k=NOMINAL_K, tc1_per_k=-0.9e-4, tc2_per_k2=7e-7)
    saturation_a = saturation_current_a(
        t_k=c["t_k"], is_ref_a=c["saturation_a"], t_ref_k=NOMINAL_K, xti=XTI, gap_ev=GAP_EV
    )
    return DiodeBranch(ohm, saturation_a, thermal_voltage_v(t_k=c["t_k"]))


def mos_branch(c: Values) -> MosBranch:
    threshold_v = threshold_linear_v(
        t_k=c["t_k"], threshold_ref_v=c["threshold_v"], t_ref_k=NOMINAL_K, fall_v_per_k=1.54e-3
    )
    gain = gain_a_per_v2(t_k=c["t_k"], gain_ref_a_per_v2=2e-5, t_ref_k=NOMINAL_K, exponent=-1.5)
    specific_a = specific_current_a(t_k=c["t_k"], gain=gain, slope_factor=SLOPE_FACTOR)
    return MosBranch(c["series_ohm"], threshold_v, SLOPE_FACTOR, specific_a, thermal_voltage_v(t_k=c["t_k"]))


def diode_trip_v(c: Values) -> np.ndarray:
    return divider_diode_trip_v(diode_branch(c), divider_ratio=c["divider_ratio"], offset_v=c["offset_v"])


def mos_trip_v(c: Values) -> np.ndarray:
    return divider_mos_trip_v(mos_branch(c), divider_ratio=c["divider_ratio"], offset_v=c["offset_v"])


# The two circuits again, scalar and written out independently: what is left of the current at a supply.


def diode_law_a(v: float, *, series_ohm: float, saturation_a: float, t_k: float) -> tuple[float, float]:
    above = t_k - NOMINAL_K
    exponent = XTI * math.log(t_k / NOMINAL_K) + GAP_EV / K_OVER_Q * (1.0 / NOMINAL_K - 1.0 / t_k)
    current_a = saturation_a * math.exp(exponent) * math.expm1(v / (K_OVER_Q * t_k))
    return current_a, series_ohm * (1.0 - 0.9e-4 * above + 7e-7 * above * above)


def mos_law_a(v: float, *, series_ohm: float, threshold_v: float, t_k: float) -> tuple[float, float]:
    vt = K_OVER_Q * t_k
    specific_a = 2.0 * SLOPE_FACTOR * 2e-5 * (t_k / NOMINAL_K) ** -1.5 * vt * vt
    x = (v - threshold_v + 1.54e-3 * (t_k - NOMINAL_K)) / (2.0 * SLOPE_FACTOR * vt)
    softplus = max(x, 0.0) + math.log1p(math.exp(-abs(x)))
    return specific_a * softplus * softplus, series_ohm


Law = Callable[..., tuple[float, float]]


def brentq_trip_v(law: Law, offset_v: float, divider_ratio: float, **device: float) -> float:
    def excess_a(supply_v: float) -> float:
        device_v = divider_ratio * supply_v - offset_v
        current_a, ohm = law(device_v, **device)
        return (supply_v - device_v) / ohm - current_a

    return float(brentq(excess_a, 0.25, 6.0, xtol=1e-13, rtol=1e-14))


CASES = (
    pytest.param(diode_trip_v, diode_law_a, DIODE_SPANS, id="diode"),
    pytest.param(mos_trip_v, mos_law_a, MOS_SPANS, id="mos"),
)


def rows_of(values: Values) -> list[dict[str, float]]:
    return [dict(zip(values, map(float, row), strict=True)) for row in zip(*values.values(), strict=True)]


@pytest.mark.parametrize(("trip_v", "law", "spans"), CASES)
def test_every_corner_of_a_factorial_against_scipy(
    trip_v: Callable[[Values], np.ndarray], law: Law, spans: dict[str, tuple[float, ...]]
) -> None:
    corners = factorial_corners(spans)
    expected = [brentq_trip_v(law, **row) for row in rows_of(corners)]
    assert trip_v(corners) == pytest.approx(np.array(expected), abs=1e-11)


@pytest.mark.parametrize(("trip_v", "law", "spans"), CASES)
def test_random_parts_lie_inside_the_window_of_the_corners(
    trip_v: Callable[[Values], np.ndarray], law: Law, spans: dict[str, tuple[float, ...]]
) -> None:
    generator = np.random.default_rng(11)
    drawn = {name: generator.uniform(min(v), max(v), 10_000) for name, v in spans.items()}
    found = trip_v(drawn)
    corners = trip_v(factorial_corners({**spans, "t_k": tuple(np.linspace(233.15, 398.15, 34))}))
    assert corners.min() <= found.min() <= found.max() <= corners.max()
    for index in range(0, 10_000, 100):  # a hundred of them against SciPy as well
        row = {name: float(values[index]) for name, values in drawn.items()}
        assert found[index] == pytest.approx(brentq_trip_v(law, **row), abs=1e-11)


def test_a_leaky_diode_never_gets_ahead() -> None:
    # By hand: at 0 V the diode takes 1/(1 + IS R/(n V_T)) of the supply; a divider with more leads from the start.
    limit_a = 0.026 / 1e6 * (1.0 - 0.4) / 0.4
    saturation_a = limit_a * np.array([0.5, 0.999, 1.001, 2.0])
    branch = DiodeBranch(1e6, saturation_a, 0.026)
    with pytest.raises(NoCrossingError) as caught:
        divider_diode_trip_v(branch, divider_ratio=0.4, offset_v=0.0)
    assert caught.value.exists.tolist() == [True, True, False, False]
    assert str(caught.value) == "no crossing at 2 of 4 corners, first at index (2,)"
    with pytest.raises(NoCrossingError, match=r"^no crossing at 1 of 1 corners$"):
        divider_diode_trip_v(DiodeBranch(1e6, 2.0 * limit_a, 0.026), divider_ratio=0.4, offset_v=0.0)


def test_a_diode_that_leaks_a_hair_less_than_it_may_gets_ahead_at_nanovolts() -> None:
    # To first order the crossing of a diode of IS = (1 - d) of the limit lies at 2 d n V_T/a: 13 nV here.
    limit_a = 0.026 / 1e6 * (1.0 - 0.4) / 0.4
    found_v = float(
        divider_diode_trip_v(DiodeBranch(1e6, limit_a * (1.0 - 1e-7), 0.026), divider_ratio=0.4, offset_v=0.0)
    )
    assert found_v == pytest.approx(2e-7 * 0.026 / 0.4, rel=0.2)  # the square root of a rounding, 1.5e-8, of n V_T/a


def test_a_transistor_that_gets_ahead_at_nanovolts_is_not_taken_for_rounding() -> None:
    # SciPy finds the offset for which the balance of currents holds at 5 nV.
    branch, ratio, level_v = MosBranch(2e6, -0.0519, 1.3, 5e-8, 0.026), 0.5, 5e-9

    def surplus_a(offset_v: float) -> float:
        gate_v = ratio * level_v - offset_v
        inversion = math.log1p(math.exp((gate_v + 0.0519) / (2.0 * 1.3 * 0.026)))
        return 5e-8 * inversion**2 - (level_v - gate_v) / 2e6

    offset_v = brentq(surplus_a, 0.0, 0.1, xtol=1e-17, rtol=1e-15)
    found_v = float(divider_mos_trip_v(branch, divider_ratio=ratio, offset_v=offset_v))
    assert found_v == pytest.approx(level_v, rel=1e-3)


def test_an_offset_that_leaves_the_diode_always_a_little_behind() -> None:
    # R IS is half of n V_T (1 - a)/a; by hand, the diode is nearest at the supply where its slope is that of the line,
    # and there -3.01 mV make it touch: -(1 - a) n V_T (0.5 - ln 0.5 - 1).
    touching_v = -0.6 * 0.026 * (0.5 - math.log(0.5) - 1.0)
    branch = DiodeBranch(1e6, 0.5 * 0.6 / 0.4 * 0.026 / 1e6, 0.026)
    assert touching_v == pytest.approx(-3.01e-3, abs=5e-6)
    assert float(divider_diode_trip_v(branch, divider_ratio=0.4, offset_v=touching_v + 1e-6)) > 0.0
    for behind_v in (1e-6, 2e-3):
        with pytest.raises(NoCrossingError):
            divider_diode_trip_v(branch, divider_ratio=0.4, offset_v=touching_v - behind_v)


def test_an_offset_that_favours_the_divider_too_much_leaves_no_crossing() -> None:
    diode = DiodeBranch(1e6, 9e-19, 0.026)
    assert float(divider_diode_trip_v(diode, divider_ratio=0.45, offset_v=-0.05)) > 1.0
    with pytest.raises(NoCrossingError):
        divider_diode_trip_v(diode, divider_ratio=0.45, offset_v=-0.5)
    mos = MosBranch(1e6, 0.6, 1.3, 5e-8, 0.026)
    assert float(divider_mos_trip_v(mos, divider_ratio=0.5, offset_v=-0.05)) > 0.5
    with pytest.raises(NoCrossingError):
        divider_mos_trip_v(mos, divider_ratio=0.5, offset_v=-0.5)


def test_levels_move_the_way_they_must() -> None:
    # A larger part, more leakage, a lower threshold: the part overtakes sooner. A larger offset: later.
    diode = DiodeBranch(1e6, np.array([9e-19, 1.8e-18]), 0.026)
    by_leakage = divider_diode_trip_v(diode, divider_ratio=0.45, offset_v=0.0)
    assert by_leakage[1] < by_leakage[0]
    mos = MosBranch(1e6, np.array([0.6, 0.5]), 1.3, 5e-8, 0.026)
    by_threshold = divider_mos_trip_v(mos, divider_ratio=0.5, offset_v=0.0)
    assert by_threshold[1] < by_threshold[0]
    ratios, offsets = np.array([0.40, 0.45]), np.array([0.0, 0.01])
    for trip_v in (
        lambda **k: divider_diode_trip_v(DiodeBranch(1e6, 9e-19, 0.026), **k),
        lambda **k: divider_mos_trip_v(MosBranch(1e6, 0.6, 1.3, 5e-8, 0.026), **k),
    ):
        assert np.diff(trip_v(divider_ratio=ratios, offset_v=0.0))[0] < 0.0
        assert np.diff(trip_v(divider_ratio=0.45, offset_v=offsets))[0] > 0.0


def test_branches_of_corners_are_told_apart_without_comparing_their_arrays() -> None:
    ohm = np.array([1e6, 2e6])
    for one, other in (
        (DiodeBranch(ohm, 1e-17, 0.026), DiodeBranch(ohm, 1e-17, 0.026)),
        (MosBranch(ohm, 0.6, 1.3, 5e-8, 0.026), MosBranch(ohm, 0.6, 1.3, 5e-8, 0.026)),
    ):
        assert one != other
        assert len({one, other}) == 2


# --- crude current against a reference's own ---------------------------------------------------------------------

DIODE = DiodeBranch(series_ohm=np.array([1e6, 0.8e6]), saturation_a=9e-19, emission_v=0.0257)
MOS = MosBranch(series_ohm=np.array([1e6, 0.8e6]), threshold_v=0.6, slope_factor=1.3, specific_a=5e-8, thermal_v=0.0257)
BRANCHES = (pytest.param(DIODE, id="diode"), pytest.param(MOS, id="mos"))


def device_voltage_v(branch: Branch, current_a: float) -> float:
    if isinstance(branch, DiodeBranch):
        return 0.0257 * math.log1p(current_a / 9e-19)
    return 0.6 + 2.0 * 1.3 * 0.0257 * math.log(math.expm1(math.sqrt(current_a / 5e-8)))


def brentq_crude_a(branch: Branch, ohm: float, supply_v: float) -> float:
    def excess_v(log_a: float) -> float:
        return math.exp(log_a) * ohm + device_voltage_v(branch, math.exp(log_a)) - supply_v

    return math.exp(brentq(excess_v, math.log(1e-25), math.log(1e-3), xtol=1e-14, rtol=1e-14))


@pytest.mark.parametrize("branch", BRANCHES)
@pytest.mark.parametrize("supply_v", [0.3, 0.6, 1.2, 3.6])
def test_crude_current_against_scipy(branch: Branch, supply_v: float) -> None:
    expected = [brentq_crude_a(branch, ohm, supply_v) for ohm in np.asarray(branch.series_ohm)]
    assert branch.current_a(supply_v) == pytest.approx(np.array(expected), rel=1e-9)


def reference_a(v: float) -> float:
    """Nothing up to 0.9 V, then in a straight line over 0.4 V to 8 uA."""
    return min(max(v - 0.9, 0.0) * 8e-6 / 0.4, 8e-6)


REFERENCE = {"start_v": 0.9, "rise_v": 0.4, "regulated_a": 8e-6}


@pytest.mark.parametrize("branch", BRANCHES)
def test_reference_overtakes_where_scipy_says(branch: Branch) -> None:
    found = reference_overtakes_v(branch, mirror_ratio=2.0, **REFERENCE)
    for ohm, trip_v in zip(np.asarray(branch.series_ohm), found, strict=True):

        def excess_a(v: float, ohm: float = ohm) -> float:
            return reference_a(v) - 2.0 * brentq_crude_a(branch, ohm, v)

        assert trip_v == pytest.approx(brentq(excess_a, 0.9, 1.3, xtol=1e-13), abs=1e-10)


@pytest.mark.parametrize("branch", BRANCHES)
def test_a_reference_that_is_there_at_once_overtakes_where_it_sets_in(branch: Branch) -> None:
    found = reference_overtakes_v(branch, mirror_ratio=2.0, start_v=0.9, rise_v=0.0, regulated_a=8e-6)
    assert found.tolist() == [0.9, 0.9]


@pytest.mark.parametrize("branch", BRANCHES)
def test_crude_overtakes_where_scipy_says(branch: Branch) -> None:
    found = crude_overtakes_v(branch, mirror_ratio=2.0, regulated_a=8e-6)
    for ohm, level_v in zip(np.asarray(branch.series_ohm), found, strict=True):
        expected = brentq(lambda v, ohm=ohm: brentq_crude_a(branch, ohm, v) - 4e-6, 0.9, 12.0, xtol=1e-13)
        assert level_v == pytest.approx(expected, abs=1e-10)


@pytest.mark.parametrize("branch", BRANCHES)
def test_currents_are_equal_at_both_crossings(branch: Branch) -> None:
    first = reference_overtakes_v(branch, mirror_ratio=2.0, **REFERENCE)
    second = crude_overtakes_v(branch, mirror_ratio=2.0, regulated_a=8e-6)
    assert np.all(first < second)
    for level_v in (first, second):
        expected_a = [reference_a(v) for v in level_v]
        assert 2.0 * branch.current_a(level_v) == pytest.approx(np.array(expected_a), rel=1e-9)


def test_a_reference_below_the_crude_current_never_overtakes() -> None:
    with pytest.raises(NoCrossingError) as caught:
        reference_overtakes_v(DIODE, mirror_ratio=2.0, start_v=0.9, rise_v=1e-4, regulated_a=np.array([8e-6, 1e-9]))
    assert caught.value.exists.tolist() == [True, False]


def test_a_reference_that_rises_slower_than_the_crude_current_never_stays_ahead() -> None:
    """At full conduction the crude current rises by 2 A/Mohm: over 4.1 V that is 8.2 uA, more than the reference."""
    branch = DiodeBranch(1e6, 9e-19, 0.0257)
    with pytest.raises(NoCrossingError) as caught:
        reference_overtakes_v(
            branch, mirror_ratio=2.0, start_v=0.9, rise_v=np.array([0.4, 4.1]), regulated_a=np.array([8e-6, 8e-6])
        )
    assert caught.value.exists.tolist() == [True, False]


def test_a_reference_must_rise_faster_than_the_crude_current_and_not_as_fast() -> None:
    # Powers of two, so that m V_r/I_0 is exactly 2^20 ohm; half an ohm more is left, on which almost nothing drops.
    series_ohm = 2.0**20 + np.array([0.5, 0.0, -0.5])
    exact = {"mirror_ratio": 1.0, "start_v": 0.3, "rise_v": 0.5, "regulated_a": 2.0**-21}
    with pytest.raises(NoCrossingError) as caught:
        reference_overtakes_v(DiodeBranch(series_ohm, 1e-17, 0.0257), **exact)
    assert caught.value.exists.tolist() == [True, False, False]
    found_v = reference_overtakes_v(DiodeBranch(series_ohm[:1], 1e-17, 0.0257), **exact)
    assert found_v[0] - 0.3 == pytest.approx(2.0**20 * 1e-17 * math.expm1(0.3 / 0.0257), rel=1e-6)


def test_a_reference_that_regulates_at_the_crude_current_still_releases() -> None:
    branch = DiodeBranch(1e6, 9e-19, 0.0257)
    crude_a = float(branch.current_a(0.9))
    at_once = {"mirror_ratio": 1.0, "start_v": 0.9, "rise_v": 0.0}
    assert float(reference_overtakes_v(branch, regulated_a=crude_a, **at_once)) == 0.9
    with pytest.raises(NoCrossingError):
        reference_overtakes_v(branch, regulated_a=math.nextafter(crude_a, 0.0), **at_once)


def test_corners_of_the_reference_alone_broadcast() -> None:
    found = reference_overtakes_v(
        DiodeBranch(1e6, 9e-19, 0.0257), mirror_ratio=2.0, start_v=np.array([0.9, 0.9]), rise_v=0.4, regulated_a=8e-6
    )
    assert found.shape == (2,)
    assert found[0] == found[1]


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: DiodeBranch(0.0, 1e-18, 0.026), "series_ohm must be greater than 0 (found 0.0)"),
    (lambda: DiodeBranch(1e6, 0.0, 0.026), "saturation_a must be greater than 0 (found 0.0)"),
    (lambda: DiodeBranch(1e6, 1e-18, -1.0), "emission_v must be greater than 0 (found -1.0)"),
    (lambda: MosBranch(1e6, math.nan, 1.3, 5e-8, 0.026), "threshold_v must be a finite number (found nan)"),
    (lambda: MosBranch(1e6, 0.6, 0.0, 5e-8, 0.026), "slope_factor must be greater than 0 (found 0.0)"),
    (
        lambda: MosBranch(1e6, 0.6, 1.3, np.array([5e-8, 0.0]), 0.026),
        "specific_a must be greater than 0 (found 0.0 at index (1,))",
    ),
    (lambda: MosBranch(1e6, 0.6, 1.3, 5e-8, 0.0), "thermal_v must be greater than 0 (found 0.0)"),
    (
        lambda: divider_diode_trip_v(DIODE, divider_ratio=1.0, offset_v=0.0),
        "divider_ratio must be between 0 and 1, ends excluded (found 1.0)",
    ),
    (
        lambda: divider_mos_trip_v(MOS, divider_ratio=0.5, offset_v=math.nan),
        "offset_v must be a finite number (found nan)",
    ),
    (lambda: MOS.current_a(-0.1), "source_v must be at least 0 (found -0.1)"),
    (
        lambda: reference_overtakes_v(DIODE, mirror_ratio=0.0, **REFERENCE),
        "mirror_ratio must be greater than 0 (found 0.0)",
    ),
    (
        lambda: reference_overtakes_v(DIODE, mirror_ratio=1.0, **{**REFERENCE, "start_v": 0.0}),
        "start_v must be greater than 0 (found 0.0)",
    ),
    (
        lambda: reference_overtakes_v(DIODE, mirror_ratio=1.0, **{**REFERENCE, "rise_v": -0.1}),
        "rise_v must be at least 0 (found -0.1)",
    ),
    (
        lambda: reference_overtakes_v(DIODE, mirror_ratio=1.0, **{**REFERENCE, "regulated_a": 0.0}),
        "regulated_a must be greater than 0 (found 0.0)",
    ),
    (
        lambda: crude_overtakes_v(DIODE, mirror_ratio=1.0, regulated_a=0.0),
        "regulated_a must be greater than 0 (found 0.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
