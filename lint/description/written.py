"""A value of the schema's examples as one would write it in a description."""

from __future__ import annotations

import re
from typing import Any, Final

MOST_WRITTEN: Final = 80
"""Longest example that a message shows, in characters."""


def written(value: Any) -> str:
    """The value in YAML, on one line; long mappings and lists break off after an entry."""
    if isinstance(value, dict):
        return _row("{", [f"{key}: {written(inside)}" for key, inside in value.items()], "}")
    if isinstance(value, list):
        return _row("[", [written(inside) for inside in value], "]")
    if isinstance(value, bool):
        return "true" if value else "false"
    text = str(value)
    plain = re.fullmatch(r"[\w.%+/^*-][\w .%+/^*-]*", text)
    return text if plain or not isinstance(value, str) else f"'{text}'"


def _row(left: str, entries: list[str], right: str) -> str:
    row = f"{left}{', '.join(entries)}{right}"
    return row if len(row) <= MOST_WRITTEN or not entries else f"{left}{entries[0]}, ...{right}"
