"""The level of a crossover over corners and temperature, against the vectorised solver and its own random draws."""

from __future__ import annotations

import numpy as np
import pytest

from tests.rules.sound import case_of
from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.crossover.crossover_level import CrossoverLevel, release_level, second_crossing_level
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics import crossover, mos_threshold, silicon
from tidegate.lint.physics.array_domain import FloatArray
from tidegate.lint.physics.corner_spread import TEMPERATURE, Corner, spread_over_corners
from tidegate.lint.physics.fed_branch import DiodeBranch, MosBranch

COLD_K, HOT_K = 233.15, 398.15
# The numbers of the sound example, written out again: device nmos_long and the crossover of por.
SPANS = {"threshold": (0.485, 0.515), "resistance": (1.8e6, 2.2e6), "offset": (-3e-3, 3e-3)}
NOMINAL = {"threshold": 0.5, "resistance": 2.0e6, "offset": 0.0, TEMPERATURE: 298.15}
SLOPE_FACTOR = 0.068 / (8.617333262e-5 * 298.15 * np.log(10.0))
WINDOW_V = 2e-6
"""V: the scalar search ends on a grid of about 1 K about the best point; the level turns by less than 1 uV in it."""


def mos_level_v(corner: Corner) -> FloatArray:
    t_k = corner[TEMPERATURE]
    branch = MosBranch(
        series_ohm=corner["resistance"],
        threshold_v=mos_threshold.threshold_linear_v(
            t_k=t_k, threshold_ref_v=corner["threshold"], t_ref_k=298.15, fall_v_per_k=0.35e-3
        ),
        slope_factor=SLOPE_FACTOR,
        specific_a=mos_threshold.specific_current_a(t_k=t_k, gain=26e-6, slope_factor=SLOPE_FACTOR),
        thermal_v=silicon.thermal_voltage_v(t_k=t_k),
    )
    return crossover.divider_mos_trip_v(branch, divider_ratio=0.5, offset_v=corner["offset"])


def level(patch: str = "", element: str = "por") -> CrossoverLevel:
    case = case_of(patch, element)
    assert isinstance(case.subject, Comparator)
    return release_level(case, case.subject)


def test_both_ends_of_the_window_are_reached_by_the_vectorised_sweep() -> None:
    spread = spread_over_corners(
        mos_level_v, nominal=NOMINAL, spans=SPANS, temperature_k=(COLD_K, HOT_K), temperature_points=41
    )
    found = level()
    assert found.least().level_v == pytest.approx(spread.least_v, abs=WINDOW_V)
    assert found.most().level_v == pytest.approx(spread.most_v, abs=WINDOW_V)
    assert found.least().t_k == pytest.approx(spread.least_at[TEMPERATURE], abs=2.0)
    assert {name: found.least().corner[name] for name in SPANS} == {name: spread.least_at[name] for name in SPANS}


def test_ten_thousand_random_draws_lie_inside_and_come_close_to_the_ends() -> None:
    rng = np.random.default_rng(20260102)
    drawn = {name: rng.uniform(*ends, 10_000) for name, ends in SPANS.items()}
    levels_v = mos_level_v({**drawn, TEMPERATURE: rng.uniform(COLD_K, HOT_K, 10_000)})
    found = level()
    assert found.least().level_v - WINDOW_V <= levels_v.min()
    assert levels_v.max() <= found.most().level_v + WINDOW_V
    width_v = found.most().level_v - found.least().level_v
    assert levels_v.max() - levels_v.min() > 0.8 * width_v


def test_what_moves_the_level_most_comes_first() -> None:
    """Of 24 mV of threshold spread at a ratio of 0.5 more than twice that arrives; temperature makes most."""
    swings = level().swings_v()
    assert [name for name, _ in swings] == ["temperature", "threshold", "resistance", "offset"]
    alone_v = {name: [float(mos_level_v({**{k: np.asarray(v) for k, v in NOMINAL.items()}, name: np.asarray(end),
                                         TEMPERATURE: np.asarray((COLD_K + HOT_K) / 2)})) for end in ends]
               for name, ends in SPANS.items()}  # fmt: skip
    for name, width_v in swings[1:]:
        assert width_v == pytest.approx(abs(alone_v[name][1] - alone_v[name][0]), rel=1e-9)


def test_a_diode_falls_by_its_own_slope_over_the_ratio() -> None:
    patch = "comparators: {por: {crossover: {kind: divider_diode, diode: pnp}}}"
    found = level(patch)
    spread = spread_over_corners(
        _diode_level_v, nominal={k: v for k, v in NOMINAL.items() if k != "threshold"},
        spans={k: v for k, v in SPANS.items() if k != "threshold"}, temperature_k=(COLD_K, HOT_K),
        temperature_points=41,
    )  # fmt: skip
    assert found.least().level_v == pytest.approx(spread.least_v, abs=WINDOW_V)
    assert found.most().level_v == pytest.approx(spread.most_v, abs=WINDOW_V)


def _diode_level_v(corner: Corner) -> FloatArray:
    t_k = corner[TEMPERATURE]
    branch = DiodeBranch(
        series_ohm=corner["resistance"],
        saturation_a=silicon.saturation_current_a(t_k=t_k, is_ref_a=8e-19, t_ref_k=298.15, xti=3.0, gap_ev=1.17),
        emission_v=silicon.thermal_voltage_v(t_k=t_k),
    )
    return crossover.divider_diode_trip_v(branch, divider_ratio=0.5, offset_v=corner["offset"])


def test_an_extreme_inside_the_range_of_temperature_is_found() -> None:
    """Less a line that falls as fast as the level does in the middle, the level turns inside the range."""
    found = level()
    cold_v, hot_v = (found.at_v(found.least().corner, t_k) for t_k in (COLD_K, HOT_K))
    slope = (hot_v - cold_v) / (HOT_K - COLD_K)
    inside = found.where_least(lambda place: abs(place.t_k - 300.0) + (0.0 if place.level_v else 1.0))
    assert inside.t_k == pytest.approx(300.0, abs=1.0)
    bowed = found.where_least(lambda place: place.level_v - slope * (place.t_k - COLD_K))
    grid_k = np.linspace(COLD_K, HOT_K, 2001)
    exact = min(
        float(mos_level_v({**{k: np.asarray(v) for k, v in bowed.corner.items()}, TEMPERATURE: np.asarray(t_k)}))
        - slope * (t_k - COLD_K)
        for t_k in grid_k
    )
    assert bowed.level_v - slope * (bowed.t_k - COLD_K) == pytest.approx(exact, abs=WINDOW_V)


def test_second_crossing_by_hand() -> None:
    """Least resistance 1.8 Mohm at 400 nA drops 0.72 V; the device adds less than 0.7 V, least when hot."""
    case = case_of(
        "comparators: {por: {crossover: {kind: crude_current, reference_current: 400 nA, mirror: 1}}}", "por"
    )
    assert isinstance(case.subject, Comparator)
    found = second_crossing_level(case, case.subject).least()
    thermal_v = 8.617333262e-5 * HOT_K
    specific_a = 2 * SLOPE_FACTOR * 26e-6 * thermal_v**2
    device_v = 0.485 - 0.35e-3 * (HOT_K - 298.15)
    device_v += 2 * SLOPE_FACTOR * thermal_v * np.log(np.expm1(np.sqrt(400e-9 / specific_a)))
    assert found.level_v == pytest.approx(1.8e6 * 400e-9 + device_v, rel=1e-9)
    assert found.t_k == pytest.approx(HOT_K)


@pytest.mark.parametrize(
    "fact",
    [
        "comparators.por.crossover.ratio", "comparators.por.crossover.resistance", "comparators.por.crossover.offset",
        "comparators.por.crossover.gain", "process.devices.nmos_long.threshold",
        "process.devices.nmos_long.threshold_slope", "process.devices.nmos_long.swing",
        "process.devices.nmos_long.reference_temperature", "conditions.junction_temperature",
    ],
)  # fmt: skip
def test_a_fact_that_is_missing_is_named(fact: str) -> None:
    from tests.rules.sound import without

    case: Case = case_of(without(fact), "por")
    assert isinstance(case.subject, Comparator)
    with pytest.raises(MissingFactsError) as missing:
        release_level(case, case.subject)
    assert set(missing.value.missing) == {fact}
