"""Own range: a detector is good for the supply at which it decides, and survives what it reports."""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped, at_code
from tidegate.lint.derived.levels.response import response
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: a detector is characterised at the supply at which it decides"


@rule(
    "own_range/levels_inside",
    title="every trip level lies in the supply range the detector is good for",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Where the rail that a detector watches also feeds it: works_from (its greatest value) <= the lowest of the "
    "falling and rising levels, and the highest of them <= works_to (its least value), at every code that can be "
    "chosen. A detector fed by another rail is not judged here; a falling level below works_from is left to "
    "self_bias/works_at_own_trip.",
    facts=("comparators.*.domain", "domains.*.rail", "comparators.*.works_from, works_to", "comparators.*.trip, codes"),
    mend="a detector that works over a wider range, levels further in, or another rail to feed it",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {ov: {works_to: 1.95 V}}",
        holds="comparators: {ov: {works_to: 2.75 V}}",
    ),
)
def levels_lie_inside(comparator: Comparator, case: Case) -> Judgement:
    """Compare both ends of the levels of every code with the detector's own range."""
    fed_by = case.attempt(lambda: rail_of(case, comparator).id)
    if fed_by is not None and fed_by != comparator.watches:
        return case.not_applicable(f"{fed_by} feeds it, and not {comparator.watches}")
    facts = case.own
    from_v, to_v, _, found = case.gather(
        lambda: facts.most("works_from"),
        lambda: facts.least("works_to"),
        lambda: rail_of(case, comparator),
        lambda: case.gather_all([partial(_ends, case, at) for at in _at_every_code(comparator, case)]),
    )
    low, high = min(ends.least_v for ends in found), max(ends.most_v for ends in found)
    if not Measure(from_v, low, _V, Relation.AT_LEAST).holds and low == min(ends.falling_v for ends in found):
        return case.not_applicable("its falling level lies below its own range (self_bias/works_at_own_trip says so)")
    range_text = f"works from {show(from_v, _V)} to {show(to_v, _V)}; levels {show(low, _V)} to {show(high, _V)}"
    codes = f", over {len(comparator.codes)} codes" if comparator.codes else ""
    if low - from_v <= to_v - high:
        return case.at_least(
            need=from_v, have=low, dimension=_V, says="its lowest level", why=range_text + codes,
            mend=f"a detector that works from {show_down(low, _V)} or less; now {show(from_v, _V)}", at="works_from",
        )  # fmt: skip
    return case.at_most(
        need=to_v, have=high, dimension=_V, says="its highest level", why=range_text + codes,
        mend=f"a detector that works to {show_up(high, _V)} or more; now {show(to_v, _V)}", at="works_to",
    )  # fmt: skip


def _at_every_code(comparator: Comparator, case: Case) -> Iterator[Comparator]:
    if comparator.trip is not None or not comparator.codes:
        yield as_shipped(case, comparator)
    for code in comparator.codes:
        yield at_code(comparator, code)


class _Ends(msgspec.Struct, frozen=True):
    """The lowest and the highest of both levels, and the lowest falling one, in V."""

    least_v: float
    most_v: float
    falling_v: float


def _ends(case: Case, comparator: Comparator) -> _Ends:
    falling, rising = case.gather(lambda: falling_window(case, comparator), lambda: rising_window(case, comparator))
    least_v, most_v = min(falling.least_v, rising.least_v), max(falling.most_v, rising.most_v)
    return _Ends(least_v, most_v, falling.least_v)


@rule(
    "own_range/survives",
    title="an over-voltage detector survives what it reports, and reports it below the damage level",
    level=Level.ERROR,
    applies_to="comparators",
    proves="R_hi + s t <= the damage level of the rail, and, where the rail also feeds the detector, <= works_to: R_hi "
    "is the highest rising level, s the steepest overshoot and t the longest delay plus filter plus sampling period.",
    facts=(
        "comparators.*.trip", "comparators.*.delay, filter, sampling", "rails.*.overshoot", "rails.*.damage",
        "comparators.*.works_to",
    ),
    mend="a lower level, a faster answer, or a detector that stands more",
    sources=("common practice, no source: what reports a voltage must stand it",),
    example=Example(
        fails="comparators: {ov: {works_to: 1.973 V}}",
        holds="comparators: {ov: {works_to: 2.75 V}}",
    ),
    formulas=(trip_window.response_time_s, trip_window.droop_during_response_v),
)  # fmt: skip
def survives_what_it_reports(comparator: Comparator, case: Case) -> Judgement:
    """Compare the highest supply before the answer with the damage level and with the detector's own range."""
    if comparator.role != "over_voltage":
        return case.not_applicable("reports no over-voltage")
    rail = case.description.rails[comparator.watches]
    damage_v = case.of(rail).least("damage")
    fed = case.attempt(lambda: rail_of(case, comparator) is rail) is not False
    to_v = case.own.least("works_to") if fed else damage_v
    window, answer, _ = case.gather(
        lambda: rising_window(case, as_shipped(case, comparator)),
        lambda: response(case, comparator),
        lambda: rail_of(case, comparator),
    )
    if fed and window.most_v > to_v:
        return case.not_applicable("its level lies above its own range (own_range/levels_inside says so)")
    reached_v = window.most_v + answer.moved_v
    limit_v = min(damage_v, to_v)
    what = f"{rail.id} damages above" if limit_v == damage_v else "works to"
    return case.at_most(
        need=limit_v,
        have=reached_v,
        dimension=_V,
        says=f"until the answer {rail.id} reaches",
        why=f"rising level up to {show(window.most_v, _V)}, {show(answer.moved_v, _V)} more in "
        f"{show(answer.time_s, Dimension.DURATION)}; {what} {show(limit_v, _V)}",
        mend=f"a level {show_up(reached_v - limit_v, _V)} lower, or a faster answer",
        at="trip.rising" if comparator.trip is not None else "codes",
    )


RULES: Final[tuple[Rule, ...]] = (levels_lie_inside, survives_what_it_reports)
