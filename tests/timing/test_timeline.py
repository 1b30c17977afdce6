"""Timelines of the sound example and of small descriptions: scenarios, closed forms, missing facts, what is kept."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from typing import Any

import pytest
from scipy.integrate import solve_ivp

from tests.rules.sound import patched
from tidegate.lint.graph.dependency import build
from tidegate.lint.timing.evaluate import LoadState
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.slack import assert_slack, release_slack
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import GivenSupply, MadeSupply
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines
from tidegate.lint.timing.waveform import Waveform


def lines_of(patch: dict[str, Any] | None = None) -> Timelines:
    description = patched(json.dumps(patch or {})).description
    return timelines(description, build(description))


def named(lines: Sequence[Timeline], name: str) -> Timeline:
    return next(line for line in lines if line.scenario.name == name)


def test_every_kind_of_start_and_fall_is_there() -> None:
    lines = lines_of()
    assert [line.scenario.name for line in lines.starts] == [
        "fastest ramp", "slowest ramp", "ramp that goes back", "residual charge", "off and on again", "plug_in",
    ]  # fmt: skip
    assert [line.scenario.name for line in lines.falls] == ["fastest power-down", "slowest power-down"]
    assert [line.scenario.name for line in lines.published] == [
        "ISO 16750-2 slow decrease and increase", "ISO 16750-2 reset behaviour",
    ]  # fmt: skip
    alone = lines.alone("vcore")
    assert alone is not None
    assert alone.scenario.name == "vcore falls"


def test_the_fastest_ramp_by_hand() -> None:
    line = named(lines_of().starts, "fastest ramp")
    slope = 1.8 / 50e-6
    reference = line.states["ref_fast"]
    assert isinstance(reference, On)
    # Works from 1.06 V at the latest (and from 0 V on for all that is said), settles in 5 us to 60 us.
    assert reference.may_be_off == ((-FOREVER_S, pytest.approx(1.06 / slope + 60e-6)),)
    assert reference.may_be_on[0][0] == pytest.approx(5e-6, rel=1e-6)
    error_v = 0.005 * 1.677 + 3 * 0.4e-3 / 0.367
    uv = line.states["uv"]
    assert isinstance(uv, Decision)
    assert uv.may_release[0][0] == pytest.approx((1.677 - error_v) / slope + 0.5e-6 + 0.3e-6)
    assert uv.may_assert[-1][1] == pytest.approx((1.677 + error_v) / slope + 1.5e-6 + 2e-6)
    regulator = line.states["core_regulator"]
    assert isinstance(regulator, LoadState)
    assert regulator.ready.may_be_off == ((-FOREVER_S, pytest.approx(1.06 / slope + 60e-6 + 80e-6)),)


def test_a_made_rail_follows_its_maker() -> None:
    line = named(lines_of().starts, "slowest ramp")
    rail, maker = line.states["vcore"], line.states["core_regulator"]
    assert isinstance(rail, MadeSupply)
    assert isinstance(maker, LoadState)
    on_s, surely_s = maker.running.may_be_on[0][0], maker.running.may_be_off[0][1]
    high = rail.may_be_high(rising_v=0.6, falling_v=0.6)
    low = rail.may_be_low(rising_v=0.6, falling_v=0.6)
    # Half of 1.2 V after half of the slowest rise of 2 ms, and 20 us to 200 us after the regulator is on.
    assert high[0][0] == pytest.approx(on_s + 20e-6 + 1e-3)
    assert low[0][1] == pytest.approx(surely_s + 200e-6 + 1e-3)
    assert rail.may_be_high(rising_v=1.3, falling_v=1.3) == ()


def test_a_rail_after_another_comes_late_by_its_delay() -> None:
    lines = lines_of({
        "rails": {"vio": {"nominal": "3.3 V", "after": "avdd", "delay": {"min": "1 ms", "max": "3 ms"},
                          "rise": {"min": "100 us", "max": "1 ms"}}},
    })  # fmt: skip
    rail = named(lines.starts, "fastest ramp").states["vio"]
    assert isinstance(rail, GivenSupply)
    # avdd is up at the least level it is guaranteed for, 1.6 V of 1.8 V in 50 us.
    assert rail.least_s == pytest.approx(50e-6 * 1.6 / 1.8 + 1e-3)
    assert rail.most_s == pytest.approx(50e-6 * 1.6 / 1.8 + 3e-3)


def test_hold_up_against_the_discharge_solved_by_scipy() -> None:
    """With no collapse stated, the fall is that of 10 uF under 29 mA: when it leaves 1.6 V, by C dV/dt = -I."""
    lines = lines_of({"rails": {"avdd": {"collapse": None}}})
    line = lines.alone("avdd")
    assert line is not None
    assert line.scenario.about == "avdd falls at 2.9 V/ms, by its hold-up"

    def leaves(_: float, v: Any) -> float:
        return float(v[0] - 1.6)

    done = solve_ivp(lambda *_: [-29e-3 / 10e-6], (0.0, 1e-3), [1.8], events=leaves, rtol=1e-10)
    works = dict(lines.read.parts["core_regulator"].works)["avdd"]  # type: ignore[union-attr]
    slack = assert_slack(line, "core_regulator", rail="avdd", works=works)
    assert slack is not None
    assert slack.then_s == pytest.approx(float(done.t_events[0][0]), rel=1e-8)


def test_a_release_delay_of_an_rc_stage_by_its_closed_form() -> None:
    """1 Mohm and 300 pF to 63.2 % of the supply take R C: the release comes that much later, the assertion does not."""
    rc_s = 1e6 * 300e-12
    delay_s = -rc_s * math.log(1.0 - (1.0 - math.exp(-1.0)))
    assert delay_s == pytest.approx(rc_s)
    exact = {"output_stages": {"rst_out": {"release_delay": f"{delay_s!r} s"}}}
    states = named(lines_of(exact).starts, "fastest ramp").states
    gather, last = states["gather"], states["rst_out"]
    assert isinstance(gather, Decision)
    assert isinstance(last, Decision)
    # What is unknown at the input of the stage may run the delay down as well as a release.
    free_s = min(gather.may_release[0][0], gather.may_be_unknown[0][0])
    assert last.may_release[0][0] == pytest.approx(max(free_s + delay_s, gather.may_release[0][0]) + 10e-9)


def test_a_dip_too_short_to_discharge_leaves_no_delay() -> None:
    """The bounce of the plug resets for some time; without a discharge nothing of the delay is left after it."""
    with_it, without = lines_of(), lines_of({"output_stages": {"rst_out": {"discharge": "none"}}})
    sound = release_slack(named(with_it.starts, "plug_in"), "core_regulator")
    worse = release_slack(named(without.starts, "plug_in"), "core_regulator")
    assert sound is not None
    assert worse is not None
    assert worse.slack_s < sound.slack_s


def test_rails_without_an_order_come_late_and_early() -> None:
    def rail(number: int) -> dict[str, Any]:
        return {f"v{number}": {"nominal": "1 V", "rise": {"min": "1 ms", "max": "2 ms"}}}

    two = lines_of({"rails": rail(1)})
    assert [line.scenario.name for line in two.starts if "late" in line.scenario.name] == ["avdd late", "v1 late"]
    nine = lines_of({"rails": {name: entry for n in range(8) for name, entry in rail(n).items()}})
    groups = [line.scenario for line in nine.starts if "late" in line.scenario.name]
    assert len(groups) == 8  # two for each bit of nine rails
    begins = [{name: waveform.points[0][0] for name, waveform in group.waveforms.items()} for group in groups]
    rails = list(begins[0])
    for first in rails:
        for second in rails:
            assert first == second or any(begin[first] > begin[second] for begin in begins)


def test_what_is_missing_is_named_with_the_end_that_is() -> None:
    lines = lines_of({
        "references": {"ref_fast": {"settling": {"max": None}}}, "rails": {"avdd": {"rise": {"min": None}}},
        "loads": {"core_regulator": {"ready": None}},
    })  # fmt: skip
    assert lines.gaps("uv").facts == ("references.ref_fast.settling.max",)
    assert lines.gaps("uv", scenes=(Scene.START,)).untried == ("rails.avdd.rise.min",)
    assert "loads.core_regulator.ready" in lines.gaps("core_regulator", own=True).facts
    assert "loads.core_regulator.ready" not in lines.gaps("core_logic", own=True).facts


def test_a_loop_that_nothing_starts_never_comes_up() -> None:
    """A reference on a bias that copies it, without a start-up circuit; with one, both come up."""
    loop = {
        "references": {"ref_fast": {"bias": "bias_main", "start_up": "none", "self_biased": False}},
        "biases": {"bias_main": {"domain": "aon"}},
    }
    dead = named(lines_of(loop).starts, "fastest ramp").states["ref_fast"]
    assert isinstance(dead, On)
    assert dead.may_be_on == ()
    loop["references"]["ref_fast"]["start_up"] = {"by": "a kick", "least_slope": "0 V/s"}
    alive = named(lines_of(loop).starts, "fastest ramp").states["ref_fast"]
    assert isinstance(alive, On)
    assert alive.may_be_off[-1][1] < FOREVER_S


def test_timelines_are_made_once_for_a_description() -> None:
    description = patched("").description
    graph = build(description)
    assert timelines(description, graph) is timelines(description, graph)
    assert timelines(description, build(description)) is not timelines(description, graph)


def test_any_scenario_can_be_tried() -> None:
    lines = lines_of()
    steps = Waveform(((0.0, 0.0), (0.0, 1.8)))
    line = lines.at(Scenario("step", "at once", Scene.START, {"avdd": steps}))
    regulator = line.states["core_regulator"]
    assert isinstance(regulator, LoadState)
    assert regulator.fed.may_be_on == ((0.0, FOREVER_S),)


def test_the_published_steps_go_down_by_five_per_cent() -> None:
    """ISO 16750-2, clause 4.6.2, second-hand: steps of 5 % of the least supply, here 1.71 V, down to 0 V."""
    lines = lines_of()
    waveform = named(lines.published, "ISO 16750-2 reset behaviour").scenario.waveforms["avdd"]
    lows = sorted({round(level_v, 9) for _, level_v in waveform.points}, reverse=True)
    assert lows == [round(1.71 * (20 - step) / 20, 9) for step in range(21)]
    slow = named(lines.published, "ISO 16750-2 slow decrease and increase").scenario.waveforms["avdd"]
    assert slow.points[1] == (pytest.approx(1.8 / 0.5 * 60.0), 0.0)
