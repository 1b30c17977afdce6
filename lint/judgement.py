"""What a rule says about one element: its kind, the numbers behind it, the path, and what would mend it."""

from __future__ import annotations

from enum import StrEnum

import msgspec

from tidegate.lint.graph.edge import Path
from tidegate.lint.quantity import Dimension, show, show_apart


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
        return 0.0 if abs(margin) <= 1e-9 * max(abs(self.need), abs(self.have)) else margin

    @property
    def holds(self) -> bool:
        """Whether the number keeps its limit; at the limit, it does."""
        return self.margin >= 0.0

    def text(self) -> str:
        """``25 mV, at least 38 mV needed``, with digits enough to tell the two apart."""
        have, need = show_apart(self.have, self.need, self.dimension)
        return f"{have}, {self.relation} {need} needed"

    def margin_text(self) -> str:
        """The margin, with its sign."""
        margin = self.margin
        text = show(abs(margin), _difference(self.dimension))
        return f"-{text}" if margin < 0 else f"+{text}"


def _difference(dimension: Dimension) -> Dimension:
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
    waiver: str = ""
    """Why the finding is accepted; empty where it is not."""

    @property
    def is_finding(self) -> bool:
        """Whether somebody must act: a failure or a question for a person, not waived."""
        return self.kind in (Kind.FAIL, Kind.REVIEW) and not self.waiver
