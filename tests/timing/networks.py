"""A rail of round numbers, and what hangs on it, for networks that are timed by hand."""

from __future__ import annotations

from typing import Any

import msgspec

from tidegate.lint.derived.supply.steepest_fall import SteepestFall
from tidegate.lint.timing.evaluate import Network, State, evaluate, network
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
    DomainPart,
    LoadPart,
    RailPart,
    SourcePart,
    TimedPart,
)
from tidegate.lint.timing.ramps import RailRamp
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.waveform import Waveform

SLOW = Waveform(((0.0, 0.0), (4.0, 2.0)))
"""Half a volt a second up to 2 V at 4 s."""
HILL = Waveform(((0.0, 0.0), (4.0, 2.0), (10.0, 2.0), (14.0, 0.0)))
RAMP = RailRamp(2.0, Bounds(1.5, 1.5), Bounds(4.0, 8.0), Bounds(6.0, 12.0), SteepestFall(1 / 3, "its collapse"))
"""2 V; up from 1.5 V on; rises in 4 s to 8 s, falls in 6 s to 12 s."""


def scenario(waveform: Waveform = SLOW, **changes: Any) -> Scenario:
    return Scenario("tried", "tried", Scene.START, {"vdd": waveform}, **changes)


def net(*parts: TimedPart, ramps: dict[str, RailRamp] | None = None) -> Network:
    """A network of some parts beside the rail vdd and the domain aon on it, both always there."""
    base: list[TimedPart] = [RailPart("vdd", None, None, NOTHING), DomainPart("aon", "vdd", ())]
    return network({part.id: part for part in (*base, *parts)}, {"vdd": RAMP} if ramps is None else ramps)


def source(name: str, *needs: str, domain: str = "aon", rail: str = "vdd", **changes: Any) -> SourcePart:
    made = SourcePart(name, rail, domain, needs, Bounds(1.0, 1.5), Bounds(0.5, 1.0), starts_itself=False)
    return msgspec.structs.replace(made, **changes)


def load(name: str = "core", **changes: Any) -> LoadPart:
    made = LoadPart(name, (("vdd", Bounds(1.0, FOREVER_S)),), None, (), NOTHING, ())
    return msgspec.structs.replace(made, **changes)


def state(name: str, *parts: TimedPart, tried: Scenario | None = None) -> State:
    return evaluate(net(*parts), tried or scenario())[name]


MADE = RailPart("vx", None, "maker", Bounds(1.0, 3.0))
"""A rail that a source makes, 1 s to 3 s after it is on."""
