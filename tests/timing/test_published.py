"""The published profiles on a rail of round numbers, point by point.

Values as others quote ISO 16750-2 (second-hand): 0.5 V/min; steps of 5 % of the least supply, 5 s low, 10 s recovered.
"""

from __future__ import annotations

import pytest

from tests.timing.bare import bare
from tidegate.lint.timing.published import published
from tidegate.lint.timing.scenario import Scenario, Scene

RAIL = "rails: {{a: {{nominal: 2 V, rise: {{min: {rise}, max: 1 s}}, fall: {{min: {fall}, max: 1 s}}{more}}}}}"


def profiles(*, rise: str = "10 us", fall: str = "10 us", more: str = "") -> list[Scenario]:
    return list(published(bare(RAIL.format(rise=rise, fall=fall, more=more)).setting))


def test_slow_decrease_and_increase() -> None:
    slow, _ = profiles()
    # 2 V at 0.5 V/min take 4 min, both ways.
    assert slow.waveforms["a"].points == ((0.0, 2.0), (pytest.approx(240.0), 0.0), (pytest.approx(480.0), 2.0))
    assert slow.name == "ISO 16750-2 slow decrease and increase"
    assert slow.about == "0.5 V/min down and up (clause 4.5, values second-hand)"
    assert (slow.scene, slow.fast, slow.in_sequence) == (Scene.PUBLISHED, True, False)


def _steps(least_v: float, edge_s: float) -> list[tuple[float, float]]:
    """Twenty steps, each 5 % deeper: an edge, 5 s low, an edge, 10 s recovered."""
    found = [(0.0, least_v)]
    for number in range(20):
        begin_s = number * (edge_s + 5.0 + edge_s + 10.0)
        low_v = least_v * (1.0 - 0.05 * (number + 1))
        found += [
            (begin_s, least_v), (begin_s + edge_s, low_v), (begin_s + edge_s + 5.0, low_v),
            (begin_s + 2 * edge_s + 5.0, least_v),
        ]  # fmt: skip
    return found


@pytest.mark.parametrize(
    ("rise", "fall", "more", "least_v", "edge_s"),
    [
        ("10 us", "10 us", "", 2.0, 1e-3),
        ("10 us", "10 us", ", delivered: {min: 1.8 V, max: 2.1 V}", 1.8, 1e-3),
        ("10 us", "10 us", ", delivered: {max: 2.1 V}", 2.0, 1e-3),
        ("5 ms", "10 us", "", 2.0, 5e-3),
        ("10 us", "7 ms", "", 2.0, 7e-3),
    ],
)
def test_steps_of_five_per_cent(rise: str, fall: str, more: str, least_v: float, edge_s: float) -> None:
    _, steps = profiles(rise=rise, fall=fall, more=more)
    found = [number for point in steps.waveforms["a"].points for number in point]
    assert found == pytest.approx([number for point in _steps(least_v, edge_s) for number in point], abs=1e-12)
    assert steps.name == "ISO 16750-2 reset behaviour"
    assert steps.about == "steps of 5 % of the least supply down to 0 V (clause 4.6.2, values second-hand)"
    assert steps.scene is Scene.PUBLISHED


def test_without_a_rail_off_the_chip_there_is_no_profile() -> None:
    assert list(published(bare("rails: {a: {nominal: 2 V}}").setting)) == []


def test_every_rail_off_the_chip_takes_them() -> None:
    two = bare(
        "rails:\n  a: {nominal: 2 V, rise: {min: 1 ms, max: 1 s}}\n  b: {nominal: 1 V, rise: {min: 1 ms, max: 1 s}}\n"
        "  c: {nominal: 1 V, rise: {min: 1 ms, max: 1 s}, made_by: m}\nloads: {m: {needs: [{rail: a}]}}"
    )
    for scenario in published(two.setting):
        assert set(scenario.waveforms) == {"a", "b"}
