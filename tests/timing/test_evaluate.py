"""Supplies, gates, drivers and loads of small networks, timed by hand."""

from __future__ import annotations

import msgspec
import pytest

from tests.timing.networks import HILL, MADE, RAMP, SLOW, load, net, scenario, source, state
from tests.timing.random_subsystems import comparator, stage
from tidegate.lint.timing.evaluate import LoadState, State, evaluate
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
    DomainPart,
    LoadPart,
    RailPart,
    ResetPart,
    TimedPart,
)
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.state import (
    ALWAYS_ON,
    ANY_DECISION,
    ANYTHING,
    RELEASED,
    Decision,
    On,
)
from tidegate.lint.timing.supply import GivenSupply, MadeSupply
from tidegate.lint.timing.waveform import Waveform

# Supplies


def test_a_source_works_from_its_level_and_settles() -> None:
    # 1 V to 1.5 V after 2 s to 3 s, and 0.5 s to 1 s more.
    assert state("ref", source("ref")) == On(((2.5, FOREVER_S),), ((-FOREVER_S, 4.0),))
    assert state("ref", source("ref"), tried=scenario(HILL)) == On(
        ((2.5, 12.0),), ((-FOREVER_S, 4.0), (11.0, FOREVER_S))
    )


def test_nothing_works_from_a_supply_of_nothing() -> None:
    """What may work from 0 V on still needs a supply: 1 nV, 2 ns after it begins."""
    found = state("ref", source("ref", works_from=Bounds(0.0, 0.0), settling=NOTHING))
    assert isinstance(found, On)
    assert found.may_be_on[0][0] == found.may_be_off[0][1] == pytest.approx(2e-9, rel=1e-9)
    found = state("ref", source("ref", works_from=Bounds(0.0, 1.5), settling=NOTHING))
    assert isinstance(found, On)
    assert found.may_be_on[0][0] == pytest.approx(2e-9, rel=1e-9)
    assert found.may_be_off == ((-FOREVER_S, 3.0),)
    exact = state("ref", source("ref", works_from=Bounds(1e-9, 1e-9), settling=NOTHING))
    assert exact == state("ref", source("ref", works_from=NOTHING, settling=NOTHING))


def test_a_rail_without_waveform_or_ramp_may_be_anything() -> None:
    for part in (RailPart("vx", None, None, NOTHING), RailPart("vx", None, "ref", NOTHING)):
        states = evaluate(net(part, source("ref"), source("of", rail="vx", settling=NOTHING)), scenario())
        assert states["vx"] == ANYTHING
        assert states["of"] == ANYTHING


@pytest.mark.parametrize(("fast", "rise_s", "fall_s"), [(True, 4.0, 6.0), (False, 8.0, 12.0)])
def test_a_made_rail_rises_with_its_maker_fast_or_slowly(fast: bool, rise_s: float, fall_s: float) -> None:
    tried = evaluate(net(MADE, source("maker"), ramps={"vdd": RAMP, "vx": RAMP}), scenario(HILL, fast=fast))
    rail = tried["vx"]
    assert isinstance(rail, MadeSupply)
    # Its maker is on from 2.5 s at the earliest, and 4 s at the latest, to 11 s or 12 s.
    assert rail.may_be_high(rising_v=1.0, falling_v=1.0) == ((2.5 + 1.0 + rise_s / 2, 12.0 + fall_s / 2),)
    assert rail.may_be_low(rising_v=2.0, falling_v=1.0) == (
        ((-FOREVER_S, 4.0 + 3.0 + rise_s), (11.0 + fall_s / 2, FOREVER_S))
        if 7.0 + rise_s < 11.0 + fall_s / 2 else ALWAYS
    )  # fmt: skip


def test_a_made_rail_that_is_forced_follows_its_waveform() -> None:
    forced = Scenario("forced", "forced", Scene.OWN, {"vdd": SLOW, "vx": HILL})
    rail = evaluate(net(MADE, source("maker"), ramps={"vdd": RAMP, "vx": RAMP}), forced)["vx"]
    assert isinstance(rail, GivenSupply)
    assert rail.waveform == HILL


AFTER = RailPart("vx", "vdd", None, Bounds(1.0, 3.0))


def late(waveform: Waveform, *, in_sequence: bool = True, after: RailPart = AFTER) -> State:
    both = Scenario("both", "both", Scene.START, {"vdd": waveform, "vx": SLOW}, in_sequence=in_sequence)
    return evaluate(net(after), both)["vx"]


@pytest.mark.parametrize(
    ("waveform", "least_s", "most_s"),
    [
        (SLOW, 4.0, 6.0),  # up at 1.5 V, after 3 s
        (Waveform(((0.0, 2.0),)), 1.0, 3.0),  # up long before: counted from 0 s
        (Waveform(((-9.0, 0.0), (-5.0, 2.0))), 1.0, 3.0),
        # Up for the first time after 3 s; that it goes again, and comes back, does not count.
        (HILL, 4.0, 6.0),
        (Waveform(((0.0, 0.0), (4.0, 2.0), (5.0, 0.0), (9.0, 2.0))), 4.0, 6.0),
    ],
)
def test_a_rail_after_another_waits_for_it(waveform: Waveform, least_s: float, most_s: float) -> None:
    rail = late(waveform)
    assert isinstance(rail, GivenSupply)
    assert (rail.least_s, rail.most_s) == (least_s, most_s)


def test_rails_in_a_row_add_their_delays_up() -> None:
    last = RailPart("vy", "vx", None, Bounds(0.5, 1.0))
    tried = Scenario("row", "row", Scene.START, dict.fromkeys(("vdd", "vx", "vy"), SLOW), in_sequence=True)
    rail = evaluate(net(AFTER, last, ramps={"vdd": RAMP, "vx": RAMP}), tried)["vy"]
    assert isinstance(rail, GivenSupply)
    # vdd is up after 3 s, vx begins 1 s to 3 s later and is up 3 s after that.
    assert (rail.least_s, rail.most_s) == (3.0 + 1.0 + 3.0 + 0.5, 3.0 + 3.0 + 3.0 + 1.0)


def test_a_rail_out_of_sequence_does_not_wait() -> None:
    for rail in (late(SLOW, in_sequence=False), late(SLOW, after=RailPart("vx", None, None, Bounds(1.0, 3.0)))):
        assert isinstance(rail, GivenSupply)
        assert (rail.least_s, rail.most_s) == (0.0, 0.0)


def test_a_rail_after_one_that_never_comes_up_may_be_anything() -> None:
    assert late(Waveform(((0.0, 0.0), (1.0, 1.25)))) == ANYTHING
    assert late(SLOW, after=RailPart("vx", "vdd", None, Bounds(1.0, FOREVER_S))) == ANYTHING


# Gates


@pytest.mark.parametrize(
    ("gate", "expected"),
    [
        # Of a source that is on between 2.5 s and 4 s, of a net released then, and of a load that runs then.
        (source("gate"), On(((3.0, FOREVER_S),), ((-FOREVER_S, 5.0),))),
        (ResetPart("gate", ("uv",), False, (), "vdd", 0.0), On(((3.5, FOREVER_S),), ((-FOREVER_S, 6.0),))),
        (load("gate", needs=("bias",)), On(((3.0, FOREVER_S),), ((-FOREVER_S, 5.0),))),
        (RailPart("gate", None, None, NOTHING), On(((2.5, FOREVER_S),), ALWAYS)),
    ],
)
def test_what_gates_a_domain(gate: TimedPart, expected: On) -> None:
    uv = comparator(
        "uv", needs=(), works_from=Bounds(1.0, 1.0), rising=Bounds(1.5, 2.0), falling=Bounds(0.5, 1.0),
        delay=Bounds(0.0, 1.0), undecided="asserts",
    )  # fmt: skip
    parts = (source("bias"), uv, gate, DomainPart("gated", "vdd", ("gate",)), source("ref", domain="gated"))
    assert state("ref", *parts) == expected


def test_a_rail_gates_what_needs_it_from_where_it_is_up() -> None:
    # vdd is up at 1.5 V, which it reaches after 3 s; the source would work by then and settles once more.
    assert state("ref", source("ref", "vdd", works_from=NOTHING)) == On(((3.5, FOREVER_S),), ((-FOREVER_S, 4.0),))


def test_a_domain_that_is_switched_by_several_needs_all() -> None:
    parts = (source("one"), source("two", settling=Bounds(2.0, 5.0)), DomainPart("gated", "vdd", ("one", "two")))
    assert state("gated", *parts) == On(((4.0, FOREVER_S),), ((-FOREVER_S, 8.0),))
    assert state("aon") is ALWAYS_ON


def test_a_detector_on_an_unknown_rail_may_say_anything() -> None:
    uv = comparator("uv", needs=(), works_from=NOTHING, rising=NOTHING, falling=NOTHING, delay=NOTHING)
    assert state("uv", msgspec.structs.replace(uv, watches="vx")) == ANY_DECISION


def test_a_detector_that_needs_something_decides_once_that_is_up() -> None:
    uv = comparator(
        "uv", needs=("ref",), works_from=Bounds(0.5, 0.5), rising=Bounds(0.5, 0.5), falling=Bounds(0.25, 0.25),
        delay=Bounds(0.25, 0.5), undecided="asserts",
    )  # fmt: skip
    # The reference is up between 2.5 s and 4 s; the level was passed at 1 s.
    assert state("uv", source("ref"), uv) == Decision(((-FOREVER_S, 4.5),), ((2.75, FOREVER_S),), NEVER)
    armed = msgspec.structs.replace(uv, armed_by=("ref",))
    assert state("uv", source("ref"), armed) == Decision(((2.5, 4.5),), ALWAYS, NEVER)


def test_a_driver_that_is_not_there_may_say_anything() -> None:
    out = stage("out", driven_by=("gone",), works_from=Bounds(1.0, 1.0), delay=NOTHING, hold="asserts")
    assert state("out", out) == Decision(ALWAYS, ((2.0, FOREVER_S),), ((2.0, FOREVER_S),), ((-FOREVER_S, 2.0),))


def test_drivers_that_must_agree() -> None:
    one, two = (
        comparator(name, needs=(), works_from=NOTHING, rising=Bounds(v, v), falling=Bounds(v, v), delay=NOTHING,
                   undecided="asserts")
        for name, v in (("one", 1.0), ("two", 1.5))
    )  # fmt: skip
    any_one = ResetPart("rst", ("one", "two"), False, (), "vdd", 0.0)
    both = ResetPart("rst", ("one", "two"), True, (), "vdd", 0.0)
    assert state("rst", one, two, any_one) == Decision(((-FOREVER_S, 3.0),), ((3.0, FOREVER_S),), NEVER)
    assert state("rst", one, two, both) == Decision(((-FOREVER_S, 2.0),), ((2.0, FOREVER_S),), NEVER)


# Loads


def loaded(part: LoadPart, *parts: TimedPart, tried: Scenario | None = None) -> LoadState:
    found = state(part.id, *parts, part, tried=tried)
    assert isinstance(found, LoadState)
    return found


def test_a_load_is_fed_ready_and_running() -> None:
    fed = On(((2.0, FOREVER_S),), ((-FOREVER_S, 2.0),))
    bare = loaded(load(ready=Bounds(1.0, 2.0)))
    assert bare == LoadState(fed, On(((3.0, FOREVER_S),), ((-FOREVER_S, 4.0),)), RELEASED, fed)
    up = On(((2.5, FOREVER_S),), ((-FOREVER_S, 4.0),))
    assert loaded(load(needs=("ref",)), source("ref")) == LoadState(fed, up, RELEASED, up)
    gated = DomainPart("gated", "vdd", ("ref",))
    assert loaded(load(domain="gated"), source("ref"), gated) == LoadState(fed, up, RELEASED, up)
    late = On(((4.0, FOREVER_S),), ((-FOREVER_S, 8.0),))
    both = load(domain="gated", needs=("slow",))
    assert loaded(both, source("ref"), gated, source("slow", settling=Bounds(2.0, 5.0))).running == late


def test_a_load_runs_once_every_net_releases_it() -> None:
    nets = [
        comparator(name, needs=(), works_from=NOTHING, rising=Bounds(v, v), falling=Bounds(v, v), delay=NOTHING,
                   undecided="asserts")
        for name, v in (("one", 1.25), ("two", 1.5))
    ]  # fmt: skip
    found = loaded(load(resets=("one", "two")), *nets)
    assert found.reset == Decision(((-FOREVER_S, 3.0),), ((3.0, FOREVER_S),), NEVER)
    assert found.running == On(((3.0, FOREVER_S),), ((-FOREVER_S, 3.0),))


@pytest.mark.parametrize(
    ("works", "on", "off"),
    [
        (Bounds(1.0, FOREVER_S), ((2.0, 12.0),), ((-FOREVER_S, 2.0), (12.0, FOREVER_S))),
        (Bounds(1.0, 2.0), ((2.0, 12.0),), ((-FOREVER_S, 2.0), (12.0, FOREVER_S))),  # just reached: within
        (Bounds(1.0, 1.5), ((2.0, 3.0), (11.0, 12.0)), ((-FOREVER_S, 2.0), (3.0, 11.0), (12.0, FOREVER_S))),
    ],
)
def test_a_load_works_between_two_levels(works: Bounds, on: Times, off: Times) -> None:
    fed = loaded(load(works=(("vdd", works),)), tried=scenario(HILL)).fed
    for found, expected in ((fed.may_be_on, on), (fed.may_be_off, off)):
        assert [end for span in found for end in span] == pytest.approx([end for span in expected for end in span])


def test_a_load_needs_every_one_of_its_rails() -> None:
    works = (("vdd", Bounds(1.0, FOREVER_S)), ("vx", Bounds(1.5, FOREVER_S)))
    tried = Scenario("both", "both", Scene.START, {"vdd": SLOW, "vx": HILL})
    fed = loaded(load(works=works), RailPart("vx", None, None, NOTHING), tried=tried).fed
    assert fed == On(((3.0, 11.0),), ((-FOREVER_S, 3.0), (11.0, FOREVER_S)))
