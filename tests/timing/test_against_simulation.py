"""The timing against a simulation in small steps: every simulated edge lies inside its interval; the ends are reached.

The simulation (simulation.py) is independent: one machine an element, one value for each tolerance, asked once a step.
"""

from __future__ import annotations

import random
from collections.abc import Mapping

import pytest

from tests.timing.random_subsystems import (
    bounds,
    comparator,
    load,
    random_parts,
    random_waveform,
    source,
    stage,
    supplied_with,
    with_supply,
)
from tests.timing.simulation import Pick, Word, simulate
from tidegate.lint.timing.evaluate import LoadState, State, evaluate
from tidegate.lint.timing.interval import Times, delayed, is_in
from tidegate.lint.timing.parts import Bounds, ResetPart, TimedPart
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.waveform import Waveform

SUBSYSTEMS = 40
DRAWS = 4
STEPS = 700
ROOM_IN_STEPS = 12
"""An element notices a change up to one step late, and passes it on; the longest chain has eight elements."""


def _sets(state: State) -> Mapping[Word, Times]:
    """When an element may be what the simulation can say."""
    match state:
        case Decision():
            return {"assert": state.may_assert, "release": state.may_release, "unknown": state.may_be_unknown}
        case On():
            return {True: state.may_be_on, False: state.may_be_off}
        case LoadState():
            return {True: state.ready.may_be_on, False: state.ready.may_be_off}
        case _:
            raise AssertionError(state)


def _any_value(chance: random.Random) -> Pick:
    """A value at an end, or anywhere between."""
    return lambda range_: chance.choice((range_.least, range_.most, chance.uniform(range_.least, range_.most)))


@pytest.mark.parametrize("seed", range(SUBSYSTEMS))
def test_every_simulated_state_is_one_that_may_be(seed: int) -> None:
    chance = random.Random(seed)
    parts, waveform = random_parts(chance), random_waveform(chance)
    states = evaluate(with_supply(parts), supplied_with(waveform))
    to_s = waveform.points[-1][0] + 25.0
    room_s = ROOM_IN_STEPS * (to_s + 2.0) / STEPS
    wide = {
        name: {word: delayed(times, least_s=-room_s, most_s=room_s) for word, times in _sets(states[name]).items()}
        for name in parts
    }
    for draw in range(DRAWS):
        run = simulate(
            parts, {"vdd": waveform.level_v}, from_s=-2.0, to_s=to_s, steps=STEPS, pick=_any_value(chance),
            unknown_reads_as=("release", "assert")[draw % 2],
        )  # fmt: skip
        for name in parts:
            for at_s, word in zip(run.times, run.said[name], strict=True):
                assert is_in(wide[name][word], at_s), (name, at_s, word, parts[name], states[name], waveform)


def _chain(chance: random.Random) -> dict[str, TimedPart]:
    """Elements in a row, so that no two ways share a tolerance."""
    middle = chance.uniform(1.0, 1.5)
    return {
        "bias": source("bias", needs=(), works_from=bounds(chance, 0.3, 0.5), settling=bounds(chance, 0.5, 3.0)),
        "ref": source("ref", needs=("bias",), works_from=Bounds(0.3, 0.3), settling=bounds(chance, 1.0, 6.0)),
        "uv": comparator(
            "uv", needs=("ref",), works_from=Bounds(0.3, 0.3), rising=Bounds(middle, middle + 0.05),
            falling=Bounds(middle - 0.05, middle), delay=bounds(chance, 0.2, 2.0), undecided="asserts",
        ),
        "out": stage("out", driven_by=("uv",), works_from=Bounds(0.3, 0.3), delay=bounds(chance, 0.1, 0.8),
                     hold="asserts", release_delay=bounds(chance, 1.0, 6.0)),
        "rst": ResetPart("rst", ("out",), False, ("core",), "vdd", 0.0),
    }  # fmt: skip


def _first(run_said: list[Word], times: list[float], word: Word) -> float:
    return next(at for at, said in zip(times, run_said, strict=True) if said == word)


@pytest.mark.parametrize("seed", range(12))
def test_without_reconvergence_both_ends_are_reached(seed: int) -> None:
    """All tolerances at their least give the earliest release, all at their greatest the latest."""
    chance = random.Random(seed)
    parts = _chain(chance)
    rise_s = chance.uniform(0.5, 30.0)
    waveform = Waveform(((0.0, 0.0), (rise_s, 1.8)))
    state = evaluate(with_supply(parts), supplied_with(waveform))["rst"]
    assert isinstance(state, Decision)
    (earliest_s, _), *_ = state.may_release
    latest_s = state.may_assert[-1][1]
    to_s, steps = rise_s + 25.0, 2000
    room_s = 6 * (to_s + 1.0) / steps
    for pick, expected_s in ((lambda range_: range_.least, earliest_s), (lambda range_: range_.most, latest_s)):
        run = simulate(parts, {"vdd": waveform.level_v}, from_s=-1.0, to_s=to_s, steps=steps, pick=pick)
        assert _first(run.said["rst"], run.times, "release") == pytest.approx(expected_s, abs=room_s)


def test_where_ways_share_a_tolerance_the_intervals_are_wider_than_what_can_be() -> None:
    """A reference that both a release and a load wait for: by intervals the load is late while the release is early."""
    parts: dict[str, TimedPart] = {
        "ref": source("ref", needs=(), works_from=Bounds(0.5, 0.5), settling=Bounds(1.0, 9.0)),
        "uv": comparator("uv", needs=("ref",), works_from=Bounds(0.5, 0.5), rising=Bounds(1.0, 1.0),
                         falling=Bounds(0.9, 0.9), delay=Bounds(2.0, 2.0), undecided="asserts"),
        "rst": ResetPart("rst", ("uv",), False, ("core",), "vdd", 0.0),
        "core": load("core", needs=("ref",), works=Bounds(1.0, 99.0), ready=Bounds(0.0, 1.0)),
    }  # fmt: skip
    net, tried = with_supply(parts), supplied_with(Waveform(((0.0, 0.0), (1.0, 2.0))))

    def slack_s(ends: dict[str, bool]) -> float:
        state = evaluate(net.pinned(ends), tried)["core"]
        assert isinstance(state, LoadState)
        return state.reset.may_release[0][0] - state.ready.may_be_off[0][1]

    # The reference works from 0.25 s on: released by 0.25 + 1 + 2 s at the earliest, ready by 0.25 + 9 + 1 s.
    assert slack_s({}) == pytest.approx(3.25 - 10.25)
    # At either end of the reference, for both alike: 2 s of delay against 1 s to be ready.
    assert slack_s({"ref": False}) == pytest.approx(1.0)
    assert slack_s({"ref": True}) == pytest.approx(1.0)
