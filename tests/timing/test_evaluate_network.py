"""Networks at one end of their tolerances or in part; what is kept, known, and forced."""

from __future__ import annotations

import random

import msgspec
import pytest

from tests.timing.networks import MADE, SLOW, net, scenario, source
from tests.timing.random_subsystems import INFINITE, random_parts, random_waveform, supplied_with, with_supply
from tidegate.lint.timing.evaluate import Found, LoadState, Network, State, evaluate, network
from tidegate.lint.timing.interval import FOREVER_S, both, outside
from tidegate.lint.timing.parts import (
    NOT_NAMED,
    NOTHING,
    Bounds,
    DomainPart,
    ResetPart,
    bounds_of,
)
from tidegate.lint.timing.state import (
    ALWAYS_ON,
    ANY_DECISION,
    ANYTHING,
    ASSERTED,
    NEVER_ON,
    NO_DECISION,
    NOTHING_KNOWN,
    On,
)
from tidegate.lint.timing.supply import GivenSupply
from tidegate.lint.timing.waveform import Waveform


def test_a_part_is_pinned_to_one_end() -> None:
    given = net(source("ref", settling=Bounds(0.5, FOREVER_S)))
    least, most = given.pinned({"ref": False}).parts["ref"], given.pinned({"ref": True}).parts["ref"]
    # What has no end is taken at neither.
    assert least == source("ref", works_from=Bounds(1.0, 1.0), settling=Bounds(0.5, FOREVER_S))
    assert most == source("ref", works_from=Bounds(1.5, 1.5), settling=Bounds(0.5, FOREVER_S))
    assert Network.__struct_config__.frozen
    assert given.pinned({}).parts == given.pinned({"unknown": True}).parts == given.parts
    assert given.parts["ref"] == source("ref", settling=Bounds(0.5, FOREVER_S))


def test_what_is_one_thing_or_another_is_pinned_in_every_form() -> None:
    forms = source("ref"), source("ref", settling=Bounds(2.0, 3.0))
    given = network({"ref": forms[0]}, {}, {"ref": forms[1:]})
    assert given.pinned({"ref": True}).others["ref"] == [
        source("ref", works_from=Bounds(1.5, 1.5), settling=Bounds(3.0, 3.0))
    ]


def test_an_element_that_is_one_thing_or_another_may_be_as_either_is() -> None:
    """Half a volt a second: works from 1 V, 2 s; settles in 1 s, or in 2 s to 3 s."""
    first = source("ref", works_from=Bounds(1.0, 1.0), settling=Bounds(1.0, 1.0))
    other = msgspec.structs.replace(first, settling=Bounds(2.0, 3.0))
    base = net(first)

    def state(*, best: bool) -> State:
        given = network(base.parts, base.ramps, {"ref": [other]}, best=best)
        return evaluate(given, scenario())["ref"]

    assert state(best=False) == On(((3.0, FOREVER_S),), ((-FOREVER_S, 5.0),))
    assert state(best=True) == On(((4.0, FOREVER_S),), ((-FOREVER_S, 3.0),))


def test_of_what_is_not_named_anything_may_be_so_and_nothing_for_certain() -> None:
    net_of = ResetPart("rst", (NOT_NAMED,), False, (), "vdd", 0.0)
    base = net(DomainPart("far", NOT_NAMED, (NOT_NAMED,)), source("ref", domain="far"), net_of)
    for best, on, decision in ((False, ANYTHING, ANY_DECISION), (True, NOTHING_KNOWN, NO_DECISION)):
        found = evaluate(network(base.parts, base.ramps, best=best), scenario(Waveform(((0.0, 2.0),))))
        assert (found["far"], found["ref"], found["rst"]) == (on, on, decision)


def _is_inside(inner: State, outer: State) -> bool:
    """Whether whatever may be so in one state may be so in the other."""
    if isinstance(inner, LoadState):
        return all(_is_inside(*pair) for pair in zip(inner, outer, strict=True))  # type: ignore[arg-type]
    assert isinstance(inner, tuple)
    assert isinstance(outer, tuple)
    added = [both(few, outside(many)) for few, many in zip(inner, outer, strict=True)]
    return all(end - start <= 1e-9 for times in added for start, end in times)


@pytest.mark.parametrize("seed", range(120))
def test_what_is_not_known_lies_around_and_inside_of_every_completion(seed: int) -> None:
    """Some ends of some tolerances are not known: at the sure corner 0 s or without end, at the best the other way.

    Inclusion of interval arithmetic (IEEE 1788-2015, 4.1), for directed intervals as for proper ones.
    """
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), random_waveform(chance)
    sure, best = dict(parts), dict(parts)
    for name in parts:
        for field, value in bounds_of(parts[name]):
            if chance.random() < 0.2 and not (field == "release_delay" and value == NOTHING):  # none is not unknown
                least_known, most_known = chance.choice(((False, True), (True, False), (False, False)))
                far = Bounds(value.least if least_known else 0.0, value.most if most_known else INFINITE)
                near = Bounds(
                    value.least if least_known else (value.most if most_known else INFINITE),
                    value.most if most_known else (value.least if least_known else 0.0),
                )
                sure[name] = msgspec.structs.replace(sure[name], **{field: far})
                best[name] = msgspec.structs.replace(best[name], **{field: near})
    known = evaluate(with_supply(parts), supplied_with(waveform))
    wide = evaluate(with_supply(sure), supplied_with(waveform))
    inner = evaluate(msgspec.structs.replace(with_supply(best), best=True), supplied_with(waveform))
    for name in parts:
        assert _is_inside(known[name], wide[name]), (name, known[name], wide[name])
        assert _is_inside(inner[name], known[name]), (name, inner[name], known[name])


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
