"""The ladder of a rail: rungs, slacks, scale, and what is not known."""

from __future__ import annotations

import pytest

from tests.rules.sound import both, patched, without
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.reports.ladder import Ladder, ladder_lines, ladders

CLEAN = "reference: null, divider: null, offset: null, all: {of: total, amount: 10 mV, is: bound, at: rail}"
PATCH = (
    f"comparators: {{uv: {{trip: {{falling: 1.63 V, rising: 1.68 V}}, errors: {{{CLEAN}}}}}, "
    f"ov: {{trip: {{falling: 1.91 V, rising: 1.96 V}}, errors: {{{CLEAN}}}}}, "
    "por: {trip: {rising: {min: 1.2 V, max: 1.5 V}, falling: {min: 1.14 V, max: 1.44 V}}}}"
)


def ladder_of(patch: str, rail: str = "avdd") -> Ladder:
    description = patched(patch).description
    return next(ladder for ladder in ladders(description, build(description)) if ladder.rail == rail)


def test_rungs_and_slacks() -> None:
    rungs = {rung.name: (rung.slack_v, rung.slack_to) for rung in ladder_of(PATCH).rungs}
    # Plain differences: 2.5 - 1.97, 1.98 - 1.97, 1.9 - 1.89, 1.71 - 1.69, 1.62 - 1.6, 1.67 - 1.5.
    expected = {
        "damage": (0.53, "ov rising"),
        "ov rising": (0.01, "sign-off"),
        "ov falling": (0.01, "service"),
        "uv rising": (0.02, "service"),
        "uv falling": (0.02, "sign-off"),
        "por rising": (0.17, "uv rising"),
    }
    assert {name: (pytest.approx(slack), to) for name, (slack, to) in expected.items()} == {
        name: rungs[name] for name in expected
    }
    assert {name for name, (slack, _) in rungs.items() if slack is None} == {"service", "sign-off", "por falling"}


def test_highest_first() -> None:
    middles = [rung.window.least_v + rung.window.most_v for rung in ladder_of(PATCH).rungs]
    assert middles == sorted(middles, reverse=True)


def test_levels_out_of_order_have_a_slack_below_zero() -> None:
    rungs = {rung.name: rung.slack_v for rung in ladder_of(PATCH.replace("max: 1.5 V", "max: 1.7 V")).rungs}
    assert rungs["por rising"] == pytest.approx(-0.03)


@pytest.mark.parametrize("width", [68, 80, 110])
def test_to_scale(width: int) -> None:
    head, *lines = ladder_lines(ladder_of(PATCH), width=width)
    assert max(map(len, lines)) <= width
    assert all(ord(character) < 128 for line in lines for character in line)
    bars = {line[2:].split("  ")[0].strip(): line for line in lines}
    damage, service = bars["damage"].index("|"), bars["service"]
    sign_off = bars["sign-off"]
    step_v = (2.5 - 1.14) / (damage - bars["por falling"].index("#"))
    assert head.startswith("avdd, to scale, ")
    assert (service.index("]") - service.index("[")) * step_v == pytest.approx(0.18, abs=1.5 * step_v)
    assert (sign_off.index("]") - sign_off.index("[")) * step_v == pytest.approx(0.38, abs=1.5 * step_v)
    assert (damage - sign_off.index("]")) * step_v == pytest.approx(0.52, abs=1.5 * step_v)


def test_as_it_is_shown() -> None:
    assert list(ladder_lines(ladder_of(PATCH), width=80)) == [
        "avdd, to scale, 52 mV a column",
        "  damage                                 |  2.5 V           +530 mV to ov rising",
        "  ov rising                   ##            1.95 to 1.97 V  +10 mV to sign-off",
        "  ov falling                  #             1.9 to 1.92 V   +10 mV to service",
        "  service                 [==]              1.71 to 1.89 V",
        "  sign-off              [------]            1.6 to 1.98 V",
        "  uv rising              ##                 1.67 to 1.69 V  +20 mV to service",
        "  uv falling            ##                  1.62 to 1.64 V  +20 mV to sign-off",
        "  por rising    #######                     1.2 to 1.5 V    +170 mV to uv rising",
        "  por falling  #######                      1.14 to 1.44 V",
    ]


def test_a_narrow_terminal_gets_a_list() -> None:
    lines = list(ladder_lines(ladder_of(PATCH), width=40))
    assert max(map(len, lines)) <= 40
    assert lines[:4] == [
        "avdd, no room to draw it to scale",
        "  damage       2.5 V",
        "    +530 mV to ov rising",
        "  ov rising    1.95 to 1.97 V",
    ]


def test_what_is_not_known_is_said_in_one_line() -> None:
    *_, last = ladder_lines(ladder_of(without("rails.avdd.damage")), width=80)
    assert last == "  not given: rails.avdd.damage"
    gone = without(
        *(f"comparators.{name}.trip" for name in ("uv", "ov", "por")),
        *(f"rails.avdd.{fact}" for fact in ("damage", "guaranteed")),
    )
    (line,) = ladder_lines(ladder_of(gone), width=80)
    assert line.startswith("avdd: no ladder, not given: comparators.por.trip.")


def test_a_level_is_drawn_as_far_as_it_is_told() -> None:
    """Without its errors a nominal level reaches at least to its nominal; a typical one says no more."""
    patch = both(PATCH, without("comparators.uv.errors"))
    rungs = {rung.name: rung for rung in ladder_of(patch).rungs}
    falling = rungs["uv falling"]
    assert (falling.window.least_v, falling.window.most_v, falling.open) == (1.63, 1.63, True)
    assert falling.slack_v == pytest.approx(0.03)
    *lines, last = ladder_lines(ladder_of(patch), width=90)
    assert last == "  not given: comparators.uv.errors"
    shown = next(line for line in lines if "uv falling" in line)
    assert "1.63 V or beyond" in shown and shown.endswith("+30 mV at most to sign-off")
    about = ladder_of(
        both(PATCH, "comparators: {uv: {hysteresis: null, trip: {falling: {typ: 1.63 V}, rising: {min: 1.66 V}}}}")
    )
    rungs = {rung.name: rung for rung in about.rungs}
    window = rungs["uv falling"].window  # a typical level is a nominal one
    assert (window.least_v, window.most_v) == (pytest.approx(1.62), pytest.approx(1.64))
    assert (rungs["uv rising"].window.least_v, rungs["uv rising"].open) == (1.66, True)


def test_a_rail_that_no_detector_watches_has_no_ladder() -> None:
    description = patched("comparators: {uv_core: {watches: avdd}}").description
    assert [ladder.rail for ladder in ladders(description, build(description))] == ["avdd"]


def test_long_names_are_shortened() -> None:
    from tidegate.lint.reports.ladder import Rung

    rungs = (Rung("a_name_that_goes_on_and_on rising", Window(1.0, 1.1)), Rung("service", Window(0.5, 0.6)))
    _, line, _ = ladder_lines(Ladder("avdd", rungs, ()), width=80)
    assert line.startswith("  a_name_th.. rising  ")


def test_all_levels_alike_can_be_drawn() -> None:
    from tidegate.lint.reports.ladder import Rung

    rungs = (Rung("uv rising", Window(1.0, 1.0)), Rung("uv falling", Window(1.0, 1.0)))
    assert [line.count("#") for line in ladder_lines(Ladder("avdd", rungs, ()), width=80)] == [0, 1, 1]
