"""Which element is to blame for an unknown level, on states written by hand."""

from __future__ import annotations

from types import SimpleNamespace
from typing import Any, cast

import msgspec
import pytest

from tests.timing.random_subsystems import comparator, source, stage
from tidegate.lint.graph.edge import Hop
from tidegate.lint.timing.blame import Blame, Why, blame_for_unknown
from tidegate.lint.timing.evaluate import LoadState, State
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import NOTHING, Bounds, ResetPart, TimedPart
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import ALWAYS_ON, ANYTHING, ASSERTED, NEVER_ON, RELEASED, Decision, On
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.timeline import Timeline, Timelines
from tidegate.lint.timing.waveform import Waveform

UP = GivenSupply(Waveform(((0.0, 0.0), (4.0, 2.0))))
"""Half a volt a second up to 2 V at 4 s."""


def unknown(*spans: tuple[float, float]) -> Decision:
    return Decision(ALWAYS, ALWAYS, spans)


def uv(*, works_from: Bounds = Bounds(1.0, 1.5), needs: tuple[str, ...] = (), name: str = "uv") -> TimedPart:  # noqa: B008
    return comparator(name, needs=needs, works_from=works_from, rising=NOTHING, falling=NOTHING, delay=NOTHING)


def out(name: str = "out", *, driven_by: tuple[str, ...] = ("uv",), hold: str = "asserts") -> TimedPart:
    return stage(name, driven_by=driven_by, works_from=Bounds(0.5, 1.0), delay=NOTHING, hold=hold)


def rst(*driven_by: str) -> TimedPart:
    return ResetPart("rst", driven_by, False, (), "vdd", 0.0)


def blamed(*parts: TimedPart, at_s: float, start: str = "rst", **states: State) -> Blame:
    lines = SimpleNamespace(read=SimpleNamespace(every={part.id: part for part in parts}))
    line = Timeline(Scenario("tried", "tried", Scene.START, {}), {"vdd": UP, "aon": ALWAYS_ON, **states})
    return blame_for_unknown(cast(Timelines, lines), line, start, at_s)


def way(*elements: str) -> tuple[Hop, ...]:
    return (Hop(elements[0], ""), *(Hop(element, "driven by") for element in elements[1:]))


def test_a_detector_that_cannot_decide_waits_for_its_supply() -> None:
    states: dict[str, Any] = {"rst": unknown((0.0, 9.0)), "out": unknown((0.0, 9.0)), "uv": unknown((0.0, 9.0))}
    found = blamed(uv(), out(), rst("out"), at_s=2.5, **states)
    assert found == Blame("uv", Why.UNDECIDED, "vdd at 1.5 V", way("rst", "out", "uv"))
    hash(found)  # cannot be changed
    # From 3 s on its supply is there.
    assert blamed(uv(), out(), rst("out"), at_s=3.0, **states).waits_for == "its answer"
    assert blamed(uv(), rst("uv"), at_s=2.5, **states).path == way("rst", "uv")
    assert blamed(uv(), start="uv", at_s=2.5, **states).path == way("uv")


@pytest.mark.parametrize(
    ("works_from", "at_s", "waits_for"),
    [
        (Bounds(1.0, FOREVER_S), 0.5, "its answer"),  # not known from where on: not told as a level
        (NOTHING, -1.0, "vdd at 1e-09 V"),
        (NOTHING, 1.0, "its answer"),
        (Bounds(1.0, 1.23456), 1.0, "vdd at 1.235 V"),
    ],
)
def test_the_supply_it_waits_for(works_from: Bounds, at_s: float, waits_for: str) -> None:
    found = blamed(uv(works_from=works_from), rst("uv"), at_s=at_s, rst=unknown((-5.0, 9.0)), uv=unknown((-5.0, 9.0)))
    assert found.waits_for == waits_for


OFF = On(NEVER, ((2.0, 4.0),))


@pytest.mark.parametrize(
    ("state", "at_s", "down"),
    [
        (OFF, 2.0, True),
        (OFF, 3.9, True),
        (OFF, 4.0, False),
        (NEVER_ON, 3.5, True),
        (ALWAYS_ON, 3.5, False),
        (ASSERTED, 3.5, True),
        (RELEASED, 3.5, False),
        (LoadState(ALWAYS_ON, ALWAYS_ON, RELEASED, OFF), 3.5, True),
        (LoadState(OFF, OFF, ASSERTED, ALWAYS_ON), 3.5, False),
        (UP, 0.0, False),
    ],
)
def test_what_of_its_needs_may_not_be_up(state: State, at_s: float, down: bool) -> None:
    detector = uv(works_from=Bounds(0.0, 0.25), needs=("ref",))
    states: dict[str, Any] = {"rst": unknown((-9.0, 9.0)), "uv": unknown((-9.0, 9.0)), "ref": state}
    fed: dict[str, Any] = {"vdd": GivenSupply(Waveform(((0.0, 2.0),)))}
    assert blamed(detector, rst("uv"), at_s=at_s, **states, **fed).waits_for == ("ref" if down else "its answer")


def test_the_deepest_cause_comes_first() -> None:
    detector = uv(needs=("bias", "ref"))
    states: dict[str, Any] = {"rst": unknown((0.0, 9.0)), "uv": unknown((0.0, 9.0)), "bias": NEVER_ON, "ref": NEVER_ON}
    assert blamed(detector, rst("uv"), at_s=2.0, **states).waits_for == "vdd at 1.5 V"
    assert blamed(detector, rst("uv"), at_s=3.5, **states).waits_for == "bias"
    assert blamed(detector, rst("uv"), at_s=3.5, **(states | {"bias": ALWAYS_ON})).waits_for == "ref"
    assert blamed(detector, rst("uv"), at_s=3.5, **(states | {"aon": NEVER_ON})).waits_for == "aon"
    assert blamed(detector, rst("uv"), at_s=3.5, **(states | {"vdd": ANYTHING})).waits_for == "bias"


def test_a_stage_that_is_not_alive_and_has_no_hold_is_to_blame_itself() -> None:
    states: dict[str, Any] = {"rst": unknown((0.0, 9.0)), "out": unknown((0.0, 9.0)), "uv": unknown((0.0, 9.0))}
    found = blamed(uv(), out(hold="none"), rst("out"), at_s=1.5, **states)
    assert found == Blame("out", Why.NOT_HELD, "vdd at 1 V", way("rst", "out"))
    # Once it is alive, or where it is held, what drives it is to blame.
    assert blamed(uv(), out(hold="none"), rst("out"), at_s=2.0, **states).element == "uv"
    assert blamed(uv(), out(hold="releases"), rst("out"), at_s=1.5, **states).element == "uv"


def test_a_stage_whose_drivers_are_known_is_alive_before_its_input() -> None:
    states: dict[str, Any] = {"rst": unknown((0.0, 9.0)), "out": unknown((0.0, 9.0)), "uv": RELEASED}
    assert blamed(uv(), out(), rst("out"), at_s=3.0, **states) == Blame(
        "out", Why.INPUT, "its input", way("rst", "out")
    )
    assert blamed(uv(), out(), rst("out"), at_s=3.0, **(states | {"uv": ALWAYS_ON})).element == "out"
    later = states | {"uv": unknown((3.5, 9.0))}
    assert blamed(uv(), out(), rst("out"), at_s=3.0, **later).element == "out"
    assert blamed(uv(), out(), rst("out"), at_s=3.5, **later).element == "uv"
    ref = source("ref", needs=(), works_from=NOTHING, settling=NOTHING)
    assert blamed(ref, start="ref", at_s=3.0).why is Why.INPUT


@pytest.mark.parametrize(
    ("one", "two", "blame"),
    [
        (((0.0, 2.0),), ((0.0, 3.0),), "two"),  # the last to be unknown before the net was
        (((0.0, 3.0),), ((0.0, 2.0),), "one"),
        (((0.0, 9.0),), ((0.0, 8.0),), "one"),  # both still are: the first that is named
        (((3.0, 9.0),), ((0.0, 8.0),), "one"),
        (((0.0, 2.0), (3.0, 3.5)), ((0.0, 3.25),), "one"),
        (((0.0, 2.0), (4.5, 9.0)), ((0.0, 3.25),), "two"),
        (((4.0, 9.0),), ((0.0, 3.25),), "one"),
    ],
)
def test_of_several_drivers_the_one_that_was_unknown_last(one: Times, two: Times, blame: str) -> None:
    parts = (uv(name="one"), uv(name="two"), rst("one", "two"))
    found = blamed(*parts, at_s=4.0, rst=unknown((0.0, 9.0)), one=unknown(*one), two=unknown(*two))
    assert found.element == blame


def test_each_element_is_asked_about_the_time_at_which_it_was_unknown() -> None:
    # The net is unknown at 5 s because out was up to 2.5 s; by then uv was waiting for its supply still.
    states: dict[str, Any] = {"rst": unknown((0.0, 9.0)), "out": unknown((0.0, 2.5)), "uv": unknown((0.0, 9.0))}
    assert blamed(uv(), out(), rst("out"), at_s=5.0, **states).waits_for == "vdd at 1.5 V"


def test_a_ring_is_left_after_one_round() -> None:
    one, two = out("one", driven_by=("two",)), out("two", driven_by=("one",))
    found = blamed(one, two, rst("one"), at_s=5.0, **dict.fromkeys(("rst", "one", "two"), unknown((0.0, 9.0))))
    assert found == Blame("two", Why.INPUT, "its input", way("rst", "one", "two"))
    alone = msgspec.structs.replace(cast(Any, one), driven_by=("one",))
    assert blamed(alone, rst("one"), at_s=5.0, rst=unknown((0.0, 9.0)), one=unknown((0.0, 9.0))).element == "one"
