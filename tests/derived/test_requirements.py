"""What the levels of a detector must keep, held against hand arithmetic on small descriptions."""

from __future__ import annotations

from typing import Any

import pytest

from tests.derived.small import case_on, description, detector, span, volts
from tidegate.lint.derived.levels.requirements import Requirement, requirements

# Common practice, no source: signed off from 1.60 V, error +-10 mV, hysteresis 50 mV, placed to guarantee.
UNDER = ((1.60, 1.62), (1.65, 1.67))
# The same error and hysteresis placed the other way round: always released above 1.60 V.
UNDER_REVERSED = ((1.53, 1.55), (1.58, 1.60))
OVER = ((1.98, 2.00), (2.03, 2.05))
POWER_ON = ((1.10, 1.30), (1.20, 1.40))

Levels = tuple[tuple[float, float], tuple[float, float]]


def found(role: str, levels: Levels, *, works: Any = None, **rail: Any) -> dict[str, Requirement]:
    """The requirements of a detector by name; it answers 1 us after the crossing."""
    made = description({"det": detector(role, *levels, delay="1 us")}, works=works, **rail)
    case = case_on(made, "det")
    kept = [(due, due.work_out(case, made.comparators["det"])) for due in requirements(made.comparators["det"])]
    assert case.reading.exact
    for due, one in kept:
        assert one is None or (one.name, one.end) == (due.name, due.end)
    return {due.name: one for due, one in kept if one is not None}


def margin_v(name: str, role: str, levels: Levels, **facts: Any) -> float:
    return found(role, levels, **facts)[name].margin_v


def supply(least: float, most: float, *, ripple: float = 0.0, step: float = 0.0) -> dict[str, Any]:
    """What is delivered; a load step of 1 A through an impedance that drops ``step`` volts."""
    return {
        "delivered": span((least, most)), "ripple": {"peak_to_peak": volts(ripple)}, "load_step": "1 A",
        "source_impedance": f"{step} ohm",
    }  # fmt: skip


ANY = supply(1.8, 1.85)


def test_sign_off_example_guarantees_with_nothing_to_spare() -> None:
    assert margin_v("protects", "under_voltage", UNDER, works={"min": "1.6 V"}, **ANY) == pytest.approx(0.0, abs=1e-12)


def test_sign_off_example_the_other_way_round_is_silent_for_70_mv() -> None:
    short_v = margin_v("protects", "under_voltage", UNDER_REVERSED, works={"min": "1.6 V"}, **ANY)
    assert short_v == pytest.approx(1.53 - 1.60, abs=1e-12)


# Hand arithmetic on the levels above; every input other than 0. A rail that moves 20 mV/us or 30 mV/us for 1 us.
MARGINS = {
    "under-voltage protects": (
        ("protects", "under_voltage", UNDER), {"works": {"min": "1.55 V"}, "collapse": "20 mV/us", **ANY},
        1.60 - 0.02 - 1.55,
    ),
    "under-voltage quiet": (
        ("quiet", "under_voltage", UNDER), {"works": {"min": "1.5 V"}, **supply(1.71, 1.9, ripple=0.02, step=0.03)},
        1.71 - 0.01 - 0.03 - 1.62,
    ),
    "under-voltage comes back": (
        ("comes back", "under_voltage", UNDER),
        {"works": {"min": "1.5 V"}, **supply(1.70, 1.9, ripple=0.02, step=0.03)}, 1.70 - 0.01 - 1.67,
    ),
    "over-voltage protects": (
        ("protects", "over_voltage", OVER), {"works": {"max": "2.1 V"}, "overshoot": "30 mV/us", **ANY},
        2.10 - 2.05 - 0.03,
    ),
    "over-voltage quiet": (
        ("quiet", "over_voltage", OVER), {"works": {"max": "2.1 V"}, **supply(1.71, 1.89, ripple=0.04, step=0.03)},
        2.03 - 1.89 - 0.02,
    ),
    "over-voltage comes back": (
        ("comes back", "over_voltage", OVER), {"works": {"max": "2.1 V"}, **supply(1.71, 1.89, ripple=0.04)},
        1.98 - 1.89 - 0.02,
    ),
    "power-on protects": (("protects", "power_on", POWER_ON), {"works": {"min": "1 V"}, **ANY}, 1.10 - 1.0),
    "power-on quiet": (
        ("quiet", "power_on", POWER_ON), {"works": {"min": "1 V"}, **supply(1.62, 1.9, ripple=0.02, step=0.03)},
        1.62 - 0.01 - 0.03 - 1.30,
    ),
    "power-on comes back": (
        ("comes back", "power_on", POWER_ON), {"works": {"min": "1 V"}, **supply(1.62, 1.9, ripple=0.02)},
        1.62 - 0.01 - 1.40,
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", MARGINS)
def test_margin_by_hand(name: str) -> None:
    asked, facts, expected_v = MARGINS[name]
    assert margin_v(*asked, **facts) == pytest.approx(expected_v, abs=1e-12)


def test_power_on_lets_go_before_under_voltage() -> None:
    """1.65 V is where the under-voltage detector lets go at the earliest, 1.40 V where power-on does at the latest."""
    both = {"por": detector("power_on", *POWER_ON), "uv": detector("under_voltage", *UNDER)}
    made = description(both, works={"min": "1 V"}, **ANY)
    case, power_on = case_on(made, "por"), made.comparators["por"]
    order = next(due for due in requirements(power_on) if due.name == "lets go in order").work_out(case, power_on)
    assert order is not None
    assert order.margin_v == pytest.approx(1.65 - 1.40, abs=1e-12)
    assert "lets go in order" not in found("under_voltage", UNDER, works={"min": "1 V"}, **ANY)


def test_a_power_on_detector_that_guards_a_load_alone_allows_for_the_fall_of_the_rail() -> None:
    """30 mV/us for 1 us; where an under-voltage detector stands, the load is none of its business."""
    alone = margin_v("protects", "power_on", POWER_ON, works={"min": "1 V"}, collapse="30 mV/us", **ANY)
    assert alone == pytest.approx(1.10 - 0.03 - 1.0, abs=1e-12)


def test_power_on_protects_with_whichever_level_is_lower() -> None:
    lower = margin_v("protects", "power_on", ((1.20, 1.30), (1.15, 1.30)), works={"min": "1 V"}, **ANY)
    assert lower == pytest.approx(0.15, abs=1e-12)


@pytest.mark.parametrize(
    ("role", "levels", "works"),
    [
        ("under_voltage", UNDER, {"min": "1.5 V"}), ("over_voltage", OVER, {"max": "2.1 V"}),
        ("power_on", POWER_ON, {"min": "1 V"}),
    ],
)  # fmt: skip
def test_a_millivolt_higher_moves_every_margin_by_one(role: str, levels: Levels, works: Any) -> None:
    """Under-voltage and power-on: protects gains, the rest lose; over-voltage: protects loses, the rest gain."""
    higher: Any = tuple((least + 0.001, most + 0.001) for least, most in levels)
    before, after = (found(role, each, works=works, **supply(1.7, 1.9)) for each in (levels, higher))
    moved = {name: after[name].margin_v - before[name].margin_v for name in before}
    gains = 1.0 if role != "over_voltage" else -1.0
    expected = {name: 0.001 * (gains if name == "protects" else -gains) for name in before}
    assert moved == {name: pytest.approx(by_v, abs=1e-12) for name, by_v in expected.items()}
