"""What missing facts must keep for an open judgement to hold, found by reading its rule again.

A fact that waits stands at its best while the others do too; moved towards its worst, it is found where the margin
reaches nothing.  With several facts waiting, each such value is necessary, and the room is theirs together; with one,
it is also sufficient.
"""

from __future__ import annotations

import math
from functools import partial

from tidegate.lint.corners import Ask
from tidegate.lint.derived.borne import BreakEven, break_even
from tidegate.lint.engine import Review, asker
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading, Wait
from tidegate.lint.judgement import Judgement, Kind, Relation
from tidegate.lint.physics.domain import DomainError


def break_evens(review: Review, judgement: Judgement) -> tuple[BreakEven, ...]:
    """What each missing number of an open judgement must keep, the others at their best.

    Facts that cannot spoil it by themselves, such as the factor of a product whose other factor may be nothing, have
    none.
    """
    if judgement.kind is not Kind.OPEN or judgement.measure is None or not judgement.measure.best_margin >= 0.0:
        return ()
    rule, element = review.rules[judgement.rule], review.graph.elements[judgement.subject]
    ask = asker(rule, element, review.loaded.description, review.graph, judgement.level)
    chosen, waits = _best_reading(ask)
    alone = len(waits) == 1 == len(judgement.missing)
    found = (break_even(partial(_margin, ask), wait, chosen, alone=alone) for wait in waits)
    return tuple(one for one in found if one is not None)


def _best_reading(ask: Ask) -> tuple[dict[str, object], list[Wait]]:
    """The choices of the reading at the best corner, and the ends that wait in it."""
    reading = Reading(Corner.BEST)
    _margin(ask, reading)
    return dict(reading.chosen), list(reading.waits.values())


def _margin(ask: Ask, reading: Reading) -> float:
    """The margin in a reading, not rounded; not a number where there is none."""
    try:
        measure = ask(reading).measure
    except (MissingFactsError, DomainError):
        return math.nan
    if measure is None:
        return math.nan
    over = measure.have - measure.need
    return over if measure.relation is Relation.AT_LEAST else -over
