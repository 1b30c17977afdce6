"""JSON as text: readable, the same for the same data, and with nothing in it that a terminal would obey."""

from __future__ import annotations

import json
import textwrap
from typing import Any

from tidegate.lint.reports.plain_text import UNSAFE


def json_form(data: Any, *, depth: int = 0) -> str:
    """Data as JSON text, indented as what stands so many levels deep; no line break at the end.

    Control, format and direction characters, and halves of surrogate pairs, are written as their numbers, which JSON
    reads as the same text.
    """
    text = json.dumps(data, indent=2, ensure_ascii=False, allow_nan=False)
    return textwrap.indent(UNSAFE.sub(_numbered, text), "  " * depth)


def _numbered(found: Any) -> str:
    character: str = found[0]
    return character if character == "\n" else json.dumps(character)[1:-1] if not character.isascii() else "\\u007f"
