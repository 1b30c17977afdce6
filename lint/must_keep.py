"""What an open judgement asks of the facts that are missing: for each a value, for all together the room that is left.

It is worked out once for a review, by reading rules again, and kept with the graph for every form of the report.
"""

from __future__ import annotations

import math
from typing import Final

import msgspec

from tidegate.lint.account import Line
from tidegate.lint.break_even import break_evens
from tidegate.lint.corners import settling_choice
from tidegate.lint.derived.borne import BreakEven
from tidegate.lint.engine import Review, asker
from tidegate.lint.facts.names import dimension_at
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.judgement import Judgement, Kind

_NOTHING: Final = 1e-15
"""In kept units; what lies below is where a search ended, and no size."""


class MustKeep(msgspec.Struct, frozen=True):
    """What missing facts must keep for an open judgement to hold."""

    facts: tuple[BreakEven, ...] = ()
    """The value of each that has one by itself, the others at their best."""
    terms: tuple[str, ...] = ()
    """The terms of the account that are not known, or not to both ends."""
    room: float | None = None
    """What they may take together of the margin so far, in its unit; None where there is none, or no end to it."""
    choice: tuple[str, object] | None = None
    """A missing word, and the value of it with which the judgement holds whatever else is missing."""


def must_keep(review: Review, judgement: Judgement) -> MustKeep | None:
    """What the missing facts of an open judgement must keep; None for any other."""
    if judgement.kind is not Kind.OPEN:
        return None
    kept = review.graph.once(_kept)
    key = (judgement.rule, judgement.subject)
    if key not in kept:
        kept[key] = _worked_out(review, judgement)
    return kept[key]


def _kept(_graph: Graph) -> dict[tuple[str, str], MustKeep]:
    return {}


def _worked_out(review: Review, judgement: Judgement) -> MustKeep:
    measure = judgement.measure
    element = review.graph.elements.get(judgement.subject)
    rule = review.rules.get(judgement.rule)
    if element is None or rule is None or not judgement.missing:
        return MustKeep()
    terms = tuple(dict.fromkeys(line.name for line in waiting(judgement)))
    room = measure.margin if measure is not None and math.isfinite(measure.best_margin) else math.nan
    try:
        facts = tuple(each for each in break_evens(review, judgement) if _says_something(each))
        choice = None
        if any(dimension_at(fact) is None for fact in judgement.missing):  # else no word is missing
            choice = settling_choice(asker(rule, element, review.loaded.description, review.graph, judgement.level))
    except KeyboardInterrupt:
        raise
    except BaseException:  # whatever a rule does wrong when it is read again takes nothing from what it said
        return MustKeep(terms=terms, room=room if room >= 0.0 else None)
    return MustKeep(facts, terms, room if room >= 0.0 else None, choice)


def _says_something(kept: BreakEven) -> bool:
    """Whether a value is no mere bound of the language: to be at least nothing says nothing of a size."""
    dimension = dimension_at(kept.fact)
    return kept.at_most or abs(kept.value) > _NOTHING or (dimension is not None and dimension.signed)


def waiting(judgement: Judgement) -> tuple[Line, ...]:
    """The lines of the account that are not known, or not to both ends."""
    return tuple(line for line in judgement.account if line.waits)
