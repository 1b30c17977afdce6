"""What a rule says about one element: its kind, the numbers behind it, the path, and what would mend it."""

from __future__ import annotations

import math
from enum import StrEnum

import msgspec

from tidegate.lint.account import Line
from tidegate.lint.description.place import Place
from tidegate.lint.graph.edge import Path
from tidegate.lint.quantity import NO_END, Dimension, parse, show, show_apart


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
    """A number against its limit, both in the dimension's kept unit; a positive margin is good.

    Where facts are missing, need and have are those of one corner: for what surely does not hold and for what is open
    with all that is missing at its best, for what surely holds at its worst.
    """

    need: float
    have: float
    dimension: Dimension
    relation: Relation
    sure: float | None = None
    """The margin with all that is missing as unfavourable as it may be; None where ``margin`` is exact."""
    best: float | None = None
    """The margin with all that is missing as favourable as it may be; None where ``margin`` is exact."""

    @property
    def margin(self) -> float:
        """How far on the good side the number is; what rounding leaves of an exact tie counts as none."""
        margin = self.have - self.need if self.relation is Relation.AT_LEAST else self.need - self.have
        rounding = 1e-9 * max(abs(self.need), abs(self.have))
        return 0.0 if abs(margin) <= rounding < math.inf else margin

    @property
    def sure_margin(self) -> float:
        """The margin that is there whatever the missing facts turn out to be; margins are ranked by it."""
        return self.margin if self.sure is None else self.sure

    @property
    def best_margin(self) -> float:
        """The margin that there can be at most."""
        return self.margin if self.best is None else self.best

    @property
    def is_exact(self) -> bool:
        """Whether nothing is missing for the margin."""
        return self.sure_margin == self.best_margin

    @property
    def is_known(self) -> bool:
        """Whether anything is known of the margin: one of its ends."""
        return math.isfinite(self.sure_margin) or math.isfinite(self.best_margin) or self.is_exact

    @property
    def holds(self) -> bool:
        """Whether the number keeps its limit; at the limit, it does."""
        return self.margin >= 0.0

    @property
    def slack(self) -> float:
        """The margin as a share of the need: margins of all kinds compare."""
        return self.share(self.margin)

    def share(self, margin: float) -> float:
        """A margin as a share of the need; of the number found where that is 0 or without end."""
        if margin == 0.0 or math.isinf(margin):
            return margin
        size = abs(self.need) if 0.0 < abs(self.need) < math.inf else abs(self.have)
        return margin / size if 0.0 < size < math.inf else math.copysign(math.inf, margin)

    def texts(self) -> tuple[str, str]:
        """The number found and its limit, with digits enough to tell them apart; a tie is told as one."""
        if math.isinf(self.have) or math.isinf(self.need):
            return self._size(self.have), self._size(self.need)
        if self.margin == 0.0:
            return show(self.need, self.dimension), show(self.need, self.dimension)
        return show_apart(self.have, self.need, self.dimension)

    def _size(self, value: float) -> str:
        """A number, which may have no end because something is not known, or because there is none."""
        if math.isfinite(value):
            return show(value, self.dimension)
        return NO_END if self.is_exact else "not known"

    def text(self) -> str:
        """``25 mV, at least 38 mV needed``."""
        have, _ = self.texts()
        limit = self.limit_text()
        if self._is_below_nothing and self.relation is Relation.AT_MOST:
            return f"{have}, {limit} for any: {show(-self.need, self.dimension)} too little without it"
        return f"{have}, {limit}{' needed' if limit.startswith(self.relation) else ''}"

    def limit_text(self) -> str:
        """The limit with what a number must do to it: ``at least 38 mV``; in words where it is no size."""
        if math.isinf(self.need):
            return "no limit known" if self.holds else "no limit that would do"
        if self._is_below_nothing:
            return "none needed" if self.relation is Relation.AT_LEAST else "no room"
        return f"{self.relation} {self.texts()[1]}"

    @property
    def _is_below_nothing(self) -> bool:
        """Whether the limit of a size lies below 0: then nothing is needed, or there is less than no room."""
        return -math.inf < self.need < 0.0 and not self.dimension.signed

    def margin_text(self) -> str:
        """The margin, with its sign."""
        return signed(self.margin, self.dimension)

    def margin_words(self, kind: Kind) -> str:
        """The margin as far as it is known, for a judgement of a kind: ``+8.8 mV so far``, ``-31.2 mV or worse``."""
        return " ".join(part for part in self.margin_parts(kind) if part)

    def margin_parts(self, kind: Kind) -> tuple[str, str]:
        """The same as a number, and what is said of it."""
        sure, best = self.sure_margin, self.best_margin
        low, high = signed(sure, self.dimension), signed(best, self.dimension)
        if sure == best:
            return self.margin_text(), ""
        if kind is Kind.OPEN:
            if math.isinf(best):
                return (low, "or more") if math.isfinite(sure) else ("not known", "")
            return (self.margin_text(), "so far") if math.isinf(sure) else (low, f"to {high}")
        if self.margin < 0.0:
            return self.margin_text(), "" if math.isclose(self.margin, sure) else "or worse"
        return low, "or more"


def signed(value: float, dimension: Dimension) -> str:
    """A margin of a number of some dimension, with its sign."""
    if math.isinf(value):
        return NO_END if value > 0.0 else f"short {NO_END}"
    return f"{'-' if value < 0.0 else '+'}{show(abs(value), difference(dimension))}"


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
    account: tuple[Line, ...] = ()
    """The terms of what is there, and below them those of what is needed, with their signs."""
    limits: int = 0
    """How many of the last lines of the account are those of what is needed."""
    under: str = ""
    """The rule whose failure says the same of this element; empty where the judgement stands for itself."""


def under(judgement: Judgement, rule: str) -> Judgement:
    """A failure that the failure of another rule explains: told there, and kept here with its number."""
    message = f"{judgement.message} ({rule} says so)"
    return msgspec.structs.replace(judgement, kind=Kind.NOT_APPLICABLE, message=message, under=rule)


def least_margin(judgement: Judgement, asked: str) -> Judgement:
    """A judgement held against a margin that is asked for: a quantity, or a share of the need.

    What passes, or is open, fails where the best end of its margin is less, and passes only where the sure end is not;
    between, it is open.

    Raises: QuantityError: if the text is neither.
    """
    measure = judgement.measure
    assert measure is not None
    least = (
        parse(asked, Dimension.RATIO) * abs(measure.need)
        if asked.endswith(("%", "ppm"))
        else parse(asked, difference(measure.dimension))
    )
    if math.isinf(least):
        return judgement  # a share of a need of which nothing is known
    enough = least * (1 - 1e-9)
    waits = judgement.kind is Kind.OPEN or bool(judgement.missing)
    if (measure.best_margin if waits else measure.sure_margin) < enough:
        return _too_small(judgement, measure, asked, least)
    if judgement.kind is Kind.OPEN or measure.sure_margin >= enough:
        return judgement
    sure, best = (signed(margin, measure.dimension) for margin in (measure.sure_margin, measure.best_margin))
    message = f"{judgement.message}; the settings ask for {asked} of margin: {sure} for sure, {best} at best"
    mend = f"give {', '.join(judgement.missing)}"
    return msgspec.structs.replace(judgement, kind=Kind.OPEN, message=message, mend=mend)


def _too_small(judgement: Judgement, measure: Measure, asked: str, least: float) -> Judgement:
    """A failure of the margin that the settings ask for."""
    margin = measure.best_margin if judgement.kind is Kind.OPEN or judgement.missing else measure.sure_margin
    message = (
        f"{judgement.message}; the margin of {signed(margin, measure.dimension)} is less than the {asked} that the "
        "settings ask for"
    )
    mend = f"another {show(least - margin, difference(measure.dimension))} of margin"
    return msgspec.structs.replace(judgement, kind=Kind.FAIL, message=message, mend=mend)
