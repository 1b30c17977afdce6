"""What the components of a crossover make: SciPy at every corner, random draws, a resistor that turns."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from tests.rules.sound import both, case_of, patched, without
from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.crossover.crossover_facts import CrossoverFacts, release_facts, second_crossing_facts
from tidegate.lint.derived.crossover.crossover_level import level_of as scalar_level_of
from tidegate.lint.derived.crossover.crossover_sweep import CrossoverSweep, crossover_sweep, level_of
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.corner_spread import TEMPERATURE, Spread, factorial_corners

COLD_K, HOT_K = 233.15, 398.15
K_OVER_Q = 1.380649e-23 / 1.602176634e-19
MOS = "comparators: {por: {crossover: {resistor: poly_high}}}"
DIODE = "comparators: {por: {crossover: {kind: divider_diode, diode: pnp, resistor: poly_high}}}"
CRUDE = """
comparators:
  por:
    crossover:
      kind: crude_current
      mirror: 1
      resistor: poly_high
      reference_current: {min: 500 nA, typ: 550 nA, max: 600 nA}
      reference_start: {min: 0.9 V, max: 1 V}
      reference_rise: {min: 0.2 V, max: 0.3 V}
"""
PATCHES = [pytest.param(MOS, id="mos"), pytest.param(DIODE, id="diode"), pytest.param(CRUDE, id="crude")]


def sweep(patch: str, element: str = "por") -> CrossoverSweep:
    description = patched(patch).description
    return crossover_sweep(description, build(description), description.comparators[element])


def facts(patch: str) -> CrossoverFacts:
    case = case_of(patch, "por")
    assert isinstance(case.subject, Comparator)
    return release_facts(case, case.subject)


def level(patch: str) -> Spread:
    found = sweep(patch).level
    assert not isinstance(found, Unknown)
    return found


# The three circuits once more, written out for one corner. Their numbers are those of the sound example and of the
# patches above: nmos_long 0.35 mV/K and 68 mV per decade at 25 degC, 26 uA/V^2; pnp 8e-19 A, 1.17 eV, exponent 3;
# poly_high -900 ppm/K and 2.5 ppm/K^2 from 25 degC; half of the supply is compared.
SLOPE_FACTOR = 0.068 / (K_OVER_Q * 298.15 * math.log(10.0))


def device_a(kind: str, gate_v: float, corner: dict[str, float]) -> float:
    t_k = corner[TEMPERATURE]
    thermal_v = K_OVER_Q * t_k
    if kind == "diode":
        saturation_a = 8e-19 * (t_k / 298.15) ** 3 * math.exp(1.17 / K_OVER_Q * (1.0 / 298.15 - 1.0 / t_k))
        return saturation_a * math.expm1(gate_v / thermal_v)
    x = (gate_v - corner["threshold"] + 0.35e-3 * (t_k - 298.15)) / (2.0 * SLOPE_FACTOR * thermal_v)
    return 2.0 * SLOPE_FACTOR * 26e-6 * thermal_v**2 * (max(x, 0.0) + math.log1p(math.exp(-abs(x)))) ** 2


def series_ohm(corner: dict[str, float]) -> float:
    above_k = corner[TEMPERATURE] - 298.15
    return corner["resistance"] * (1.0 - 900e-6 * above_k + 2.5e-6 * above_k**2)


def crude_a(supply_v: float, corner: dict[str, float]) -> float:
    def excess_a(gate_v: float) -> float:
        return device_a("mos", gate_v, corner) - (supply_v - gate_v) / series_ohm(corner)

    gate_v: float = brentq(excess_a, -1.0, supply_v, xtol=1e-14)
    return (supply_v - gate_v) / series_ohm(corner)


def surplus_a(kind: str, supply_v: float, corner: dict[str, float]) -> float:
    """Above 0 once the detector has let go."""
    if kind == "crude":
        share = min(max(supply_v - corner["reference start"], 0.0) / corner["reference rise"], 1.0)
        return share * corner["reference current"] - crude_a(supply_v, corner)
    gate_v = 0.5 * supply_v - corner["offset"]
    return device_a(kind, gate_v, corner) - (supply_v - gate_v) / series_ohm(corner)


def brentq_v(kind: str, corner: dict[str, float]) -> float:
    least_v, most_v = (0.9, 1.3) if kind == "crude" else (0.4, 3.0)
    found_v: float = brentq(lambda v: surplus_a(kind, v, corner), least_v, most_v, xtol=1e-13)
    return found_v


@pytest.mark.parametrize(("kind", "patch"), [("mos", MOS), ("diode", DIODE), ("crude", CRUDE)], ids=lambda x: x[:5])
def test_every_corner_of_a_factorial_against_scipy_and_the_window_against_all(kind: str, patch: str) -> None:
    given, found = facts(patch), level(patch)
    corners = factorial_corners({**given.spans, TEMPERATURE: (COLD_K, 270.0, 298.15, 350.0, HOT_K)})
    levels_v = level_of(given)(corners)
    rows = [dict(zip(corners, map(float, row), strict=True)) for row in zip(*corners.values(), strict=True)]
    assert levels_v == pytest.approx(np.array([brentq_v(kind, row) for row in rows]), abs=1e-9)
    assert found.least_v - 1e-9 <= levels_v.min()
    assert levels_v.max() <= found.most_v + 1e-9
    for end_v, at in ((found.least_v, found.least_at), (found.most_v, found.most_at)):
        assert brentq_v(kind, dict(at)) == pytest.approx(end_v, abs=1e-9)


@pytest.mark.parametrize("patch", PATCHES)
def test_ten_thousand_random_draws_lie_inside_and_come_close_to_the_ends(patch: str) -> None:
    given, found = facts(patch), level(patch)
    rng = np.random.default_rng(20260103)
    drawn = {name: rng.uniform(min(ends), max(ends), 10_000) for name, ends in given.spans.items()}
    levels_v = level_of(given)({**drawn, TEMPERATURE: rng.uniform(COLD_K, HOT_K, 10_000)})
    assert found.least_v <= levels_v.min()
    assert levels_v.max() <= found.most_v
    assert levels_v.max() - levels_v.min() > 0.7 * (found.most_v - found.least_v)


@pytest.mark.parametrize("patch", PATCHES)
def test_one_corner_at_a_time_gives_the_same(patch: str) -> None:
    given, found = facts(patch), level(patch)
    one_by_one, at_once = scalar_level_of(given), level_of(given)
    assert one_by_one.least().level_v == pytest.approx(found.least_v, abs=1e-6)
    assert one_by_one.most().level_v == pytest.approx(found.most_v, abs=1e-6)
    for values in itertools.islice(itertools.product(*given.spans.values()), 0, None, 3):
        corner = dict(zip(given.spans, values, strict=True))
        for t_k in (COLD_K, 300.0, HOT_K):
            arrays = {name: np.asarray(value) for name, value in {**corner, TEMPERATURE: t_k}.items()}
            assert one_by_one.at_v(corner, t_k) == pytest.approx(float(at_once(arrays)), rel=1e-9)


# ppolyf_u of google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a, models/ngspice/sm141064.ngspice L38606-07:
# its resistance is least at 25 + 9e-5/(2 * 7e-7) = 89.3 degC. In strong inversion, and with a threshold that stays, the
# voltage of the device does not move with temperature: what is left is the resistor.
TURNS = """
process:
  resistors: {turns: {tc1: -90 ppm/K, tc2: 0.7 ppm/K^2, reference_temperature: 25 degC}}
  devices: {nmos_long: {threshold: 0.5 V, threshold_slope: 0 V/K}}
comparators:
  por:
    crossover: {kind: crude_current, mirror: 1, reference_current: 1 uA, resistance: 2 Mohm, gain: 1e-9 A/V^2}
"""
NAMED = "comparators: {por: {crossover: {resistor: turns}}}"


def turning_facts(*patches: str) -> CrossoverFacts:
    case = case_of(both(TURNS, *patches), "por")
    assert isinstance(case.subject, Comparator)
    return second_crossing_facts(case, case.subject)


def test_a_resistor_whose_minimum_lies_inside_the_range_makes_the_extreme_there() -> None:
    given = turning_facts(NAMED)
    scalar = scalar_level_of(given)
    least = scalar.least()
    exact = minimize_scalar(
        lambda t_k: 1e-6 * 2e6 * (1.0 - 90e-6 * (t_k - 298.15) + 0.7e-6 * (t_k - 298.15) ** 2),
        bounds=(COLD_K, HOT_K), method="bounded",
    )  # fmt: skip
    assert exact.x == pytest.approx(273.15 + 89.3, abs=0.05)
    assert least.t_k == pytest.approx(exact.x, abs=0.5)
    ends_v = [scalar.at_v(least.corner, t_k) for t_k in (COLD_K, HOT_K)]
    assert least.level_v < min(ends_v)
    # The resistor drops 1 uA times what it has lost since the cold end: 2 V times 0.0088.
    lost_v = ends_v[0] - least.level_v
    assert lost_v == pytest.approx(2.0 * (1.0 - 90e-6 * -65.0 + 0.7e-6 * 65.0**2) - exact.fun, abs=1e-6)

    found = sweep(both(TURNS, NAMED)).second
    assert found is not None
    assert not isinstance(found, Unknown)
    assert found.level.least_at[TEMPERATURE] == pytest.approx(exact.x, abs=0.5)
    assert found.level.least_v == pytest.approx(least.level_v, abs=1e-7)


def test_a_resistor_that_is_not_named_stays_as_stated() -> None:
    scalar = scalar_level_of(turning_facts())
    assert "tc1" not in scalar.spans
    assert scalar.most().level_v == pytest.approx(scalar.least().level_v, abs=1e-6)


def test_a_coefficient_with_a_range_is_a_corner() -> None:
    given = facts(both(MOS, "process: {resistors: {poly_high: {tc1: {min: -1000 ppm/K, max: -800 ppm/K}}}}"))
    assert given.spans["tc1"] == pytest.approx((-1e-3, -0.8e-3))
    assert given.nominal["tc1"] == pytest.approx(-0.9e-3)


def test_contributions_spread_and_slope() -> None:
    found = level("")
    assert [swing.name for swing in found.swings if swing.width_v > 0.0] == [
        TEMPERATURE, "threshold", "resistance", "offset",
    ]  # fmt: skip
    assert (found.least_at[TEMPERATURE], found.most_at[TEMPERATURE]) == (HOT_K, COLD_K)
    assert found.slope_v_per_k is not None
    # All of 0.35 mV/K over half, and the device's own fall in weak inversion: of the order of 1 mV/K.
    assert -1.5e-3 < found.slope_v_per_k < -0.35e-3 / 0.5
    assert sweep("").nominal_k == pytest.approx(273.15 + 42.5)


def test_tracking_at_equal_temperature_and_corner() -> None:
    """A reference that works from 1.2 V at -40 degC and 1.7 mV/K less above: the cold end counts, not the hot level."""
    early = "{works_from: {max: 0.9 V}}"
    patch = both(
        "references: {ref_fast: {works_from: {max: 1.2 V}, works_from_slope: -1.7 mV/K}}",
        f"comparators: {{uv: {early}, ov: {early}, uv_core: {early}}}",
        "biases: {bias_start: {works_from: {max: 0.5 V}}}",
    )  # fmt: skip
    found = sweep(patch).tracking
    assert found is not None
    assert not isinstance(found, Unknown)
    corner = {"threshold": 0.485, "resistance": 2.2e6, "offset": -3e-3}

    def room_v(t_k: float) -> float:
        gate_offset = {**corner, TEMPERATURE: t_k}
        level_v = brentq(
            lambda v: device_a("mos", 0.5 * v + 3e-3, gate_offset) - (0.5 * v - 3e-3) / 2.2e6, 0.4, 3.0, xtol=1e-13
        )
        return float(level_v) - 0.07 - (1.2 - 1.7e-3 * (t_k - COLD_K))

    assert found.margin.least_v == pytest.approx(min(room_v(t_k) for t_k in (COLD_K, 300.0, HOT_K)), abs=1e-8)
    assert (found.element, found.hysteresis_v) == ("ref_fast", pytest.approx(0.07))
    assert found.need_v == pytest.approx(1.2)
    assert found.margin.least_at[TEMPERATURE] == COLD_K


def test_second_crossing_has_the_supply_in_service_beside_it() -> None:
    found = sweep(CRUDE).second
    assert found is not None
    assert not isinstance(found, Unknown)
    assert found.in_service_v == pytest.approx(1.895)
    at = {**found.level.least_at}
    assert crude_a(found.level.least_v, at) == pytest.approx(500e-9, rel=1e-9)
    assert sweep(MOS).second is None


def test_what_is_missing_is_named() -> None:
    assert sweep(without("comparators.por.crossover.gain")).level == Unknown(("comparators.por.crossover.gain",), "")
    found = sweep(both(CRUDE, without("comparators.por.crossover.reference_start", "rails.avdd.delivered")))
    assert found.level == Unknown(("comparators.por.crossover.reference_start",), "")
    assert found.tracking is None
    assert found.second == Unknown(("rails.avdd.delivered",), "")
    tc = sweep(both(MOS, without("process.resistors.poly_high.tc2")))
    assert tc.level == Unknown(("process.resistors.poly_high.tc2",), "")


def test_where_there_is_no_level_it_is_said() -> None:
    found = sweep(both(DIODE, "process: {diodes: {pnp: {saturation: 1 mA}}}"))
    assert found.level == Unknown(
        (), "at some corner the divided supply is ahead from the start: nothing holds reset at any supply"
    )
    assert found.tracking is None


def test_one_temperature_will_do() -> None:
    found = level("conditions: {junction_temperature: 25 degC}")
    assert found.slope_v_per_k is None
    assert found.least_v < found.nominal_v < found.most_v
