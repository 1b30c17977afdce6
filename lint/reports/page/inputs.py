"""What a page rests on: the files that were read, and the settings they were judged by."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable
from pathlib import Path

from tidegate.lint.description.model.description import Conditions
from tidegate.lint.description.reading import read_file
from tidegate.lint.quantity import Span, show
from tidegate.lint.reports.page.contents import InputFile
from tidegate.lint.settings import Settings


def input_files(names: Iterable[str]) -> tuple[InputFile, ...]:
    """The files with their digests."""
    return tuple(InputFile(name, _digest(name)) for name in names)


def _digest(name: str) -> str:
    try:
        if not Path(name).is_file():  # what came through a pipe does not come again
            return ""
        return hashlib.sha256(read_file(Path(name))).hexdigest()
    except (OSError, ValueError):  # process data that come with the tool, or a file that has gone since
        return ""


def settings_rows(settings: Settings, conditions: Conditions | None) -> tuple[tuple[str, str], ...]:
    """The settings in force and the conditions of use, each with its value."""
    rows = [("settings", settings.shown), ("failures count from", settings.fail_at.value)]
    if settings.also:
        rows.append(("also counted", ", ".join(settings.also)))
    rows += [(f"level of {name}", level.value) for name, level in settings.levels.items()]
    rows += [(f"least margin of {name}", margin) for name, margin in settings.least_margins.items()]
    if settings.leave_out:
        rows.append(("left out", ", ".join(settings.leave_out)))
    for word, packs in (("rule packs", settings.packs), ("installed rule packs", settings.packs_installed)):
        if packs:
            rows.append((word, ", ".join(packs)))
    if conditions is not None:
        rows += [(field.replace("_", " "), shown) for field in _FIELDS if (shown := _shown(getattr(conditions, field)))]
    return tuple(rows)


_FIELDS = ("junction_temperature", "service_life", "power_cycles", "combine", "coverage", "false_trips")


def _shown(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, Span):
        ends = dict.fromkeys(
            show(end, value.dimension) for end in (value.least, value.typical, value.most) if end is not None
        )
        return " to ".join(ends)
    return f"{value:g}" if isinstance(value, float) else str(value).replace("_", " ")
