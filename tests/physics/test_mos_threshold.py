"""MOS threshold over temperature and the law of inversion: a kit's slopes, SciPy for the inverse."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.mos_threshold import (
    diode_connected_v,
    gain_a_per_v2,
    saturated_current_a,
    specific_current_a,
    subthreshold_swing_v_per_decade,
    threshold_linear_v,
)
from tidegate.lint.physics.silicon import thermal_voltage_v

# google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a, sm141064.ngspice: threshold, KT1 (L37545, L37581-82;
# L37969, L38024-26; L814, L953-962), 25 degC; slopes derived, in mV/K.
GF180_SLOPES = (
    ("gf180-nmos_6p0", 0.67314, -0.412, -1.38),
    ("gf180-pmos_6p0", 0.8978, -0.3828, -1.28),
    ("gf180-nmos_3p3", 0.70838, -0.45935, -1.54),
)


@pytest.mark.parametrize(
    ("threshold_v", "kt1_v", "slope_mv_per_k"),
    [row[1:] for row in GF180_SLOPES],
    ids=[row[0] for row in GF180_SLOPES],
)
def test_slope_of_gf180_devices(threshold_v: float, kt1_v: float, slope_mv_per_k: float) -> None:
    # The law of the model card is V_TH(T0) + KT1 (T/T0 - 1) (BSIM3v3 manual, value from memory): a straight line.
    for t_k in (233.15, 299.15, 398.15):
        found_v = threshold_linear_v(
            t_k=t_k, threshold_ref_v=threshold_v, t_ref_k=298.15, fall_v_per_k=-1e-3 * slope_mv_per_k
        )
        # The slope is given to 5 uV/K.
        assert float(found_v) == pytest.approx(threshold_v + kt1_v * (t_k / 298.15 - 1.0), abs=5e-6 * abs(t_k - 298.15))


def test_gain_follows_the_mobility() -> None:
    found = gain_a_per_v2(t_k=600.0, gain_ref_a_per_v2=2e-4, t_ref_k=300.0, exponent=-1.5)
    assert float(found) == pytest.approx(2e-4 / math.sqrt(8.0), rel=1e-12)


DEVICE = {"threshold_v": 0.6, "slope_factor": 1.3, "specific_a": 2e-7, "thermal_v": 0.02585}


def test_strong_inversion_is_the_square_law() -> None:
    # I = beta/(2 n) (V_GS - V_TH)^2 with I_S = 2 n beta V_T^2: the square law (Shichman and Hodges, 1968).
    beta = 2e-7 / (2.0 * 1.3 * 0.02585**2)
    found = saturated_current_a(gate_v=2.6, **DEVICE)
    assert float(found) == pytest.approx(beta / (2.0 * 1.3) * 2.0**2, rel=1e-9)


def test_weak_inversion_has_the_swing_of_the_slope_factor() -> None:
    low, high = saturated_current_a(gate_v=np.array([0.10, 0.20]), **DEVICE)
    swing = 0.1 / math.log10(high / low)
    assert swing == pytest.approx(1.3 * 0.02585 * math.log(10.0), rel=1e-3)
    # IHP SG13G2 process specification, Rev 1.2, p. 7: low-voltage nMOS, 76 mV per decade at 27 degC: n = 1.276.
    found = subthreshold_swing_v_per_decade(slope_factor=1.276, thermal_v=thermal_voltage_v(t_k=300.15))
    assert 1e3 * float(found) == pytest.approx(76.0, abs=0.05)


def test_specific_current() -> None:
    vt = float(thermal_voltage_v(t_k=300.0))
    found = specific_current_a(t_k=300.0, gain=1e-4, slope_factor=1.3)
    assert float(found) == pytest.approx(2.0 * 1.3 * 1e-4 * vt**2, rel=1e-12)
    # At V_GS = V_TH the current is I_S ln^2(2).
    at_threshold = saturated_current_a(gate_v=0.6, **DEVICE)
    assert float(at_threshold) == pytest.approx(2e-7 * math.log(2.0) ** 2, rel=1e-12)


@settings(max_examples=60, deadline=None)
@given(log_current=st.floats(-15.0, -3.0), threshold_v=st.floats(-0.2, 1.0), n=st.floats(1.0, 1.7))
def test_inverse_against_scipy(log_current: float, threshold_v: float, n: float) -> None:
    current_a = 10.0**log_current
    found = float(
        diode_connected_v(
            current_a=current_a, threshold_v=threshold_v, slope_factor=n, specific_a=2e-7, thermal_v=0.02585
        )
    )

    def excess(v: float) -> float:
        x = (v - threshold_v) / (2.0 * n * 0.02585)
        s = x + math.log1p(math.exp(-x)) if x > 0.0 else math.log1p(math.exp(x))
        return math.log(2e-7) + 2.0 * math.log(s) - math.log(current_a)

    assert found == pytest.approx(brentq(excess, -5.0, 30.0, xtol=1e-14, rtol=1e-14), abs=1e-12)


@settings(max_examples=40, deadline=None)
@given(v=st.floats(-0.5, 3.0))
def test_law_and_inverse_return_to_where_they_started(v: float) -> None:
    current_a = saturated_current_a(gate_v=v, **DEVICE)
    assert float(diode_connected_v(current_a=current_a, **DEVICE)) == pytest.approx(v, abs=1e-12)


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (
        lambda: threshold_linear_v(t_k=0.0, threshold_ref_v=0.5, t_ref_k=300.0, fall_v_per_k=1e-3),
        "t_k must be greater than 0 (found 0.0)",
    ),
    (
        lambda: threshold_linear_v(t_k=300.0, threshold_ref_v=math.nan, t_ref_k=300.0, fall_v_per_k=1e-3),
        "threshold_ref_v must be a finite number (found nan)",
    ),
    (
        lambda: threshold_linear_v(t_k=300.0, threshold_ref_v=0.5, t_ref_k=300.0, fall_v_per_k=math.inf),
        "fall_v_per_k must be a finite number (found inf)",
    ),
    (
        lambda: gain_a_per_v2(t_k=300.0, gain_ref_a_per_v2=0.0, t_ref_k=300.0, exponent=-1.5),
        "gain_ref_a_per_v2 must be greater than 0 (found 0.0)",
    ),
    (
        lambda: specific_current_a(t_k=300.0, gain=1e-4, slope_factor=0.0),
        "slope_factor must be greater than 0 (found 0.0)",
    ),
    (
        lambda: saturated_current_a(gate_v=math.nan, **DEVICE),
        "gate_v must be a finite number (found nan)",
    ),
    (
        lambda: saturated_current_a(gate_v=1.0, **{**DEVICE, "specific_a": 0.0}),
        "specific_a must be greater than 0 (found 0.0)",
    ),
    (lambda: diode_connected_v(current_a=0.0, **DEVICE), "current_a must be greater than 0 (found 0.0)"),
    (
        lambda: diode_connected_v(current_a=1e-6, **{**DEVICE, "thermal_v": -1.0}),
        "thermal_v must be greater than 0 (found -1.0)",
    ),
    (
        lambda: subthreshold_swing_v_per_decade(slope_factor=-1.0, thermal_v=0.026),
        "slope_factor must be at least 0 (found -1.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
