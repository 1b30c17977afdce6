"""The report for machines: JSON with a schema of its own (``schema/report.schema.json``)."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from typing import Any, Final

from tidegate.lint.corners import choice_text
from tidegate.lint.description.place import Fault, Place
from tidegate.lint.engine import Review
from tidegate.lint.facts.names import dimension_at
from tidegate.lint.judgement import Judgement, Kind, Measure
from tidegate.lint.must_keep import MustKeep, must_keep
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.accounts import sides
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.order import CAUTION, verdict
from tidegate.lint.settings import Settings
from tidegate.lint.version import VERSION

SEPARATOR: Final = ",\n"
"""What stands between the entries."""
_DIGITS: Final = 12
"""Significant digits of a number: what lies beyond them is rounding."""
REPORT_SCHEMA: Final = "urn:tidegate:report:2"
"""The version of the report's form."""


def json_text(files: Sequence[dict[str, Any]], *, settings: str, fail_at: str) -> str:
    """The whole report as text, one entry for each description."""
    entries = SEPARATOR.join(map(entry_text, files))
    return "".join(json_pieces([entries] if files else [], settings=settings, fail_at=fail_at))


def entry_text(entry: dict[str, Any]) -> str:
    """The entry of a description as it stands in the whole."""
    return json_form(entry, depth=2)


def json_pieces(entries: Iterable[str], *, settings: str, fail_at: str) -> Iterator[str]:
    """The whole report, a piece at a time, around the texts of all entries with separators between them."""
    report = {
        "schema": REPORT_SCHEMA,
        "tool": {"name": "tidegate", "version": VERSION},
        "settings": {"file": settings, "fail_at": fail_at},
        "caution": CAUTION,
        "files": [],
    }
    head, _, foot = json_form(report).rpartition("[]")
    yield f"{head}["
    opened = False
    for text in entries:
        yield text if opened else f"\n{text}"
        opened = True
    yield f"\n  ]{foot}\n" if opened else f"]{foot}\n"


def settings_entry(settings: Settings) -> dict[str, Any]:
    """The settings in force: where they come from and what they change."""
    return {
        "file": settings.file or None,
        "fail_at": settings.fail_at.value,
        "also": list(settings.also),
        "leave_out": list(settings.leave_out),
        "levels": {name: level.value for name, level in settings.levels.items()},
        "least_margins": dict(settings.least_margins),
        "conditions": settings.conditions_given,
        "waivers": list(settings.waivers),
        "packs": [*settings.packs, *settings.packs_installed, *settings.option_packs],
    }


def unusable_entry(file: str, faults: Sequence[Fault], settings: Settings) -> dict[str, Any]:
    """A file that cannot be used, with its faults."""
    return {
        "file": file,
        "verdict": "UNUSABLE",
        "settings": settings_entry(settings),
        "faults": [
            {"place": _place(f.place), "path": f.path, "problem": f.problem, "advice": f.advice} for f in faults
        ],
    }


def review_entry(review: Review) -> dict[str, Any]:
    """One description, with all that was said about it."""
    description = review.loaded.description
    return {
        "file": review.loaded.sources.files[0].name,
        "includes": [file.name for file in review.loaded.sources.files[1:]],
        "subsystem": description.subsystem,
        "revision": description.revision,
        "invented": bool(description.invented),
        "verdict": verdict(review),
        "settings": settings_entry(review.settings),
        "counts": {kind.value: review.counts.get(kind, 0) for kind in Kind},
        "judgements": [_judgement(review, judgement) for judgement in review.judgements],
        "rule_faults": [{"rule": f.rule, "subject": f.subject, "error": f.error} for f in review.faults],
    }


def _judgement(review: Review, judgement: Judgement) -> dict[str, Any]:
    measure = judgement.measure
    return {
        "rule": judgement.rule,
        "subject": judgement.subject,
        "kind": judgement.kind.value,
        "level": judgement.level.value,
        "message": judgement.message,
        "why": judgement.why,
        "mend": judgement.mend,
        "relation": measure.relation.value if measure else None,
        "need": number_entry(measure, "need"),
        "have": number_entry(measure, "have"),
        "margin": margin_entry(measure),
        "account": account_entry(judgement),
        "fact": judgement.at,
        "place": _place(review.place(judgement)),
        "path": [{"element": hop.element, "by": hop.by} for hop in judgement.path],
        "missing": list(judgement.missing),
        "must_keep": must_keep_entry(judgement, must_keep(review, judgement)),
        "under": judgement.under or None,
        "waiver": judgement.waiver or None,
    }


def number_entry(measure: Measure | None, which: str) -> dict[str, Any] | None:
    """A value and its unit; one without end has no value."""
    if measure is None:
        return None
    return _quantity(getattr(measure, which), measure.dimension)


def margin_entry(measure: Measure | None) -> dict[str, Any] | None:
    """The margin that is told, its sure and its best end, and whether these are one."""
    if measure is None:
        return None
    ends = {"sure": finite(measure.sure_margin), "best": finite(measure.best_margin), "exact": measure.is_exact}
    return _quantity(measure.margin, measure.dimension) | ends


def account_entry(judgement: Judgement) -> list[dict[str, Any]]:
    """The terms of what there is and of what is needed, each with its sign."""
    if judgement.measure is None:
        return []
    dimension = judgement.measure.dimension
    return [
        {
            "side": side.name,
            "name": line.name,
            **_quantity(line.value, dimension),
            "of": line.of,
            "waits": list(line.waits),
            "sure": finite(line.sure if line.waits else line.value),
            "best": finite(line.best if line.waits else line.value),
        }
        for side in sides(judgement)
        for line in side.lines
    ]


def must_keep_entry(judgement: Judgement, kept: MustKeep | None) -> dict[str, Any] | None:
    """What the missing facts of an open judgement must keep: each alone, all together, and which word holds."""
    if kept is None:
        return None
    facts = []
    for each in kept.facts:
        dimension = dimension_at(each.fact)
        if dimension is not None:
            limit = {"relation": "at most" if each.at_most else "at least", "sufficient": each.alone}
            facts.append({"fact": each.fact, **limit, **_quantity(each.value, dimension)})
    room = None
    if kept.room is not None and judgement.measure is not None:
        room = _quantity(kept.room, judgement.measure.dimension)
    choice = None if kept.choice is None else {"fact": kept.choice[0], "value": choice_text(kept.choice[1])}
    return {"facts": facts, "terms": list(kept.terms), "room": room, "choice": choice}


def _quantity(value: float, dimension: Dimension) -> dict[str, Any]:
    return {"value": finite(value), "unit": "" if dimension is Dimension.COUNT else dimension.unit}


def finite(value: float | None) -> float | None:
    """A number without what rounding leaves behind it; None where it has no end."""
    if value is None or not math.isfinite(value):
        return None
    return float(f"{value:.{_DIGITS}g}") + 0.0


def _place(place: Place) -> dict[str, Any]:
    return {"file": place.file, "line": place.line, "column": place.column}
