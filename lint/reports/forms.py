"""The forms of a report: what each makes of one description, and how the parts make a whole."""

from __future__ import annotations

import io
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from enum import StrEnum
from pathlib import PurePath
from typing import Any, Final

from tidegate.lint.batch import Judged
from tidegate.lint.rule import Rule


class Form(StrEnum):
    """A form of the report."""

    TERMINAL = "terminal"
    JSON = "json"
    SARIF = "sarif"
    MARKDOWN = "markdown"
    HTML = "html"


ENDINGS: Final = {
    ".txt": Form.TERMINAL, ".json": Form.JSON, ".sarif": Form.SARIF, ".md": Form.MARKDOWN,
    ".html": Form.HTML,
}  # fmt: skip
"""The form that the ending of a file's name asks for."""


def form_of(path: str) -> Form | None:
    """The form that a file's name asks for; None if its ending says nothing."""
    return ENDINGS.get(PurePath(path).suffix.lower())


@dataclass(frozen=True, slots=True)
class Look:
    """How a text report looks: its width, whether in colour, whether with what passes."""

    width: int
    colour: bool
    every: bool


def part(form: Form, judged: Judged, look: Look) -> Any:
    """What one description adds to a report: plain data, which can come from another process."""
    if form is Form.TERMINAL:
        return _terminal(judged, look)
    if form is Form.JSON:
        from tidegate.lint.reports.json_report import review_entry, unusable_entry

        return unusable_entry(judged.file, judged.faults) if judged.review is None else review_entry(judged.review)
    if form is Form.MARKDOWN:
        from tidegate.lint.reports.markdown import review_markdown, unusable_markdown

        return (
            unusable_markdown(judged.file, judged.faults) if judged.review is None else review_markdown(judged.review)
        )
    if form is Form.HTML:
        from tidegate.lint.reports.page.gather import gather

        return gather(judged)
    from tidegate.lint.reports import sarif

    if judged.review is None:
        return [], sarif.fault_notifications(judged.faults)
    return sarif.review_results(judged.review), sarif.rule_fault_notifications(judged.review.faults)


def _terminal(judged: Judged, look: Look) -> str:
    from rich.console import Console

    from tidegate.lint.reports.terminal import show_faults, show_review

    out = io.StringIO()
    console = Console(
        file=out, width=look.width, force_terminal=look.colour, color_system="standard" if look.colour else None,
        markup=False, emoji=False, highlight=False, legacy_windows=False,
    )  # fmt: skip
    if judged.review is None:
        show_faults(console, judged.faults)
    else:
        show_review(console, judged.review, all_kinds=look.every)
    return out.getvalue()


def whole(form: Form, parts: Sequence[Any], rules: Iterable[Rule], *, status: int, settings: str, fail_at: str) -> str:
    """A report made of the parts of all descriptions."""
    if form is Form.TERMINAL:
        return "\n".join(parts)
    if form is Form.MARKDOWN:
        return "\n".join(parts)
    if form is Form.JSON:
        from tidegate.lint.reports.json_report import json_text

        return json_text(parts, settings=settings, fail_at=fail_at)
    if form is Form.HTML:
        from tidegate.lint.reports.page.render import page

        return page(parts, rules)
    from tidegate.lint.reports import sarif

    notifications = [note for _, notes in parts for note in notes]
    ran = sarif.invocation(successful=status in (0, 1), status=status, notifications=notifications, settings=settings)
    return sarif.sarif_text([results for results, _ in parts], list(rules), ran=ran)
