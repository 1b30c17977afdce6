"""What the page shows of one description: plain data, which can come from another process."""

from __future__ import annotations

import msgspec

from tidegate.lint.reports.drawing.graph import GraphDrawing
from tidegate.lint.reports.drawing.ladder import LadderDrawing
from tidegate.lint.reports.drawing.timeline import TimelineDrawing
from tidegate.lint.reports.drawing.waterfall import WaterfallDrawing


class Finding(msgspec.Struct, frozen=True):
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
    keep: str
    """What the missing facts must keep, for what is open."""
    explains: tuple[tuple[str, str], ...]
    """The failures that this one explains: where each stands, and what it is."""
    account: WaterfallDrawing | None


class Kept(msgspec.Struct, frozen=True):
    """A rule that holds, or a failure that another one explains."""

    anchor: str
    rule: str
    message: str
    margin: str
    account: WaterfallDrawing | None


class DetectorMargin(msgspec.Struct, frozen=True):
    """One of the three margins of a detector."""

    name: str
    margin: str
    kind: str
    finding: str
    """Where the judgement stands; empty where there is none."""


class ElementPart(msgspec.Struct, frozen=True):
    """An element (or a waiver) with what was said about it."""

    anchor: str
    id: str
    noun: str
    place: str
    note: str
    three: tuple[DetectorMargin, ...]
    findings: tuple[Finding, ...]
    explained: tuple[Kept, ...]
    """Failures that others explain."""
    kept: tuple[Kept, ...]
    not_applicable: int
    """How many do not apply, without those that are explained."""


class LedgerRow(msgspec.Struct, frozen=True):
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
    margin_note: str
    """What is said of the margin where it is not known to both ends."""
    share: str
    slack: str
    """Its place among all margins, as a number that sorts."""
    bar: float
    """The same for the eye: from -1 to 1, one half being a margin of a tenth of the need."""


class QuestionPart(msgspec.Struct, frozen=True):
    """Facts to find out next, asked together."""

    what: str
    settles: str
    keep: str
    paths: str
    finding: str
    """Where the gravest of the judgements that wait for them stands."""


class OpenPart(msgspec.Struct, frozen=True):
    """What is open: the questions that settle most, what else is missing, what is known so far."""

    questions: tuple[QuestionPart, ...]
    rest: tuple[str, ...]
    known: tuple[Finding, ...]
    """The open judgements with a number, the gravest and nearest first."""
    unexplained: tuple[Finding, ...]
    """Those that wait for no fact."""
    nothing_known: int


class FamilyRow(msgspec.Struct, frozen=True):
    """How much of a family was judged; in the order pass, fail, review, open, not applicable."""

    family: str
    counts: tuple[int, ...]


class WaiverRow(msgspec.Struct, frozen=True):
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


class BasisRow(msgspec.Struct, frozen=True):
    """How many numbers of each section rest on one kind of evidence."""

    basis: str
    counts: tuple[int, ...]


class BasedFact(msgspec.Struct, frozen=True):
    """A number that says where it comes from."""

    fact: str
    by: str
    covers: str
    source: str


class Evidence(msgspec.Struct, frozen=True):
    """Facts by the kind of evidence they rest on."""

    sections: tuple[str, ...]
    rows: tuple[BasisRow, ...]
    facts: tuple[BasedFact, ...]
    left_out: int


class InputFile(msgspec.Struct, frozen=True):
    """A file that was read, and the SHA-256 digest of its content; empty where it could not be read again."""

    name: str
    sha256: str


class Todo(msgspec.Struct, frozen=True):
    """One thing to do next."""

    kind: str
    what: str
    why: str
    anchor: str


class Pictures(msgspec.Struct, frozen=True):
    """What is drawn, and why the rest is not."""

    ladders: tuple[LadderDrawing, ...]
    no_ladder: tuple[str, ...]
    timelines: tuple[TimelineDrawing, ...]
    no_timeline: str
    more_timelines: int
    graph: GraphDrawing | None
    edges: tuple[tuple[str, str, str], ...]
    """The graph in words: tail, relation, head."""


class Fault(msgspec.Struct, frozen=True):
    """A rule that failed itself."""

    rule: str
    subject: str
    error: str


class DescriptionPart(msgspec.Struct, frozen=True):
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
    open: OpenPart
    elements: tuple[ElementPart, ...]
    pictures: Pictures
    ledger: tuple[LedgerRow, ...]
    waivers: tuple[WaiverRow, ...]
    evidence: Evidence
    settings: tuple[tuple[str, str], ...]
    files: tuple[InputFile, ...]
    faults: tuple[Fault, ...]


class UnusablePart(msgspec.Struct, frozen=True):
    """A file that cannot be used, with its faults: place, and what is wrong."""

    file: str
    faults: tuple[tuple[str, str], ...]
