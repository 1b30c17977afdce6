"""Gathers what the page shows of one description."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from itertools import islice
from typing import Final

from tidegate.lint.batch import Judged
from tidegate.lint.description.place import Fault as FileFault
from tidegate.lint.engine import WEIGHT, Review
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.reports.drawing.graph import draw_graph
from tidegate.lint.reports.drawing.ladder import draw_ladder
from tidegate.lint.reports.drawing.picture_graph import elements_shown, picture_graph
from tidegate.lint.reports.drawing.timeline import draw_timeline
from tidegate.lint.reports.ladder import ladders
from tidegate.lint.reports.order import by_element, closest_first, described, kind_word, missing_facts, verdict
from tidegate.lint.reports.page.contents import (
    DescriptionPart,
    ElementPart,
    FamilyRow,
    Fault,
    Finding,
    Kept,
    LedgerRow,
    Missing,
    Pictures,
    Todo,
    UnusablePart,
    WaiverRow,
)
from tidegate.lint.reports.page.evidence import evidence
from tidegate.lint.reports.page.inputs import input_files, settings_rows
from tidegate.lint.timing.timeline import timelines
from tidegate.lint.waivers import STILL_RIGHT

MOST_TIMELINES: Final = 16
MOST_TODO: Final = 4
NEXT_CLOSEST: Final = 3
_COUNTED: Final = (Kind.PASS, Kind.FAIL, Kind.REVIEW, Kind.OPEN, Kind.NOT_APPLICABLE)
_FINDINGS: Final = (Kind.FAIL, Kind.REVIEW, Kind.OPEN)
_UNFIT: Final = re.compile(r"[^A-Za-z0-9_.-]+")


def gather(judged: Judged) -> DescriptionPart | UnusablePart:
    """What the page shows of one file."""
    if judged.review is None:
        return UnusablePart(judged.file, tuple(_fault(fault) for fault in judged.faults))
    review = judged.review
    description = review.loaded.description
    measured = closest_first(review.judgements)
    live = [judgement for judgement in measured if not judgement.waiver]
    closest = live[0] if live else None
    todo = _todo(review)
    said = verdict(review)
    return DescriptionPart(
        file=review.loaded.sources.files[0].name,
        name=description.subsystem or "unnamed subsystem",
        revision=description.revision or "",
        invented=bool(description.invented),
        note=description.note or "",
        verdict=said,
        good=said.startswith("KEPT"),
        counts=tuple((_mark(kind), kind_word(kind), review.counts.get(kind, 0)) for kind in _COUNTED),
        waived=sum(1 for judgement in review.judgements if judgement.waiver),
        closest=None if closest is None else _ledger_row(closest),
        closest_says="" if closest is None else closest.message,
        closest_mend="" if closest is None else closest.mend,
        next_closest=tuple(_ledger_row(judgement) for judgement in live[1 : 1 + NEXT_CLOSEST]),
        todo=_shown(todo),
        more_todo=max(len(todo) - MOST_TODO, 0),
        families=tuple(_families(review)),
        missing=tuple(_missing(review)),
        unexplained=tuple(_finding(review, j) for j in review.judgements if j.kind is Kind.OPEN and not j.missing),
        elements=tuple(_element(review, subject, found) for subject, found in _by_subject(review)),
        pictures=_pictures(review),
        ledger=tuple(_ledger_row(judgement) for judgement in measured),
        waivers=tuple(_waivers(review)),
        evidence=evidence(description),
        settings=settings_rows(judged.settings, description.conditions),
        files=input_files(file.name for file in review.loaded.sources.files),
        faults=tuple(Fault(fault.rule, fault.subject, fault.error) for fault in review.faults),
    )


def _fault(fault: FileFault) -> tuple[str, str]:
    return str(fault.place), str(fault).removeprefix(f"{fault.place}: ")


def anchor(judgement: Judgement) -> str:
    """Where a judgement stands on the page: the same in every revision."""
    return f"finding-{_slug(judgement.subject)}-{_slug(judgement.rule)}"


def _slug(text: str) -> str:
    return _UNFIT.sub("-", text)[:160]


def _mark(kind: Kind) -> str:
    return "na" if kind is Kind.NOT_APPLICABLE else kind.value


def _kind(judgement: Judgement) -> tuple[str, str]:
    """Mark and word of a judgement."""
    if judgement.waiver:
        return "waived", "waived"
    if judgement.kind is Kind.FAIL and judgement.level is not Level.ERROR:
        return "fail", judgement.level.value
    return _mark(judgement.kind), kind_word(judgement.kind)


def _finding(review: Review, judgement: Judgement) -> Finding:
    kind, word = _kind(judgement)
    row = _ledger_row(judgement) if judgement.measure else None
    return Finding(
        anchor=anchor(judgement),
        rule=judgement.rule,
        subject=judgement.subject,
        kind=kind,
        word=word,
        message=judgement.message,
        why="" if judgement.kind is Kind.OPEN else judgement.why,
        mend=judgement.mend,
        path=() if judgement.kind is Kind.PASS else tuple((hop.element, hop.by) for hop in judgement.path),
        place=str(review.place(judgement)),
        margin=row.margin if row else "",
        share=row.share if row else "",
        missing=judgement.missing,
        waiver=judgement.waiver,
    )


def _by_subject(review: Review) -> Iterable[tuple[str, list[Judgement]]]:
    return by_element(judgement for judgement in review.judgements if judgement.rule != STILL_RIGHT.id)


def _element(review: Review, subject: str, judgements: Sequence[Judgement]) -> ElementPart:
    noun, place = described(review, subject)
    return ElementPart(
        anchor=f"element-{_slug(subject)}",
        id=subject,
        noun=noun,
        place=f"{place.file}:{place.line}",
        note=getattr(review.graph.elements.get(subject), "note", None) or "",
        findings=tuple(_finding(review, judgement) for judgement in judgements if judgement.kind in _FINDINGS),
        kept=tuple(
            Kept(anchor(j), j.rule, j.message, j.measure.margin_text() if j.measure else "")
            for j in judgements
            if j.kind is Kind.PASS
        ),
        not_applicable=sum(1 for judgement in judgements if judgement.kind is Kind.NOT_APPLICABLE),
    )


def _ledger_row(judgement: Judgement) -> LedgerRow:
    measure = judgement.measure
    assert measure is not None
    kind, word = _kind(judgement)
    have, need = measure.texts()
    slack = measure.slack
    return LedgerRow(
        finding=anchor(judgement), subject=judgement.subject, rule=judgement.rule,
        family=judgement.rule.partition("/")[0].replace("_", " "), kind=kind, word=word, have=have, need=need,
        relation=measure.relation.value, margin=measure.margin_text(), share=_share(slack),
        slack=f"{min(max(slack, -1e9), 1e9):.6g}", bar=round(slack / (abs(slack) + 0.1), 3) if abs(slack) < 1e9 else 1,
    )  # fmt: skip


def _share(slack: float) -> str:
    """The margin as a share of the need, short."""
    if abs(slack) >= 9.995:
        return f"{'-' if slack < 0 else '+'}>999 %"
    percent = 100.0 * slack
    return f"{percent:+.{0 if abs(percent) >= 99.5 else 1}f} %"


def _shown(todo: Sequence[Todo]) -> tuple[Todo, ...]:
    """The first of them; what is open keeps its place among them."""
    if len(todo) <= MOST_TODO or todo[-1].kind != "open":
        return tuple(todo[:MOST_TODO])
    return (*todo[: MOST_TODO - 1], todo[-1])


def _todo(review: Review) -> list[Todo]:
    """What to do next, the weightiest first: mend, look, give facts."""
    live = [judgement for judgement in review.judgements if not judgement.waiver]
    failures = [judgement for judgement in live if judgement.kind is Kind.FAIL]
    failures.sort(key=lambda j: (-WEIGHT[j.level], j.measure.slack if j.measure else -1.0))
    todo = [Todo("fail", f"{j.subject}: {j.mend or j.message}", j.message, anchor(j)) for j in failures]
    for judgement in live:
        if judgement.kind is Kind.REVIEW:
            what = f"{judgement.subject}: {judgement.mend or 'look at it'}"
            todo.append(Todo("review", what, judgement.message, anchor(judgement)))
    waiting = missing_facts(review)
    if waiting:
        fact = max(waiting, key=lambda name: len(waiting[name]))
        others = f", and {len(waiting) - 1} facts more" if len(waiting) > 1 else ""
        todo.append(Todo("open", f"give {fact}{others}", f"{len(waiting[fact])} rules wait for it", "open"))
    return todo


def _families(review: Review) -> Iterable[FamilyRow]:
    families: dict[str, dict[Kind, int]] = {}
    for judgement in review.judgements:
        row = families.setdefault(judgement.rule.partition("/")[0], dict.fromkeys(_COUNTED, 0))
        row[judgement.kind] += 1
    for family, row in families.items():
        yield FamilyRow(family.replace("_", " "), tuple(row[kind] for kind in _COUNTED))


def _missing(review: Review) -> Iterable[Missing]:
    first = {fact: judgement for judgement in reversed(review.judgements) for fact in judgement.missing}
    for fact, rules in missing_facts(review).items():
        yield Missing(fact, tuple(rules), anchor(first[fact]))


def _pictures(review: Review) -> Pictures:
    description, graph = review.loaded.description, review.graph
    found = list(ladders(description, graph))
    drawn = {ladder.rail: draw_ladder(ladder) for ladder in found}
    lines = timelines(description, graph)
    courses = [*lines.starts, *lines.falls]
    timed = [draw_timeline(line, lines) for line in islice(courses, MOST_TIMELINES)]
    picture = picture_graph(description, graph, review.judgements)
    return Pictures(
        ladders=tuple(drawing for drawing in drawn.values() if drawing is not None),
        no_ladder=tuple(rail for rail, drawing in drawn.items() if drawing is None),
        timelines=tuple(drawing for drawing in timed if drawing is not None),
        no_timeline="" if courses else "no rail says how it rises (rails.*.nominal, rails.*.rise)",
        more_timelines=max(len(courses) - MOST_TIMELINES, 0),
        graph=draw_graph(picture, elements=elements_shown(graph)),
        edges=tuple((edge.tail, edge.kind.forwards, edge.head) for edge in graph.edges()),
    )


def _waivers(review: Review) -> Iterable[WaiverRow]:
    """Each waiver, with what the rule that judges waivers says of it."""
    judged = {review.place(judgement): judgement for judgement in review.judgements if judgement.rule == STILL_RIGHT.id}
    covered = {(judgement.rule, judgement.subject): anchor(judgement) for judgement in review.judgements}
    own = review.loaded.description.waivers
    placed = [(review.loaded.sources.place(("waivers", number)), waiver) for number, waiver in enumerate(own)]
    placed += [(one.place, one.waiver) for one in review.settings.waived if one.place in judged]
    for place, waiver in placed:
        judgement = judged.get(place)
        yield WaiverRow(
            rule=waiver.rule, element=waiver.element, why=waiver.why, agreed_by=waiver.agreed_by, until=waiver.until,
            margin=waiver.margin or "", stands=judgement is not None and judgement.kind is Kind.PASS,
            says="not judged" if judgement is None else judgement.message,
            place=str(place),
            finding=covered.get((waiver.rule, waiver.element), ""),
        )  # fmt: skip
