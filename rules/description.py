"""Description: facts that contradict each other, whatever the circuit is."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.trip_levels import falling_window
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import Better, Corner, MissingFactsError, Reading
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_COMMON_PRACTICE: Final = (
    "common practice, no source: two facts that cannot both hold make every judgement on them void"
)
_ROUNDING: Final = 1e-9
_LESS: Final = Better.LESS
_MORE: Final = Better.MORE


class _Order(msgspec.Struct, frozen=True):
    """Two levels of which the first must not be higher, in V, as they stand in a reading."""

    less_v: float
    less_says: str
    more_v: float
    more_says: str
    at: str
    usual: bool = False
    """Whether the order is what is usual only: a person must look where it is not kept."""
    follows: bool = False
    """Whether it follows from others, and need not be told beside them."""

    @property
    def is_wrong(self) -> bool:
        rounding_v = _ROUNDING * abs(self.more_v) if math.isfinite(self.more_v) else 0.0
        return self.less_v > self.more_v + rounding_v

    def text(self) -> str:
        less, more = (show(level_v, Dimension.VOLTAGE) for level_v in (self.less_v, self.more_v))
        return f"{self.less_says} ({less}) lies above {self.more_says} ({more})"


def _answer(case: Case, orders: Callable[[Case], Iterator[_Order]], what: str) -> Judgement:
    """Fail with every pair that contradicts whatever is missing; what may still turn out to is open."""
    certain = [order for order in orders(_at_best(case)) if order.is_wrong]
    if any(not order.usual for order in certain):
        told = [order for order in certain if not order.follows]
        told = certain if all(order.usual for order in told) else told
        return case.fails("; ".join(order.text() for order in told), mend="correct one of the two", at=told[0].at)
    wrong = [order for order in orders(case) if order.is_wrong]
    if any(not order.usual for order in wrong):
        return case.fails(wrong[0].text(), mend="correct one of the two", at=wrong[0].at)
    if wrong:
        return case.asks(
            "; ".join(order.text() for order in wrong), why="it is so on some rails, and a slip on most",
            mend="correct one of the two, or say why it is so", at=wrong[0].at,
        )  # fmt: skip
    return case.passes(f"{what} agree")


def _at_best(case: Case) -> Case:
    """The same case with all that is missing at its best: what contradicts there does so whatever is missing."""
    return Case(
        subject=case.subject, rule=case.rule, level=case.level, description=case.description, graph=case.graph,
        reading=Reading(Corner.BEST, chosen=case.reading.chosen),
    )  # fmt: skip


@rule(
    "description/rails",
    title="the ranges of a rail lie inside one another",
    level=Level.ERROR,
    applies_to="rails",
    proves="guaranteed.min <= delivered.min and delivered.max <= guaranteed.max <= damage; the residual level lies "
    "below the supply in service. A nominal level outside of what is delivered is for a person to look at.",
    facts=("rails.*.nominal", "rails.*.delivered", "rails.*.guaranteed", "rails.*.damage", "rails.*.residual"),
    mend="correct the range that is wrong",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="rails: {vcore: {guaranteed: {min: 1.08 V, max: 1.25 V}}}",
        holds="rails: {vcore: {guaranteed: {min: 1.08 V, max: 1.32 V}}}",
    ),
)
def rail_ranges_nest(rail: Rail, case: Case) -> Judgement:
    """Hold each range of the rail against the next."""

    def orders(at: Case) -> Iterator[_Order]:
        own = at.of(rail)
        delivered, guaranteed, damage = own.delivered, own.guaranteed, own.damage
        low, high = "the lowest supply delivered", "the highest supply delivered"
        yield _Order(
            guaranteed.least(_LESS), "the lowest supply signed off for", delivered.least(_MORE),
            "the lowest delivered", "guaranteed",
        )  # fmt: skip
        yield _Order(delivered.least(_LESS), low, own.nominal.typical(_MORE), "nominal", "delivered", usual=True)
        yield _Order(own.nominal.typical(_LESS), "nominal", delivered.most(_MORE), high, "delivered", usual=True)
        yield _Order(delivered.most(_LESS), high, guaranteed.most(_MORE), "the highest signed off for", "guaranteed")
        yield _Order(
            guaranteed.most(_LESS), "the highest supply signed off for", damage.least(_MORE), "the damage level",
            "damage",
        )  # fmt: skip
        yield _Order(own.residual.most(_LESS), "the residual level", delivered.least(_MORE), low, "residual")
        yield _Order(delivered.most(_LESS), high, damage.least(_MORE), "the damage level", "damage", follows=True)

    return _answer(case, orders, "its ranges")


@rule(
    "description/loads",
    title="a load works in the whole range that its rail delivers",
    level=Level.ERROR,
    applies_to="loads",
    proves="needs.works.min <= the lowest supply delivered and the highest supply delivered <= needs.works.max, for "
    "every rail the load needs; else no detector could both protect it and stay quiet.",
    facts=("loads.*.needs.*.works", "rails.*.delivered"),
    mend="correct the range of the load or that of the rail",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="loads: {core_logic: {needs: {0: {works: {min: 1.08 V, max: 1.25 V}}}}}",
        holds="loads: {core_logic: {needs: {0: {works: {min: 1.08 V, max: 1.32 V}}}}}",
    ),
)
def load_works_in_service(load: Load, case: Case) -> Judgement:
    """Hold the working range of the load against what each rail delivers."""
    if not load.needs:
        raise MissingFactsError([load.fact("needs")])

    def orders(at: Case) -> Iterator[_Order]:
        for index, need in enumerate(load.needs):
            works, delivered = at.of(load).needs[index].works, at.of(at.description.rails[need.rail]).delivered
            fact, rail = f"needs.{index}.works", need.rail
            yield _Order(works.least(_LESS), "its lowest supply", delivered.least(_MORE), f"the lowest of {rail}", fact)
            yield _Order(delivered.most(_LESS), f"the highest of {rail}", works.most(_MORE), "its highest supply", fact)

    return _answer(case, orders, "its working range and the range delivered")


@rule(
    "description/references",
    title="a reference does not make more than the supply it works from",
    level=Level.ERROR,
    applies_to="references",
    proves="voltage <= works_from for a reference that is made on the chip: without a charge pump no output lies above "
    "the supply.",
    facts=("references.*.voltage", "references.*.works_from", "references.*.kind"),
    mend="correct the voltage, or the lowest supply",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="references: {ref_fast: {works_from: {max: 0.55 V}}}",
        holds="references: {ref_fast: {works_from: {max: 1.06 V}}}",
    ),
)
def reference_below_its_supply(reference: Reference, case: Case) -> Judgement:
    """Hold the voltage against the lowest supply."""
    if case.of(reference).kind.must() == "external":
        return case.not_applicable("comes from outside the chip")

    def orders(at: Case) -> Iterator[_Order]:
        own = at.of(reference)
        yield _Order(
            own.voltage.typical(_LESS), "its voltage", own.works_from.most(_MORE), "the supply it works from",
            "works_from",
        )  # fmt: skip

    return _answer(case, orders, "its voltage and its lowest supply")


@rule(
    "description/comparators",
    title="the facts of a detector agree with each other",
    level=Level.ERROR,
    applies_to="comparators",
    proves="works_from <= works_to; the levels stated in trip and those of the code it ships with have something in "
    "common; a re-arming level does not lie above the falling level. That the stated hysteresis is what lies between "
    "the levels is judged by claims/hysteresis.",
    facts=(
        "comparators.*.works_from, works_to", "comparators.*.trip, codes, ships_with", "comparators.*.rearms_below",
    ),
    mend="correct one of the two facts",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {uv: {ships_with: one, codes: {one: {rising: 1.682 V, falling: 1.632 V}}}}",
        holds="comparators: {uv: {ships_with: one, codes: {one: {rising: 1.677 V, falling: 1.627 V}}}}",
    ),
)  # fmt: skip
def detector_facts_agree(comparator: Comparator, case: Case) -> Judgement:
    """Hold its range, its levels, its codes and its re-arming level against each other."""

    def orders(at: Case) -> Iterator[_Order]:
        own = at.of(comparator)
        yield _Order(own.works_from.most(_LESS), "works_from", own.works_to.least(_MORE), "works_to", "works_from")
        if comparator.role != "over_voltage":
            yield _Order(
                own.rearms_below.least(_LESS), "rearms_below", _highest_falling_v(comparator, at), "the falling level",
                "rearms_below",
            )  # fmt: skip
        if comparator.trip is not None and comparator.ships_with in comparator.codes:
            yield from _code_orders(comparator, comparator.ships_with, at)

    return _answer(case, orders, "its own range, levels and codes")


def _highest_falling_v(comparator: Comparator, case: Case) -> float:
    """The falling level at its highest, in V: as it is stated, else from the rising one."""
    trip = case.of(comparator).trip
    if trip.falling.given is not None:
        return trip.falling.most(_MORE)
    return case.turned(lambda: falling_window(case, as_shipped(case, comparator)).most_v)


def _code_orders(comparator: Comparator, code: str, case: Case) -> Iterator[_Order]:
    """What is stated in trip and what at the code it ships with: neither lies above the other altogether."""
    trip, shipped = case.of(comparator).trip, case.of(comparator).codes[code]
    levels = {"rising": (trip.rising, shipped.rising), "falling": (trip.falling, shipped.falling)}
    for level, (stated, chosen) in levels.items():
        names = f"the {level} level of trip", f"that of {code}, which it ships with"
        at = f"codes.{code}.{level}"
        yield _Order(stated.least(_LESS), names[0], chosen.most(_MORE), names[1], at)
        yield _Order(chosen.least(_LESS), names[1], stated.most(_MORE), names[0], at)


RULES: Final[tuple[Rule, ...]] = (
    rail_ranges_nest,
    load_works_in_service,
    reference_below_its_supply,
    detector_facts_agree,
)
