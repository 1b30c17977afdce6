"""Trip windows of one rail among each other: power-on below under-voltage, and both below over-voltage."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.level_distance import Distance, distance
from tidegate.lint.derived.levels.placed_roles import PLACED_ROLES
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import TripLevel, Which, falling_window, rising_window
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_PLACE: Final = {role: place for place, role in enumerate(PLACED_ROLES)}
_MOST_TOLD: Final = 12


class _Step(msgspec.Struct, frozen=True):
    """A level of one detector that must stay below a level of another one."""

    below: Comparator
    low: Which
    above: Comparator
    high: Which

    @property
    def pair(self) -> str:
        """Both detectors, from below."""
        return f"{self.below.id} to {self.above.id}"

    def distance(self, case: Case) -> Distance:
        """How near the two levels come.

        Raises: MissingFactsError: where it is not said at which code a detector ships.
        """
        return distance(case, as_shipped(case, self.below), self.low, as_shipped(case, self.above), self.high)


@rule(
    "trip_window/order",
    title="the detectors of a rail decide in order, nominally and at the extremes",
    level=Level.ERROR,
    applies_to="rails",
    proves="Highest rising level of every power-on detector <= lowest rising level of every under-voltage detector, so "
    "that power-on lets go before under-voltage decides, and the same for the falling levels, so that under-voltage "
    "asserts first on the way down; highest rising level of both <= lowest falling level of every over-voltage "
    "detector. Nominal levels are parted by the errors that either has alone, and by the difference of those of a "
    "reference that both use, which move both; levels that are stated as ranges are compared worst against worst. The "
    "distance of every pair is told. Where the supply in service and the damage level stand among them is judged by "
    "trip_window/nuisance, trip_window/release and own_range/survives.",
    facts=("comparators.*.trip of every detector of the rail, with errors or ranges", "comparators.*.reference"),
    mend="move the levels apart, or narrow their errors",
    sources=("common practice, no source: power-on, under-voltage, service, over-voltage, damage",),
    example=Example(
        fails="comparators: {por: {trip: {rising: {min: 1.17 V, max: 1.68 V}, falling: {min: 1.11 V, max: 1.43 V}}}}",
        holds="comparators: {por: {trip: {rising: {min: 1.17 V, max: 1.49 V}, falling: {min: 1.11 V, max: 1.43 V}}}}",
    ),
    formulas=(*LEVEL_FORMULAS,),
)
def detectors_stand_in_order(rail: Rail, case: Case) -> Judgement:
    """Find the nearest of all pairs of detectors of different roles."""
    comparators = case.description.comparators
    watching = [comparators[name] for name in case.graph.tails(rail.id, EdgeKind.WATCHES)]
    placed = sorted((one for one in watching if one.role in _PLACE), key=lambda one: _PLACE[one.role])
    if len({comparator.role for comparator in placed}) < 2:
        return case.not_applicable("fewer than two sorts of detector watch it")
    steps = list(_steps(placed))
    nearest, step = min(((_nearest(case, step), step) for step in steps), key=lambda found: found[0].gap_v)
    how = f"as {nearest.shared} moves both" if nearest.shared else "worst against worst"
    return case.at_least(
        need=nearest.below,
        have=nearest.above,
        dimension=_V,
        says=f"{step.high} level of {step.above.id} above {step.below.id}, {how}:",
        why=f"{', '.join(_ladder(case, placed))}; apart: {', '.join(_told(case, steps))}",
        mend=f"{step.above.id} and {step.below.id} {show_up(-nearest.gap_v, _V)} further apart",
    )


def _steps(placed: Sequence[Comparator]) -> Iterator[_Step]:
    """What must stay below what: every pair of detectors of different roles."""
    for below in placed:
        for above in placed:
            if _PLACE[below.role] < _PLACE[above.role]:
                if above.role == "over_voltage":
                    yield _Step(below, "rising", above, "falling")
                else:
                    yield _Step(below, "rising", above, "rising")
                    yield _Step(below, "falling", above, "falling")


def _nearest(case: Case, step: _Step) -> Distance:
    """The distance of a step; one of which nothing is known keeps no other from being judged."""
    noted = list(case.missing)
    try:
        return step.distance(case)
    except MissingFactsError as error:
        case.asked.missing = noted
        case.reading.block([fact for fact in error.missing if fact not in noted])
        return Distance(Sum(-math.inf if case.at_best else math.inf, ()), Sum(0.0, ()), "")


def _ladder(case: Case, placed: Sequence[Comparator]) -> Iterator[str]:
    """From where to where the levels of each detector lie."""
    for detector in placed:
        ends = case.if_known(partial(_ends_v, case, detector))
        yield f"{detector.id} {'not known' if ends is None else ' to '.join(show(end_v, _V) for end_v in ends)}"


def _ends_v(case: Case, detector: Comparator) -> tuple[float, float]:
    falling: TripLevel = falling_window(case, detector)
    return falling.least_v, rising_window(case, detector).most_v


def _told(case: Case, steps: Sequence[_Step]) -> Iterator[str]:
    """How far each pair is apart, at its nearest."""
    for pair in dict.fromkeys(step.pair for step in steps[:_MOST_TOLD]):
        gaps = [(step, case.if_known(partial(step.distance, case))) for step in steps if step.pair == pair]
        texts = [_gap(step, found, several=len(gaps) > 1) for step, found in gaps]
        yield f"{pair} {' and '.join(texts)}"
    if len(steps) > _MOST_TOLD:
        yield f"and {len(steps) - _MOST_TOLD} more steps"


def _gap(step: _Step, found: Distance | None, *, several: bool) -> str:
    which = f"{step.high} " if several else ""
    return f"{which}{'not known' if found is None else show(found.gap_v, _V)}"


RULES: Final[tuple[Rule, ...]] = (detectors_stand_in_order,)
