"""JSON as text: readable, the same for the same data, and with nothing in it that a terminal would obey."""

from __future__ import annotations

import json
import re
from typing import Any, Final

import msgspec

from tidegate.lint.reports.plain_text import UNSAFE

_UNSAFE_IN_JSON: Final = re.compile(UNSAFE.pattern.replace("\x00-\x1f", ""))  # JSON writes those as numbers itself


def json_form(data: Any, *, depth: int = 0) -> str:
    """Data as JSON text, indented as what stands so many levels deep; no line break at the end.

    Control, format and direction characters, and halves of surrogate pairs, are written as their numbers, which JSON
    reads as the same text.
    """
    try:
        text = msgspec.json.format(msgspec.json.encode(data), indent=2).decode()
    except UnicodeEncodeError:  # half a surrogate pair, as in a file name that is no text
        text = json.dumps(data, indent=2, ensure_ascii=False, allow_nan=False)
    pad = "  " * depth
    return f"{pad}{_UNSAFE_IN_JSON.sub(_numbered, text)}".replace("\n", f"\n{pad}")


def _numbered(found: re.Match[str]) -> str:
    return "\\u007f" if found[0] == "\x7f" else json.dumps(found[0])[1:-1]
