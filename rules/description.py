"""Description: facts that contradict each other, whatever the circuit is."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator, Reference
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, Span, show
from tidegate.lint.rule import Example, Rule, rule

_COMMON_PRACTICE: Final = (
    "common practice, no source: two facts that cannot both hold make every judgement on them void"
)
_ROUNDING: Final = 1e-9


class _Order(msgspec.Struct, frozen=True):
    """Two levels of which the first must not be higher, in V; None where one is not given."""

    less_v: float | None
    less_says: str
    more_v: float | None
    more_says: str
    at: str

    @property
    def is_given(self) -> bool:
        return self.less_v is not None and self.more_v is not None

    @property
    def is_wrong(self) -> bool:
        return self.less_v is not None and self.more_v is not None and self.less_v > self.more_v * (1 + _ROUNDING)

    def text(self) -> str:
        less, more = (show(level_v or 0.0, Dimension.VOLTAGE) for level_v in (self.less_v, self.more_v))
        return f"{self.less_says} ({less}) lies above {self.more_says} ({more})"


def _answer(case: Case, orders: Sequence[_Order], what: str) -> Judgement:
    """Fail with every pair that contradicts; what is not given contradicts nothing."""
    wrong = [order for order in orders if order.is_wrong]
    if wrong:
        return case.fails("; ".join(order.text() for order in wrong), mend="correct one of the two", at=wrong[0].at)
    if any(order.is_given for order in orders):
        return case.passes(f"{what} agree")
    return case.not_applicable(f"nothing is given of {what} that could contradict")


def _least(span: Span | None) -> float | None:
    return None if span is None else span.least


def _most(span: Span | None) -> float | None:
    return None if span is None else span.most


def _middle(span: Span | None) -> float | None:
    return None if span is None else span.middle


@rule(
    "description/rails",
    title="the ranges of a rail lie inside one another",
    level=Level.ERROR,
    applies_to="rails",
    proves="guaranteed.min <= delivered.min <= nominal <= delivered.max <= guaranteed.max <= damage; the residual "
    "level and the dip of the ramp lie below the supply in service; the fastest ramp is not slower than the slowest.",
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
    nominal = _middle(rail.nominal)
    low, high = _least(rail.delivered), _most(rail.delivered)
    signed_high, damage = _most(rail.guaranteed), _least(rail.damage)
    top = "the highest supply delivered" if high is not None else "nominal"
    orders = [
        _Order(_least(rail.guaranteed), "the lowest supply signed off for", low, "the lowest delivered", "guaranteed"),
        _Order(low, "the lowest supply delivered", nominal, "nominal", "delivered"),
        _Order(nominal, "nominal", high, "the highest supply delivered", "delivered"),
        _Order(high, "the highest supply delivered", signed_high, "the highest signed off for", "guaranteed"),
        _Order(signed_high, "the highest supply signed off for", damage, "the damage level", "damage"),
        _Order(_most(rail.residual), "the residual level", low, "the lowest supply delivered", "residual"),
    ]
    if signed_high is None:
        orders.append(_Order(high if high is not None else nominal, top, damage, "the damage level", "damage"))
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
    return _answer(case, list(_load_orders(load, case)), "its working range and the range delivered")


def _load_orders(load: Load, case: Case) -> Iterator[_Order]:
    for index, need in enumerate(load.needs):
        delivered = case.description.rails[need.rail].delivered
        at = f"needs.{index}.works"
        yield _Order(_least(need.works), "its lowest supply", _least(delivered), f"the lowest of {need.rail}", at)
        yield _Order(_most(delivered), f"the highest of {need.rail}", _most(need.works), "its highest supply", at)


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
    if reference.kind == "external":
        return case.not_applicable("comes from outside the chip")
    voltage, lowest = _middle(reference.voltage), _most(reference.works_from)
    order = _Order(voltage, "its voltage", lowest, "the supply it works from", "works_from")
    return _answer(case, [order], "its voltage and its lowest supply")


@rule(
    "description/comparators",
    title="the facts of a detector agree with each other",
    level=Level.ERROR,
    applies_to="comparators",
    proves="works_from <= works_to; the levels stated in trip are those of the code it ships with; a re-arming level "
    "does not lie above the falling level. That the stated hysteresis is what lies between the levels is judged by "
    "claims/hysteresis.",
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
    trip = comparator.trip
    orders = [
        _Order(_most(comparator.works_from), "works_from", _least(comparator.works_to), "works_to", "works_from"),
    ]  # fmt: skip
    if comparator.role != "over_voltage":
        falling = _most(trip.falling) if trip is not None else None
        orders.append(
            _Order(_least(comparator.rearms_below), "rearms_below", falling, "the falling level", "rearms_below")
        )
    if trip is not None and comparator.ships_with is not None:
        code = comparator.codes[comparator.ships_with]
        for level in ("rising", "falling"):
            pair = _middle(getattr(trip, level)), _middle(getattr(code, level))
            names = f"the {level} level of trip", f"that of {comparator.ships_with}, which it ships with"
            at = f"codes.{comparator.ships_with}.{level}"
            orders.append(_Order(pair[0], names[0], pair[1], names[1], at))
            orders.append(_Order(pair[1], names[1], pair[0], names[0], at))
    return _answer(case, orders, "its own range, levels and codes")


RULES: Final[tuple[Rule, ...]] = (
    rail_ranges_nest,
    load_works_in_service,
    reference_below_its_supply,
    detector_facts_agree,
)
