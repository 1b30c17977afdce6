"""The report for machines: JSON with a schema of its own (``schema/report.schema.json``)."""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any, Final

from tidegate.lint.description.place import Fault, Place
from tidegate.lint.engine import Review
from tidegate.lint.judgement import Judgement, Kind, Measure
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.order import CAUTION, verdict
from tidegate.lint.version import VERSION

REPORT_SCHEMA: Final = "urn:tidegate:report:1"
"""The version of the report's form."""


def json_text(files: Sequence[dict[str, Any]], *, settings: str, fail_at: str) -> str:
    """The whole report as text, one file entry for each description."""
    report = {
        "schema": REPORT_SCHEMA,
        "tool": {"name": "tidegate", "version": VERSION},
        "settings": {"file": settings, "fail_at": fail_at},
        "caution": CAUTION,
        "files": list(files),
    }
    return json.dumps(report, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def unusable_entry(file: str, faults: Sequence[Fault]) -> dict[str, Any]:
    """A file that cannot be used, with its faults."""
    return {
        "file": file,
        "verdict": "UNUSABLE",
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
        "need": _number(measure, "need"),
        "have": _number(measure, "have"),
        "margin": _number(measure, "margin"),
        "fact": judgement.at,
        "place": _place(review.place(judgement)),
        "path": [{"element": hop.element, "by": hop.by} for hop in judgement.path],
        "missing": list(judgement.missing),
        "waiver": judgement.waiver or None,
    }


def _number(measure: Measure | None, which: str) -> dict[str, Any] | None:
    """A value and its unit; an unlimited one has no value."""
    if measure is None:
        return None
    value: float = getattr(measure, which)
    unit = "" if measure.dimension is Dimension.COUNT else measure.dimension.unit
    return {"value": value if abs(value) != float("inf") else None, "unit": unit}


def _place(place: Place) -> dict[str, Any]:
    return {"file": place.file, "line": place.line, "column": place.column}
