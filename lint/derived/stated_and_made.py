"""A number that a document states, beside the one that its own components make: two ways that must meet."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from typing import Final, TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.facts.reading import Better
from tidegate.lint.facts.view import Number
from tidegate.lint.judgement import Judgement, Measure, Relation
from tidegate.lint.quantity import Dimension, show

ROUNDING: Final = 0.005
"""Share by which two numbers of three digits each may differ: half a unit of the third digit of 1.00."""


class Made(msgspec.Struct, frozen=True):
    """What the components make, at the least and at the most, and how that was worked out."""

    least: float
    most: float
    how: str

    def text(self, dimension: Dimension) -> str:
        """Both ends, or the one number."""
        least, most = show(self.least, dimension), show(self.most, dimension)
        return least if self.most == self.least else f"{least} to {most}"


def share_for_rounding(end: float) -> float:
    """What rounding may leave at an end: half a per cent of it."""
    return ROUNDING * abs(end) if math.isfinite(end) else 0.0


def held_against(
    case: Case, stated: Number, make: Callable[[], Made], *, dimension: Dimension, what: str, at: str,
    rounding: Callable[[float], float] = share_for_rounding,
) -> Judgement:  # fmt: skip
    """Judge a stated number by what its components make; ``rounding`` is what rounding may leave at an end.

    A stated range must hold all that the components make; a typical value, or a single one, must be one that they can
    make.  An end that is not stated is not known, and neither is one of which a component is not.
    """
    typical = list(_of_typical(case, stated, make, rounding, dimension))
    single = stated.given is not None and stated.given.least == stated.given.typical == stated.given.most
    off = [found for found in typical if not found[1].holds]
    measures = typical if single else off or list(_of_ends(stated, make, rounding, dimension))
    words, measure, made, slack = min(measures, key=lambda found: found[1].margin)
    answer = case.at_least if measure.relation is Relation.AT_LEAST else case.at_most
    return answer(
        need=measure.need, have=measure.have, dimension=dimension, says=words.format(what=what),
        why=f"{made.how}: {made.text(dimension)}; up to {show(slack, dimension)} is taken for rounding",
        mend=f"state {made.text(dimension)}, or correct the components", at=at,
    )  # fmt: skip


_Found: TypeAlias = tuple[str, Measure, Made, float]
"""A comparison: how it is worded, its numbers, what the components make, and what is taken for rounding."""


def _of_typical(
    case: Case, stated: Number, make: Callable[[], Made], rounding: Callable[[float], float], dimension: Dimension
) -> Iterator[_Found]:
    """A typical value, or a single one, against what the components can make: the more they can, the better."""
    value = None if stated.given is None else stated.given.typical
    if value is not None:
        made = case.turned(make)
        low, high = rounding(made.least), rounding(made.most)
        word = "{what} as stated"
        yield word, Measure(made.least - low, value, dimension, Relation.AT_LEAST), made, low
        yield word, Measure(made.most + high, value, dimension, Relation.AT_MOST), made, high


def _of_ends(
    stated: Number, make: Callable[[], Made], rounding: Callable[[float], float], dimension: Dimension
) -> Iterator[_Found]:
    """Both ends of a range against those of what the components make."""
    made = make()
    low, high = rounding(made.least), rounding(made.most)
    least, most = stated.least(Better.LESS), stated.most(Better.MORE)
    word = "{what} that the components make, "
    yield f"{word}least", Measure(least - low, made.least, dimension, Relation.AT_LEAST), made, low
    yield f"{word}greatest", Measure(most + high, made.most, dimension, Relation.AT_MOST), made, high
