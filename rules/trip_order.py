"""Trip windows of one rail among each other: power-on below under-voltage, and both below over-voltage."""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.placement_facts import PLACED_ROLES
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import trip_margin
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_PLACE: Final = {role: place for place, role in enumerate(PLACED_ROLES)}


class _Levels(msgspec.Struct, frozen=True):
    detector: Comparator
    falling: Window
    rising: Window


class _Step(msgspec.Struct, frozen=True):
    """A level of one detector that must stay below a level of the next."""

    below: Comparator
    above: Comparator
    level: str
    below_window: Window
    above_window: Window

    @property
    def gap_v(self) -> float:
        return self.above_window.least_v - self.below_window.most_v

    @property
    def is_in_order_nominally(self) -> bool:
        """Whether the middle of the one level lies above the middle of the other."""
        below, above = self.below_window, self.above_window
        return above.least_v + above.most_v > below.least_v + below.most_v


@rule(
    "trip_window/order",
    title="the detectors of a rail decide in order, nominally and at the extremes",
    level=Level.ERROR,
    applies_to="rails",
    proves="Highest rising level of every power-on detector <= lowest rising level of every under-voltage detector, so "
    "that power-on lets go before under-voltage decides, and the same for the falling levels, so that under-voltage "
    "asserts first on the way down; highest rising level of both <= lowest falling level of every over-voltage "
    "detector. Where the nominal levels stand in order and only the extremes overlap, detectors that take their level "
    "from one reference are for a person to look at: what they share moves both. Where the supply in service and the "
    "damage level stand among them is judged by trip_window/nuisance, trip_window/release and own_range/survives.",
    facts=("comparators.*.trip of every detector of the rail",),
    mend="move the levels apart, or narrow their errors",
    sources=("common practice, no source: power-on, under-voltage, service, over-voltage, damage",),
    example=Example(
        fails="comparators: {por: {trip: {rising: {min: 1.17 V, max: 1.68 V}, falling: {min: 1.11 V, max: 1.43 V}}}}",
        holds="comparators: {por: {trip: {rising: {min: 1.17 V, max: 1.49 V}, falling: {min: 1.11 V, max: 1.43 V}}}}",
    ),
    formulas=(trip_margin.power_on_before_under_voltage_v,),
)
def detectors_stand_in_order(rail: Rail, case: Case) -> Judgement:
    """Find the narrowest step between detectors of different roles."""
    comparators = case.description.comparators
    watching = [comparators[name] for name in case.graph.tails(rail.id, EdgeKind.WATCHES)]
    placed = [comparator for comparator in watching if comparator.role in _PLACE]
    if len({comparator.role for comparator in placed}) < 2:
        return case.not_applicable("fewer than two sorts of detector watch it")
    found = case.gather_all([partial(_levels, case, detector) for detector in placed])
    found.sort(key=lambda levels: _PLACE[levels.detector.role])
    step = min(_steps(found), key=lambda step: step.gap_v)
    ladder = ", ".join(
        f"{levels.detector.id} {show(levels.falling.least_v, _V)} to {show(levels.rising.most_v, _V)}"
        for levels in found
    )
    says = f"{step.level} of {step.above.id} above {step.below.id}, worst against worst:"
    overlap_v = -step.gap_v
    reference = step.below.reference
    shared = reference is not None and reference == step.above.reference
    if overlap_v > 0.0 and step.is_in_order_nominally and shared:
        return case.asks(
            f"{step.below.id} and {step.above.id} overlap by {show(overlap_v, _V)} at the extremes, and not nominally",
            why=f"both take their level from {reference}, whose error moves both; {ladder}",
            mend=f"show that what they do not share is at least {show_up(overlap_v, _V)} smaller, or move them apart",
            measure=Measure(0.0, step.gap_v, _V, Relation.AT_LEAST),
        )
    return case.at_least(
        need=step.below_window.most_v,
        have=step.above_window.least_v,
        dimension=_V,
        says=says,
        why=ladder,
        mend=f"{step.above.id} and {step.below.id} {show_up(overlap_v, _V)} further apart",
    )


def _levels(case: Case, detector: Comparator) -> _Levels:
    shipped = as_shipped(case, detector)
    falling, rising = case.gather(lambda: falling_window(case, shipped), lambda: rising_window(case, shipped))
    return _Levels(detector, falling, rising)


def _steps(found: list[_Levels]) -> Iterator[_Step]:
    """The narrowest step of each sort: of the highest below and the lowest above, for each two roles."""
    by_role = [[x for x in found if x.detector.role == role] for role in PLACED_ROLES]
    power_on, under, over = by_role
    if power_on and under:
        for level in ("rising", "falling"):
            low = max(power_on, key=lambda x: getattr(x, level).most_v)
            high = min(under, key=lambda x: getattr(x, level).least_v)
            yield _Step(low.detector, high.detector, f"{level} level", getattr(low, level), getattr(high, level))
    if over and (power_on or under):
        low = max((*power_on, *under), key=lambda x: x.rising.most_v)
        high = min(over, key=lambda x: x.falling.least_v)
        yield _Step(low.detector, high.detector, "falling level", low.rising, high.falling)


RULES: Final[tuple[Rule, ...]] = (detectors_stand_in_order,)
