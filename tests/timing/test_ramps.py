"""The numbers that ramps are made of, by hand, and what is missing for them."""

from __future__ import annotations

import msgspec
import pytest

from tests.timing.bare import bare
from tidegate.lint.derived.supply.steepest_fall import SteepestFall
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import Bounds
from tidegate.lint.timing.ramps import RailRamp, Ramps

RISE, FALL = "rise: {min: 1 ms, max: 10 ms}", "fall: {min: 4 ms, max: 40 ms}"


def ramps(rail: str, more: str = "") -> Ramps:
    return bare(f"rails: {{a: {{{rail}}}}}\n{more}").ramps


def ramp(rail: str, more: str = "") -> RailRamp:
    return ramps(rail, more).by_rail["a"]


def at_best(rail: str, more: str = "") -> RailRamp:
    return bare(f"rails: {{a: {{{rail}}}}}\n{more}").at_best.ramps.by_rail["a"]


def near(least: float, most: float) -> Bounds:
    return Bounds(pytest.approx(least, rel=1e-12), pytest.approx(most, rel=1e-12))


def test_a_rail_that_says_all() -> None:
    found = ramp(f"nominal: 2 V, {RISE}, {FALL}, collapse: 1 V/ms, guaranteed: {{min: 1.6 V}}")
    assert found == RailRamp(
        2.0, Bounds(1.6, 1.6), near(1e-3, 10e-3), near(4e-3, 40e-3), SteepestFall(pytest.approx(1e3), "its collapse")
    )
    assert found.fastest_rise_v_per_s == pytest.approx(2000.0)
    hash(msgspec.structs.replace(found, rise=Bounds(1e-3, 1e-2), fall=Bounds(4e-3, 4e-2)))  # cannot be changed


@pytest.mark.parametrize(
    ("facts", "up", "best", "lacks"),
    [
        ("guaranteed: {min: 1.6 V}, delivered: {min: 1.8 V}", (1.6, 1.6), (1.6, 1.6), ()),
        ("guaranteed: {min: 2.6 V}", (2.0, 2.0), (2.0, 2.0), ()),  # no further than it rises
        # What it is delivered at does not say from where on circuits are guaranteed.
        ("delivered: {min: 1.8 V}", (0.0, 2.0), (2.0, 0.0), ("rails.a.guaranteed",)),
        ("guaranteed: {max: 2.2 V}", (0.0, 2.0), (2.0, 0.0), ("rails.a.guaranteed.min",)),
    ],
)
def test_from_where_a_rail_is_up(
    facts: str, up: tuple[float, float], best: tuple[float, float], lacks: tuple[str, ...]
) -> None:
    text = f"nominal: 2 V, {RISE}, {FALL}, {facts}"
    found = ramp(text)
    assert (found.up, found.up_v, found.lacks.up) == (Bounds(*up), up[1], lacks)
    assert at_best(text).up == Bounds(*best)


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
    """A load for each current, all of them on the rail, and no other."""
    entries = [
        f"  l{number}: {{needs: [{{rail: a}}]{f', consumes: {current}' if current else ''}}}"
        for number, current in enumerate(currents)
    ]
    return "\n".join(["complete: [loads]", "loads:", *entries]) if entries else ""


FAST, SLOW = ("rails.a.fall.min",), ("rails.a.fall.max",)


@pytest.mark.parametrize(
    ("facts", "bounds", "best", "lacks"),
    [
        ("", (0.0, FOREVER_S), (FOREVER_S, 0.0), (("rails.a.fall",), ("rails.a.fall",))),
        ("fall: {min: 4 ms}", (4e-3, FOREVER_S), (4e-3, 4e-3), ((), SLOW)),
        ("fall: {max: 40 ms}", (0.0, 40e-3), (40e-3, 40e-3), (FAST, ())),
        (FALL, (4e-3, 40e-3), (4e-3, 40e-3), ((), ())),
        # How it collapses in service does not say how it is switched off.
        ("collapse: 1 V/ms", (0.0, FOREVER_S), (FOREVER_S, 0.0), (("rails.a.fall",), ("rails.a.fall",))),
    ],
)
def test_the_way_down_to_nothing(
    facts: str, bounds: tuple[float, float], best: tuple[float, float], lacks: tuple[tuple[str, ...], tuple[str, ...]]
) -> None:
    text = f"nominal: 2 V, {RISE}, {facts}"
    found = ramp(text)
    assert (found.fall, at_best(text).fall) == (near(*bounds), near(*best))
    assert (found.lacks.fast_fall, found.lacks.slow_fall) == lacks


COLLAPSE = ("rails.a.collapse",)


@pytest.mark.parametrize(
    ("facts", "more", "sure", "best", "by", "lacks"),
    [
        ("collapse: 1 V/ms", "", 1e3, 1e3, "its collapse", ()),
        ("collapse: {min: 0.1 V/ms, max: 1 V/ms}", "", 1e3, 1e3, "its collapse", ()),
        ("collapse: {min: 1 V/ms}", "", FOREVER_S, 1e3, "its collapse", ("rails.a.collapse.max",)),
        ("", "", FOREVER_S, 0.0, "its collapse", COLLAPSE),
        (FALL, "", FOREVER_S, 0.0, "its collapse", COLLAPSE),  # how it is switched off does not say how it collapses
        # What is stated counts, whatever holds it up: I / C = 1 mA / 10 uF = 100 V/s.
        ("hold_up: 10 uF, collapse: 1 V/ms", drawn("1 mA"), 1e3, 1e3, "its collapse", ()),
        ("hold_up: 10 uF", drawn("1 mA"), 100.0, 0.0, "its hold-up", COLLAPSE),
        ("hold_up: {min: 10 uF, max: 1 mF}", drawn("{min: 1 mA, max: 2 mA}", "3 mA"), 500.0, 0.0, "its hold-up",
         COLLAPSE),
        # A current that one load does not say, none at all, or loads that are not described hold nothing up.
        ("hold_up: 10 uF", drawn("1 mA", ""), FOREVER_S, 0.0, "its collapse", COLLAPSE),
        ("hold_up: 10 uF", drawn("", "1 mA"), FOREVER_S, 0.0, "its collapse", COLLAPSE),
        ("hold_up: 10 uF", drawn("{min: 1 mA}"), FOREVER_S, 0.0, "its collapse", COLLAPSE),
        ("hold_up: 10 uF", drawn("0 mA"), FOREVER_S, 0.0, "its collapse", COLLAPSE),
        ("hold_up: 10 uF", drawn("1 mA").replace("complete: [loads]", ""), FOREVER_S, 0.0, "its collapse", COLLAPSE),
        ("hold_up: {max: 10 uF}", drawn("1 mA"), FOREVER_S, 0.0, "its collapse", COLLAPSE),
    ],
)  # fmt: skip
def test_the_way_out_of_service(
    facts: str, more: str, sure: float, best: float, by: str, lacks: tuple[str, ...]
) -> None:
    text = f"nominal: 2 V, {RISE}, {facts}"
    found = ramp(text, more)
    assert (found.steepest.v_per_s, found.steepest.by) == (pytest.approx(sure), by)
    assert at_best(text, more).steepest.v_per_s == pytest.approx(best)
    assert found.lacks.steepest == lacks
    assert found.can_fall == (sure < FOREVER_S)


def test_the_pace_of_a_rail_that_its_maker_makes() -> None:
    """An end that is not known is any time at the sure corner, and none that could harm at the best one."""
    text = f"nominal: 2 V, rise: {{min: 1 ms}}, {FALL}"
    assert ramp(text).at_pace(fast=True) == (near(1e-3, 1e-3), near(4e-3, 4e-3))
    assert ramp(text).at_pace(fast=False) == (Bounds(0.0, FOREVER_S), near(40e-3, 40e-3))
    assert at_best(text).at_pace(fast=False) == (Bounds(FOREVER_S, 0.0), near(40e-3, 40e-3))


def test_a_rail_needs_a_nominal_level() -> None:
    assert ramps(RISE).lacks == {"a": ("rails.a.nominal",)}
    assert ramps(f"nominal: {{min: 1.9 V}}, {RISE}").lacks == {"a": ("rails.a.nominal.typ",)}
    assert ramps(f"nominal: {{min: 1.9 V, max: 2.1 V}}, {RISE}").lacks == {"a": ("rails.a.nominal.typ",)}
    assert ramp(f"nominal: {{min: 1.9 V, typ: 2 V}}, {RISE}").nominal_v == pytest.approx(2.0)
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
