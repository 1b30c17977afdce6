"""Random small subsystems for the timing: parts by name, each after what it needs, and a supply to try them with."""

from __future__ import annotations

import random

from tidegate.lint.timing.evaluate import Network, network
from tidegate.lint.timing.parts import (
    NOTHING,
    Bounds,
    ComparatorPart,
    DomainPart,
    LoadPart,
    RailPart,
    ResetPart,
    SourcePart,
    StagePart,
    TimedPart,
)
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.waveform import Waveform

INFINITE = float("inf")


def bounds(chance: random.Random, least: float, most: float) -> Bounds:
    """A range within a range."""
    ends = sorted(chance.uniform(least, most) for _ in range(2))
    return Bounds(*ends)


def source(name: str, *, needs: tuple[str, ...], works_from: Bounds, settling: Bounds) -> SourcePart:
    return SourcePart(name, "vdd", "aon", needs, works_from, settling, starts_itself=False)


def comparator(
    name: str, *, needs: tuple[str, ...], works_from: Bounds, rising: Bounds, falling: Bounds, delay: Bounds,
    filter: Bounds = NOTHING, undecided: str = "undefined", pulse: Bounds = NOTHING,
) -> ComparatorPart:  # fmt: skip
    return ComparatorPart(
        id=name, rail="vdd", domain="aon", watches="vdd", needs=needs, armed_by=(), over=False, works_from=works_from,
        rising=rising, falling=falling, filter=filter, delay=delay, pulse=pulse,
        undecided=undecided,  # type: ignore[arg-type]
    )  # fmt: skip


def stage(
    name: str, *, driven_by: tuple[str, ...], works_from: Bounds, delay: Bounds, hold: str = "none",
    all_agree: bool = False, release_delay: Bounds = NOTHING, discharge_s: float = 0.0, latches: bool = False,
) -> StagePart:  # fmt: skip
    return StagePart(
        id=name, rail="vdd", domain="aon", needs=(), driven_by=driven_by, all_agree=all_agree, works_from=works_from,
        hold=hold,  # type: ignore[arg-type]
        latches=latches, power_up="releases", delay=delay, release_delay=release_delay, discharge_s=discharge_s,
    )  # fmt: skip


def load(name: str, *, needs: tuple[str, ...], works: Bounds, ready: Bounds) -> LoadPart:
    return LoadPart(name, (("vdd", works),), None, needs, ready, ("rst",))


def random_parts(chance: random.Random) -> dict[str, TimedPart]:
    """A bias, a reference, two detectors, three stages, a reset net and a load."""
    parts: dict[str, TimedPart] = {
        "bias": source("bias", needs=(), works_from=bounds(chance, 0.3, 0.8), settling=bounds(chance, 0.0, 3.0)),
        "ref": source("ref", needs=("bias",), works_from=bounds(chance, 0.5, 1.1), settling=bounds(chance, 0.5, 9.0)),
    }
    for name, needs in (("por", ("bias",)), ("uv", ("bias", "ref"))):
        middle = chance.uniform(0.8, 1.6)
        apart = chance.uniform(0.0, 0.08)
        parts[name] = comparator(
            name, needs=needs, works_from=bounds(chance, 0.4, 0.9),
            rising=Bounds(middle + apart, middle + apart + chance.uniform(0.0, 0.05)),
            falling=Bounds(middle - chance.uniform(0.0, 0.05), middle), delay=bounds(chance, 0.1, 2.0),
            filter=chance.choice((NOTHING, bounds(chance, 0.1, 2.5))),
            undecided=chance.choice(("asserts", "releases", "undefined")),
            pulse=chance.choice((NOTHING, NOTHING, bounds(chance, 1.0, 6.0))),
        )  # fmt: skip
    holds = ("asserts", "releases", "none")
    parts["first"] = stage(
        "first", driven_by=("uv",), works_from=bounds(chance, 0.4, 0.8), delay=bounds(chance, 0.0, 0.6),
        hold=chance.choice(holds), latches=chance.random() < 0.25,
    )  # fmt: skip
    parts["gather"] = stage(
        "gather", driven_by=("por", "first"), works_from=bounds(chance, 0.4, 0.8), delay=bounds(chance, 0.0, 0.6),
        hold=chance.choice(holds), all_agree=chance.random() < 0.3,
    )  # fmt: skip
    parts["last"] = stage(
        "last", driven_by=("gather",), works_from=bounds(chance, 0.4, 0.8), delay=bounds(chance, 0.0, 0.6),
        hold=chance.choice(holds), release_delay=chance.choice((NOTHING, bounds(chance, 1.0, 9.0))),
        discharge_s=chance.choice((0.0, 1.5, INFINITE)),
    )  # fmt: skip
    parts["rst"] = ResetPart("rst", ("last",), False, ("core",), "vdd", 0.0)
    parts["core"] = load(
        "core", needs=("ref",), works=Bounds(chance.uniform(0.8, 1.5), INFINITE), ready=bounds(chance, 0.0, 8.0)
    )
    return parts


def random_waveform(chance: random.Random) -> Waveform:
    """A supply that comes, may go back and dip, and may go again, within 100 s."""
    points = [(0.0, 0.0)]
    at_s = 0.0
    for _ in range(chance.randint(1, 4)):
        at_s += chance.uniform(2.0, 15.0)
        points.append((at_s, chance.uniform(0.2, 1.9)))
        at_s += chance.uniform(0.0, 8.0)
        points.append((at_s, points[-1][1]))
    points.append((at_s + chance.uniform(2.0, 12.0), chance.choice((1.8, 1.8, 0.0))))
    return Waveform(tuple(points))


def shifted(waveform: Waveform, by_s: float) -> Waveform:
    """The same supply, later by a time."""
    return Waveform(tuple((at_s + by_s, level_v) for at_s, level_v in waveform.points))


def with_supply(parts: dict[str, TimedPart]) -> Network:
    """The network of the parts, on one rail and in one domain that is always on."""
    return network({"vdd": RailPart("vdd", None, None, NOTHING), "aon": DomainPart("aon", "vdd", ()), **parts}, {})


def supplied_with(waveform: Waveform) -> Scenario:
    return Scenario("tried", "tried", Scene.START, {"vdd": waveform})
