"""The numbers that ramps are made of, by hand, and what is missing for them."""

from __future__ import annotations

import msgspec
import pytest

from tests.timing.bare import bare
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import Bounds
from tidegate.lint.timing.ramps import RailRamp, Ramps

RISE, FALL = "rise: {min: 1 ms, max: 10 ms}", "fall: {min: 4 ms, max: 40 ms}"


def ramps(rail: str, more: str = "") -> Ramps:
    return bare(f"rails: {{a: {{{rail}}}}}\n{more}").ramps


def ramp(rail: str, more: str = "") -> RailRamp:
    return ramps(rail, more).by_rail["a"]


def near(least: float, most: float) -> Bounds:
    return Bounds(pytest.approx(least, rel=1e-12), pytest.approx(most, rel=1e-12))


def test_a_rail_that_says_all() -> None:
    found = ramp(f"nominal: 2 V, {RISE}, {FALL}")
    assert found == RailRamp(2.0, 2.0, near(1e-3, 10e-3), near(4e-3, 40e-3), "its fastest fall")
    assert found.fastest_rise_v_per_s == pytest.approx(2000.0)
    assert found.fastest_fall_v_per_s == pytest.approx(500.0)
    hash(msgspec.structs.replace(found, rise=Bounds(1e-3, 1e-2), fall=Bounds(4e-3, 4e-2)))  # cannot be changed


@pytest.mark.parametrize(
    ("facts", "up_v"),
    [
        ("", 2.0),
        ("delivered: {min: 1.8 V}", 1.8),
        ("guaranteed: {min: 1.6 V}, delivered: {min: 1.8 V}", 1.6),
        ("guaranteed: {max: 2.2 V}, delivered: {min: 1.8 V}", 1.8),
        ("guaranteed: {max: 2.2 V}", 2.0),
    ],
)
def test_from_where_a_rail_is_up(facts: str, up_v: float) -> None:
    assert ramp(f"nominal: 2 V, {RISE}, {FALL}, {facts}").up_v == pytest.approx(up_v)


@pytest.mark.parametrize(
    ("rise", "bounds", "lacks"),
    [
        ("", Bounds(0.0, FOREVER_S), ("rails.a.rise",)),
        ("rise: {min: 1 ms}", near(1e-3, FOREVER_S), ("rails.a.rise.max",)),
        ("rise: {max: 1 ms}", near(0.0, 1e-3), ("rails.a.rise.min",)),
        ("rise: 1 ms", near(1e-3, 1e-3), ()),
    ],
)
def test_what_a_rise_lacks(rise: str, bounds: Bounds, lacks: tuple[str, ...]) -> None:
    found = ramp(f"nominal: 2 V, {FALL}, {rise}")
    assert (found.rise, found.start_lacks) == (bounds, lacks)


def drawn(*currents: str) -> str:
    """A load for each current, all of them on the rail."""
    entries = [
        f"  l{number}: {{needs: [{{rail: a}}]{f', consumes: {current}' if current else ''}}}"
        for number, current in enumerate(currents)
    ]
    return "\n".join(["loads:", *entries]) if entries else ""


FAST, SLOW = ("rails.a.fall.min",), ("rails.a.fall.max",)


@pytest.mark.parametrize(
    ("facts", "more", "bounds", "limited_by", "lacks"),
    [
        ("", "", Bounds(0.0, FOREVER_S), "its fastest fall", (("rails.a.fall",), ("rails.a.fall",))),
        ("fall: {min: 4 ms}", "", near(4e-3, FOREVER_S), "its fastest fall", ((), SLOW)),
        ("fall: {max: 40 ms}", "", near(0.0, 40e-3), "its fastest fall", (FAST, ())),
        # Where no fastest fall is said, as steep as a collapse: 2 V at 1 V/ms.
        ("collapse: 1 V/ms", "", near(2e-3, FOREVER_S), "its collapse", ((), ("rails.a.fall",))),
        ("collapse: {min: 0.1 V/ms, max: 1 V/ms}, fall: {max: 40 ms}", "", near(2e-3, 40e-3), "its collapse", ((), ())),
        ("collapse: {min: 1 V/ms}", "", Bounds(0.0, FOREVER_S), "its fastest fall", (("rails.a.fall",),) * 2),
        (f"collapse: 1 V/ms, {FALL}", "", near(4e-3, 40e-3), "its fastest fall", ((), ())),
        # 10 uF of 2 V under 2 mA and 3 mA hold it up for 4 ms; under 1 mA for 20 ms.
        (f"hold_up: 10 uF, {FALL}", drawn("2 mA", "3 mA"), near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: {{min: 10 uF, max: 1 mF}}, {FALL}", drawn("1 mA"), near(20e-3, 40e-3), "its hold-up", ((), ())),
        (f"hold_up: 100 uF, {FALL}", drawn("1 mA"), near(200e-3, 200e-3), "its hold-up", ((), ())),
        ("hold_up: 10 uF", drawn("1 mA"), near(20e-3, FOREVER_S), "its hold-up", ((), ("rails.a.fall",))),
        ("hold_up: 10 uF, collapse: 1 V/ms", drawn("{max: 1 mA}"), near(20e-3, FOREVER_S), "its hold-up",
         ((), ("rails.a.fall",))),
        # A current that one load does not say, or none at all, holds nothing up that could be relied on.
        (f"hold_up: 10 uF, {FALL}", drawn("1 mA", ""), near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: 10 uF, {FALL}", drawn("", "1 mA"), near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: 10 uF, {FALL}", drawn("{min: 1 mA}"), near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: 10 uF, {FALL}", drawn("0 mA"), near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: 10 uF, {FALL}", "", near(4e-3, 40e-3), "its fastest fall", ((), ())),
        (f"hold_up: {{max: 10 uF}}, {FALL}", drawn("1 mA"), near(4e-3, 40e-3), "its fastest fall", ((), ())),
    ],
)  # fmt: skip
def test_the_way_down(
    facts: str, more: str, bounds: Bounds, limited_by: str, lacks: tuple[tuple[str, ...], tuple[str, ...]]
) -> None:
    found = ramp(f"nominal: 2 V, {RISE}, {facts}", more)
    assert (found.fall, found.limited_by) == (bounds, limited_by)
    assert (found.fast_fall_lacks, found.slow_fall_lacks) == lacks


def test_a_rail_needs_a_nominal_level() -> None:
    assert ramps(RISE).lacks == {"a": ("rails.a.nominal",)}
    assert ramps(f"nominal: {{min: 1.9 V}}, {RISE}").lacks == {"a": ("rails.a.nominal.typ",)}
    assert ramp(f"nominal: {{min: 1.9 V, max: 2.1 V}}, {RISE}").nominal_v == pytest.approx(2.0)
    assert ramps(f"nominal: 2 V, {RISE}").lacks == {}


@pytest.mark.parametrize(
    ("facts", "name"),
    [
        (f"nominal: 0 V, {RISE}", "nominal_v"),
        ("nominal: 2 V, rise: 0 s", "rise_s"),
        ("nominal: 2 V, fall: 0 s", "fall_s"),
    ],
)
def test_numbers_that_cannot_be_refuse_a_rail(facts: str, name: str) -> None:
    found = ramps(facts)
    assert found.by_rail == found.lacks == {}
    error = found.refused["a"]
    assert isinstance(error, DomainError)
    assert str(error).startswith(name)


def test_rails_are_refused_one_by_one() -> None:
    found = bare("rails: {a: {nominal: 0 V}, b: {nominal: 1 V, rise: 1 ms}, c: {rise: 1 ms}, d: {nominal: 1 V}}").ramps
    assert (set(found.refused), set(found.by_rail), set(found.lacks)) == ({"a"}, {"b", "d"}, {"c"})
