"""Junctions over temperature: a foundry's table of base-emitter voltages, and the law of the current by quadrature."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import constants
from scipy.integrate import quad

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.silicon import (
    junction_voltage_v,
    saturation_current_a,
    thermal_voltage_v,
)


def test_thermal_voltage() -> None:
    # 25.852 mV at 300 K; 59.5 mV per decade; SciPy's CODATA constants as the reference.
    assert float(thermal_voltage_v(t_k=300.0)) == pytest.approx(constants.k * 300.0 / constants.e, rel=1e-15)
    assert float(thermal_voltage_v(t_k=300.0)) * math.log(10.0) == pytest.approx(59.526e-3, abs=5e-7)


# google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a, models/ngspice/testing/180MCU_SPICE_DATA/BJT/
# bjt_fc_pnp.nl_out.xlsx, rows 2-17, typical, 0.42 um x 10 um: circuit-simulator output, not silicon.
GF180_V_BE = ((-40.0, 0.8422), (25.0, 0.7378), (125.0, 0.5685))
# Same table: difference for a tenfold current.
GF180_TENFOLD = ((-40.0, 46.58e-3), (25.0, 59.33e-3), (125.0, 79.36e-3), (175.0, 89.58e-3))
# Current gain from the same table's currents; the emitter current, 1 uA/um^2, follows from them too.
GF180_GAIN = {-40.0: 0.95, 25.0: 1.62, 125.0: 2.45}


@pytest.mark.parametrize(("t_degc", "expected_v"), GF180_V_BE, ids=[f"gf180-pnp-{t:.0f}-degC" for t, _ in GF180_V_BE])
def test_base_emitter_voltage_of_gf180_table(t_degc: float, expected_v: float) -> None:
    # Model card of the same repository, sm141064.ngspice L47295-47308: IS 9e-19 A, EG 1.17, XTI 3, 25 degC.
    t_k = t_degc + 273.15
    gain = GF180_GAIN[t_degc]
    saturation_a = saturation_current_a(t_k=t_k, is_ref_a=9e-19, t_ref_k=298.15, xti=3.0, gap_ev=1.17)
    found = junction_voltage_v(
        current_a=4.2e-6 * gain / (1.0 + gain), saturation_a=saturation_a, emission_v=thermal_voltage_v(t_k=t_k)
    )
    # The simulator's model also has high-level injection and series resistance: up to 1.6 mV.
    assert float(found) == pytest.approx(expected_v, abs=2e-3)


@pytest.mark.parametrize(("t_degc", "expected_v"), GF180_TENFOLD, ids=[f"gf180-{t:.0f}-degC" for t, _ in GF180_TENFOLD])
def test_tenfold_current_of_gf180_table(t_degc: float, expected_v: float) -> None:
    # Up to 0.7 % above the ideal law, for the reasons above.
    emission_v = thermal_voltage_v(t_k=t_degc + 273.15)
    once_v, tenfold_v = junction_voltage_v(current_a=np.array([1e-7, 1e-6]), saturation_a=1e-18, emission_v=emission_v)
    assert float(tenfold_v - once_v) == pytest.approx(expected_v, rel=8e-3)


@pytest.mark.parametrize(("xti", "gap_ev"), [(3.0, 1.17), (3.4, 1.11), (0.0, 0.69), (-1.5, 1.21)])
@pytest.mark.parametrize("t_k", [223.15, 300.0, 398.15])
def test_saturation_current_against_a_quadrature(t_k: float, xti: float, gap_ev: float) -> None:
    # d ln IS/dT = XTI/T + Eg/(k T^2), integrated by SciPy with its own constants.
    k_ev = constants.k / constants.e
    expected, _ = quad(lambda t: xti / t + gap_ev / (k_ev * t * t), 300.0, t_k, epsabs=1e-12)
    found = saturation_current_a(t_k=t_k, is_ref_a=1e-18, t_ref_k=300.0, xti=xti, gap_ev=gap_ev)
    assert math.log(float(found) / 1e-18) == pytest.approx(expected, abs=1e-9)


def test_arrays_broadcast() -> None:
    t_k = np.array([[250.0], [300.0], [350.0]])
    is_ref_a = np.array([1e-18, 2e-18])
    found = saturation_current_a(t_k=t_k, is_ref_a=is_ref_a, t_ref_k=300.0, xti=3.0, gap_ev=1.17)
    assert found.shape == (3, 2)
    assert found[1] == pytest.approx(is_ref_a, rel=1e-15)
    assert found[:, 1] == pytest.approx(2.0 * found[:, 0], rel=1e-12)


@settings(max_examples=40, deadline=None)
@given(t_k=st.floats(220.0, 450.0), step_k=st.floats(0.1, 50.0))
def test_hotter_junctions_leak_more_and_drop_less(t_k: float, step_k: float) -> None:
    t = np.array([t_k, t_k + step_k])
    saturation_a = saturation_current_a(t_k=t, is_ref_a=1e-18, t_ref_k=300.0, xti=3.0, gap_ev=1.17)
    v = junction_voltage_v(current_a=1e-6, saturation_a=saturation_a, emission_v=thermal_voltage_v(t_k=t))
    assert saturation_a[1] > saturation_a[0]
    assert v[1] < v[0]


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: thermal_voltage_v(t_k=-1.0), "t_k must be greater than 0 (found -1.0)"),
    (
        lambda: saturation_current_a(t_k=300.0, is_ref_a=0.0, t_ref_k=300.0, xti=3.0, gap_ev=1.1),
        "is_ref_a must be greater than 0 (found 0.0)",
    ),
    (
        lambda: saturation_current_a(t_k=300.0, is_ref_a=1e-18, t_ref_k=0.0, xti=3.0, gap_ev=1.1),
        "t_ref_k must be greater than 0 (found 0.0)",
    ),
    (
        lambda: saturation_current_a(t_k=300.0, is_ref_a=1e-18, t_ref_k=300.0, xti=math.nan, gap_ev=1.1),
        "xti must be a finite number (found nan)",
    ),
    (
        lambda: saturation_current_a(t_k=300.0, is_ref_a=1e-18, t_ref_k=300.0, xti=3.0, gap_ev=-1.1),
        "gap_ev must be greater than 0 (found -1.1)",
    ),
    (
        lambda: junction_voltage_v(current_a=-1.0, saturation_a=1e-18, emission_v=0.026),
        "current_a must be at least 0 (found -1.0)",
    ),
    (
        lambda: junction_voltage_v(current_a=1.0, saturation_a=0.0, emission_v=0.026),
        "saturation_a must be greater than 0 (found 0.0)",
    ),
    (
        lambda: junction_voltage_v(current_a=1.0, saturation_a=1e-18, emission_v=0.0),
        "emission_v must be greater than 0 (found 0.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
