"""Own range: a detector is good for the supply at which it decides, and survives what it reports."""

from __future__ import annotations

import math
from collections.abc import Iterator
from functools import partial
from typing import Final

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped, at_code
from tidegate.lint.derived.levels.furthest import highest, lowest
from tidegate.lint.derived.levels.response import moved_v
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import TripLevel, falling_window, rising_window
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule

_V: Final = Dimension.VOLTAGE
_COMMON_PRACTICE: Final = "common practice, no source: a detector is characterised at the supply at which it decides"


@rule(
    "own_range/levels_inside",
    title="every trip level lies in the supply range the detector is good for",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Where the rail that a detector watches also feeds it: works_from (its greatest value) <= the lowest of the "
    "falling and rising levels, and the highest of them <= works_to (its least value), at every code that can be "
    "chosen. A detector fed by another rail is not judged here.",
    facts=("comparators.*.domain", "domains.*.rail", "comparators.*.works_from, works_to", "comparators.*.trip, codes"),
    mend="a detector that works over a wider range, levels further in, or another rail to feed it",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="comparators: {ov: {works_to: 1.95 V}}",
        holds="comparators: {ov: {works_to: 2.75 V}}",
    ),
    formulas=LEVEL_FORMULAS,
    yields=("self_bias/works_at_own_trip",),
)
def levels_lie_inside(comparator: Comparator, case: Case) -> Judgement:
    """Compare both ends of the levels of every code with the detector's own range."""
    fed_by, unsaid = _fed_by(comparator, case)
    if not unsaid and fed_by != comparator.watches:
        return case.not_applicable(f"{fed_by} feeds it, and not {comparator.watches}")
    if unsaid and case.at_best:
        return case.passes(f"another rail than {comparator.watches} may feed it")
    facts = case.of(comparator)
    from_v, to_v = facts.works_from.most(), facts.works_to.least()
    low, high = _furthest(comparator, case)
    least, most = show(low.value, _V), show(high.value, _V)
    range_text = f"works from {show(from_v, _V)} to {show(to_v, _V)}; levels {least} to {most}"
    codes = f", over {len(comparator.codes)} codes" if comparator.codes else ""
    if low.value - from_v <= to_v - high.value:
        return case.at_least(
            need=from_v, have=low, dimension=_V, says="its lowest level", why=range_text + codes,
            mend=f"a detector that works from {show_down(low.value, _V)} or less; now {show(from_v, _V)}",
            at="works_from",
        )  # fmt: skip
    return case.at_most(
        need=to_v, have=high, dimension=_V, says="its highest level", why=range_text + codes,
        mend=f"a detector that works to {show_up(high.value, _V)} or more; now {show(to_v, _V)}", at="works_to",
    )  # fmt: skip


def _fed_by(comparator: Comparator, case: Case) -> tuple[str | None, bool]:
    """The rail that feeds a detector, and whether that is not said; then it is noted."""
    domain = case.description.domains.get(comparator.domain or "")
    if domain is not None and domain.rail is not None:
        return domain.rail, False
    case.reading.block((comparator.fact("domain") if domain is None else domain.fact("rail"),))
    return None, True


def _furthest(comparator: Comparator, case: Case) -> tuple[Sum, Sum]:
    """The lowest and the highest that a level can lie, at any code."""
    levels = [
        level
        for chosen in _at_every_code(comparator, case)
        for level in (falling_window(case, chosen), rising_window(case, chosen))
    ]
    ends = case.each(partial(_both_ends, level) for level in levels)
    return lowest([low for low, _ in ends]), highest([high for _, high in ends])


def _both_ends(level: TripLevel) -> tuple[Sum, Sum]:
    return level.end("least"), level.end("most")


def _at_every_code(comparator: Comparator, case: Case) -> Iterator[Comparator]:
    if comparator.trip is not None or not comparator.codes:
        yield as_shipped(case, comparator)
    for code in comparator.codes:
        yield at_code(comparator, code)


def _where_its_own_range_is_the_limit(comparator: Comparator, description: Description) -> tuple[str, ...]:
    """The detector, where it stands less than its rail."""
    own, rail = comparator.works_to, description.rails[comparator.watches]
    if own is None or own.least is None:
        return ()
    damage_v = None if rail.damage is None else rail.damage.least
    return (comparator.id,) if damage_v is None or own.least < damage_v else ()


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
    formulas=(*LEVEL_FORMULAS, trip_window.response_time_s, trip_window.droop_during_response_v),
    yields=(Yield("own_range/levels_inside", _where_its_own_range_is_the_limit),),
)  # fmt: skip
def survives_what_it_reports(comparator: Comparator, case: Case) -> Judgement:
    """Compare the highest supply before the answer with the damage level and with the detector's own range."""
    if comparator.role != "over_voltage":
        return case.not_applicable("reports no over-voltage")
    rail = case.description.rails[comparator.watches]
    own, damage_v = case.of(comparator), case.of(rail).damage.least()
    fed_by, unsaid = _fed_by(comparator, case)
    fed = case.perhaps(fed_by == rail.id, might=unsaid)
    to_v = own.works_to.least() if fed else math.inf
    at_own = to_v < damage_v
    level = rising_window(case, comparator).end("most")
    moves = case.sum(
        plus(f"{rail.id} rises until the answer", lambda: moved_v(case, comparator), of=own.delay, floor=0.0)
    )
    limit = case.sum(
        plus("works to", own.works_to.least, of=own.works_to) if at_own
        else plus(f"{rail.id} damages above", lambda: damage_v, of=case.of(rail).damage)
    )  # fmt: skip
    reached = level.plus(moves)
    what = "works to" if at_own else f"{rail.id} damages above"
    return case.at_most(
        need=limit,
        have=reached,
        dimension=_V,
        says=f"until the answer {rail.id} reaches",
        why=f"rising level up to {show(level.value, _V)}, {show(moves.value, _V)} more until the answer; {what} "
        f"{show(limit.value, _V)}",
        mend=f"a level {show_up(reached.value - limit.value, _V)} lower, or a faster answer",
        at="trip.rising" if comparator.trip is not None else "codes",
    )


RULES: Final[tuple[Rule, ...]] = (levels_lie_inside, survives_what_it_reports)
