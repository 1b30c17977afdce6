"""What the page shows of one description: plain data, which can come from another process."""

from __future__ import annotations

from dataclasses import dataclass

from tidegate.lint.reports.drawing.graph import GraphDrawing
from tidegate.lint.reports.drawing.ladder import LadderDrawing
from tidegate.lint.reports.drawing.timeline import TimelineDrawing


@dataclass(frozen=True, slots=True)
class Finding:
    """A judgement, in words."""

    anchor: str
    rule: str
    subject: str
    kind: str
    """fail, review, open, pass or waived: the mark that stands before it."""
    word: str
    message: str
    why: str
    mend: str
    path: tuple[tuple[str, str], ...]
    """Elements, and the words that lead to each."""
    place: str
    margin: str
    share: str
    missing: tuple[str, ...]
    waiver: str


@dataclass(frozen=True, slots=True)
class Kept:
    """A rule that holds."""

    anchor: str
    rule: str
    message: str
    margin: str


@dataclass(frozen=True, slots=True)
class ElementPart:
    """An element (or a waiver) with what was said about it."""

    anchor: str
    id: str
    noun: str
    place: str
    note: str
    findings: tuple[Finding, ...]
    kept: tuple[Kept, ...]
    not_applicable: int


@dataclass(frozen=True, slots=True)
class LedgerRow:
    """A judgement with a number."""

    finding: str
    subject: str
    rule: str
    family: str
    kind: str
    word: str
    have: str
    need: str
    relation: str
    margin: str
    share: str
    slack: str
    """The margin as a share of the need, as a number that sorts."""
    bar: float
    """The same for the eye: from -1 to 1, one half being a margin of a tenth of the need."""


@dataclass(frozen=True, slots=True)
class Missing:
    """A fact that is missing, and the rules that wait for it."""

    fact: str
    rules: tuple[str, ...]
    finding: str


@dataclass(frozen=True, slots=True)
class FamilyRow:
    """How much of a family was judged; in the order pass, fail, review, open, not applicable."""

    family: str
    counts: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class WaiverRow:
    """An accepted finding."""

    rule: str
    element: str
    why: str
    agreed_by: str
    until: str
    margin: str
    stands: bool
    says: str
    place: str
    finding: str


@dataclass(frozen=True, slots=True)
class BasisRow:
    """How many numbers of each section rest on one kind of evidence."""

    basis: str
    counts: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class BasedFact:
    """A number that says where it comes from."""

    fact: str
    by: str
    covers: str
    source: str


@dataclass(frozen=True, slots=True)
class Evidence:
    """Facts by the kind of evidence they rest on."""

    sections: tuple[str, ...]
    rows: tuple[BasisRow, ...]
    facts: tuple[BasedFact, ...]
    left_out: int


@dataclass(frozen=True, slots=True)
class InputFile:
    """A file that was read, and the SHA-256 digest of its content; empty where it could not be read again."""

    name: str
    sha256: str


@dataclass(frozen=True, slots=True)
class Todo:
    """One thing to do next."""

    kind: str
    what: str
    why: str
    anchor: str


@dataclass(frozen=True, slots=True)
class Pictures:
    """What is drawn, and why the rest is not."""

    ladders: tuple[LadderDrawing, ...]
    no_ladder: tuple[str, ...]
    timelines: tuple[TimelineDrawing, ...]
    no_timeline: str
    more_timelines: int
    graph: GraphDrawing | None
    edges: tuple[tuple[str, str, str], ...]
    """The graph in words: tail, relation, head."""


@dataclass(frozen=True, slots=True)
class Fault:
    """A rule that failed itself."""

    rule: str
    subject: str
    error: str


@dataclass(frozen=True, slots=True)
class DescriptionPart:
    """One description."""

    file: str
    name: str
    revision: str
    invented: bool
    note: str
    verdict: str
    good: bool
    counts: tuple[tuple[str, str, int], ...]
    """Mark, word and number of each kind."""
    waived: int
    closest: LedgerRow | None
    closest_says: str
    closest_mend: str
    next_closest: tuple[LedgerRow, ...]
    """The margins that come after the closest."""
    todo: tuple[Todo, ...]
    more_todo: int
    families: tuple[FamilyRow, ...]
    missing: tuple[Missing, ...]
    unexplained: tuple[Finding, ...]
    elements: tuple[ElementPart, ...]
    pictures: Pictures
    ledger: tuple[LedgerRow, ...]
    waivers: tuple[WaiverRow, ...]
    evidence: Evidence
    settings: tuple[tuple[str, str], ...]
    files: tuple[InputFile, ...]
    faults: tuple[Fault, ...]


@dataclass(frozen=True, slots=True)
class UnusablePart:
    """A file that cannot be used, with its faults: place, and what is wrong."""

    file: str
    faults: tuple[tuple[str, str], ...]
