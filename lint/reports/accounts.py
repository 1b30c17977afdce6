"""The account of a number as reports show it: what there is and what is needed, each as terms with signs."""

from __future__ import annotations

import math

import msgspec

from tidegate.lint.account import Line
from tidegate.lint.judgement import Judgement, Relation, difference
from tidegate.lint.quantity import NO_END, Dimension, show


class Side(msgspec.Struct, frozen=True):
    """One side of a comparison: its terms, and what they come to."""

    name: str
    """``have`` or ``need``."""
    word: str
    """What the result is called: what there is, or the limit with what must be done to it."""
    lines: tuple[Line, ...]
    value: float
    text: str


def sides(judgement: Judgement) -> tuple[Side, Side]:
    """What there is and what is needed; either may have no terms."""
    measure = judgement.measure
    assert measure is not None
    cut = len(judgement.account) - judgement.limits
    have, need = measure.texts()
    limit = "at least needed" if measure.relation is Relation.AT_LEAST else "at most allowed"
    return (
        Side("have", "there is", judgement.account[:cut], measure.have, have),
        Side("need", limit, judgement.account[cut:], measure.need, need),
    )


def sign(line: Line) -> str:
    """The sign of a term."""
    return "-" if line.value < 0.0 or (line.value == 0.0 and math.copysign(1.0, line.value) < 0.0) else "+"


def source(line: Line) -> str:
    """Where a term comes from; of one that is not known, what it waits for."""
    return ", ".join(line.waits) or line.of


def line_text(line: Line, dimension: Dimension) -> str:
    """The size of a term without its sign: ``46.2 mV``, ``40 mV or more``, ``not known``."""
    if not line.waits:
        return _size(line.value, dimension)
    ends = sorted(abs(end) for end in (line.sure, line.best) if end is not None)
    low, high = (ends[0], ends[-1]) if ends else (math.inf, math.inf)
    if math.isinf(low) or (low == 0.0 and math.isinf(high)):
        return "not known"
    if math.isinf(high):
        return f"{_size(low, dimension)} or more"
    return _size(low, dimension) if low == high else f"{_size(low, dimension)} to {_size(high, dimension)}"


def _size(value: float, dimension: Dimension) -> str:
    return NO_END if math.isinf(value) else show(abs(value), difference(dimension))
