"""Gathers what the page shows of one description."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Mapping, Sequence
from itertools import islice
from typing import Final

from tidegate.lint.batch import Judged
from tidegate.lint.description.place import Fault as FileFault
from tidegate.lint.engine import Review
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.must_keep import must_keep
from tidegate.lint.reports.detector_margins import THREE, DetectorMargins, detector_margins
from tidegate.lint.reports.drawing.graph import draw_graph
from tidegate.lint.reports.drawing.ladder import draw_ladder
from tidegate.lint.reports.drawing.picture_graph import elements_shown, picture_graph
from tidegate.lint.reports.drawing.timeline import draw_timeline
from tidegate.lint.reports.drawing.waterfall import draw_waterfall
from tidegate.lint.reports.gravity import gravest_first, has_number, least_room_first, told_share
from tidegate.lint.reports.ladder import ladders
from tidegate.lint.reports.open_words import limits_text, paths_text, rest_text, settles_text
from tidegate.lint.reports.order import by_element, described, explained_by, kind_word, verdict
from tidegate.lint.reports.page.contents import (
    DescriptionPart,
    DetectorMargin,
    ElementPart,
    FamilyRow,
    Fault,
    Finding,
    Kept,
    LedgerRow,
    OpenPart,
    Pictures,
    QuestionPart,
    Todo,
    UnusablePart,
    WaiverRow,
)
from tidegate.lint.reports.page.evidence import evidence
from tidegate.lint.reports.page.inputs import input_files, settings_rows
from tidegate.lint.reports.questions import MOST_QUESTIONS, Question, questions, rest
from tidegate.lint.reports.words import judgements_text, keep_text, margin_words
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
    measured = least_room_first(review.judgements)
    places = {id(judgement): number for number, judgement in enumerate(measured)}
    live = [judgement for judgement in measured if not judgement.waiver and not judgement.under]
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
        closest=None if closest is None else _ledger_row(closest, places),
        closest_says="" if closest is None else closest.message,
        closest_mend="" if closest is None else closest.mend,
        next_closest=tuple(_ledger_row(judgement, places) for judgement in live[1 : 1 + NEXT_CLOSEST]),
        todo=_shown(todo),
        more_todo=max(len(todo) - MOST_TODO, 0),
        families=tuple(_families(review)),
        open=_open(review),
        elements=tuple(_elements(review)),
        pictures=_pictures(review),
        ledger=tuple(_ledger_row(judgement, places) for judgement in measured),
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


def _finding(review: Review, judgement: Judgement, explains: Sequence[Judgement] = ()) -> Finding:
    kind, word = _kind(judgement)
    measure = judgement.measure
    return Finding(
        anchor=anchor(judgement),
        rule=judgement.rule,
        subject=judgement.subject,
        kind=kind,
        word=word,
        message=judgement.message,
        why="" if judgement.kind is Kind.OPEN and measure is None else judgement.why,
        mend=judgement.mend,
        path=() if judgement.kind is Kind.PASS else tuple((hop.element, hop.by) for hop in judgement.path),
        place=str(review.place(judgement)),
        margin=margin_words(judgement) if has_number(judgement) else "",
        share=_share(told_share(judgement)) if has_number(judgement) else "",
        missing=judgement.missing,
        waiver=judgement.waiver,
        keep=keep_text(judgement, must_keep(review, judgement)),
        explains=tuple((anchor(one), judgements_text([one])) for one in explains),
        account=draw_waterfall(judgement),
    )


def _by_subject(review: Review) -> Iterable[tuple[str, list[Judgement]]]:
    return by_element(judgement for judgement in review.judgements if judgement.rule != STILL_RIGHT.id)


def _elements(review: Review) -> Iterable[ElementPart]:
    explained = explained_by(review.judgements)
    three = {row.detector: tuple(_three(row)) for row in detector_margins(review)}
    for subject, judgements in _by_subject(review):
        noun, place = described(review, subject)
        under = [one for one in judgements if one.under]
        told = [one for one in judgements if one.kind in _FINDINGS]
        yield ElementPart(
            anchor=f"element-{_slug(subject)}",
            id=subject,
            noun=noun,
            place=f"{place.file}:{place.line}",
            note=getattr(review.graph.elements.get(subject), "note", None) or "",
            three=three.get(subject, ()),
            findings=tuple(_finding(review, one, explained.get(id(one), ())) for one in told),
            explained=tuple(map(_kept, under)),
            kept=tuple(_kept(one) for one in judgements if one.kind is Kind.PASS),
            not_applicable=sum(1 for one in judgements if one.kind is Kind.NOT_APPLICABLE) - len(under),
        )


def _kept(judgement: Judgement) -> Kept:
    number = margin_words(judgement)
    return Kept(anchor(judgement), judgement.rule, judgement.message, number, draw_waterfall(judgement))


def _three(row: DetectorMargins) -> Iterable[DetectorMargin]:
    for (name, _), judgement, text in zip(THREE, row.judgements, row.texts, strict=True):
        if text != "-" and judgement is not None:
            kind = "fail" if judgement.under else _kind(judgement)[0]
            yield DetectorMargin(name, text, kind, anchor(judgement))


def _ledger_row(judgement: Judgement, places: Mapping[int, int]) -> LedgerRow:
    measure = judgement.measure
    assert measure is not None
    kind, word = ("under", f"under {judgement.under}") if judgement.under else _kind(judgement)
    have, need = measure.texts()
    limit = measure.limit_text()
    relation = measure.relation.value if limit.startswith(measure.relation.value) else ""
    margin, note = measure.margin_parts(judgement.kind)
    share = told_share(judgement)
    return LedgerRow(
        finding=anchor(judgement), subject=judgement.subject, rule=judgement.rule,
        family=judgement.rule.partition("/")[0].replace("_", " "), kind=kind, word=word, have=have,
        need=need if relation else limit, relation=relation, margin=margin, margin_note=note, share=_share(share),
        slack=str(places[id(judgement)]), bar=round(share / (abs(share) + 0.1), 3) if abs(share) < 1e9 else 1,
    )  # fmt: skip


def _share(slack: float) -> str:
    """The margin as a share of the need, short; empty where it has no end."""
    if math.isinf(slack):
        return ""
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
    """What to do next, the gravest first: mend, look, find out."""
    live = [judgement for judgement in review.judgements if not judgement.waiver]
    failures = gravest_first(judgement for judgement in live if judgement.kind is Kind.FAIL)
    todo = [Todo("fail", f"{j.subject}: {j.mend or j.message}", j.message, anchor(j)) for j in failures]
    for judgement in gravest_first(live):
        if judgement.kind is Kind.REVIEW:
            what = f"{judgement.subject}: {judgement.mend or 'look at it'}"
            todo.append(Todo("review", what, judgement.message, anchor(judgement)))
    asked = questions(review)
    if asked:
        first, more = asked[0], len(asked) - 1
        others = f", and {more} more {'question' if more == 1 else 'questions'}" if more else ""
        todo.append(Todo("open", f"find out {first.what}{others}", f"settles {settles_text(first)}", "open"))
    return todo


def _open(review: Review) -> OpenPart:
    waiting = [judgement for judgement in review.judgements if judgement.kind is Kind.OPEN]
    known = gravest_first(judgement for judgement in waiting if has_number(judgement))
    unexplained = [judgement for judgement in waiting if judgement.measure is None and not judgement.missing]
    asked = questions(review)
    return OpenPart(
        questions=tuple(map(_question, asked[:MOST_QUESTIONS])),
        rest=tuple(rest_text(one) for one in rest(asked[MOST_QUESTIONS:])),
        known=tuple(_finding(review, judgement) for judgement in known),
        unexplained=tuple(_finding(review, judgement) for judgement in unexplained),
        nothing_known=len(waiting) - len(known) - len(unexplained),
    )


def _question(question: Question) -> QuestionPart:
    first = next(iter((*question.settles, *question.helps)))
    return QuestionPart(
        question.what, settles_text(question), limits_text(question.limits), paths_text(question), anchor(first)
    )


def _families(review: Review) -> Iterable[FamilyRow]:
    families: dict[str, dict[Kind, int]] = {}
    for judgement in review.judgements:
        row = families.setdefault(judgement.rule.partition("/")[0], dict.fromkeys(_COUNTED, 0))
        row[judgement.kind] += 1
    for family, row in families.items():
        yield FamilyRow(family.replace("_", " "), tuple(row[kind] for kind in _COUNTED))


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
