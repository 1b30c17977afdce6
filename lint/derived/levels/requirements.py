"""What the levels of a detector must keep: what it guards is protected, service is quiet, and reset comes back.

Each is written once, as signed terms.  The rules judge it, the placement solves it for the level, the yield draws it,
and its account is what a reader checks by hand.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.account import Sum, less, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound, greatest_supplies, guarded_loads, least_supplies
from tidegate.lint.derived.levels.level_distance import Distance, distance
from tidegate.lint.derived.levels.response import moved_v, response_text
from tidegate.lint.derived.levels.trip_levels import End, TripLevel, Which, falling_window, rising_window
from tidegate.lint.derived.reset_path.guarding_nets import watching
from tidegate.lint.derived.reset_path.path_gaps import unsaid_ways
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.facts.view import factors
from tidegate.lint.facts.views.supply import RailFacts
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Path
from tidegate.lint.graph.paths import Reach, drives
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.physics.hysteresis import release_droop_v
from tidegate.lint.quantity import Dimension, show

_V: Final = Dimension.VOLTAGE
_SIDES: Final[Mapping[str, tuple[str, Relation]]] = {
    "least": ("lowest", Relation.AT_LEAST), "most": ("highest", Relation.AT_MOST),
}  # fmt: skip


class Requirement(msgspec.Struct, frozen=True):
    """One end of a level against the limit that it must keep, both as sums of named terms, in V at the rail."""

    name: str
    """What it keeps: protects, quiet, comes back, lets go in order."""
    which: Which
    end: End
    """The end of the level that is compared: its least must be at least the limit, its most at most."""
    have: Sum
    need: Sum
    why: str
    bound: Bound | None = None
    """What sets the limit, where that is a load or what must work once reset lets go."""

    @property
    def measure(self) -> Measure:
        """The end of the level and its limit; what they may be at best, where extremes need not meet, beside it."""
        measure = Measure(self.need.value, self.have.value, _V, _SIDES[self.end][1])
        loose = self.have.loose + self.need.loose
        if loose <= 0.0:
            return measure
        return msgspec.structs.replace(measure, sure=measure.margin, best=measure.margin + loose)

    @property
    def margin_v(self) -> float:
        """How far the level keeps its limit, in V; below 0 it does not."""
        return self.measure.margin

    @property
    def is_kept(self) -> bool:
        """Whether the level keeps its limit; at the limit, it does."""
        return self.measure.holds

    @property
    def says(self) -> str:
        """What is measured."""
        return f"{self.which} level at its {_SIDES[self.end][0]}"

    @property
    def path(self) -> Path:
        """The way to what sets the limit."""
        return self.bound.path if self.bound is not None else ()


class Due(msgspec.Struct, frozen=True):
    """What the levels of a detector must keep, yet to be worked out."""

    name: str
    end: End
    """The end of a level that is compared: the least must be at least its limit, the most at most."""
    work_out: Callable[[Case, Comparator], Requirement | None]


def requirements(comparator: Comparator) -> tuple[Due, ...]:
    """Everything that the levels of a detector must keep."""
    over = comparator.role == "over_voltage"
    found = [
        Due("protects", _end(over), protects),
        Due("quiet", _end(not over), quiet),
        Due("comes back", _end(not over), comes_back),
    ]
    if comparator.role == "power_on":
        found.append(Due("lets go in order", "most", lets_go_first))
    return tuple(found)


@answered_once
def protects_nothing(case: Case, comparator: Comparator) -> bool:
    """Whether nothing leans on a detector: no load that needs its rail, nothing that must work once it lets go."""
    if comparator.role == "power_on":
        return follower_supplies(case, comparator) == [] and not guard_gaps(case, comparator)
    if guard_gaps(case, comparator):
        return False
    return not any(
        need.rail == comparator.watches
        for load, _ in guarded_loads(case.graph, comparator.id)
        for need in load.needs
    )  # fmt: skip


def protects(case: Case, comparator: Comparator) -> Requirement | None:
    """The level that protects, against the most demanding of what leans on it; None where nothing does.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    bounds, gaps = _bounds(case, comparator), guard_gaps(case, comparator)
    if not bounds and gaps:
        raise MissingFactsError(gaps)
    return _protected(case, comparator, bounds[0], gaps=gaps) if bounds else None


def protects_rail(case: Case, comparator: Comparator) -> Requirement:
    """The level that protects, against the range that its rail is signed off for: where nothing leans on a detector.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    rail = case.description.rails[comparator.watches]
    guaranteed = case.of(rail).guaranteed
    log = case.reading.listen()
    level_v = guaranteed.most() if comparator.role == "over_voltage" else guaranteed.least()
    case.reading.unlisten()
    return _protected(case, comparator, Bound(level_v, rail.id, guaranteed.path, (), tuple(log)), gaps=())


def _protected(case: Case, comparator: Comparator, first: Bound, *, gaps: Sequence[str]) -> Requirement:
    """The level that protects, against what is most demanding, and what is not said of what else it may guard."""
    over = comparator.role == "over_voltage"
    level, end = _protecting(case, comparator), _end(over)
    rail = comparator.watches
    verb = "is signed off" if first.element == rail else "works"
    works = f"{first.element} {verb} {'up to' if over else 'from'}"
    need = [plus(works, lambda: first.level_v, of=first.fact)]
    why = f"{works} {_known(first.level_v)}"
    if comparator.role != "power_on" or first.element in case.description.loads:
        moves = f"{rail} {'rises' if over else 'falls'} until the answer"
        term = less if over else plus
        need.append(term(moves, lambda: moved_v(case, comparator), of=case.of(comparator).delay, floor=0.0))
        why = f"{why}; until the answer, {response_text(case, comparator)}"
    if gaps:
        need.append((less if over else plus)("what else it may guard", partial(_unsaid, gaps), of=gaps[0], floor=0.0))
    needed = _with_lines(case.sum(*need), first)
    return Requirement("protects", level.which, end, level.end(end), needed, why, first)


def guard_gaps(case: Case, comparator: Comparator) -> tuple[str, ...]:
    """What is not said of the ways on which it might guard more than it is seen to."""
    kept = case.graph.once(_kept_gaps)
    if comparator.id not in kept:
        kept[comparator.id] = unsaid_ways(case, Reach(comparator.id, drives(case.graph)))
    return kept[comparator.id]


def _kept_gaps(_graph: Graph) -> dict[str, tuple[str, ...]]:
    return {}


def _unsaid(gaps: Sequence[str]) -> float:
    raise MissingFactsError(gaps)


def _with_lines(need: Sum, first: Bound) -> Sum:
    """The need, with what the level of the most demanding waits for in its first line."""
    if not first.waits:
        return need
    line, *rest = need.lines
    return Sum(need.value, (msgspec.structs.replace(line, waits=first.waits), *rest))


def _end(over: bool) -> End:
    return "most" if over else "least"


def _bounds(case: Case, comparator: Comparator) -> Sequence[Bound]:
    if comparator.role == "power_on":
        return follower_supplies(case, comparator)
    return (
        greatest_supplies(case, comparator) if comparator.role == "over_voltage" else least_supplies(case, comparator)
    )


def _protecting(case: Case, comparator: Comparator) -> TripLevel:
    """The level that protects: the one that asserts; of a power-on detector the lower one."""
    falling, rising = falling_window(case, comparator), rising_window(case, comparator)
    if comparator.role == "over_voltage":
        return rising
    if comparator.role == "power_on" and rising.least_v < falling.least_v:
        return rising
    return falling


def protects_down_to_v(case: Case, comparator: Comparator) -> float:
    """Down (or up) to which level a detector protects whatever it guards, in V: its level less the move of the rail.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    over = comparator.role == "over_voltage"
    level = _protecting(case, comparator)
    moves_v = moved_v(case, comparator)
    return level.most_v + moves_v if over else level.least_v - moves_v


def quiet(case: Case, comparator: Comparator) -> Requirement:
    """The level that asserts, against the supply in service.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    rail = case.of(case.description.rails[comparator.watches])
    if comparator.role == "over_voltage":
        return _above_service(case, comparator, rising_window(case, comparator), "quiet")
    need = case.sum(
        plus(f"{comparator.watches} delivered, least", rail.delivered.least, of=rail.delivered),
        less("half the ripple", lambda: half_ripple_v(rail), of=rail.ripple.peak_to_peak),
        less("load step at release", lambda: step_v(rail), of=rail.load_step),
    )
    why = f"{_service(comparator, need, 'down to')}, less {_parts(need)}"
    return Requirement("quiet", "falling", "most", falling_window(case, comparator).end("most"), need, why)


def comes_back(case: Case, comparator: Comparator) -> Requirement:
    """The level that lets go, against the supply at which it must.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    rail = case.of(case.description.rails[comparator.watches])
    if comparator.role == "over_voltage":
        return _above_service(case, comparator, falling_window(case, comparator), "comes back")
    need = case.sum(
        plus(f"{comparator.watches} delivered, least", rail.delivered.least, of=rail.delivered),
        less("half the ripple", lambda: half_ripple_v(rail), of=rail.ripple.peak_to_peak),
    )
    why = f"{_service(comparator, need, 'down to')}, less {_parts(need)}"
    return Requirement("comes back", "rising", "most", rising_window(case, comparator).end("most"), need, why)


def _above_service(case: Case, comparator: Comparator, level: TripLevel, name: str) -> Requirement:
    """Either level of an over-voltage detector stays above the supply in service."""
    rail = case.of(case.description.rails[comparator.watches])
    need = case.sum(
        plus(f"{comparator.watches} delivered, greatest", rail.delivered.most, of=rail.delivered),
        plus("half the ripple", lambda: half_ripple_v(rail), of=rail.ripple.peak_to_peak),
    )
    why = f"{_service(comparator, need, 'up to')}, plus {_parts(need)}"
    return Requirement(name, level.which, "least", level.end("least"), need, why)


@answered_once
def lets_go_first(case: Case, comparator: Comparator) -> Requirement | None:
    """A power-on detector lets go before any under-voltage detector of its rail; None for every other.

    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    if comparator.role != "power_on":
        return None
    others = watching(case.graph, comparator.watches, ("under_voltage",))
    if not others:
        return None
    found = case.each(partial(_releases, case, comparator, other) for other in others)
    nearest, other = min(zip(found, others, strict=True), key=lambda each: each[0].gap_v)
    why = f"{other.id} lets go from {_known(nearest.above.value)} on"
    return Requirement(
        "lets go in order", "rising", "most", nearest.below, nearest.above, why,
        Bound(nearest.above.value, other.id, f"comparators.{other.id}.trip.rising", ()),
    )  # fmt: skip


def _releases(case: Case, comparator: Comparator, other: Comparator) -> Distance:
    return distance(case, comparator, "rising", as_shipped(case, other), "rising")


def half_ripple_v(rail: RailFacts) -> float:
    """How far the ripple goes to either side of the supply, in V."""
    return rail.ripple.peak_to_peak.most() / 2


def step_v(rail: RailFacts) -> float:
    """How far the supply drops when the loads start to draw current at release, in V."""
    step_a, source_ohm = factors(rail.load_step, rail.source_impedance)
    return release_droop_v(load_step_a=step_a, source_ohm=source_ohm)


def _service(comparator: Comparator, need: Sum, words: str) -> str:
    return f"{comparator.watches} is delivered {words} {_known(need.lines[0].value)}"


def _known(level_v: float) -> str:
    return show(level_v, _V) if math.isfinite(level_v) else "a supply that is not given"


def _parts(need: Sum) -> str:
    """What is taken off, or added, in words; what is not known is named."""
    texts = [
        f"{show(abs(line.value), _V)} ({line.name})"
        if not line.waits and math.isfinite(line.value)
        else f"{line.name} (not given)"
        for line in need.lines[1:]
    ]
    return " and ".join(texts)
