"""A number that a document states, beside the one that its own components make."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.judgement import Judgement, Measure, Relation
from tidegate.lint.quantity import Dimension, Span, show

ROUNDING: Final = 0.005
"""Share by which two numbers of three digits each may differ: half a unit of the third digit of 1.00."""


class Made(msgspec.Struct, frozen=True):
    """What the components make, at the least and at the most, and how that was worked out."""

    least: float
    most: float
    how: str


def held_against(
    case: Case, stated: Span, made: Made, *, dimension: Dimension, what: str, slack: float, at: str
) -> Judgement:
    """Judge a stated number by what its components make; ``slack`` is what rounding may leave, in the same unit.

    A stated range must hold all that the components make; a single value must be one that they can make; an end that
    is not stated is not judged.
    """
    measures = _measures(stated, made, slack, dimension)
    words, measure = min(measures, key=lambda found: found[1].margin)
    made_text = show(made.least, dimension)
    if made.most != made.least:
        made_text += f" to {show(made.most, dimension)}"
    answer = case.at_least if measure.relation is Relation.AT_LEAST else case.at_most
    return answer(
        need=measure.need, have=measure.have, dimension=dimension, says=words.format(what=what),
        why=f"{made.how}: {made_text}; up to {show(slack, dimension)} is taken for rounding",
        mend=f"state {made_text}, or correct the components", at=at,
    )  # fmt: skip


def _measures(stated: Span, made: Made, slack: float, dimension: Dimension) -> Iterator[tuple[str, Measure]]:
    """Every comparison that is due, and how it is worded."""
    single = stated.typical if stated.least == stated.most else None
    if single is not None:
        yield "{what} as stated", Measure(made.least - slack, single, dimension, Relation.AT_LEAST)
        yield "{what} as stated", Measure(made.most + slack, single, dimension, Relation.AT_MOST)
        return
    if stated.least is not None:
        yield (
            "{what} that the components make, least",
            Measure(stated.least - slack, made.least, dimension, Relation.AT_LEAST),
        )
    if stated.most is not None:
        yield (
            "{what} that the components make, greatest",
            Measure(stated.most + slack, made.most, dimension, Relation.AT_MOST),
        )
