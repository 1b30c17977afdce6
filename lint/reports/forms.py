"""The forms of a report: what each makes of one description, and how the parts make a whole."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from enum import StrEnum
from pathlib import PurePath
from typing import Any, Final

import msgspec

from tidegate.lint.batch import Judged
from tidegate.lint.reports.spool import Spool
from tidegate.lint.rule import Rule
from tidegate.lint.settings import Settings


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


class Look(msgspec.Struct, frozen=True):
    """How a text report looks: its width, whether in colour, whether with what passes."""

    width: int = 80
    colour: bool = False
    every: bool = False


class View(msgspec.Struct, frozen=True):
    """A form and, where it is text for people at a terminal, its look."""

    form: Form
    look: Look = msgspec.field(default=Look())
    findings_only: bool = False
    """In SARIF: without the results that ask nothing of anybody."""


class Part(msgspec.Struct, frozen=True):
    """What one description adds to a report: plain data, which can come from another process."""

    text: str = ""
    notifications: tuple[dict[str, Any], ...] = ()
    """What SARIF says of the run and not of a description's elements."""
    data: Any = None
    """What the page is made of, which is drawn as a whole."""


class Ran(msgspec.Struct, frozen=True):
    """What a report says of the run as a whole."""

    status: int
    settings: Sequence[Settings]
    """The settings that were in force, each once."""
    rules: Sequence[Rule]


def part(view: View, judged: Judged) -> Part:
    """What one description adds to a report."""
    if view.form is Form.TERMINAL:
        return Part(_terminal(judged, view.look))
    if view.form is Form.JSON:
        return Part(_json(judged))
    if view.form is Form.MARKDOWN:
        return Part(_markdown(judged))
    if view.form is Form.HTML:
        from tidegate.lint.reports.page.gather import gather

        return Part(data=gather(judged))
    from tidegate.lint.reports import sarif

    if judged.review is None:
        return Part("", tuple(sarif.fault_notifications(judged.faults)))
    notes = sarif.rule_fault_notifications(judged.review.faults)
    results = sarif.review_results(judged.review, findings_only=view.findings_only)
    return Part(sarif.results_text(results), tuple(notes))


def _terminal(judged: Judged, look: Look) -> str:
    from tidegate.lint.reports.paint import painted
    from tidegate.lint.reports.terminal import fault_lines, review_lines

    if judged.review is None:
        return painted(fault_lines(judged.faults), colour=look.colour)
    return painted(review_lines(judged.review, look.width, all_kinds=look.every), colour=look.colour)


def _json(judged: Judged) -> str:
    from tidegate.lint.reports.json_report import entry_text, review_entry, unusable_entry

    if judged.review is None:
        return entry_text(unusable_entry(judged.file, judged.faults, judged.settings))
    return entry_text(review_entry(judged.review))


def _markdown(judged: Judged) -> str:
    from tidegate.lint.reports.markdown import review_markdown, unusable_markdown

    if judged.review is None:
        return unusable_markdown(judged.file, judged.faults)
    return review_markdown(judged.review)


class Whole:
    """A report in the making: parts come one by one, and the whole is written at the end."""

    def __init__(self, form: Form) -> None:
        self._form = form
        self._texts = Spool(",\n" if form in (Form.JSON, Form.SARIF) else "\n")
        self._notifications: list[dict[str, Any]] = []
        self._data: list[Any] = []

    def add(self, new: Part) -> None:
        """Take what one description adds."""
        if new.text:
            self._texts.add(new.text)
        if new.data is not None:
            self._data.append(new.data)
        self._notifications += new.notifications

    def pieces(self, ran: Ran) -> Iterator[str]:
        """The whole report, a piece at a time."""
        if self._form is Form.JSON:
            from tidegate.lint.reports.json_report import json_pieces

            files = ", ".join(settings.shown for settings in ran.settings)
            return json_pieces(self._texts.pieces(), settings=files, fail_at=_least_level(ran.settings))
        if self._form is Form.SARIF:
            from tidegate.lint.reports import sarif

            how = sarif.invocation(
                status=ran.status, notifications=self._notifications, settings=ran.settings, rules=ran.rules
            )
            return sarif.sarif_pieces(self._texts.pieces(), ran.rules, ran=how)
        if self._form is Form.HTML:
            from tidegate.lint.reports.page.render import page

            return iter([page(self._data, ran.rules)])
        return self._texts.pieces()

    def close(self) -> None:
        """Give back what the parts were kept in."""
        self._texts.close()


def _least_level(settings: Sequence[Settings]) -> str:
    """The least level that makes the exit status 1 under any of the settings."""
    from tidegate.lint.engine import WEIGHT

    return min((each.fail_at for each in settings), key=WEIGHT.__getitem__, default=Settings().fail_at).value
