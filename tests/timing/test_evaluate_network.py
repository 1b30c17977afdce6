"""Networks at one end of their tolerances or in part; what is kept, known, and forced."""

from __future__ import annotations

import random

import pytest

from tests.timing.networks import MADE, SLOW, net, scenario, source
from tests.timing.random_subsystems import random_parts, random_waveform, supplied_with, with_supply
from tidegate.lint.timing.evaluate import Found, Network, State, evaluate
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
)
from tidegate.lint.timing.state import (
    ALWAYS_ON,
    ANYTHING,
    ASSERTED,
    NEVER_ON,
    On,
)
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.waveform import Waveform


def test_a_part_is_pinned_to_one_end() -> None:
    given = net(source("ref", settling=Bounds(0.5, FOREVER_S)))
    least, most = given.pinned({"ref": False}).parts["ref"], given.pinned({"ref": True}).parts["ref"]
    assert least == source("ref", works_from=Bounds(1.0, 1.0), settling=Bounds(0.5, 0.5))
    assert most == source("ref", works_from=Bounds(1.5, 1.5), settling=Bounds(0.5, 0.5))  # what is not finite: least
    assert Network.__struct_config__.frozen
    assert given.pinned({}).parts == given.pinned({"unknown": True}).parts == given.parts
    assert given.parts["ref"] == source("ref", settling=Bounds(0.5, FOREVER_S))


def test_least_values_of_nothing_become_as_great_as_the_greatest() -> None:
    part = source("ref", works_from=Bounds(0.0, 1.5), settling=Bounds(0.5, 1.0))
    given = net(part, source("late", settling=Bounds(0.0, FOREVER_S)))
    best = given.without_spread_from_nothing(["ref", "late", "unknown"]).parts
    assert best["ref"] == source("ref", works_from=Bounds(1.5, 1.5), settling=Bounds(0.5, 1.0))
    assert best["late"] == given.parts["late"]


def test_among_orders_some_elements_alone() -> None:
    given = net(source("one"), source("two", "one"), source("three", "two"))
    some = given.among(["three", "one", "unknown"])
    assert [group for group, _ in some.order] == [["one"], ["three"]]
    assert list(some.parts) == ["one", "three"]


def test_what_is_not_ordered_anew_is_as_it_was_known() -> None:
    given = net(source("one"), source("two", "one")).among(["two"])
    known: dict[str, State] = {
        "vdd": GivenSupply(SLOW),
        "aon": ALWAYS_ON,
        "one": On(((9.0, FOREVER_S),), ((-FOREVER_S, 9.0),)),
    }
    found = evaluate(given, scenario(), known)
    assert dict(found) == {"two": On(((9.5, FOREVER_S),), ((-FOREVER_S, 10.0),))}
    assert evaluate(given, scenario())["two"] == ANYTHING
    assert evaluate(given, scenario(), {**known, "one": NEVER_ON})["two"] == NEVER_ON


def test_what_is_forced_has_its_state_whatever_it_leans_on() -> None:
    given = net(source("one"), source("two", "one"))
    found = evaluate(given, scenario(), None, {"one": NEVER_ON})
    assert (found["one"], found["two"]) == (NEVER_ON, NEVER_ON)
    ring = net(source("one", "two"), source("two", "one"))
    forced = evaluate(ring, scenario(), None, {"one": ALWAYS_ON})
    assert forced["two"] == On(((2.5, FOREVER_S),), ((-FOREVER_S, 4.0),))
    assert evaluate(given, scenario(), None, {"vdd": ANYTHING})["one"] == ANYTHING
    assert evaluate(given, scenario(), None, {"one": ASSERTED})["two"] == NEVER_ON


@pytest.mark.parametrize("seed", range(6))
def test_what_other_scenarios_found_changes_nothing(seed: int) -> None:
    chance = random.Random(seed)
    given, found = with_supply(random_parts(chance)), Found()
    waveforms = [random_waveform(chance) for _ in range(3)]
    for waveform in [*waveforms, *waveforms]:
        kept, anew = evaluate(given, supplied_with(waveform), found=found), evaluate(given, supplied_with(waveform))
        for name in given.parts:
            if name != "vdd":
                assert kept[name] == anew[name]


def test_what_sees_the_same_is_the_same() -> None:
    given, found = net(source("one"), source("two", "one", settling=NOTHING), MADE, source("maker")), Found()
    first = evaluate(given, scenario(), found=found)
    again = evaluate(given, scenario(Waveform(((0.0, 0.0), (4.0, 2.0)))), found=found)  # equal, another object
    assert all(first[name] is again[name] for name in given.parts)
    other = evaluate(given, scenario(Waveform(((1.0, 0.0), (5.0, 2.0)))), found=found)
    assert other["one"] == On(((3.5, FOREVER_S),), ((-FOREVER_S, 5.0),))
    assert other["aon"] is first["aon"]
