"""What leans on itself: rings that nothing starts, that hold themselves, that are followed, that never rest."""

from __future__ import annotations

from typing import Any

import msgspec
import pytest

from tests.timing.networks import RAMP, SLOW, load, net, scenario, source, state
from tests.timing.random_subsystems import comparator, stage
from tidegate.lint.timing.evaluate import LoadState, State, evaluate
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
    DomainPart,
    RailPart,
    ResetPart,
    TimedPart,
)
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import (
    ANY_DECISION,
    ANYTHING,
    NEVER_ON,
    Decision,
    On,
)
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.waveform import Waveform


def test_what_waits_for_itself_never_comes_up() -> None:
    states = evaluate(net(source("one", "two"), source("two", "one"), load(needs=("one",))), scenario())
    assert states["one"] == states["two"] == NEVER_ON
    found = states["core"]
    assert isinstance(found, LoadState)
    assert found.running == NEVER_ON


def test_a_load_that_gates_its_own_domain_is_down_and_in_reset() -> None:
    gated = DomainPart("gated", "vdd", ("core",))
    states = evaluate(
        net(gated, load(domain="gated", resets=("rst",)), ResetPart("rst", (), True, (), "vdd", 0.0)), scenario()
    )
    found = states["core"]
    assert isinstance(found, LoadState)
    assert found.ready == found.running == NEVER_ON
    assert found.fed == On(((2.0, FOREVER_S),), ((-FOREVER_S, 2.0),))


def test_a_ring_of_stages_holds_itself() -> None:
    """Stages that drive each other in a ring, asserting at first: what their holds assert goes round."""
    names = [f"s{number}" for number in range(5)]
    ring = [
        stage(name, driven_by=(other,), works_from=Bounds(0.5, 0.5), delay=NOTHING, hold="asserts")
        for name, other in zip(names, [*names[1:], names[0]], strict=True)
    ]
    states = evaluate(net(*ring), scenario())
    # Nothing ever releases the ring: asserted by its holds up to 1 s, by itself from then on.
    for name in names:
        assert states[name] == Decision(ALWAYS, NEVER, NEVER, ((-FOREVER_S, 1.0),))
    open_ring = [*ring[:-1], msgspec.structs.replace(ring[-1], hold="releases")]
    states = evaluate(net(*open_ring), scenario())
    assert states[names[-1]] == Decision(((1.0, FOREVER_S),), ((-FOREVER_S, 1.0),), NEVER)


LOW = comparator(
    "low", needs=(), works_from=NOTHING, rising=Bounds(9.0, 9.0), falling=Bounds(9.0, 9.0), delay=NOTHING,
    undecided="asserts",
)  # fmt: skip
"""A detector that always asserts."""


def restless(name: str, **changes: Any) -> TimedPart:
    """A stage that is alive while it releases, releases while it is not, and passes an assertion on while it is."""
    made = stage(name, driven_by=("low",), works_from=Bounds(0.5, 0.5), delay=NOTHING, hold="releases")
    return msgspec.structs.replace(made, needs=(name,), **changes)


def test_what_never_comes_to_rest_may_be_anything() -> None:
    assert state("odd", LOW, restless("odd")) == ANY_DECISION


def test_a_rail_in_a_restless_ring_keeps_the_waveform_that_it_is_given() -> None:
    ring = (LOW, restless("odd", rail="vx"), RailPart("vx", None, "odd", NOTHING))
    ramps = {"vdd": RAMP, "vx": RAMP}
    given = Scenario("given", "given", Scene.OWN, {"vdd": SLOW, "vx": SLOW})
    states = evaluate(net(*ring, ramps=ramps), given)
    rail = states["vx"]
    assert isinstance(rail, GivenSupply)
    assert rail.waveform == SLOW
    assert states["odd"] == ANY_DECISION
    # One that its maker makes may be anything, and so may one that waits for another rail.
    assert evaluate(net(*ring, ramps=ramps), scenario())["vx"] == ANYTHING
    in_turn = msgspec.structs.replace(given, in_sequence=True)
    assert evaluate(net(*ring, ramps=ramps), in_turn)["vx"] == ANYTHING


def ring_with_a_release(*, goes_s: float) -> dict[str, State]:
    """Five stages of 0.5 s in a ring, all alive from 1 s on; one is released from outside, too, from 3 s to 4 s."""
    names = [f"s{number}" for number in range(5)]
    ring = [
        stage(name, driven_by=(other,), works_from=Bounds(0.5, 0.5), delay=Bounds(0.5, 0.5), hold="asserts")
        for name, other in zip(names, [*names[1:], names[0]], strict=True)
    ]
    ring[-1] = msgspec.structs.replace(ring[-1], driven_by=("s0", "uv"), all_agree=True)
    outside = {"uv": Decision(((-FOREVER_S, 3.0), (4.0, FOREVER_S)), ((3.0, 4.0),), NEVER)}
    waveform = Waveform(((0.0, 0.0), (4.0, 2.0), (goes_s, 2.0), (goes_s, 0.0)))
    return evaluate(net(*ring), scenario(waveform), outside)


def test_what_goes_round_a_ring_twice_is_followed() -> None:
    states = ring_with_a_release(goes_s=8.5)
    for number in range(5):  # out of s4 0.5 s after it came, out of s0 2 s after that, and the same again
        state_of = states[f"s{number}"]
        assert isinstance(state_of, Decision)
        out_s = 3.5 + 0.5 * (4 - number)
        again = (out_s + 2.5, min(out_s + 3.5, 8.5))
        assert state_of.may_release == ((out_s, out_s + 1.0), again)
        assert state_of.may_be_unknown == NEVER


@pytest.mark.parametrize("goes_s", [11.0, 1000.0])
def test_what_goes_round_more_than_twice_may_be_anything(goes_s: float) -> None:
    """Up to 11 s it would come by three times, and rest then; without an end, ever again."""
    states = ring_with_a_release(goes_s=goes_s)
    assert [states[f"s{number}"] for number in range(5)] == [ANY_DECISION] * 5
