"""Spread over corners: brute force and SciPy for the extremes, hand arithmetic for the contributions."""

from __future__ import annotations

import itertools
from collections.abc import Callable

import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from tidegate.lint.physics.array_domain import FloatArray
from tidegate.lint.physics.corner_spread import Corner, Spread, factorial_corners, spread_over_corners
from tidegate.lint.physics.crossover import NoCrossingError, divider_diode_trip_v
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.fed_branch import DiodeBranch
from tidegate.lint.physics.resistor import resistance_ohm
from tidegate.lint.physics.silicon import saturation_current_a, thermal_voltage_v

NOMINAL = {"series_ohm": 1e6, "saturation_a": 9e-19, "offset_v": 0.0, "t_k": 298.15}
SPANS = {"series_ohm": (0.8e6, 1.2e6), "saturation_a": (5.85e-19, 12.15e-19), "offset_v": (-0.008, 0.008)}
RANGE_K = (233.15, 398.15)


def trip_v(c: Corner) -> FloatArray:
    """An invented detector: 0.45 of the supply against a GF180-like diode (see test_crossover)."""
    ohm = resistance_ohm(t_k=c["t_k"], r_ref_ohm=c["series_ohm"], t_ref_k=298.15, tc1_per_k=-0.9e-4, tc2_per_k2=7e-7)
    saturation_a = saturation_current_a(t_k=c["t_k"], is_ref_a=c["saturation_a"], t_ref_k=298.15, xti=3.0, gap_ev=1.17)
    branch = DiodeBranch(ohm, saturation_a, thermal_voltage_v(t_k=c["t_k"]))
    return divider_diode_trip_v(branch, divider_ratio=0.45, offset_v=c["offset_v"])


def spread(level_v: Callable[[Corner], FloatArray]) -> Spread:
    return spread_over_corners(level_v, nominal=NOMINAL, spans=SPANS, temperature_k=RANGE_K, temperature_points=17)


def test_factorial_is_every_combination() -> None:
    spans = {"a": (1.0, 2.0), "b": (3.0, 4.0, 5.0), "c": (6.0,)}
    found = factorial_corners(spans)
    rows = list(zip(*(axis.tolist() for axis in found.values()), strict=True))
    assert rows == list(itertools.product(*spans.values()))
    assert factorial_corners({}) == {}


def test_window_of_a_detector_against_every_corner_and_random_parts() -> None:
    found = spread(trip_v)
    corners = trip_v(factorial_corners({**SPANS, "t_k": tuple(np.linspace(*RANGE_K, 200))}))
    assert found.least_v == pytest.approx(corners.min(), abs=1e-9)
    assert found.most_v == pytest.approx(corners.max(), abs=1e-9)

    generator = np.random.default_rng(5)
    drawn = {name: generator.uniform(min(v), max(v), 10_000) for name, v in {**SPANS, "t_k": RANGE_K}.items()}
    inside = trip_v(drawn)
    assert found.least_v <= inside.min() <= inside.max() <= found.most_v


def test_the_ends_are_reached_where_they_are_said_to_lie() -> None:
    found = spread(trip_v)
    for level_v, at in ((found.least_v, found.least_at), (found.most_v, found.most_at)):
        assert float(trip_v({name: np.array(value) for name, value in at.items()})) == pytest.approx(level_v, abs=1e-12)
    assert found.least_at["t_k"] == RANGE_K[1]
    assert found.most_at["t_k"] == RANGE_K[0]
    assert found.most_at["offset_v"] == 0.008


def test_contributions_are_ranked_and_are_what_each_does_alone() -> None:
    found = spread(trip_v)
    # By hand, at the comparison: temperature 165 K at 1.7 mV/K, saturation current V_T ln(12.15/5.85) = 19 mV, offset
    # 16 mV, resistor V_T ln(1.2/0.8) = 10 mV.
    assert [s.name for s in found.swings] == ["t_k", "saturation_a", "offset_v", "series_ohm"]
    widths = [s.width_v for s in found.swings]
    assert widths == sorted(widths, reverse=True)
    nominal = {name: np.array(value) for name, value in NOMINAL.items()}
    alone = [float(trip_v({**nominal, "offset_v": np.array(v)})) for v in SPANS["offset_v"]]
    assert (found.swings[2].least_v, found.swings[2].most_v) == pytest.approx(tuple(alone))
    assert found.nominal_v == pytest.approx(float(trip_v(nominal)))
    ends = [float(trip_v({**nominal, "t_k": np.array(t)})) for t in RANGE_K]
    assert found.slope_v_per_k is not None
    assert found.slope_v_per_k == pytest.approx((ends[1] - ends[0]) / 165.0)
    # A diode's 1.7 mV/K behind 0.45.
    assert found.slope_v_per_k == pytest.approx(-1.7e-3 / 0.45, rel=0.2)


def test_an_extreme_inside_the_temperature_range_is_found() -> None:
    # A level that is lowest at a temperature of each corner's own, between points of the grid; SciPy finds the same.
    def level_v(c: Corner) -> FloatArray:
        turn_k = 310.0 + 20.0 * c["offset_v"] / 0.008
        return np.asarray(1.0 + 1e-6 * c["series_ohm"] * ((c["t_k"] - turn_k) / 100.0) ** 2)

    found = spread(level_v)
    assert found.least_v == pytest.approx(1.0, abs=1e-9)
    hot = minimize_scalar(lambda t: 1.0 + 0.8 * ((t - 330.0) / 100.0) ** 2, bounds=RANGE_K, method="bounded")
    at_hot = spread_over_corners(
        level_v,
        nominal={**NOMINAL, "offset_v": 0.008},
        spans={**SPANS, "offset_v": (0.008,)},
        temperature_k=RANGE_K,
        temperature_points=5,
    )
    assert at_hot.least_at["t_k"] == pytest.approx(hot.x, abs=0.1)
    assert at_hot.most_at["t_k"] == RANGE_K[0]


def test_tracking_of_two_levels_is_wider_than_neither_extreme_against_extreme() -> None:
    # Two levels that fall together with temperature: corner by corner their distance hardly moves.
    def works_from_v(c: Corner) -> FloatArray:
        return np.asarray(1.2 - 3.5e-3 * (c["t_k"] - 298.15))

    together = spread(lambda c: trip_v(c) - works_from_v(c))
    apart_v = spread(trip_v).least_v - spread(works_from_v).most_v
    assert together.least_v > apart_v + 0.3


def test_a_level_without_parameters_has_a_temperature_only() -> None:
    found = spread_over_corners(
        lambda c: 1.0 + 0.0 * c["t_k"],
        nominal={"t_k": 300.0},
        spans={},
        temperature_k=(250.0, 350.0),
        temperature_points=3,
    )
    assert (found.least_v, found.nominal_v, found.most_v, found.slope_v_per_k) == (1.0, 1.0, 1.0, 0.0)
    assert [s.name for s in found.swings] == ["t_k"]


def test_one_temperature_has_no_slope() -> None:
    found = spread_over_corners(
        trip_v, nominal=NOMINAL, spans=SPANS, temperature_k=(298.15, 298.15), temperature_points=3
    )
    assert found.slope_v_per_k is None
    corners = trip_v(factorial_corners({**SPANS, "t_k": (298.15,)}))
    assert (found.least_v, found.most_v) == (corners.min(), corners.max())


def test_a_corner_with_no_crossing_is_not_passed_over() -> None:
    with pytest.raises(NoCrossingError):
        spread_over_corners(
            trip_v,
            nominal=NOMINAL,
            spans={**SPANS, "offset_v": (-0.5, 0.0)},
            temperature_k=RANGE_K,
            temperature_points=3,
        )


def call(**changed: object) -> object:
    arguments = {
        "nominal": NOMINAL,
        "spans": SPANS,
        "temperature_k": RANGE_K,
        "temperature_points": 5,
        **changed,
    }
    return spread_over_corners(trip_v, **arguments)  # type: ignore[arg-type]


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: factorial_corners({"a": ()}), "a must have at least one value"),
    (lambda: factorial_corners({"a": (1.0, float("nan"))}), "a must be a finite number (found nan)"),
    (lambda: call(temperature_k=(0.0, 300.0)), "least_k must be greater than 0 (found 0.0)"),
    (lambda: call(temperature_k=(300.0, 299.0)), "most_k must be at least least_k, 300.0 (found 299.0)"),
    (lambda: call(temperature_points=2), "temperature_points must be at least 3 (found 2)"),
    (
        lambda: call(nominal={"t_k": 300.0}),
        "nominal must name the parameters of spans and t_k (found ['t_k'])",
    ),
)


@pytest.mark.parametrize(("refused", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(refused: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        refused()
    assert str(caught.value) == message
