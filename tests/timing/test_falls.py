"""Power-downs and dips, each waveform by hand; the critical levels against the time they leave a detector blind."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import msgspec
import pytest

from tests.timing.bare import bare
from tests.timing.random_subsystems import comparator, load, source, stage
from tidegate.lint.derived.supply.steepest_fall import SteepestFall
from tidegate.lint.timing.falls import alone, critical_levels_v, dips, together
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import NOTHING, Bounds, ComparatorPart, ResetPart, TimedPart
from tidegate.lint.timing.ramps import RailRamp, RampLacks
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import Setting
from tidegate.lint.timing.waveform import Waveform

RAILS = """
rails:
  a: {nominal: 2 V, rise: {min: 1 ms, max: 10 ms}, fall: {min: 4 ms, max: 40 ms}, collapse: 500 V/s}
  b: {nominal: 1 V, rise: {min: 3 ms, max: 20 ms}, fall: {min: 8 ms, max: 9 ms}}
"""


def points(scenario: Scenario, rail: str = "a") -> Any:
    return pytest.approx([number for point in scenario.waveforms[rail].points for number in point], rel=1e-8, abs=1e-15)


def test_all_rails_fall_at_once() -> None:
    fast, slow = together(bare(RAILS).setting)
    assert points(fast) == [0.0, 2.0, 4e-3, 0.0]
    assert points(fast, "b") == [0.0, 1.0, 8e-3, 0.0]
    assert points(slow) == [0.0, 2.0, 40e-3, 0.0]
    assert points(slow, "b") == [0.0, 1.0, 9e-3, 0.0]
    assert (fast.name, fast.about) == ("fastest power-down", "every rail falls as fast as it may")
    assert (slow.name, slow.about) == ("slowest power-down", "every rail falls as slowly as it may")
    assert (fast.fast, slow.fast, fast.scene, slow.scene) == (True, False, Scene.FALL, Scene.FALL)


@pytest.mark.parametrize(
    ("fall", "rails"),
    [("{min: 8 ms}", [{"a", "b"}, {"a"}]), ("{max: 9 ms}", [{"a"}, {"a", "b"}])],
)
def test_one_rail_that_does_not_say_how_it_falls_is_left_out(fall: str, rails: list[set[str]]) -> None:
    setting = bare(RAILS.replace("{min: 8 ms, max: 9 ms}", fall)).setting
    assert [set(scenario.waveforms) for scenario in together(setting)] == rails


def test_without_rails_nothing_falls() -> None:
    assert list(together(bare("rails: {a: {nominal: 2 V}}").setting)) == []


def test_one_rail_falls_alone_as_fast_as_it_may() -> None:
    setting = bare(RAILS).setting
    found = alone(setting, "a")
    assert found is not None
    assert points(found) == [0.0, 2.0, 4e-3, 0.0]
    assert set(found.waveforms) == {"a"}
    assert (found.name, found.rail, found.scene) == ("a falls", "a", Scene.FALL)
    assert found.about == "a falls at 500 V/s, by its collapse"
    assert alone(setting, "unknown") is None
    assert alone(bare(RAILS.replace(", collapse: 500 V/s", "")).setting, "a") is None
    assert alone(bare(RAILS.replace("500 V/s", "0 V/s")).setting, "a") is None  # it never falls


# Dips

RAMP = RailRamp(2.0, Bounds(1.8, 1.8), Bounds(1e-3, 10e-3), Bounds(4e-3, 40e-3), SteepestFall(500.0, "its collapse"))
"""2 V; falls at 500 V/s and rises at 2000 V/s at most."""
JUST = 1.0 - 1e-9


def detector(name: str = "uv", *, watches: str = "vdd", over: bool = False, **changes: Any) -> ComparatorPart:
    facts: dict[str, Any] = {
        "works_from": Bounds(0.1, 0.7), "rising": Bounds(1.5, 1.6), "falling": Bounds(1.3, 1.4), "delay": NOTHING,
    }  # fmt: skip
    made = comparator(name, needs=(), **(facts | changes))
    return msgspec.structs.replace(made, watches=watches, over=over)


def levels(*parts: TimedPart) -> list[float]:
    return critical_levels_v(parts, "vdd", RAMP)


def exactly(*expected_v: float) -> Any:
    return pytest.approx(expected_v, rel=1e-12)


def test_the_levels_of_a_detector() -> None:
    # Just below where it surely asserts, where it perhaps does, and just below what it works from.
    assert levels(detector()) == exactly(1.4 * JUST, 1.3, 0.7 * JUST)
    assert levels(detector(over=True)) == exactly(0.7 * JUST)
    assert levels(detector(watches="other")) == exactly(0.7 * JUST)
    assert levels(msgspec.structs.replace(detector(), rail="other")) == exactly(1.4 * JUST, 1.3)


def test_the_levels_of_what_hangs_on_the_rail() -> None:
    ref = source("ref", needs=(), works_from=Bounds(0.2, 1.1), settling=NOTHING)
    out = stage("out", driven_by=(), works_from=Bounds(0.3, 0.6), delay=NOTHING)
    core = load("core", needs=(), works=Bounds(1.2, 1.9), ready=NOTHING)
    net = ResetPart("rst", (), False, (), "vdd", 0.9)
    assert levels(ref, out, core, net) == exactly(1.2 * JUST, 1.1 * JUST, 0.6 * JUST)
    elsewhere = [msgspec.structs.replace(part, rail="other") for part in (ref, out)]
    away = msgspec.structs.replace(core, works=(("other", Bounds(1.2, 1.9)), ("vdd", Bounds(1.0, 1.9))))
    assert levels(*elsewhere, away) == exactly(1.0 * JUST)


def test_levels_at_the_ends_of_the_rail_are_none() -> None:
    ends = [load(name, needs=(), works=Bounds(v, FOREVER_S), ready=NOTHING) for name, v in (("x", 0.0), ("y", 2.5))]
    assert levels(*ends) == []
    assert levels(detector(rising=Bounds(2.2, 2.3), falling=Bounds(2.0, 2.1), works_from=NOTHING)) == []
    assert levels(detector(falling=Bounds(0.0, 0.0), works_from=NOTHING)) == []
    assert levels(load("z", needs=(), works=Bounds(2.0, FOREVER_S), ready=NOTHING)) == exactly(2.0 * JUST)


def _blind_s(level_v: float) -> float:
    """How long a dip to a level that turns round at once stays between 1.3 V going down and 1.5 V coming back."""
    waveform = Waveform(((0.0, 2.0), ((2.0 - level_v) / 500.0, level_v), ((2.0 - level_v) * (1 / 500 + 1 / 2000), 2.0)))
    (first, second) = waveform.above(rising_v=1.5, falling_v=1.3)
    return second[0] - first[1]


def test_as_deep_as_a_dip_can_go_while_the_filter_ignores_it() -> None:
    # Down from 1.3 V and up to 1.5 V: 2.5 ms a volt, and 0.1 ms for the 0.2 V between; 0.9 ms left make 0.36 V.
    found = levels(detector(filter=Bounds(0.0, 1e-3)))
    assert found == [pytest.approx(v, rel=1e-6) for v in (1.4, 1.3, 0.94, 0.7)]
    assert _blind_s(found[2]) == pytest.approx(1e-3 * JUST, rel=1e-12)
    # A filter no longer than the way back from 1.3 V to 1.5 V, or of no known length, adds no level.
    assert len(levels(detector(filter=Bounds(0.0, 1e-4)))) == 3
    assert len(levels(detector(filter=Bounds(0.0, FOREVER_S)))) == 3
    assert len(levels(detector(filter=Bounds(0.0, 1.1e-4)))) == 4


def test_every_level_is_tried() -> None:
    wanted = [1.99 - 0.01 * number for number in range(100)]
    parts = [load(f"l{n}", needs=(), works=Bounds(v, FOREVER_S), ready=NOTHING) for n, v in enumerate(wanted)]
    assert levels(*parts) == exactly(*(v * JUST for v in wanted))


def test_levels_of_which_nothing_is_known_are_none() -> None:
    anywhere = Bounds(-FOREVER_S, FOREVER_S)
    assert levels(detector(falling=anywhere, rising=anywhere, works_from=Bounds(0.0, FOREVER_S))) == []
    assert levels(load("x", needs=(), works=Bounds(FOREVER_S, 0.0), ready=NOTHING)) == []


def dips_of(*parts: TimedPart, ramp: RailRamp = RAMP, long_s: float = 3.0) -> Sequence[Scenario]:
    setting = Setting(bare(RAILS).description, {"vdd": ramp}, {"vdd": list(parts)}, long_s)
    return list(dips(setting, "vdd"))


CORE = load("core", needs=(), works=Bounds(1.2, FOREVER_S), ready=NOTHING)


def test_a_dip_for_long_goes_down_rests_and_comes_back() -> None:
    (only,) = dips_of(CORE)
    assert points(only, "vdd") == [0.0, 2.0, 1.6e-3, 1.2, 3.0016, 1.2, 3.002, 2.0]
    assert only.rises_s == pytest.approx(3.0016)
    assert (only.name, only.about) == ("vdd dips to 1.2 V for long", "vdd dips to 1.2 V for long")
    assert (only.scene, only.rail, only.fast, only.in_sequence) == (Scene.DIP, "vdd", True, False)


def test_a_dip_of_just_less_than_the_slowest_detector_surely_sees() -> None:
    quick = detector("quick", filter=Bounds(0.0, 0.2e-3), works_from=NOTHING)
    slow = detector("slow", filter=Bounds(0.0, 1e-3), works_from=NOTHING)
    high = detector("high", filter=Bounds(0.0, 9.0), over=True, works_from=NOTHING)
    other = detector("other", watches="other", filter=Bounds(0.0, 9.0), works_from=NOTHING)
    found = {scenario.name: scenario for scenario in dips_of(quick, slow, high, other, CORE)}
    # At 1.2 V: from 1.3 V down in 0.2 ms and up to 1.5 V in 0.15 ms, so that 0.65 ms of rest make 1 ms.
    short = found["vdd dips to 1.2 V for 650 us"]
    (first, second) = short.waveforms["vdd"].above(rising_v=1.5, falling_v=1.3)
    assert second[0] - first[1] == pytest.approx(1e-3, rel=1e-8)
    assert second[0] - first[1] < 1e-3
    assert points(short, "vdd") == [0.0, 2.0, 1.6e-3, 1.2, 2.25e-3, 1.2, 2.65e-3, 2.0]
    # At 1.3 V and above it sees nothing; at 0.94 V the way down and back takes 1 ms already.
    back = found["vdd dips to 940 mV and back"]
    assert back.waveforms["vdd"].points[1] == back.waveforms["vdd"].points[2]
    assert {name for name in found if "for long" not in name} >= {short.name, back.name}
    assert not any("1.3 V for" in name and "long" not in name for name in found)
    assert not any(name.startswith("vdd dips to 1.3 V and") for name in found)
    assert not any(name.startswith("vdd dips to 1.4 V and") for name in found)


def test_a_detector_without_a_filter_is_not_blind() -> None:
    names = [scenario.name for scenario in dips_of(detector(works_from=NOTHING), CORE)]
    assert names == [f"vdd dips to {level} V for long" for level in ("1.4", "1.3", "1.2")]
    unknown = detector(works_from=NOTHING, filter=Bounds(0.0, FOREVER_S))
    assert [scenario.name for scenario in dips_of(unknown, CORE)] == names


def test_a_dip_deeper_than_any_rest_allows_turns_round_at_once() -> None:
    slow = detector("slow", filter=Bounds(0.0, 1e-3), works_from=Bounds(0.0, 0.5))
    found = {scenario.name: scenario for scenario in dips_of(slow)}
    back = found["vdd dips to 500 mV and back"]
    assert points(back, "vdd") == [0.0, 2.0, 3e-3, 0.5, 3e-3, 0.5, 3.75e-3, 2.0]
    assert back.rises_s == pytest.approx(3e-3)


def test_a_rail_whose_slopes_are_not_known_does_not_dip() -> None:
    for lacks, falls in ((RampLacks(fast_rise=("x",)), RAMP.steepest), (RampLacks(), SteepestFall(FOREVER_S, ""))):
        assert dips_of(CORE, ramp=msgspec.structs.replace(RAMP, lacks=lacks, steepest=falls)) == []
    other = RampLacks(slow_rise=("x",), fast_fall=("x",), slow_fall=("x",), up=("x",))
    assert len(dips_of(CORE, ramp=msgspec.structs.replace(RAMP, lacks=other))) == 1


def test_a_rail_without_a_ramp_does_not_dip() -> None:
    assert list(dips(Setting(bare(RAILS).description, {}, {"vdd": [CORE]}, 1.0), "vdd")) == []
