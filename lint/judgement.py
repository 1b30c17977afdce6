"""What a rule says about one element: its kind, the numbers behind it, the path, and what would mend it."""

from __future__ import annotations

import math
from enum import StrEnum

import msgspec

from tidegate.lint.description.place import Place
from tidegate.lint.graph.edge import Path
from tidegate.lint.quantity import Dimension, parse, show, show_apart


class Kind(StrEnum):
    """What a judgement says; the words are those of SARIF 2.1.0, section 3.27.9."""

    PASS = "pass"
    FAIL = "fail"
    OPEN = "open"
    REVIEW = "review"
    NOT_APPLICABLE = "notApplicable"


class Level(StrEnum):
    """How much a finding weighs; the words are those of SARIF 2.1.0, section 3.27.10."""

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"


class Relation(StrEnum):
    """What a number must do to its limit."""

    AT_LEAST = "at least"
    AT_MOST = "at most"


class Measure(msgspec.Struct, frozen=True):
    """A number against its limit, both in the dimension's kept unit; a positive margin is good."""

    need: float
    have: float
    dimension: Dimension
    relation: Relation

    @property
    def margin(self) -> float:
        """How far on the good side the number is; what rounding leaves of an exact tie counts as none."""
        margin = self.have - self.need if self.relation is Relation.AT_LEAST else self.need - self.have
        rounding = 1e-9 * max(abs(self.need), abs(self.have))
        return 0.0 if abs(margin) <= rounding < math.inf else margin

    @property
    def holds(self) -> bool:
        """Whether the number keeps its limit; at the limit, it does."""
        return self.margin >= 0.0

    @property
    def slack(self) -> float:
        """The margin as a share of the need (of the number found where that is 0): margins of all kinds compare."""
        margin = self.margin
        if margin == 0.0 or math.isinf(margin):
            return margin
        return margin / (abs(self.need) or abs(self.have))

    def texts(self) -> tuple[str, str]:
        """The number found and its limit, with digits enough to tell them apart; a tie is told as one."""
        if self.margin == 0.0:
            return show(self.need, self.dimension), show(self.need, self.dimension)
        return show_apart(self.have, self.need, self.dimension)

    def text(self) -> str:
        """``25 mV, at least 38 mV needed``."""
        have, need = self.texts()
        return f"{have}, {self.relation} {need} needed"

    def margin_text(self) -> str:
        """The margin, with its sign."""
        margin = self.margin
        text = show(abs(margin), difference(self.dimension))
        return f"-{text}" if margin < 0 else f"+{text}"


def difference(dimension: Dimension) -> Dimension:
    """The dimension of a difference: kelvins on the Celsius scale have no zero of their own."""
    return Dimension.COUNT if dimension is Dimension.TEMPERATURE else dimension


class Judgement(msgspec.Struct, frozen=True, kw_only=True):
    """What one rule says about one element."""

    rule: str
    subject: str
    kind: Kind
    level: Level
    message: str
    at: str
    """The fact of the description that the judgement is about, as a path with dots."""
    why: str = ""
    """The numbers behind the measure, or the assumption that a person must look at."""
    measure: Measure | None = None
    path: Path = ()
    missing: tuple[str, ...] = ()
    mend: str = ""
    place: Place | None = None
    """Where it stands, for what stands outside the description; None where ``at`` says it."""
    waiver: str = ""
    """Why the finding is accepted; empty where it is not."""


def least_margin(judgement: Judgement, asked: str) -> Judgement:
    """A judgement that passes, held against a margin that is asked for: a quantity, or a share of the need.

    Raises: QuantityError: if the text is neither.
    """
    measure = judgement.measure
    assert measure is not None
    least = (
        parse(asked, Dimension.RATIO) * abs(measure.need)
        if asked.endswith(("%", "ppm"))
        else parse(asked, difference(measure.dimension))
    )
    if measure.margin >= least * (1 - 1e-9):
        return judgement
    message = (
        f"{judgement.message}; the margin of {measure.margin_text()} is less than the {asked} that the settings ask for"
    )
    mend = f"another {show(least - measure.margin, difference(measure.dimension))} of margin"
    return msgspec.structs.replace(judgement, kind=Kind.FAIL, message=message, mend=mend)
