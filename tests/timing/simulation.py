"""A step-by-step simulation of small subsystems: one part with one value for each tolerance, many small time steps.

It shares no code with the timing beyond the parts themselves.  Each element is a little machine that is asked once a
step what it is: on or off; "assert", "release" or "unknown".
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

from tidegate.lint.timing.parts import Bounds, ComparatorPart, LoadPart, ResetPart, SourcePart, StagePart, TimedPart

Pick = Callable[[Bounds], float]
Word = bool | str


@dataclass
class Run:
    """What every element was at every step."""

    times: list[float]
    said: dict[str, list[Word]]


def simulate(
    parts: Mapping[str, TimedPart], levels: Mapping[str, Callable[[float], float]], *, from_s: float, to_s: float,
    steps: int, pick: Pick, unknown_reads_as: str = "release",
) -> Run:  # fmt: skip
    """Run the parts, given in an order in which each comes after what it needs, with a value picked of each range."""
    step_s = (to_s - from_s) / steps
    machines = {name: _machine(part, pick, unknown_reads_as) for name, part in parts.items()}
    run = Run([], {name: [] for name in parts})
    for number in range(steps + 1):
        at_s = from_s + number * step_s
        now: dict[str, Word] = {}
        volts = {rail: level(at_s) for rail, level in levels.items()}
        for name, machine in machines.items():
            now[name] = machine(at_s, volts, now)
            run.said[name].append(now[name])
        run.times.append(at_s)
    return run


Machine = Callable[[float, Mapping[str, float], Mapping[str, Word]], Word]


def _machine(part: TimedPart, pick: Pick, unknown_reads_as: str) -> Machine:
    match part:
        case SourcePart():
            return _source(part, pick)
        case ComparatorPart():
            return _comparator(part, pick)
        case StagePart():
            return _stage(part, pick, unknown_reads_as)
        case ResetPart():
            return lambda at, volts, now: _combined([now[name] for name in part.driven_by], part.all_agree)
        case LoadPart():
            return _load(part, pick)
        case _:
            raise AssertionError(part)


def _source(part: SourcePart, pick: Pick) -> Machine:
    works_from, settling = pick(part.works_from), pick(part.settling)
    since: list[float] = []

    def step(at: float, volts: Mapping[str, float], now: Mapping[str, Word]) -> Word:
        if volts[part.rail] < max(works_from, 1e-9) or not all(now[name] is True for name in part.needs):
            since.clear()
            return False
        if not since:
            since.append(at)
        return at - since[0] >= settling

    return step


def _comparator(part: ComparatorPart, pick: Pick) -> Machine:
    works_from, rising, falling = pick(part.works_from), pick(part.rising), pick(part.falling)
    ignores, delay, pulse = pick(part.filter), pick(part.delay), pick(part.pulse)
    high: list[bool] = []
    filtered: list[bool] = []
    differs_since: list[float] = []
    history: list[tuple[float, bool]] = []
    released_since: list[float] = []
    fed_since: list[float] = []

    def step(at: float, volts: Mapping[str, float], now: Mapping[str, Word]) -> Word:
        level = volts[part.watches]
        is_high = level >= rising if not high else (level >= falling if high[0] else level >= rising)
        high[:] = [is_high]
        if not filtered:
            filtered.append(is_high)
        if is_high != filtered[0]:
            if not differs_since:
                differs_since.append(at)
            if at - differs_since[0] >= ignores:
                filtered[0] = is_high
                differs_since.clear()
        else:
            differs_since.clear()
        history.append((at, filtered[0]))
        seen = next((value for when, value in reversed(history) if when <= at - delay), history[0][1])
        asserts = seen if part.over else not seen
        if asserts:
            released_since.clear()
        elif not released_since:
            released_since.append(at if len(history) > 1 else -float("inf"))
        if released_since and at - released_since[0] < pulse:
            asserts = True
        if volts[part.rail] < max(works_from, 1e-9) or not all(now[name] is True for name in part.needs):
            fed_since.clear()
        elif not fed_since:
            fed_since.append(at if len(history) > 1 else -float("inf"))
        if not fed_since or at - fed_since[0] < delay:
            return {"asserts": "assert", "releases": "release", "undefined": "unknown"}[part.undecided]
        return "assert" if asserts else "release"

    return step


def _combined(given: list[Word], all_agree: bool) -> Word:
    strong, weak = ("release", "assert") if all_agree else ("assert", "release")
    if strong in given:
        return strong
    return "unknown" if "unknown" in given else weak


def _stage(part: StagePart, pick: Pick, unknown_reads_as: str) -> Machine:
    works_from, delay, hold_on = pick(part.works_from), pick(part.delay), pick(part.release_delay)
    history: list[tuple[float, Word]] = []
    alive_since: list[float] = []
    charge = [0.0]
    before = [0.0]
    latched = [False]

    def step(at: float, volts: Mapping[str, float], now: Mapping[str, Word]) -> Word:
        step_s, before[0] = at - before[0], at
        if volts[part.rail] < max(works_from, 1e-9) or not all(now[name] is True for name in part.needs):
            alive_since.clear()
            history.clear()
            charge[0], latched[0] = 0.0, False
            return {"asserts": "assert", "releases": "release", "none": "unknown"}[part.hold]
        given = _combined([now[name] for name in part.driven_by], part.all_agree)
        if not alive_since:
            alive_since.append(at)
        if part.latches and part.power_up == "releases":
            latched[0] = latched[0] or given == "assert" or (given == "unknown" and unknown_reads_as == "assert")
            given = "assert" if latched[0] else given
        if hold_on > 0.0:
            free = given == "release" or (given == "unknown" and unknown_reads_as == "release")
            if free:
                charge[0] = min(1.0, charge[0] + step_s / hold_on)
            elif part.discharge_s == 0.0:
                charge[0] = 0.0
            elif part.discharge_s < float("inf"):
                charge[0] = max(0.0, charge[0] - step_s / part.discharge_s)
            given = given if charge[0] >= 1.0 - 1e-9 else "assert"
        history.append((at, given))
        return next((value for when, value in reversed(history) if when <= at - delay), history[0][1])

    return step


def _load(part: LoadPart, pick: Pick) -> Machine:
    ready_s = pick(part.ready)
    since: list[float] = []

    def step(at: float, volts: Mapping[str, float], now: Mapping[str, Word]) -> Word:
        fed = all(works.least <= volts[rail] <= works.most for rail, works in part.works)
        if not fed or not all(now[name] is True for name in part.needs):
            since.clear()
            return False
        if not since:
            since.append(at)
        return at - since[0] >= ready_s

    return step
