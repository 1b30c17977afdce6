"""Start-ups made from what rails say of themselves, each waveform by hand."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import msgspec
import pytest

from tests.timing.bare import bare
from tests.timing.random_subsystems import comparator, source
from tidegate.lint.quantity import Duration, Voltage
from tidegate.lint.timing.parts import NOTHING, Bounds, ComparatorPart
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import starts, untried

Points = tuple[tuple[float, float], ...]

ONE = """
rails:
  a:
    nominal: 2 V
    rise: {min: 1 ms, max: 10 ms}
    fall: {min: 4 ms, max: 40 ms}
"""
TWO = ONE + "  b: {nominal: 1 V, rise: {min: 3 ms, max: 20 ms}, fall: {min: 8 ms, max: 9 ms}}\n"


def tried(text: str) -> Mapping[str, Scenario]:
    made = list(starts(bare(text).setting))
    assert len({scenario.name for scenario in made}) == len(made)
    return {scenario.name: scenario for scenario in made}


def points(scenario: Scenario, rail: str = "a") -> Any:
    return pytest.approx(
        [number for point in scenario.waveforms[rail].points for number in point], rel=1e-12, abs=1e-15
    )


def flat(*numbers: float) -> list[float]:
    return list(numbers)


def test_fastest_and_slowest() -> None:
    found = tried(TWO)
    fast, slow = found["fastest ramp"], found["slowest ramp"]
    assert flat(0.0, 0.0, 1e-3, 2.0) == points(fast)
    assert flat(0.0, 0.0, 3e-3, 1.0) == points(fast, "b")
    assert flat(0.0, 0.0, 10e-3, 2.0) == points(slow)
    assert flat(0.0, 0.0, 20e-3, 1.0) == points(slow, "b")
    assert (fast.fast, slow.fast) == (True, False)
    assert fast.in_sequence
    assert slow.in_sequence
    assert fast.scene is slow.scene is Scene.START
    assert (fast.rises_s, slow.rises_s, fast.rail) == (0.0, 0.0, "")
    assert fast.about == "every rail rises as fast as it may"
    assert slow.about == "every rail rises as slowly as it may"


def test_without_a_rail_that_can_rise_only_what_is_described_is_tried() -> None:
    assert tried("rails: {a: {nominal: 2 V}}") == {}
    assert list(tried("rails: {a: {nominal: 2 V, rise: {min: 1 ms}}}")) == ["fastest ramp"]
    assert tried("rails: {a: {rise: {min: 1 ms, max: 2 ms}}}") == {}
    assert list(tried(ONE)) == ["fastest ramp", "slowest ramp"]
    assert type(bare(ONE).setting).__struct_config__.frozen


DIP = "    dip: {depth: 0.2 V}\n"


@pytest.mark.parametrize(
    ("dip", "expected"),
    [
        # 5 ms a volt. Without a detector it goes back at half of nominal.
        ("{depth: 0.2 V}", flat(0.0, 0.0, 5e-3, 1.0, 6e-3, 0.8, 12e-3, 2.0)),
        ("{depth: 0.2 V, at: {min: 1.2 V, max: 1.4 V}}", flat(0.0, 0.0, 6e-3, 1.2, 7e-3, 1.0, 12e-3, 2.0)),
        ("{depth: 0.2 V, at: {min: 0.2 V, max: 0.6 V}}", flat(0.0, 0.0, 3e-3, 0.6, 4e-3, 0.4, 12e-3, 2.0)),
        ("{depth: 0.2 V, at: {min: 0.2 V, max: 1.6 V}}", flat(0.0, 0.0, 5e-3, 1.0, 6e-3, 0.8, 12e-3, 2.0)),
        ("{depth: 0.2 V, at: {max: 0.6 V}}", flat(0.0, 0.0, 3e-3, 0.6, 4e-3, 0.4, 12e-3, 2.0)),
        ("{depth: 0.2 V, at: {min: 1.2 V}}", flat(0.0, 0.0, 6e-3, 1.2, 7e-3, 1.0, 12e-3, 2.0)),
        # As deep as it is high, and deeper: down to nothing.
        ("{depth: 1 V}", flat(0.0, 0.0, 5e-3, 1.0, 10e-3, 0.0, 20e-3, 2.0)),
        ("{depth: 1.5 V}", flat(0.0, 0.0, 5e-3, 1.0, 10e-3, 0.0, 20e-3, 2.0)),
        ("{depth: {min: 0.1 V, max: 0.2 V}}", flat(0.0, 0.0, 5e-3, 1.0, 6e-3, 0.8, 12e-3, 2.0)),
    ],
)
def test_a_ramp_that_goes_back(dip: str, expected: list[float]) -> None:
    found = tried(f"{ONE}    dip: {dip}\n")["ramp that goes back"]
    assert expected == points(found)
    assert (found.fast, found.in_sequence, found.scene) == (False, True, Scene.START)


def test_a_dip_that_has_an_upper_end_alone_may_be_anywhere_below() -> None:
    found = tried(ONE.replace("2 V", "1 V") + "    dip: {depth: 0.2 V, at: {max: 0.9 V}}\n")["ramp that goes back"]
    assert flat(0.0, 0.0, 5e-3, 0.5, 7e-3, 0.3, 14e-3, 1.0) == points(found)  # 10 ms a volt


@pytest.mark.parametrize("dip", ["{depth: 0 V}", "{at: {min: 1 V, max: 1.2 V}}", "{depth: {min: 0.1 V}}"])
def test_a_dip_that_is_not_known_or_nothing_is_none(dip: str) -> None:
    assert "ramp that goes back" not in tried(f"{ONE}    dip: {dip}\n")


def test_a_rail_beside_one_that_goes_back_rises_slowly_if_it_never_does() -> None:
    beside = TWO.replace("  b:", f"{DIP}  b:")
    assert set(tried(beside)["ramp that goes back"].waveforms) == {"a"}  # nobody knows whether b goes back
    found = tried(beside.replace("max: 9 ms}", "max: 9 ms}, dip: none"))["ramp that goes back"]
    assert flat(0.0, 0.0, 20e-3, 1.0) == points(found, "b")
    assert flat(0.0, 0.0, 5e-3, 1.0, 6e-3, 0.8, 12e-3, 2.0) == points(found)


def detector(name: str, least_v: float, *, watches: str = "a", over: bool = False) -> ComparatorPart:
    made = comparator(
        name, needs=(), works_from=NOTHING, rising=Bounds(least_v, 9.0), falling=Bounds(0.3, 0.3), delay=NOTHING
    )
    return msgspec.structs.replace(made, watches=watches, over=over)


@pytest.mark.parametrize(
    ("highest", "at_v"),
    [
        (detector("uv", 1.4), 1.4),  # where the highest of its detectors is about to decide
        (detector("uv", 0.2), 0.4),
        (detector("uv", 1.4, over=True), 0.4),
        (detector("uv", 1.4, watches="b"), 0.4),
        (detector("uv", 2.5), 2.0),  # above nominal, where no ramp comes: at its end
    ],
)
def test_a_rail_goes_back_where_a_detector_is_about_to_decide(highest: ComparatorPart, at_v: float) -> None:
    fed = source("ref", needs=(), works_from=NOTHING, settling=NOTHING)
    setting = msgspec.structs.replace(
        bare(f"{ONE}{DIP}").setting, by_rail={"a": [fed, detector("low", 0.4), highest], "b": [detector("other", 1.8)]}
    )
    found = next(scenario for scenario in starts(setting) if scenario.name == "ramp that goes back")
    expected = flat(0.0, 0.0, at_v * 5e-3, at_v, (at_v + 0.2) * 5e-3, at_v - 0.2, 12e-3, 2.0)
    assert expected == points(found)


# From what an earlier time on left behind


@pytest.mark.parametrize(
    ("residual", "expected"),
    [
        ("0.5 V", flat(0.0, 0.5, 0.75e-3, 2.0)),
        ("{min: 0.1 V, max: 0.5 V}", flat(0.0, 0.5, 0.75e-3, 2.0)),
        ("3 V", flat(0.0, 2.0, 0.0, 2.0)),
    ],
)
def test_residual_charge(residual: str, expected: list[float]) -> None:
    found = tried(f"{ONE}    residual: {residual}\n")["residual charge"]
    assert expected == points(found)
    assert (found.fast, found.in_sequence, found.scene, found.rises_s) == (True, True, Scene.START, 0.0)


def test_residual_charge_is_told_rail_by_rail_in_few_words() -> None:
    text = TWO.replace("  b:", "    residual: 0.5 V\n  b:")
    assert tried(text)["residual charge"].about == "the fastest ramp, with a at 500 mV"
    both = text.replace("max: 9 ms}", "max: 9 ms}, residual: 0 V")
    assert tried(both)["residual charge"].about == "the fastest ramp, with a at 500 mV, b at 0 V"
    assert "residual charge" not in tried(f"{ONE}    residual: 0 V\n")
    assert "residual charge" not in tried(ONE)


@pytest.mark.parametrize(("last", "length"), [("bcde1", 120), ("bcde12", 121)])
def test_of_many_rails_no_more_is_told_than_fits(last: str, length: int) -> None:
    names = [last, "bcde1234", "bcde1235", "bcde1236", "bcde1237", "x"]  # by id
    rail = "  {}: {{nominal: 1 V, rise: {{min: 1 ms, max: 2 ms}}, residual: 0.1 V, after: a}}\n"
    text = ONE.replace("    fall", "    residual: 10 mV\n    fall") + "".join(map(rail.format, names))
    whole = "a at 10 mV" + "".join(f", {name} at 100 mV" for name in names)
    assert len(whole) == length
    told = whole if length <= 120 else f"{whole[:117]}..."
    assert tried(text)["residual charge"].about == f"the fastest ramp, with {told}"


OFF = "    residual: 0.5 V\n    off_time: {min: 20 ms}\n"


def test_off_and_on_again() -> None:
    found = tried(ONE + OFF)["off and on again"]
    # Down to 0.5 V of 2 V in 3/4 of 4 ms; off for 20 ms from when all are down, 4 ms; up again in 3/4 of 1 ms.
    assert flat(0.0, 2.0, 3e-3, 0.5, 24e-3, 0.5, 24.75e-3, 2.0) == points(found)
    assert found.rises_s == pytest.approx(24e-3)
    assert (found.scene, found.fast, found.in_sequence) == (Scene.CYCLE, True, False)


def test_off_for_no_time_at_all() -> None:
    found = tried(ONE + "    off_time: 0 s\n")["off and on again"]
    assert flat(0.0, 2.0, 4e-3, 0.0, 4e-3, 0.0, 5e-3, 2.0) == points(found)
    assert found.rises_s == pytest.approx(4e-3)


def test_off_and_on_again_waits_for_the_slowest_and_the_longest() -> None:
    text = TWO.replace("  b:", f"{OFF}  b:").replace("max: 9 ms}}", "max: 9 ms}, off_time: 30 ms}")
    found = tried(text)["off and on again"]
    assert flat(0.0, 2.0, 3e-3, 0.5, 38e-3, 0.5, 38.75e-3, 2.0) == points(found)
    assert flat(0.0, 1.0, 8e-3, 0.0, 38e-3, 0.0, 41e-3, 1.0) == points(found, "b")
    assert found.rises_s == pytest.approx(38e-3)


@pytest.mark.parametrize(
    "text",
    [
        ONE,
        ONE + "    off_time: {max: 20 ms}\n",
        (ONE + OFF).replace("{min: 4 ms, max: 40 ms}", "{max: 40 ms}"),
    ],
)
def test_without_its_facts_off_and_on_again_is_not_tried(text: str) -> None:
    assert "off and on again" not in tried(text)


# Out of order


def rails(count: int, *, after: str = "") -> str:
    rail = "  v{}: {{nominal: 1 V, rise: {{min: {} ms, max: 50 ms}}{}}}\n"
    return "rails:\n" + "".join(rail.format(n, n, after if n == 1 else "") for n in range(1, count + 1))


def late_of(text: str) -> dict[str, set[str]]:
    """Which rails come late, scenario by scenario of those that say so."""
    return {
        name: {rail for rail, waveform in scenario.waveforms.items() if waveform.points[0][0] > 0.0}
        for name, scenario in tried(text).items() if "late" in name or "early" in name
    }  # fmt: skip


def test_one_late_and_one_early() -> None:
    assert late_of(rails(1)) == {}
    assert late_of(rails(2)) == {"v1 late": {"v1"}, "v2 late": {"v2"}}
    assert late_of(rails(3)) == {
        "v1 late": {"v1"}, "v2 late": {"v2"}, "v3 late": {"v3"},
        "v1 early": {"v2", "v3"}, "v2 early": {"v1", "v3"}, "v3 early": {"v1", "v2"},
    }  # fmt: skip
    assert len(late_of(rails(4))) == 8
    assert late_of(rails(3, after=", after: v3, delay: 1 ms")) == {"v2 late": {"v2"}, "v3 late": {"v3"}}


def test_more_than_a_few_rails_come_late_in_groups() -> None:
    # Numbers from 0 in binary, the last bit first: v1 000, v2 001, v3 010, v4 011, v5 100.
    assert late_of(rails(5)) == {
        "rails late, group 1": {"v2", "v4"}, "rails late, group 2": {"v1", "v3", "v5"},
        "rails late, group 3": {"v3", "v4"}, "rails late, group 4": {"v1", "v2", "v5"},
        "rails late, group 5": {"v5"}, "rails late, group 6": {"v1", "v2", "v3", "v4"},
    }  # fmt: skip
    assert len(late_of(rails(8))) == 6
    assert len(late_of(rails(9))) == 8
    about = tried(rails(5))["rails late, group 1"].about
    assert about == "2 of the rails rise when all else has come to rest"


def test_what_comes_late_comes_when_all_else_rests() -> None:
    found = tried(rails(3))
    late, early = found["v1 late"], found["v1 early"]
    # Everything else has risen within 3 ms, and a second is longer than anything of this description takes.
    assert flat(1.003, 0.0, 1.004, 1.0) == points(late, "v1")
    assert flat(0.0, 0.0, 3e-3, 1.0) == points(late, "v3")
    assert flat(0.0, 0.0, 1e-3, 1.0) == points(early, "v1")
    assert flat(1.003, 0.0, 1.006, 1.0) == points(early, "v3")
    assert late.rises_s == early.rises_s == pytest.approx(1.003)
    assert (late.scene, late.fast, late.in_sequence) == (Scene.START, True, True)
    assert late.about == "v1 rises when all else has come to rest"
    assert early.about == "v1 rises long before the others"


# Described, and not tried


def test_a_described_scenario_follows_its_points_and_leaves_the_rest_at_nominal() -> None:
    text = (
        TWO
        + """  c: {made_by: m, nominal: 1 V}
loads: {m: {needs: [{rail: a}]}}
scenarios:
  plug:
    note: it bounces
    waveforms:
      - {rail: a, points: [{at: 0 s, level: 0 V}, {at: 2 ms, level: {min: 1 V, max: 2 V}}]}
  bare: {waveforms: [{rail: c, points: [{at: 1 s, level: 0.5 V}]}]}
"""
    )
    found = tried(text)
    plug, bare_ = found["plug"], found["bare"]
    assert flat(0.0, 0.0, 2e-3, 1.5) == points(plug)
    assert flat(0.0, 1.0) == points(plug, "b")
    assert set(plug.waveforms) == {"a", "b"}
    assert flat(0.0, 2.0) == points(bare_)
    assert flat(1.0, 0.5) == points(bare_, "c")
    assert (plug.about, bare_.about) == ("it bounces", "described")
    assert plug.scene is Scene.OWN
    assert (plug.fast, plug.in_sequence, plug.rises_s) == (True, False, 0.0)


PLUG = ONE + "scenarios: {plug: {waveforms: [{rail: a, points: [{at: 0 s, level: 1 V}, {at: 3 s, level: 0 V}]}]}}"


@pytest.mark.parametrize(
    ("half", "expected"),
    [
        (("at", Duration(1.0, None, None)), flat(0.0, 1.0, 3.0, 0.0)),
        (("level", Voltage(None, None, 2.0)), flat(0.0, 1.0, 3.0, 0.0)),
    ],
)
def test_points_of_unknown_time_or_level_are_left_out(half: tuple[str, Any], expected: list[float]) -> None:
    """No file can say so (it is refused when it is read); a description that is built in memory can."""
    setting = bare(PLUG).setting
    plug = setting.description.scenarios["plug"]
    (waveform,) = plug.waveforms
    first, last = waveform.points
    unknown = msgspec.structs.replace(first, **dict([half]))

    def with_points(*points_: Any) -> Scenario:
        changed = msgspec.structs.replace(plug, waveforms=(msgspec.structs.replace(waveform, points=points_),))
        description = msgspec.structs.replace(setting.description, scenarios={"plug": changed})
        return list(starts(msgspec.structs.replace(setting, description=description)))[-1]

    assert expected == points(with_points(first, unknown, last))
    assert flat(0.0, 2.0) == points(with_points(unknown))
    assert flat(0.0, 2.0) == points(with_points())


BACK, CHARGE, AGAIN = "a ramp that goes back", "residual charge", "off and on again"


@pytest.mark.parametrize(
    ("facts", "expected"),
    [
        ("", [(BACK, "dip.depth"), (CHARGE, "residual"), (AGAIN, "off_time")]),
        (
            "    dip: {at: 1 V}\n    residual: 0 V\n    off_time: {max: 1 s}\n",
            [(BACK, "dip.depth"), (AGAIN, "off_time.min")],
        ),
        ("    dip: {depth: 0 V}\n    off_time: 1 s\n", [(CHARGE, "residual")]),
        ("    dip: none\n    off_time: 1 s\n    residual: {min: 0 V}\n", [(CHARGE, "residual.max")]),
        ("    dip: {depth: 0 V}\n    off_time: 1 s\n    residual: 0 V\n", []),
        # A dip of which it is not said where it is may be anywhere, and one place alone is tried.
        ("    dip: {depth: 1 mV}\n    off_time: 1 s\n    residual: 0 V\n", [(f"{BACK} anywhere", "dip.at")]),
        (
            "    dip: {depth: 1 mV, at: {max: 1 V}}\n    off_time: 1 s\n    residual: 0 V\n",
            [(f"{BACK} anywhere", "dip.at.min")],
        ),
        ("    dip: {depth: 1 mV, at: {min: 0 V, max: 1 V}}\n    off_time: 1 s\n    residual: 0 V\n", []),
    ],
)
def test_what_is_not_tried_names_the_fact(facts: str, expected: list[tuple[str, str]]) -> None:
    found = list(untried(bare(ONE + facts).setting))
    assert [(one.name, one.fact) for one in found] == [(name, f"rails.a.{fact}") for name, fact in expected]
    assert {one.scene for one in found} <= {Scene.START, Scene.CYCLE}


def test_what_a_ramp_lacks_is_not_tried_either() -> None:
    rest = "dip: none, residual: 0 V, off_time: 1 s"
    for ramp, expected in (
        ("rise: {min: 1 ms}, fall: {min: 4 ms}", [("slowest ramp", "rise.max")]),
        ("rise: {max: 1 ms}, fall: {min: 4 ms}", [("fastest ramp", "rise.min")]),
        ("rise: 1 ms, fall: {max: 4 ms}", [(AGAIN, "fall.min")]),
    ):
        found = untried(bare(f"rails: {{a: {{nominal: 2 V, {ramp}, {rest}}}}}").setting)
        assert [(one.name, one.fact) for one in found] == [(name, f"rails.a.{fact}") for name, fact in expected]


def test_only_what_is_certain_is_tried_where_that_is_wanted() -> None:
    """A dip may be anywhere, and what is left on a rail is not said: neither is a course that is there for certain."""
    text = ONE + "    dip: {depth: 0.2 V}\n    off_time: 20 ms\n"
    assert {"ramp that goes back", "off and on again"} <= set(tried(text))
    certain = msgspec.structs.replace(bare(text).setting, certain=True)
    assert [scenario.name for scenario in starts(certain)] == ["fastest ramp", "slowest ramp"]
