"""Turns templates into text: everything from a description is escaped, control and direction characters are shown."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import Any, Final

from jinja2 import Environment, FileSystemLoader, StrictUndefined
from markupsafe import Markup

from tidegate.lint.reports.plain_text import plain

_HERE: Final = Path(__file__).parent
FOLDERS: Final = (_HERE, _HERE.parent / "page")


def _shown(value: Any) -> Any:
    """Text as it may be shown; what a template has made is left as it is."""
    return plain(value) if isinstance(value, str) and not isinstance(value, Markup) else value


@lru_cache(maxsize=1)
def environment() -> Environment:
    """The templates of pictures and page."""
    return Environment(
        loader=FileSystemLoader(FOLDERS), autoescape=True, finalize=_shown, undefined=StrictUndefined,
        trim_blocks=False, keep_trailing_newline=True,
    )  # fmt: skip


def picture_css() -> str:
    """The style of pictures."""
    return (_HERE / "drawing.css").read_text("utf-8")
