"""What the timelines of a description keep, reach and leave as it was; overrides; what is missing, and for what."""

from __future__ import annotations

import json
from typing import Any

import networkx as nx
import pytest

from tests.rules.sound import both, patched, without
from tests.timing.bare import bare
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.evaluate import LoadState, evaluate
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER
from tidegate.lint.timing.order import leans_on
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import ASSERTED, RELEASED, Decision, On
from tidegate.lint.timing.timeline import Timelines
from tidegate.lint.timing.waveform import Waveform


def lines_of(patch: str = "") -> Timelines:
    description = patched(patch).description
    return Timelines(description, build(description))


@pytest.fixture(scope="module")
def sound() -> Timelines:
    return lines_of()


@pytest.mark.parametrize(
    ("domain", "long_s"),
    [
        ("{settling: {max: 10 ms}}", 1.0),
        ("{settling: {max: 20 ms}}", 2.0),
        ("{settling: {min: 50 ms}}", 1.0),  # what is not bounded does not count
        ("{settling: {max: 1 ms}, works_from: 1.5 V}", 1.0),  # nor is a level a time
    ],
)
def test_a_long_time_is_a_second_or_a_hundred_times_the_longest(domain: str, long_s: float) -> None:
    text = f"rails: {{v: {{nominal: 2 V}}}}\ndomains: {{d: {{rail: v, kind: always_on}}}}\nreferences: {{r: {domain}}}"
    lines = bare(text.replace("{settling", "{domain: d, settling"))
    assert lines.setting.long_s == pytest.approx(long_s)
    assert bare("rails: {v: {nominal: 2 V}}").setting.long_s == 1.0
    assert bare("domains: {d: {kind: always_on}}").setting.long_s == 1.0  # nothing to be timed at all


def test_what_hangs_on_each_rail(sound: Timelines) -> None:
    found = {rail: {part.id for part in parts} for rail, parts in sound.setting.by_rail.items()}
    assert found["vcore"] == {"uv_core", "core_logic", "adc"}
    assert found["avdd"] == {
        "ref_fast", "ref_main", "bias_start", "bias_main", "por", "uv", "ov", "uv_core", "por_out", "uv_out", "ov_out",
        "ov_latch", "gather", "rst_out", "core_out", "core_regulator", "adc",
    }  # fmt: skip


def test_in_service_everything_is_up_and_released(sound: Timelines) -> None:
    settled = sound.settled
    for name in ("ref_fast", "ref_main", "bias_main", "analog", "core"):
        assert settled[name] == On(ALWAYS, NEVER)
    for name in ("por_n", "core_rst_n", "uv"):
        assert settled[name] == Decision(NEVER, ALWAYS, NEVER)
    adc = settled["adc"]
    assert isinstance(adc, LoadState)
    assert adc.running == On(ALWAYS, NEVER)


def test_a_scenario_of_one_rail_times_what_it_reaches_alone(sound: Timelines) -> None:
    line = sound.alone("vcore")
    assert line is not None
    reached = nx.descendants(
        nx.DiGraph([(needed, name) for name, part in sound.read.parts.items() for needed in leans_on(part)]), "vcore"
    )
    assert set(line.states) == reached | {"vcore"}
    assert line.states["uv_out"] is sound.settled["uv_out"]  # not reached: as it is in service
    whole = evaluate(sound.network, Scenario("all", "all", Scene.FALL, {
        "avdd": Waveform(((0.0, 1.8),)), **line.scenario.waveforms,
    }))  # fmt: skip
    for name in reached - {"vcore"}:
        assert line.states[name] == whole[name]


def test_what_was_made_once_is_kept(sound: Timelines) -> None:
    for rail in ("avdd", "vcore"):
        assert sound.alone(rail) is sound.alone(rail)
        assert sound.dips(rail) is sound.dips(rail)
        assert [line.scenario.rail for line in sound.dips(rail)] == [rail] * len(sound.dips(rail))
    assert lines_of(without("rails.avdd.collapse", "rails.avdd.hold_up")).alone("avdd") is None
    assert sound.up_v("avdd") == pytest.approx(1.6)


def test_the_network_between_some_elements_and_another(sound: Timelines) -> None:
    # What hangs on ref_fast and is behind the regulator: the detectors and stages that reset it, and itself.
    found = sound.between(["ref_fast"], "core_regulator", rail="")
    assert set(found.parts) == {
        "ref_fast", "uv", "ov", "uv_out", "ov_out", "ov_latch", "gather", "rst_out", "por_n", "core_regulator",
    }  # fmt: skip
    assert set(sound.between(["ref_fast"], "core_regulator", rail="avdd").parts) == set(found.parts)
    assert set(sound.between(["ref_fast"], "core_regulator", rail="vcore").parts) == set()
    two = sound.between(["por", "uv"], "por_n", rail="")
    assert set(two.parts) == {"por", "uv", "por_out", "uv_out", "gather", "rst_out", "por_n"}


# Overrides


def test_an_override_forces_what_it_overrides_and_what_is_behind_it(sound: Timelines) -> None:
    (line,) = [line for line in sound.starts if line.scenario.name == "fastest ramp"]
    bypass = sound.description.bypasses["skip_core"]
    forced = sound.with_override(line, bypass)
    assert forced.scenario is line.scenario
    assert forced.states["uv_core"] == RELEASED
    assert forced.states["gather"] is line.states["gather"]
    free, held = forced.states["core_rst_n"], line.states["core_rst_n"]
    assert isinstance(free, Decision)
    assert isinstance(held, Decision)
    assert free.may_release[0][0] < held.may_release[0][0]
    asserted = lines_of("bypasses: {skip_core: {forces: asserted}}")
    (line,) = [line for line in asserted.starts if line.scenario.name == "fastest ramp"]
    stuck = asserted.with_override(line, asserted.description.bypasses["skip_core"]).states
    assert stuck["uv_core"] == ASSERTED
    never = stuck["core_rst_n"]
    assert isinstance(never, Decision)
    assert never.may_release == NEVER


# Both corners


def _on(lines: Timelines, name: str = "ref_fast") -> On:
    (line,) = [line for line in lines.starts if line.scenario.name == "fastest ramp"]
    found = line.states[name]
    assert isinstance(found, On)
    return found


def test_at_best_a_missing_least_value_is_as_great_as_the_greatest(sound: Timelines) -> None:
    # ref_fast says no least works_from: 0 V at the sure corner, 1.06 V at the best; then 5 us to 60 us more.
    assert _on(sound).may_be_on[0][0] == pytest.approx(5e-6, rel=1e-6)
    assert _on(sound.at_best).may_be_on[0][0] == pytest.approx(50e-6 * 1.06 / 1.8 + 5e-6)
    assert _on(sound.at_best).may_be_off == _on(sound).may_be_off
    assert _on(sound.lone_spread) == _on(sound)  # where the greatest is given, the least may be anything
    uv_out = [lines.starts[0].states["uv_out"] for lines in (sound, sound.at_best)]
    assert all(isinstance(state, Decision) for state in uv_out)


def test_at_best_of_what_is_missing_altogether_nothing_is_certain() -> None:
    lines = lines_of(without("references.ref_fast.settling"))
    assert _on(lines).may_be_off == ALWAYS
    assert _on(lines.at_best) == On(NEVER, ((-FOREVER_S, pytest.approx(50e-6 * 1.06 / 1.8)),))
    assert _on(lines.lone_spread) == _on(lines.at_best)


def test_where_nothing_is_missing_both_corners_are_one() -> None:
    facts = "nominal: 2 V, rise: 1 ms, fall: 1 ms, collapse: 1 V/ms, guaranteed: {min: 1.8 V, max: 2.2 V}"
    known = bare(f"rails: {{v: {{{facts}}}}}")
    assert known.at_best is known
    assert bare("rails: {v: {nominal: 2 V}}").at_best is not bare("rails: {v: {nominal: 2 V}}")


def test_what_is_certain_and_what_is_not_are_tried_by_the_same_courses(sound: Timelines) -> None:
    """But for those that are there only if what is missing turns out so."""
    lines = lines_of("{rails: {avdd: {dip: {at: null}}}, comparators: {uv: {trip: {falling: {max: 1.64 V}}}}}")
    names, certain = ({line.scenario.name for line in each.starts} for each in (lines, lines.at_best))
    assert names - certain == {"ramp that goes back"}
    dips, sure = ({line.scenario.name for line in each.dips("avdd")} for each in (lines, lines.at_best))
    assert sure < dips
    assert {line.scenario.name for line in sound.starts} == {line.scenario.name for line in sound.at_best.starts}


# What is missing


RISE = "rails.avdd.rise.min"
DETECTOR: dict[str, Any] = {"references": {"ref_fast": {"settling": {"min": "5 us"}}}}
START = (Scene.START,)


@pytest.mark.parametrize(
    ("patch", "element", "ask", "facts", "untried"),
    [
        # Names, words and greatest ends of all it leans on; least ones by themselves.
        (without("comparators.uv.domain"), "uv", {}, ["comparators.uv.domain"], []),
        (without("comparators.uv.domain"), "por_n", {}, ["comparators.uv.domain"], []),
        (without("comparators.uv.domain"), "por", {}, [], []),
        (json.dumps(DETECTOR), "uv", {}, ["references.ref_fast.settling.max"], []),
        ("", "ref_fast", {}, [], []),
        (without("comparators.uv.sampling"), "uv", {}, ["comparators.uv.sampling"], []),
        (without("comparators.uv.filter"), "por_n", {}, ["comparators.uv.filter"], []),
        # Ramps, of the rails behind an element and no others.
        (without(RISE), "uv", {"scenes": START}, [], [RISE]),
        (without(RISE), "uv", {}, [], []),
        (without(RISE), "uv", {"falling": ["avdd"]}, [], []),
        (without(RISE), "uv", {"dipping": ["avdd"]}, [], [RISE]),
        (without("rails.avdd.fall.max"), "uv", {"power_down": True}, [], ["rails.avdd.fall.max"]),
        (without("rails.avdd.fall.max"), "uv", {"falling": ["avdd"], "scenes": START}, [], []),
        (
            without("rails.avdd.collapse", "rails.avdd.hold_up"), "uv", {"falling": ["avdd"]}, [],
            ["rails.avdd.collapse"],
        ),
        (without("rails.avdd.collapse"), "uv", {"falling": ["avdd"]}, ["rails.avdd.collapse"], []),  # its hold-up
        (without("rails.vcore.rise.min"), "uv", {"scenes": START}, [], []),
        (without("rails.vcore.rise.min"), "uv_core", {"scenes": START}, ["rails.vcore.rise.min"], []),
        (without("rails.avdd.nominal"), "uv", {}, [], ["rails.avdd.nominal"]),
        (without("rails.avdd.residual"), "uv", {"scenes": START}, [], ["rails.avdd.residual"]),
        (without("rails.avdd.off_time"), "uv", {"scenes": START}, [], []),
        (without("rails.avdd.off_time"), "uv", {"scenes": (Scene.CYCLE,)}, [], ["rails.avdd.off_time"]),
        # A rail that comes after another waits for it, and a detector for the rail that it watches.
        (without(RISE), "vcore", {"scenes": START}, [], [RISE]),
        (without("rails.avdd.guaranteed"), "vcore", {}, ["rails.avdd.guaranteed"], []),
        (without("rails.avdd.guaranteed"), "uv", {}, [], []),
        # Its own time to be ready matters where the load itself is judged.
        (without("loads.adc.ready"), "adc", {"own": True}, ["loads.adc.ready"], []),
        (without("loads.adc.ready"), "adc", {}, [], []),
        (without("loads.core_regulator.ready"), "vcore", {"own": True}, [], []),
        # A net that does not say what it guards may guard any load.
        (
            "resets: {extra: {driven_by: [rst_out], active: low, domain: aon}}", "core_logic", {},
            ["resets.extra.guards"], [],
        ),
    ],
)  # fmt: skip
def test_what_is_missing(patch: str, element: str, ask: dict[str, Any], facts: list[str], untried: list[str]) -> None:
    found = lines_of(patch).gaps(element, **ask)
    assert (list(found.facts), list(found.untried)) == (facts, untried)


def test_least_ends_are_named_by_themselves() -> None:
    assert lines_of().gaps("ref_fast").lone == ("references.ref_fast.works_from.min",)
    gone = lines_of(without("references.ref_fast.settling")).gaps("ref_fast")
    assert gone.facts == ("references.ref_fast.settling",)
    assert gone.lone == ("references.ref_fast.works_from.min",)


def test_where_rails_are_forced_what_makes_them_counts_no_more() -> None:
    lines = lines_of(both(json.dumps(DETECTOR), without("domains.core.kind", "comparators.por.domain")))
    slow = "references.ref_fast.settling.max"
    # core_logic lives on vcore, which the regulator makes from ref_fast; it is reset by detectors that lean on it, too.
    assert set(lines.gaps("core_logic").facts) == {slow, "domains.core.kind", "comparators.por.domain"}
    alone = lines_of(both(
        json.dumps(DETECTOR), "output_stages: {core_out: {driven_by: [por_out]}}"
    ))  # fmt: skip
    assert slow in alone.gaps("core_logic").facts
    assert alone.gaps("core_logic", rails_forced=True).facts == ()
    assert slow in lines.gaps("core_regulator", rails_forced=True).facts
    # What stands behind its reset net, further away than its rail, counts as well.
    late = lines_of("comparators: {uv: {delay: {min: 0.3 us}}}")
    assert late.gaps("core_regulator", rails_forced=True).facts == ("comparators.uv.delay.max",)


def test_numbers_that_cannot_be_are_raised_where_they_are_behind_what_is_asked() -> None:
    lines = lines_of("rails: {vcore: {nominal: 0 V}}")
    with pytest.raises(DomainError, match="nominal_v"):
        lines.gaps("uv_core")
    assert lines.gaps("uv").untried == ()


def test_behind_an_element_stands_all_it_leans_on(sound: Timelines) -> None:
    assert set(sound.behind("ref_fast")) == {"ref_fast", "aon", "avdd"}
    assert set(sound.behind("uv_core")) == {
        "uv_core", "aon", "avdd", "bias_start", "ref_fast", "vcore", "core_regulator", "por_n", "rst_out", "gather",
        "por_out", "uv_out", "ov_out", "ov_latch", "por", "uv", "ov",
    }  # fmt: skip
    ready = set(sound.behind("core_regulator", readiness=True))
    assert ready == {"core_regulator", "aon", "avdd", "ref_fast"}
    assert set(sound.behind("core_regulator")) > ready | {"por_n", "rst_out", "uv"}
    # The nets that reset what a load waits for still count: the regulator makes the rail of the core logic.
    assert {"vcore", "core_regulator", "por_n"} <= set(sound.behind("core_logic", readiness=True))
    assert "core_rst_n" not in sound.behind("core_logic", readiness=True)


def test_untried_is_worked_out_once(sound: Timelines) -> None:
    assert sound.untried == []
    lines = lines_of(without("rails.avdd.residual"))
    assert [one[:3] for one in lines.untried] == [("residual charge", "rails.avdd.residual", "avdd")]
    assert lines.untried is lines.untried
    assert sound.alone("unknown") is None
